package draw

import "image"

// A Painter paints lists into images. It keeps pictures of glyphs between
// frames, so keep the painter. It is not safe for concurrent use.
type Painter struct{}

// NewPainter makes a painter with nothing in its memory.
func NewPainter() *Painter { return &Painter{} }

// Paint paints the list into the whole of dst, at scale device pixels per dip.
func (p *Painter) Paint(dst *image.RGBA, l *List, scale float64) {}

// Raster paints a list into a new image of its own size.
func Raster(l *List, scale float64) *image.RGBA {
	dst := image.NewRGBA(image.Rect(0, 0, int(l.Width*scale+0.5), int(l.Height*scale+0.5)))
	NewPainter().Paint(dst, l, scale)
	return dst
}
