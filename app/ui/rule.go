package ui

import (
	"fyne.io/fyne/v2"
	"fyne.io/fyne/v2/canvas"
	"fyne.io/fyne/v2/widget"
)

// fillBox is a rectangle in a token's colour: a background, or a line.
type fillBox struct {
	widget.BaseWidget
	token, edge fyne.ThemeColorName
	radius      float32
	least       fyne.Size
}

func filled(token fyne.ThemeColorName) *fillBox {
	b := &fillBox{token: token}
	b.ExtendBaseWidget(b)
	return b
}

// bordered is a card's background.
func bordered(token, edge fyne.ThemeColorName, radius float32) *fillBox {
	b := filled(token)
	b.edge, b.radius = edge, radius
	return b
}

// hairline is a line of one pixel, to part things.
func hairline() *fillBox {
	b := filled(tokenHairline)
	b.least = fyne.NewSize(1, 1)
	return b
}

func (b *fillBox) MinSize() fyne.Size { return b.least }

func (b *fillBox) CreateRenderer() fyne.WidgetRenderer {
	r := &fillRenderer{b: b, rect: canvas.NewRectangle(nil)}
	r.Refresh()
	return r
}

type fillRenderer struct {
	b    *fillBox
	rect *canvas.Rectangle
}

func (r *fillRenderer) Layout(s fyne.Size) { r.rect.Resize(s) }
func (r *fillRenderer) MinSize() fyne.Size { return r.b.least }
func (r *fillRenderer) Refresh() {
	r.rect.FillColor = ink(r.b.token)
	r.rect.CornerRadius = r.b.radius
	r.rect.StrokeColor = ink(or(r.b.edge, tokenNone))
	r.rect.StrokeWidth = 0
	if r.b.edge != "" {
		r.rect.StrokeWidth = 1
	}
	r.rect.Refresh()
}
func (r *fillRenderer) Objects() []fyne.CanvasObject { return []fyne.CanvasObject{r.rect} }
func (r *fillRenderer) Destroy()                     {}
