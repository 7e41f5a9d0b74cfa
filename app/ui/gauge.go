package ui

import (
	"fyne.io/fyne/v2"
	"fyne.io/fyne/v2/widget"
)

// gauge is a bar that fills as work goes on.
type gauge struct {
	widget.BaseWidget
	share        float32
	trough, fill *fillBox
}

func newGauge(share float32) *gauge {
	g := &gauge{share: share, trough: filled(tokenHairline), fill: filled(tokenAction)}
	g.trough.radius, g.fill.radius = 3, 3
	g.ExtendBaseWidget(g)
	return g
}

func (g *gauge) MinSize() fyne.Size                  { return fyne.NewSize(40, 6) }
func (g *gauge) CreateRenderer() fyne.WidgetRenderer { return &gaugeRenderer{g} }

type gaugeRenderer struct{ g *gauge }

func (r *gaugeRenderer) Layout(s fyne.Size) {
	place(r.g.trough, 0, 0, s.Width, s.Height)
	place(r.g.fill, 0, 0, s.Width*within(r.g.share, 0, 1), s.Height)
}
func (r *gaugeRenderer) MinSize() fyne.Size { return r.g.MinSize() }
func (r *gaugeRenderer) Refresh()           { r.Layout(r.g.Size()); r.g.trough.Refresh(); r.g.fill.Refresh() }
func (r *gaugeRenderer) Objects() []fyne.CanvasObject {
	return []fyne.CanvasObject{r.g.trough, r.g.fill}
}
func (r *gaugeRenderer) Destroy() {}
