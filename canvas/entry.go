package canvas

import (
	"fyne.io/fyne/v2"
	"fyne.io/fyne/v2/driver/desktop"
	"fyne.io/fyne/v2/widget"

	"arrowroot/canvas/draw"
	"arrowroot/canvas/scene"
	"arrowroot/compile/study"
)

// A nameEntry is the entry that opens over the sheet where a name is typed.
// Return takes the name, Escape drops it, a click elsewhere takes what was
// typed.
type nameEntry struct {
	widget.Entry
	editor *Editor
	naming *scene.Naming // nil = closed
	shift  bool          // held down: Return makes a new line in a note
}

func newNameEntry(e *Editor) *nameEntry {
	n := &nameEntry{editor: e}
	n.ExtendBaseWidget(n)
	n.OnSubmitted = func(string) { n.submit() }
	n.Hide()
	return n
}

// open asks for a name.
func (n *nameEntry) open(naming scene.Naming) {
	n.naming = &naming
	n.SetPlaceHolder(naming.Hint())
	n.MultiLine, n.Wrapping = naming.Note, fyne.TextWrapOff
	if naming.Note {
		n.Wrapping = fyne.TextWrapBreak // wrapped at words, Fyne 2.8 loses a space that is typed at the end of a line
		n.SetMinRowsVisible(3)
	}
	n.shift = false
	n.SetText(naming.Text())
	n.Show()
	n.place()
	n.editor.changed()
	if c := fyne.CurrentApp().Driver().CanvasForObject(n.editor); c != nil {
		c.Focus(n)
	}
	if naming.Text() != "" {
		n.TypedShortcut(&fyne.ShortcutSelectAll{})
	}
}

// place puts the entry where the named thing stands.
func (n *nameEntry) place() {
	if n.naming == nil {
		return
	}
	e := n.editor
	at := e.in.View.Out(n.naming.At)
	w, h := float32(128), n.MinSize().Height
	if n.naming.Note { // its text stands where the note's will
		w = min(240, e.Size().Width)
		at = at.Add(draw.Point{X: float64(w) / 2, Y: float64(h)/2 - 4})
	}
	if id := n.naming.Variable; id != "" {
		if r, ok := e.surface.mapNow().NodeRect(id); ok {
			at = draw.Point{X: r.X + r.W/2, Y: r.Y + r.H/2}
			w = max(w, float32(r.W))
		}
	}
	x := min(max(float32(at.X)-w/2, 0), max(e.Size().Width-w, 0))
	y := min(max(float32(at.Y)-h/2, 0), max(e.Size().Height-h, 0))
	n.Resize(fyne.NewSize(w, h))
	n.Move(fyne.NewPos(x, y))
	if n.naming.Note && n.naming.Which < 0 { // a new note stands where it was typed, all of it in sight
		n.naming.At = scene.Snapped(e.in.View.In(draw.Point{X: float64(x), Y: float64(y) + 4}))
	}
}

// submit takes the typed name; a name that cannot be keeps the entry open.
func (n *nameEntry) submit() {
	if n.naming == nil {
		return
	}
	edit, err := n.naming.Edit(&n.editor.in, n.Text)
	if err == nil && edit != nil {
		_, err = edit.Apply(n.editor.in.Study)
	}
	if err != nil {
		n.editor.refuse(err.Error())
		return
	}
	naming, text := *n.naming, n.Text
	n.close()
	if edit == nil {
		return
	}
	n.editor.edit(edit)
	switch {
	case naming.Note:
		if at := naming.Which; at >= 0 || text != "" {
			if at < 0 {
				at = len(n.editor.in.Rival.Layout.Notes) - 1
			}
			n.editor.pick(scene.Selection{Notes: []int{at}})
		}
	case len(naming.Members) == 0:
		id, _ := scene.Identifier(text)
		n.editor.pick(scene.Selection{Nodes: []string{id}})
	}
}

// finish takes the name if one was typed and can be, else drops it: what a
// click elsewhere does.
func (n *nameEntry) finish() {
	if n.naming == nil {
		return
	}
	if n.Text != "" && n.Text != n.naming.Text() {
		n.submit()
	}
	n.close()
}

func (n *nameEntry) close() {
	if n.naming == nil {
		return
	}
	n.naming = nil
	n.Hide()
	n.editor.changed()
	n.editor.focus()
}

// TypedKey implements fyne.Focusable.
func (n *nameEntry) TypedKey(k *fyne.KeyEvent) {
	if k.Name == fyne.KeyEscape {
		n.close()
		return
	}
	if n.MultiLine && !n.shift && (k.Name == fyne.KeyReturn || k.Name == fyne.KeyEnter) {
		n.submit()
		return
	}
	if n.MultiLine && n.shift && (k.Name == fyne.KeyReturn || k.Name == fyne.KeyEnter) {
		n.TypedRune('\n')
		n.place()
		return
	}
	n.Entry.TypedKey(k)
}

// KeyDown implements desktop.Keyable.
func (n *nameEntry) KeyDown(k *fyne.KeyEvent) {
	if k.Name == desktop.KeyShiftLeft || k.Name == desktop.KeyShiftRight {
		n.shift = true
	}
	n.Entry.KeyDown(k)
}

// KeyUp implements desktop.Keyable.
func (n *nameEntry) KeyUp(k *fyne.KeyEvent) {
	if k.Name == desktop.KeyShiftLeft || k.Name == desktop.KeyShiftRight {
		n.shift = false
	}
	n.Entry.KeyUp(k)
}

// FocusLost implements fyne.Focusable. The keyboard went elsewhere in the
// window; taking the name now would move the focus back, so it is done once
// that is over.
func (n *nameEntry) FocusLost() {
	n.Entry.FocusLost()
	if n.naming == nil {
		return
	}
	waiting := n.naming
	n.editor.post(func() {
		if n.naming != waiting {
			return
		}
		if c := fyne.CurrentApp().Driver().CanvasForObject(n.editor); c != nil && c.Focused() == fyne.Focusable(n) {
			return
		}
		n.take(waiting)
	})
}

// take is finish without asking for the keyboard.
func (n *nameEntry) take(naming *scene.Naming) {
	var edit study.Edit
	if n.Text != "" && n.Text != naming.Text() {
		edit, _ = naming.Edit(&n.editor.in, n.Text)
	}
	n.naming = nil
	n.Hide()
	n.editor.changed()
	if edit == nil {
		return
	}
	if _, err := edit.Apply(n.editor.in.Study); err == nil {
		n.editor.edit(edit)
	}
}
