package ui

import (
	"fyne.io/fyne/v2"
	"fyne.io/fyne/v2/container"
	"fyne.io/fyne/v2/widget"
)

// A pane is a scrolling column whose content is rebuilt from the view. It
// keeps its scroll position, and the keyboard focus stays with the control of
// the same key, so that a rebuild in the middle of typing is not felt.
type pane struct {
	widget.BaseWidget
	scroll  *container.Scroll
	content *fyne.Container
	keys    map[string]fyne.Focusable
}

func newPane(padX, padY, gap float32) *pane {
	p := &pane{content: padded(padX, padY, gap), keys: make(map[string]fyne.Focusable)}
	p.content.Layout.(*columnLayout).narrow = true
	p.scroll = container.NewVScroll(p.content)
	p.ExtendBaseWidget(p)
	return p
}

// fill replaces the content. keyed names the controls that take focus.
func (p *pane) fill(keyed map[string]fyne.Focusable, objects ...fyne.CanvasObject) {
	c := fyne.CurrentApp().Driver().CanvasForObject(p)
	focusedKey := ""
	if c != nil {
		for key, f := range p.keys {
			if c.Focused() == f {
				focusedKey = key
			}
		}
	}
	p.keys = keyed
	p.content.Objects = objects
	p.arrange()
	if focusedKey == "" {
		return
	}
	if f, ok := keyed[focusedKey]; ok {
		if b, ok := f.(*press); ok {
			b.byMouse = true // it had its ring, or not, before; a rebuild does not add one
		}
		c.Focus(f)
	} else {
		c.Unfocus()
	}
}

func (p *pane) arrange() {
	s := p.Size()
	if s.Width <= 0 {
		return
	}
	h := heightFor(p.content, s.Width)
	p.content.Layout.(*columnLayout).width = s.Width
	p.content.Resize(fyne.NewSize(s.Width, max(h, s.Height)))
	p.content.Refresh()
	p.scroll.Refresh()
	if limit := max(0, h-s.Height); p.scroll.Offset.Y > limit {
		p.scroll.ScrollToOffset(fyne.NewPos(0, limit))
	}
}

func (p *pane) Resize(s fyne.Size) {
	p.BaseWidget.Resize(s)
	p.arrange()
}

func (p *pane) MinSize() fyne.Size { return fyne.NewSize(40, 24) }

func (p *pane) CreateRenderer() fyne.WidgetRenderer { return &paneRenderer{p} }

type paneRenderer struct{ p *pane }

func (r *paneRenderer) Layout(s fyne.Size) {
	r.p.scroll.Resize(s)
	r.p.arrange()
}
func (r *paneRenderer) MinSize() fyne.Size           { return r.p.MinSize() }
func (r *paneRenderer) Refresh()                     { r.p.arrange() }
func (r *paneRenderer) Objects() []fyne.CanvasObject { return []fyne.CanvasObject{r.p.scroll} }
func (r *paneRenderer) Destroy()                     {}

// reveal scrolls the pane around a control so that it can be seen.
func reveal(o fyne.CanvasObject) {
	d := fyne.CurrentApp().Driver()
	c := d.CanvasForObject(o)
	if c == nil {
		return
	}
	at := d.AbsolutePositionForObject(o)
	eachPane(c.Content(), func(p *pane) {
		top := d.AbsolutePositionForObject(p)
		in := at.Subtract(top)
		if in.X < 0 || in.X > p.Size().Width || !holds(p.content, o) {
			return
		}
		switch {
		case in.Y < 0:
			p.scroll.ScrollToOffset(fyne.NewPos(0, max(0, p.scroll.Offset.Y+in.Y-unit)))
		case in.Y+o.Size().Height > p.Size().Height:
			p.scroll.ScrollToOffset(fyne.NewPos(0, p.scroll.Offset.Y+in.Y+o.Size().Height-p.Size().Height+unit))
		}
	})
}

func eachPane(o fyne.CanvasObject, f func(*pane)) {
	switch o := o.(type) {
	case *pane:
		f(o)
	case *fyne.Container:
		for _, c := range o.Objects {
			eachPane(c, f)
		}
	case *frame:
		for _, c := range o.parts() {
			eachPane(c, f)
		}
	}
}

func holds(o, wanted fyne.CanvasObject) bool {
	if o == wanted {
		return true
	}
	switch o := o.(type) {
	case *fyne.Container:
		for _, c := range o.Objects {
			if holds(c, wanted) {
				return true
			}
		}
	case *press:
		return holds(o.content, wanted)
	case *prose:
		for i := range o.spans {
			if x := o.spans[i].object; x != nil && holds(x, wanted) {
				return true
			}
		}
	}
	return false
}
