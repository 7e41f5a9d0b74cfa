package canvas

import (
	"fyne.io/fyne/v2"
	fcanvas "fyne.io/fyne/v2/canvas"
	"fyne.io/fyne/v2/widget"

	"arrowroot/canvas/draw"
)

// A Picture shows whatever list its maker gives for a size: plots, thumbnails,
// previews. Refresh it when the picture should change.
type Picture struct {
	widget.BaseWidget

	Make func(width, height float64) *draw.List // in dips
	min  fyne.Size
}

// NewPicture makes a picture that is at least so large.
func NewPicture(width, height float32, make func(width, height float64) *draw.List) *Picture {
	p := &Picture{Make: make, min: fyne.NewSize(width, height)}
	p.ExtendBaseWidget(p)
	return p
}

// MinSize implements fyne.CanvasObject.
func (p *Picture) MinSize() fyne.Size { return p.min }

// CreateRenderer implements fyne.Widget.
func (p *Picture) CreateRenderer() fyne.WidgetRenderer {
	return widget.NewSimpleRenderer(fcanvas.NewRasterWithPixels(nil))
}
