package ui

import (
	"fyne.io/fyne/v2"
	"fyne.io/fyne/v2/canvas"
	"fyne.io/fyne/v2/driver/desktop"
	"fyne.io/fyne/v2/widget"
)

// A press is the one thing to click that our small controls are made of:
// buttons, tabs, rows, cards, tiles and tools differ in content and skin only.
// It answers the mouse, the keyboard (Space, Return), shows hover, a focus
// ring when reached by keyboard, a disabled state and a tip.
type press struct {
	widget.BaseWidget
	kit     *kit
	content fyne.CanvasObject
	skin    func(*press) skin

	key         string // names the control across rebuilds of its panel
	tip         string
	tipBeside   bool // the tip stands to the right, not below
	padX, padY  float32
	minW, minH  float32
	onTap       func()
	onSecondary func(at fyne.Position) // window position
	onHover     func(in bool)          // also called as keyboard focus comes and goes
	onKey       func(fyne.KeyName) bool
	onDrag      func(at fyne.Position) // window position, while dragging
	onDrop      func(at fyne.Position)

	selected, disabled, hovered, focused, byMouse, dragging bool
	dragAt                                                  fyne.Position
}

// A skin is how a press looks in one state.
type skin struct {
	fill, edge fyne.ThemeColorName
	width      float32 // of the edge
	radius     float32
	underline  fyne.ThemeColorName // a bar along the lower edge; "" = none
}

var (
	_ fyne.Tappable          = (*press)(nil)
	_ fyne.SecondaryTappable = (*press)(nil)
	_ fyne.Focusable         = (*press)(nil)
	_ fyne.Disableable       = (*press)(nil)
	_ fyne.Draggable         = (*press)(nil)
	_ desktop.Hoverable      = (*press)(nil)
	_ desktop.Cursorable     = (*press)(nil)
	_ desktop.Mouseable      = (*press)(nil)
)

func (k *kit) press(content fyne.CanvasObject, look func(*press) skin, tap func()) *press {
	p := &press{kit: k, content: content, skin: look, onTap: tap}
	p.ExtendBaseWidget(p)
	return p
}

// HeightFor is the height at a given width, for content that wraps.
func (p *press) HeightFor(width float32) float32 {
	return max(p.minH, heightFor(p.content, width-2*p.padX)+2*p.padY)
}

func (p *press) MinSize() fyne.Size {
	m := p.content.MinSize()
	return fyne.NewSize(max(p.minW, m.Width+2*p.padX), max(p.minH, m.Height+2*p.padY))
}

func (p *press) Tapped(*fyne.PointEvent) {
	if p.disabled {
		return
	}
	p.kit.tips.hide()
	if p.onTap != nil {
		p.onTap()
	}
}

func (p *press) TappedSecondary(e *fyne.PointEvent) {
	if !p.disabled && p.onSecondary != nil {
		p.onSecondary(e.AbsolutePosition)
	}
}

func (p *press) MouseDown(*desktop.MouseEvent) {
	p.byMouse = true
	p.kit.tips.hide()
	if c := fyne.CurrentApp().Driver().CanvasForObject(p); c != nil && !p.disabled && p.onTap != nil {
		c.Focus(p)
	}
}

func (p *press) MouseUp(*desktop.MouseEvent) {}

func (p *press) Dragged(e *fyne.DragEvent) {
	if p.onDrop == nil {
		return
	}
	p.dragging, p.dragAt = true, e.AbsolutePosition
	if p.onDrag != nil {
		p.onDrag(e.AbsolutePosition)
	}
}

func (p *press) DragEnd() {
	if p.dragging && p.onDrop != nil {
		p.onDrop(p.dragAt)
	}
	p.dragging = false
}

func (p *press) MouseIn(e *desktop.MouseEvent) {
	p.hovered = true
	p.Refresh()
	if p.onHover != nil {
		p.onHover(true)
	}
	if p.tip != "" {
		p.kit.tips.after(p.tip, p, p.tipBeside)
	}
}

func (p *press) MouseMoved(*desktop.MouseEvent) {}

func (p *press) MouseOut() {
	p.hovered = false
	p.Refresh()
	p.kit.tips.hide()
	if p.onHover != nil {
		p.onHover(false)
	}
}

func (p *press) FocusGained() {
	p.focused = true
	p.Refresh()
	if p.byMouse {
		return
	}
	if p.onHover != nil {
		p.onHover(true)
	}
	reveal(p)
}

func (p *press) FocusLost() {
	if p.focused && !p.byMouse && p.onHover != nil && !p.hovered {
		p.onHover(false)
	}
	p.focused, p.byMouse = false, false
	p.Refresh()
}

func (p *press) TypedRune(rune) {}

func (p *press) TypedKey(e *fyne.KeyEvent) {
	if p.byMouse {
		p.byMouse = false
		p.Refresh()
	}
	if e.Name == fyne.KeyEscape {
		p.kit.closeTop()
		return
	}
	if p.disabled {
		return
	}
	if p.onKey != nil && p.onKey(e.Name) {
		return
	}
	switch e.Name {
	case fyne.KeySpace, fyne.KeyReturn, fyne.KeyEnter:
		if p.onTap != nil {
			p.onTap()
		}
	default:
		p.kit.onKey(e.Name)
	}
}

func (p *press) Enable()        { p.setDisabled(false) }
func (p *press) Disable()       { p.setDisabled(true) }
func (p *press) Disabled() bool { return p.disabled }

func (p *press) setDisabled(on bool) {
	if p.disabled != on {
		p.disabled = on
		p.Refresh()
	}
}

func (p *press) Cursor() desktop.Cursor {
	if p.disabled || p.onTap == nil {
		return desktop.DefaultCursor
	}
	return desktop.PointerCursor
}

func (p *press) setSelected(on bool) {
	if p.selected != on {
		p.selected = on
		p.Refresh()
	}
}

func (p *press) CreateRenderer() fyne.WidgetRenderer {
	r := &pressRenderer{p: p,
		box:  canvas.NewRectangle(nil),
		wash: canvas.NewRectangle(nil),
		bar:  canvas.NewRectangle(nil),
		ring: canvas.NewRectangle(nil),
	}
	r.Refresh()
	return r
}

type pressRenderer struct {
	p                    *press
	box, wash, bar, ring *canvas.Rectangle
}

func (r *pressRenderer) Layout(s fyne.Size) {
	r.box.Resize(s)
	r.wash.Resize(s)
	r.bar.Resize(fyne.NewSize(s.Width, 2))
	r.bar.Move(fyne.NewPos(0, s.Height-2))
	r.ring.Resize(s.Add(fyne.NewSize(2, 2)))
	r.ring.Move(fyne.NewPos(-1, -1))
	r.p.content.Resize(s.Subtract(fyne.NewSize(2*r.p.padX, 2*r.p.padY)))
	r.p.content.Move(fyne.NewPos(r.p.padX, r.p.padY))
}

func (r *pressRenderer) MinSize() fyne.Size { return r.p.MinSize() }

func (r *pressRenderer) Refresh() {
	p := r.p
	s := p.skin(p)
	r.box.FillColor = ink(or(s.fill, tokenNone))
	r.box.StrokeColor = ink(or(s.edge, tokenNone))
	r.box.StrokeWidth = s.width
	r.box.CornerRadius = s.radius
	r.wash.CornerRadius = s.radius
	r.wash.FillColor = ink(tokenNone)
	if p.hovered && !p.disabled && p.onTap != nil {
		r.wash.FillColor = ink(tokenHover)
	}
	r.bar.FillColor = ink(or(s.underline, tokenNone))
	r.ring.FillColor = ink(tokenNone)
	r.ring.CornerRadius = s.radius + 1
	r.ring.StrokeWidth = 0
	r.ring.StrokeColor = ink(tokenNone)
	if p.focused && !p.byMouse {
		r.ring.StrokeWidth = 2
		r.ring.StrokeColor = ink(tokenAction)
	}
	for _, o := range []fyne.CanvasObject{r.box, r.wash, r.bar, r.ring} {
		o.Refresh()
	}
	p.content.Refresh()
}

func (r *pressRenderer) Objects() []fyne.CanvasObject {
	return []fyne.CanvasObject{r.box, r.wash, r.p.content, r.bar, r.ring}
}

func (r *pressRenderer) Destroy() {}

// or is a, or b where a is empty.
func or[T ~string](a, b T) T {
	if a == "" {
		return b
	}
	return a
}
