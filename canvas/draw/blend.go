package draw

import (
	"encoding/binary"
	"image"

	"github.com/golang/freetype/raster"
)

// clearBand fills a band with the ground, whatever was there.
func clearBand(dst *image.RGBA, band image.Rectangle, c Color) {
	if band.Empty() {
		return
	}
	a := uint32(c.A)
	pixel := [4]uint8{uint8(uint32(c.R) * a / 255), uint8(uint32(c.G) * a / 255), uint8(uint32(c.B) * a / 255), c.A}
	start := dst.PixOffset(band.Min.X, band.Min.Y)
	row := dst.Pix[start : start+4*band.Dx()]
	copy(row, pixel[:])
	for n := 4; n < len(row); n *= 2 {
		copy(row[n:], row[:n])
	}
	for y := band.Min.Y + 1; y < band.Max.Y; y++ {
		copy(dst.Pix[dst.PixOffset(band.Min.X, y):], row)
	}
}

// over blends a colour over n pixels; share is its coverage from 0 to 255.
// The image is premultiplied, as image.RGBA is.
func over(pix []uint8, c Color, share uint32) {
	a := (uint32(c.A)*share + 127) / 255
	if a == 255 {
		pixel := uint32(c.R) | uint32(c.G)<<8 | uint32(c.B)<<16 | 255<<24
		for len(pix) >= 4 {
			binary.LittleEndian.PutUint32(pix, pixel)
			pix = pix[4:]
		}
		return
	}
	r, g, b := uint32(c.R)*a+127, uint32(c.G)*a+127, uint32(c.B)*a+127
	rest := 255 - a
	for len(pix) >= 4 {
		p := pix[:4:4]
		p[0] = uint8((uint32(p[0])*rest + r) / 255)
		p[1] = uint8((uint32(p[1])*rest + g) / 255)
		p[2] = uint8((uint32(p[2])*rest + b) / 255)
		p[3] = uint8((uint32(p[3])*rest + 255*a + 127) / 255)
		pix = pix[4:]
	}
}

func fillRect(dst *image.RGBA, box image.Rectangle, c Color) {
	for y := box.Min.Y; y < box.Max.Y; y++ {
		start := dst.PixOffset(box.Min.X, y)
		over(dst.Pix[start:start+4*box.Dx()], c, 255)
	}
}

func stamp(dst *image.RGBA, box image.Rectangle, m *mark) {
	for y := box.Min.Y; y < box.Max.Y; y++ {
		cover := m.mask.cover[(y-m.box.Min.Y)*m.mask.w+box.Min.X-m.box.Min.X:]
		i := dst.PixOffset(box.Min.X, y)
		for x := range box.Dx() {
			if share := cover[x]; share != 0 {
				over(dst.Pix[i:i+4], m.color, uint32(share))
			}
			i += 4
		}
	}
}

// fillPolygons rasterises a mark within a band. The rasteriser is as large as
// the band, so that its memory is made once and not for every mark.
func (p *Painter) fillPolygons(dst *image.RGBA, band image.Rectangle, m *mark, r *raster.Rasterizer) {
	r.Clear()
	start := 0
	if m.first > 0 {
		start = p.shape.ends[m.first-1]
	}
	for _, end := range p.shape.ends[m.first:m.end] {
		polygon(r, p.shape.points[start:end], band.Min.X, band.Min.Y)
		start = end
	}
	r.Rasterize(&spanPainter{dst: dst, at: band.Min, color: m.color})
}

// A spanPainter blends the spans of one mark.
type spanPainter struct {
	dst   *image.RGBA
	at    image.Point
	color Color
}

// Paint implements raster.Painter.
func (s *spanPainter) Paint(spans []raster.Span, done bool) {
	for _, span := range spans {
		i := s.dst.PixOffset(s.at.X+span.X0, s.at.Y+span.Y)
		over(s.dst.Pix[i:i+4*(span.X1-span.X0)], s.color, span.Alpha/257)
	}
}
