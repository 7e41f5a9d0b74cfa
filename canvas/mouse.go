package canvas

import (
	"time"

	"fyne.io/fyne/v2"
	"fyne.io/fyne/v2/driver/desktop"

	"arrowroot/canvas/draw"
	"arrowroot/canvas/scene"
)

var (
	_ desktop.Mouseable  = (*Editor)(nil)
	_ desktop.Hoverable  = (*Editor)(nil)
	_ desktop.Cursorable = (*Editor)(nil)
	_ fyne.Draggable     = (*Editor)(nil)
	_ fyne.Scrollable    = (*Editor)(nil)
)

// pressed is what is known of a press. Drag events carry no button and no
// modifier, so they are kept from the press.
type pressed struct {
	button scene.Button
	down   bool
	window fyne.Position // of the press, on the window's canvas
	at     draw.Point
	when   time.Time
	double bool // it follows another closely, in time and place
	moved  bool
	shift  bool
	ctrl   bool
}

// A second press counts as a double click within this time and distance.
const (
	doubleTime  = 400 * time.Millisecond
	doubleReach = 6 // dips
)

// modifiers are the keys held down, as the keyboard told.
type modifiers struct{ shift, ctrl, space bool }

func (e *Editor) point(p fyne.Position) draw.Point {
	return draw.Point{X: float64(p.X), Y: float64(p.Y)}
}

func buttonOf(b desktop.MouseButton) scene.Button {
	switch b {
	case desktop.MouseButtonSecondary:
		return scene.Secondary
	case desktop.MouseButtonTertiary:
		return scene.Middle
	}
	return scene.Primary
}

// MouseDown implements desktop.Mouseable.
func (e *Editor) MouseDown(m *desktop.MouseEvent) {
	e.entry.finish()
	e.focus()
	was := e.press
	e.press = pressed{
		button: buttonOf(m.Button), down: true, window: m.AbsolutePosition,
		at: e.point(m.Position), when: time.Now(),
		shift: m.Modifier&fyne.KeyModifierShift != 0,
		ctrl:  m.Modifier&(fyne.KeyModifierControl|fyne.KeyModifierSuper) != 0,
	}
	e.press.double = !was.double && !was.moved && was.button == scene.Primary && e.press.button == scene.Primary &&
		e.press.when.Sub(was.when) < doubleTime && e.press.at.Sub(was.at).Len() < doubleReach
	e.pointer = e.press.at
	e.handle(e.event(scene.Press))
}

// MouseUp implements desktop.Mouseable. After a drag it comes with the place
// of the pointer, before DragEnd.
func (e *Editor) MouseUp(m *desktop.MouseEvent) {
	if !e.press.down {
		return
	}
	e.pointer = e.point(m.Position)
	e.lift()
}

// lift ends a press. Fyne's own double click waits for its main loop twice and
// comes late when that is busy, so it is told here; and it is posted, as Fyne
// takes the focus away from what a release has just opened.
func (e *Editor) lift() {
	e.press.down = false
	e.handle(e.event(scene.Release))
	if e.press.double && !e.press.moved {
		e.post(func() { e.handle(e.event(scene.DoubleClick)) })
	}
}

// Dragged implements fyne.Draggable.
func (e *Editor) Dragged(d *fyne.DragEvent) {
	if !e.press.down {
		return
	}
	e.pointer = e.point(d.Position)
	e.press.moved = true
	e.handle(e.event(scene.Move))
}

// DragEnd implements fyne.Draggable.
func (e *Editor) DragEnd() {
	if e.press.down {
		e.lift()
	}
}

// MouseIn implements desktop.Hoverable.
func (e *Editor) MouseIn(m *desktop.MouseEvent) { e.MouseMoved(m) }

// MouseMoved implements desktop.Hoverable.
func (e *Editor) MouseMoved(m *desktop.MouseEvent) {
	e.pointer = e.point(m.Position)
	e.handle(e.event(scene.Move))
}

// MouseOut implements desktop.Hoverable.
func (e *Editor) MouseOut() { e.handle(scene.Event{Kind: scene.Leave}) }

// event is an event of a kind at the pointer, with the press's button and
// modifiers.
func (e *Editor) event(kind scene.EventKind) scene.Event {
	return scene.Event{
		Kind: kind, At: e.pointer, Button: e.press.button,
		Shift: e.press.shift, Ctrl: e.press.ctrl, Space: e.keys.space,
	}
}

// Scrolled implements fyne.Scrollable: the wheel zooms at the pointer, a
// sideways wheel pans.
func (e *Editor) Scrolled(s *fyne.ScrollEvent) {
	const notch = 25 // what Fyne reports for one notch of a wheel
	if s.Scrolled.DX != 0 && s.Scrolled.DY == 0 {
		v := e.in.View
		v.Pan.X += float64(s.Scrolled.DX)
		e.SetView(v)
		return
	}
	e.handle(scene.Event{Kind: scene.Wheel, At: e.point(s.Position), Turn: float64(s.Scrolled.DY) / notch})
}

// Cursor implements desktop.Cursorable.
func (e *Editor) Cursor() desktop.Cursor {
	if e.keys.space {
		return desktop.PointerCursor
	}
	switch e.hand.Cursor(e.in.Hover) {
	case scene.CrossCursor:
		return desktop.CrosshairCursor
	case scene.GrabCursor:
		return desktop.PointerCursor
	}
	return desktop.DefaultCursor
}
