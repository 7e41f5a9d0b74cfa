package ui

import (
	"strings"
	"unicode"

	"fyne.io/fyne/v2"
	"fyne.io/fyne/v2/driver/desktop"
)

// A command is one thing the user can tell the window to do. The one table of
// them (commands.go) drives the menus, the shortcuts, the tips of the buttons
// and the finder.
type command struct {
	id     string // stable, for code and tests
	menu   string // which menu it stands in; "" = none, the finder only
	label  string
	live   func() string // a label that changes ("Undo draw hedge → bees"); nil = label
	keys   string        // "Ctrl+Z"; one letter alone works on the sheet
	on     func() bool   // nil = always
	run    func()
	parted bool // a line above it in the menu
}

func (c *command) text() string {
	if c.live != nil {
		return c.live()
	}
	return c.label
}

func (c *command) ready() bool { return c.on == nil || c.on() }

// tip is the label with its keys.
func (c *command) tip() string {
	if c.keys == "" {
		return c.label
	}
	return c.label + "   " + c.keys
}

// shortcut reads keys such as "Ctrl+Shift+Z"; nil for a single key, which
// only the sheet listens to.
func (c *command) shortcut() fyne.Shortcut {
	parts := strings.Split(c.keys, "+")
	if strings.HasSuffix(c.keys, "++") { // the plus key itself
		parts = append(strings.Split(strings.TrimSuffix(c.keys, "++"), "+"), "+")
	}
	if len(parts) < 2 {
		return nil
	}
	if s := standardShortcuts[c.keys]; s != nil {
		return s
	}
	s := &desktop.CustomShortcut{}
	for _, p := range parts[:len(parts)-1] {
		switch p {
		case "Ctrl":
			s.Modifier |= fyne.KeyModifierShortcutDefault
		case "Shift":
			s.Modifier |= fyne.KeyModifierShift
		case "Alt":
			s.Modifier |= fyne.KeyModifierAlt
		}
	}
	last := parts[len(parts)-1]
	switch last {
	case "+":
		s.KeyName = fyne.KeyEqual // the plus stands on it
	case "−":
		s.KeyName = fyne.KeyMinus
	case "PageDown":
		s.KeyName = fyne.KeyPageDown
	default:
		s.KeyName = fyne.KeyName(last)
	}
	return s
}

// standardShortcuts are the keys that Fyne's window turns into shortcuts of its
// own before a menu sees them: a custom one for the same keys never fires.
var standardShortcuts = map[string]fyne.Shortcut{
	"Ctrl+Z": &fyne.ShortcutUndo{},
	"Ctrl+C": &fyne.ShortcutCopy{},
	"Ctrl+X": &fyne.ShortcutCut{},
	"Ctrl+V": &fyne.ShortcutPaste{},
	"Ctrl+A": &fyne.ShortcutSelectAll{},
}

// A table of commands, in the order of the menus.
type commandTable []*command

func (t commandTable) find(id string) *command {
	for _, c := range t {
		if c.id == id {
			return c
		}
	}
	return nil
}

// byKey finds the command of a single key.
func (t commandTable) byKey(key string) *command {
	for _, c := range t {
		if c.keys == key && !strings.Contains(c.keys, "+") {
			return c
		}
	}
	return nil
}

// match ranks the commands whose words begin with the words typed.
func (t commandTable) match(typed string) commandTable {
	want := strings.FieldsFunc(strings.ToLower(typed), func(r rune) bool { return unicode.IsSpace(r) })
	var first, then commandTable
	for _, c := range t {
		label := strings.ToLower(c.menu + " " + c.text())
		have := strings.Fields(label)
		found := true
		for _, w := range want {
			hit := false
			for _, h := range have {
				if strings.HasPrefix(h, w) {
					hit = true
					break
				}
			}
			found = found && hit
		}
		switch {
		case !found:
		case strings.HasPrefix(strings.ToLower(c.text()), strings.ToLower(typed)):
			first = append(first, c)
		default:
			then = append(then, c)
		}
	}
	return append(first, then...)
}
