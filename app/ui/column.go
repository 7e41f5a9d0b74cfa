package ui

import (
	"fyne.io/fyne/v2"
	"fyne.io/fyne/v2/container"
	"fyne.io/fyne/v2/widget"
)

// Fyne's layouts know no height for a given width, which wrapped text needs.
// heightFor asks ours, and takes the smallest height of everything else.
func heightFor(o fyne.CanvasObject, width float32) float32 {
	switch o := o.(type) {
	case interface{ HeightFor(width float32) float32 }:
		return o.HeightFor(width)
	case *fyne.Container:
		if l, ok := o.Layout.(interface {
			heightFor(objects []fyne.CanvasObject, width float32) float32
		}); ok {
			return l.heightFor(o.Objects, width)
		}
	}
	return o.MinSize().Height
}

// columnLayout stacks objects at full width.
type columnLayout struct {
	gap        float32
	padX, padY float32
	width      float32 // last laid out at
	narrow     bool    // it takes whatever width it is given
}

func column(gap float32, objects ...fyne.CanvasObject) *fyne.Container {
	return container.New(&columnLayout{gap: gap}, objects...)
}

func padded(padX, padY, gap float32, objects ...fyne.CanvasObject) *fyne.Container {
	return container.New(&columnLayout{gap: gap, padX: padX, padY: padY}, objects...)
}

func (l *columnLayout) Layout(objects []fyne.CanvasObject, s fyne.Size) {
	l.width = s.Width
	w := s.Width - 2*l.padX
	y := l.padY
	for _, o := range objects {
		if !o.Visible() {
			continue
		}
		h := heightFor(o, w)
		o.Move(fyne.NewPos(l.padX, y))
		o.Resize(fyne.NewSize(w, h))
		y += h + l.gap
	}
}

func (l *columnLayout) heightFor(objects []fyne.CanvasObject, width float32) float32 {
	h, n := 2*l.padY, 0
	for _, o := range objects {
		if o.Visible() {
			h += heightFor(o, width-2*l.padX)
			n++
		}
	}
	if n > 1 {
		h += float32(n-1) * l.gap
	}
	return h
}

func (l *columnLayout) MinSize(objects []fyne.CanvasObject) fyne.Size {
	w := float32(0)
	for _, o := range objects {
		if o.Visible() {
			w = max(w, o.MinSize().Width)
		}
	}
	w += 2 * l.padX
	h := l.heightFor(objects, max(w, l.width))
	if l.narrow {
		return fyne.NewSize(0, h)
	}
	return fyne.NewSize(w, h)
}

// rowLayout sets objects side by side at their smallest width, centred in
// height; those marked as elastic share what is left.
type rowLayout struct {
	gap     float32
	elastic map[fyne.CanvasObject]bool
	top     bool // at the top instead of centred
}

// row sets objects side by side; stretch marks the ones that grow.
func row(gap float32, objects ...fyne.CanvasObject) *fyne.Container {
	l := &rowLayout{gap: gap, elastic: make(map[fyne.CanvasObject]bool)}
	for i, o := range objects {
		if s, ok := o.(*stretched); ok {
			objects[i] = s.CanvasObject
			l.elastic[s.CanvasObject] = true
		}
	}
	return container.New(l, objects...)
}

// topRow is a row whose objects stand at the top.
func topRow(gap float32, objects ...fyne.CanvasObject) *fyne.Container {
	c := row(gap, objects...)
	c.Layout.(*rowLayout).top = true
	return c
}

type stretched struct{ fyne.CanvasObject }

func stretch(o fyne.CanvasObject) fyne.CanvasObject { return &stretched{o} }

// space fills what is left in a row.
func space() fyne.CanvasObject { return stretch(gapOf(0, 0)) }

func (l *rowLayout) widths(objects []fyne.CanvasObject, width float32) []float32 {
	out := make([]float32, len(objects))
	left, n, elastic := width, 0, 0
	for i, o := range objects {
		if !o.Visible() {
			continue
		}
		n++
		if l.elastic[o] {
			elastic++
			continue
		}
		out[i] = o.MinSize().Width
		left -= out[i]
	}
	left -= l.gap * float32(max(n-1, 0))
	for i, o := range objects {
		if o.Visible() && l.elastic[o] {
			out[i] = max(0, left/float32(elastic))
		}
	}
	return out
}

func (l *rowLayout) Layout(objects []fyne.CanvasObject, s fyne.Size) {
	x := float32(0)
	for i, w := range l.widths(objects, s.Width) {
		o := objects[i]
		if !o.Visible() {
			continue
		}
		h := min(s.Height, heightFor(o, w))
		y := (s.Height - h) / 2
		if l.top {
			y = 0
		}
		o.Move(fyne.NewPos(x, y))
		o.Resize(fyne.NewSize(w, h))
		x += w + l.gap
	}
}

func (l *rowLayout) heightFor(objects []fyne.CanvasObject, width float32) float32 {
	h := float32(0)
	for i, w := range l.widths(objects, width) {
		if objects[i].Visible() {
			h = max(h, heightFor(objects[i], w))
		}
	}
	return h
}

func (l *rowLayout) MinSize(objects []fyne.CanvasObject) fyne.Size {
	var m fyne.Size
	n := 0
	for _, o := range objects {
		if !o.Visible() {
			continue
		}
		n++
		s := o.MinSize()
		m.Width += s.Width
		m.Height = max(m.Height, s.Height)
	}
	m.Width += l.gap * float32(max(n-1, 0))
	return m
}

// fixedLayout gives its one object a fixed width and, where not 0, height.
type fixedLayout struct{ w, h float32 }

func fixed(w, h float32, o fyne.CanvasObject) *fyne.Container {
	return container.New(&fixedLayout{w, h}, o)
}

func (l *fixedLayout) Layout(objects []fyne.CanvasObject, s fyne.Size) {
	for _, o := range objects {
		o.Move(fyne.NewPos(0, 0))
		o.Resize(s)
	}
}

func (l *fixedLayout) heightFor(objects []fyne.CanvasObject, _ float32) float32 {
	if l.h > 0 {
		return l.h
	}
	return heightFor(objects[0], l.w)
}

func (l *fixedLayout) MinSize(objects []fyne.CanvasObject) fyne.Size {
	m := fyne.NewSize(l.w, l.h)
	if len(objects) > 0 {
		if m.Width == 0 {
			m.Width = objects[0].MinSize().Width
		}
		if m.Height == 0 {
			m.Height = heightFor(objects[0], m.Width)
		}
	}
	return m
}

// gapOf is an empty place of a given size.
func gapOf(w, h float32) fyne.CanvasObject {
	g := &emptyPlace{size: fyne.NewSize(w, h)}
	g.ExtendBaseWidget(g)
	return g
}

type emptyPlace struct {
	widget.BaseWidget
	size fyne.Size
}

func (g *emptyPlace) MinSize() fyne.Size { return g.size }
func (g *emptyPlace) CreateRenderer() fyne.WidgetRenderer {
	return widget.NewSimpleRenderer(container.NewWithoutLayout())
}
