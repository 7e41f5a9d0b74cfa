package draw

import (
	"math"

	"github.com/golang/freetype/raster"
	"golang.org/x/image/font/sfnt"
	"golang.org/x/image/math/fixed"
)

// A mask is the coverage of a small picture that is stamped often.
type mask struct {
	x, y, w, h int // of its upper left corner, from the stamp's place
	cover      []uint8
}

// Masks are kept by what they show, their size in quarters of a pixel, and
// where between two pixels they stand, in quarters too.
type maskKey struct {
	disc  bool
	face  Face
	shift uint8 // x in bits 0–1, y (discs only) in bits 2–3
	id    sfnt.GlyphIndex
	size  uint16
}

// masks is the memory of a painter. It is emptied when it grows beyond
// maskLimit, as a long zoom passes through many sizes.
type masks struct {
	kept   map[maskKey]*mask
	raster *raster.Rasterizer
	buffer sfnt.Buffer
}

const maskLimit = 6000

const xHeight = 0.547 // of DejaVu Sans, in ems

func newMasks() *masks {
	return &masks{kept: make(map[maskKey]*mask), raster: raster.NewRasterizer(1, 1)}
}

func (m *masks) find(k maskKey) *mask {
	if found, ok := m.kept[k]; ok {
		return found
	}
	if len(m.kept) > maskLimit {
		clear(m.kept)
	}
	var o outline
	dx, dy := float64(k.shift&3)/4, float64(k.shift>>2)/4
	if k.disc {
		r := float64(k.size) / 4
		o.turn(Point{dx, dy}, Point{r, 0}, 2*math.Pi)
		o.end()
	} else {
		m.letter(&o, k, dx)
	}
	made := m.fill(&o)
	m.kept[k] = made
	return made
}

// letter puts the outline of a glyph at the origin. Heights are stretched a
// little so that lower-case letters end on a whole pixel, which is what makes
// small text look sharp; widths stay true.
func (m *masks) letter(o *outline, k maskKey, dx float64) {
	size := float64(k.size) / 4
	t := typefaces[k.face]()
	segments, err := t.font.LoadGlyph(&m.buffer, k.id, t.perEm, nil)
	if err != nil {
		return // a glyph without a picture
	}
	sx := size / (float64(t.perEm) / 64)
	sy := sx
	if x := xHeight * size; x > 3 && x < 24 {
		sy *= math.Round(x) / x
	}
	at := func(p fixed.Point26_6) Point {
		return Point{float64(p.X)/64*sx + dx, float64(p.Y) / 64 * sy}
	}
	for _, s := range segments {
		switch s.Op {
		case sfnt.SegmentOpMoveTo:
			o.end()
			o.points = append(o.points, at(s.Args[0]))
		case sfnt.SegmentOpLineTo:
			o.points = append(o.points, at(s.Args[0]))
		case sfnt.SegmentOpQuadTo:
			// A quadratic is the cubic with control points two thirds of the way.
			from, c, to := o.points[len(o.points)-1], at(s.Args[0]), at(s.Args[1])
			o.points = appendCubic(o.points, from.Add(c.Sub(from).Times(2./3)), to.Add(c.Sub(to).Times(2./3)), to, 2)
		case sfnt.SegmentOpCubeTo:
			o.points = appendCubic(o.points, at(s.Args[0]), at(s.Args[1]), at(s.Args[2]), 2)
		}
	}
	o.end()
}

// fill rasterises an outline into a mask.
func (m *masks) fill(o *outline) *mask {
	if len(o.points) == 0 {
		return &mask{}
	}
	x0, y0, x1, y1 := o.box()
	made := &mask{x: x0, y: y0, w: x1 - x0, h: y1 - y0, cover: make([]uint8, (x1-x0)*(y1-y0))}
	m.raster.SetBounds(made.w, made.h)
	m.raster.UseNonZeroWinding = true
	o.rasterise(m.raster, x0, y0)
	m.raster.Rasterize(raster.PainterFunc(func(spans []raster.Span, done bool) {
		for _, s := range spans {
			row := made.cover[s.Y*made.w:]
			for x := s.X0; x < s.X1; x++ {
				row[x] = uint8(s.Alpha >> 8)
			}
		}
	}))
	return made
}

// box is the smallest rectangle of whole pixels around an outline.
func (o *outline) box() (x0, y0, x1, y1 int) {
	lo, hi := o.points[0], o.points[0]
	for _, q := range o.points[1:] {
		lo.X, lo.Y = min(lo.X, q.X), min(lo.Y, q.Y)
		hi.X, hi.Y = max(hi.X, q.X), max(hi.Y, q.Y)
	}
	return int(math.Floor(lo.X)), int(math.Floor(lo.Y)), int(math.Ceil(hi.X)) + 1, int(math.Ceil(hi.Y)) + 1
}

// rasterise hands the polygons to a rasteriser whose origin is at (x0, y0).
func (o *outline) rasterise(r *raster.Rasterizer, x0, y0 int) {
	start := 0
	for _, end := range o.ends {
		polygon(r, o.points[start:end], x0, y0)
		start = end
	}
}

func polygon(r *raster.Rasterizer, pts []Point, x0, y0 int) {
	if len(pts) < 2 {
		return
	}
	at := func(p Point) fixed.Point26_6 {
		return fixed.Point26_6{
			X: fixed.Int26_6(math.Round((p.X - float64(x0)) * 64)),
			Y: fixed.Int26_6(math.Round((p.Y - float64(y0)) * 64)),
		}
	}
	r.Start(at(pts[0]))
	for _, p := range pts[1:] {
		r.Add1(at(p))
	}
	r.Add1(at(pts[0]))
}
