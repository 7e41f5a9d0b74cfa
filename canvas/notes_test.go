package canvas

import (
	"reflect"
	"testing"

	"fyne.io/fyne/v2"
	"fyne.io/fyne/v2/driver/desktop"
	"fyne.io/fyne/v2/test"

	"arrowroot/canvas/draw"
	"arrowroot/canvas/scene"
	"arrowroot/compile/study"
)

// A note is written where the sheet is clicked, moved by hand, changed on a
// double click and deleted; each of these is one edit.
func TestNoteOnTheSheet(t *testing.T) {
	b := newBench(t, pair())
	b.SetTool(scene.NoteTool)
	b.click(300, 320, desktop.MouseButtonPrimary, 0)
	b.drain()
	if b.entry.naming == nil || !b.entry.MultiLine {
		t.Fatal("no entry for a note")
	}
	test.Type(b.entry, "hedges were")
	b.entry.KeyDown(&fyne.KeyEvent{Name: desktop.KeyShiftLeft})
	b.entry.TypedKey(&fyne.KeyEvent{Name: fyne.KeyReturn})
	b.entry.KeyUp(&fyne.KeyEvent{Name: desktop.KeyShiftLeft})
	test.Type(b.entry, "planted in spring")
	b.entry.TypedKey(&fyne.KeyEvent{Name: fyne.KeyReturn})
	notes := func() []*study.Note { return b.study.Rivals[0].Layout.Notes }
	if len(notes()) != 1 || *notes()[0] != (study.Note{At: study.Point{X: 304, Y: 320}, Text: "hedges were\nplanted in spring"}) {
		t.Fatalf("notes %+v", notes())
	}
	if !reflect.DeepEqual(b.picked, scene.Selection{Notes: []int{0}}) {
		t.Errorf("picked %+v", b.picked)
	}

	b.SetTool(scene.SelectTool)
	r, ok := b.surface.mapNow().NoteRect(0)
	if !ok || r.W < 60 || r.H < 25 {
		t.Fatalf("the note stands at %+v", r)
	}
	x, y := float32(r.Centre().X), float32(r.Centre().Y)
	b.drag(x, y, x+80, y+40, desktop.MouseButtonPrimary, 0)
	if notes()[0].At != (study.Point{X: 384, Y: 360}) {
		t.Errorf("moved to %v", notes()[0].At)
	}
	b.doubleClick(x+80, y+40)
	if b.entry.naming == nil || b.entry.Text != notes()[0].Text {
		t.Fatalf("the note does not open with its words: %q", b.entry.Text)
	}
	b.entry.SetText("other words")
	b.entry.TypedKey(&fyne.KeyEvent{Name: fyne.KeyReturn})
	if notes()[0].Text != "other words" {
		t.Errorf("it says %q", notes()[0].Text)
	}
	b.key(fyne.KeyDelete)
	if len(notes()) != 0 {
		t.Error("it is not deleted")
	}
	var labels []string
	for _, e := range b.edits {
		labels = append(labels, e.Label())
	}
	if want := []string{"Write a note", "Move a note", "Change a note", "Remove a note"}; !reflect.DeepEqual(labels, want) {
		t.Errorf("edits %q", labels)
	}
}

// A note and a node that are picked together move together, in one step.
func TestNoteMovesWithNodes(t *testing.T) {
	s := pair()
	s.Rivals[0].Layout.Notes = []*study.Note{{At: study.Point{X: 160, Y: 300}, Text: "spring only"}}
	b := newBench(t, s)
	b.drag(100, 100, 350, 400, desktop.MouseButtonPrimary, 0)
	if !reflect.DeepEqual(b.picked, scene.Selection{Nodes: []string{"hedge"}, Notes: []int{0}}) {
		t.Fatalf("the marquee picked %+v", b.picked)
	}
	b.drag(200, 200, 232, 216, desktop.MouseButtonPrimary, 0)
	if len(b.edits) != 1 || b.study.Rivals[0].Layout.Notes[0].At != (study.Point{X: 192, Y: 316}) || b.study.Rivals[0].Layout.At["hedge"] != (study.Point{X: 232, Y: 216}) {
		t.Errorf("%d edits, the note at %v", len(b.edits), b.study.Rivals[0].Layout.Notes[0].At)
	}
}

// The words of a note are part of every picture of the rival, on paper too, and
// long ones are wrapped.
func TestNoteIsDrawn(t *testing.T) {
	s := pair()
	s.Rivals[0].Layout.Notes = []*study.Note{{At: study.Point{X: 160, Y: 900}, Text: "counts of the first season are left out since the traps were set too late"}}
	in := scene.Input{Study: s, Rival: s.Rivals[0], Palette: scene.Light(), Width: 600, Height: 400, LitPath: scene.NoPath}
	in.View = scene.Fit(in)
	list, m := scene.Build(in)
	r, _ := m.NoteRect(0)
	if r.Y+r.H > 400 {
		t.Error("showing all leaves the note out")
	}
	lines := 0
	for _, item := range list.Items {
		if text, ok := item.(*draw.Text); ok && text.At.X > r.X && text.At.Y > r.Y && text.At.Y < r.Y+r.H {
			lines++
		}
	}
	if lines < 2 {
		t.Errorf("%d lines", lines)
	}
}

// Every space that is typed into a note stays, wherever the line ends.
func TestNoteKeepsItsSpaces(t *testing.T) {
	b := newBench(t, pair())
	b.SetTool(scene.NoteTool)
	b.click(100, 320, desktop.MouseButtonPrimary, 0)
	b.drain()
	const text = "temp and hours were read off the trap sheet of every day in may and in june by the same two people"
	test.Type(b.entry, text)
	if b.entry.Text != text {
		t.Errorf("typed %q, it has %q", text, b.entry.Text)
	}
}
