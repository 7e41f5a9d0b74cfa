package canvas

import (
	"fyne.io/fyne/v2"
	"fyne.io/fyne/v2/driver/desktop"

	"arrowroot/canvas/scene"
)

var (
	_ fyne.Focusable  = (*Editor)(nil)
	_ desktop.Keyable = (*Editor)(nil)
)

// focus takes the keyboard.
func (e *Editor) focus() {
	if c := fyne.CurrentApp().Driver().CanvasForObject(e); c != nil && c.Focused() != e {
		c.Focus(e)
	}
}

// FocusGained implements fyne.Focusable.
func (e *Editor) FocusGained() {
	e.focused = true
	e.changed()
}

// FocusLost implements fyne.Focusable.
func (e *Editor) FocusLost() {
	e.focused = false
	e.keys = modifiers{}
	e.changed()
}

// KeyDown implements desktop.Keyable. It comes before Fyne makes shortcuts of
// keys with Ctrl, which never arrive at TypedKey.
func (e *Editor) KeyDown(k *fyne.KeyEvent) {
	switch k.Name {
	case desktop.KeyShiftLeft, desktop.KeyShiftRight:
		e.keys.shift = true
	case desktop.KeyControlLeft, desktop.KeyControlRight, desktop.KeySuperLeft, desktop.KeySuperRight:
		e.keys.ctrl = true
	case fyne.KeySpace:
		e.keys.space = true
	case fyne.KeyLeft, fyne.KeyRight, fyne.KeyUp, fyne.KeyDown:
		if e.keys.ctrl {
			e.handle(scene.Event{Kind: scene.Key, Key: string(k.Name), Ctrl: true, Shift: e.keys.shift})
		}
	}
}

// KeyUp implements desktop.Keyable.
func (e *Editor) KeyUp(k *fyne.KeyEvent) {
	switch k.Name {
	case desktop.KeyShiftLeft, desktop.KeyShiftRight:
		e.keys.shift = false
	case desktop.KeyControlLeft, desktop.KeyControlRight, desktop.KeySuperLeft, desktop.KeySuperRight:
		e.keys.ctrl = false
	case fyne.KeySpace:
		e.keys.space = false
	}
}

// TypedKey implements fyne.Focusable.
func (e *Editor) TypedKey(k *fyne.KeyEvent) {
	name := string(k.Name)
	switch k.Name {
	case fyne.KeySpace, fyne.KeyTab:
		return
	case fyne.KeyEnter:
		name = string(fyne.KeyReturn)
	}
	e.handle(scene.Event{Kind: scene.Key, Key: name, Shift: e.keys.shift})
}

// TypedRune implements fyne.Focusable; every key arrives at TypedKey too.
func (e *Editor) TypedRune(rune) {}
