package canvas

import (
	"image"

	"fyne.io/fyne/v2"
	fcanvas "fyne.io/fyne/v2/canvas"
	"fyne.io/fyne/v2/widget"

	"arrowroot/canvas/draw"
)

// A Picture shows whatever list its maker gives for a size: plots, thumbnails,
// previews. Refresh it when the picture should change.
type Picture struct {
	widget.BaseWidget

	Make func(width, height float64) *draw.List // in dips; nil = empty

	least   fyne.Size
	painter *draw.Painter
	image   *image.RGBA
}

// NewPicture makes a picture that is at least so large, in dips.
func NewPicture(width, height float32, make func(width, height float64) *draw.List) *Picture {
	p := &Picture{Make: make, least: fyne.NewSize(width, height), painter: draw.NewPainter()}
	p.ExtendBaseWidget(p)
	return p
}

// SetMinSize changes the least size.
func (p *Picture) SetMinSize(width, height float32) {
	p.least = fyne.NewSize(width, height)
	p.Refresh()
}

// MinSize implements fyne.CanvasObject.
func (p *Picture) MinSize() fyne.Size { return p.least }

// CreateRenderer implements fyne.Widget.
func (p *Picture) CreateRenderer() fyne.WidgetRenderer {
	r := fcanvas.NewRaster(p.paint)
	return &pictureRenderer{picture: p, raster: r, objects: []fyne.CanvasObject{r}}
}

// paint fills an image of w × h device pixels.
func (p *Picture) paint(w, h int) image.Image {
	if p.image == nil || p.image.Bounds().Dx() != w || p.image.Bounds().Dy() != h {
		p.image = image.NewRGBA(image.Rect(0, 0, w, h))
	}
	size := p.Size()
	if p.Make == nil || size.Width <= 0 || size.Height <= 0 {
		clear(p.image.Pix)
		return p.image
	}
	list := p.Make(float64(size.Width), float64(size.Height))
	p.painter.Paint(p.image, list, float64(w)/float64(size.Width))
	return p.image
}

type pictureRenderer struct {
	picture *Picture
	raster  *fcanvas.Raster
	objects []fyne.CanvasObject
}

func (r *pictureRenderer) Layout(size fyne.Size)        { r.raster.Resize(size) }
func (r *pictureRenderer) MinSize() fyne.Size           { return r.picture.least }
func (r *pictureRenderer) Objects() []fyne.CanvasObject { return r.objects }
func (r *pictureRenderer) Destroy()                     {}
func (r *pictureRenderer) Refresh()                     { r.raster.Refresh() }
