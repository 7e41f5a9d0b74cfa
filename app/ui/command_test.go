package ui

import (
	"slices"
	"testing"

	"fyne.io/fyne/v2"
	"fyne.io/fyne/v2/driver/desktop"
)

// Keys and ids are unique, menus are in one piece, and what has modifiers has
// a shortcut.
func TestCommandTable(t *testing.T) {
	b := newBench(t)
	ids, keys := make(map[string]bool), make(map[string]string)
	var menus []string
	for _, c := range b.commands {
		if ids[c.id] {
			t.Errorf("%s stands twice", c.id)
		}
		ids[c.id] = true
		if c.keys != "" {
			if other := keys[c.keys]; other != "" {
				t.Errorf("%s is the key of %s and %s", c.keys, other, c.id)
			}
			keys[c.keys] = c.id
		}
		if c.menu != "" && (len(menus) == 0 || menus[len(menus)-1] != c.menu) {
			if slices.Contains(menus, c.menu) {
				t.Errorf("the menu %s is in two pieces", c.menu)
			}
			menus = append(menus, c.menu)
		}
		c.ready()
		if c.text() == "" || c.tip() == "" {
			t.Errorf("%s has no words", c.id)
		}
	}
	want := []string{"Study", "Edit", "Sheet", "Data", "Reading", "Fit", "Rivals", "Share", "Help"}
	if !slices.Equal(menus, want) {
		t.Errorf("menus %v", menus)
	}
}

func TestShortcuts(t *testing.T) {
	for keys, want := range map[string]*desktop.CustomShortcut{
		"Ctrl+Shift+Z":  {KeyName: fyne.KeyZ, Modifier: fyne.KeyModifierShortcutDefault | fyne.KeyModifierShift},
		"Ctrl++":        {KeyName: fyne.KeyEqual, Modifier: fyne.KeyModifierShortcutDefault},
		"Alt+1":         {KeyName: fyne.Key1, Modifier: fyne.KeyModifierAlt},
		"Ctrl+PageDown": {KeyName: fyne.KeyPageDown, Modifier: fyne.KeyModifierShortcutDefault},
	} {
		got, ok := (&command{keys: keys}).shortcut().(*desktop.CustomShortcut)
		if !ok || *got != *want {
			t.Errorf("%s is %+v", keys, got)
		}
	}
	if (&command{keys: "X"}).shortcut() != nil {
		t.Error("a letter alone has a shortcut: it would be lost to every entry")
	}
}

func TestMatch(t *testing.T) {
	b := newBench(t)
	for typed, want := range map[string]string{"sav": "save", "paint eff": "paint-effect", "study new": "new", "exp": "exposure"} {
		found := b.commands.match(typed)
		if len(found) == 0 || found[0].id != want {
			t.Errorf("%q finds %v first", typed, found)
		}
	}
}
