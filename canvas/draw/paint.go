package draw

import (
	"image"
	"math"
	"runtime"
	"sync"

	"github.com/golang/freetype/raster"
)

// A Painter paints lists into images. It keeps the pictures of glyphs and dots
// between frames, so keep the painter. It is not safe for concurrent use.
//
// A frame has two halves: every item is turned into marks in device pixels
// (flattened, stroked, cut into dashes, letters looked up), then the marks are
// painted, in two horizontal bands side by side if the image is large. Bands do
// not change a single pixel.
type Painter struct {
	masks *masks
	marks []mark
	shape outline // points of all marks of the frame
	bands [2]*raster.Rasterizer
}

// A mark is one thing to paint: polygons of the painter's outline, a mask, or
// a rectangle of whole pixels.
type mark struct {
	box        image.Rectangle
	color      Color
	mask       *mask
	first, end int // polygons: places in shape.ends; rectangles have none
}

// NewPainter makes a painter with nothing in its memory.
func NewPainter() *Painter {
	return &Painter{
		masks: newMasks(),
		bands: [2]*raster.Rasterizer{raster.NewRasterizer(1, 1), raster.NewRasterizer(1, 1)},
	}
}

// Raster paints a list into a new image of its own size.
func Raster(l *List, scale float64) *image.RGBA {
	dst := image.NewRGBA(image.Rect(0, 0, int(l.Width*scale+0.5), int(l.Height*scale+0.5)))
	NewPainter().Paint(dst, l, scale)
	return dst
}

// twoBands is the number of pixels from which two goroutines are worth it.
const twoBands = 100_000

// Paint paints the list over the whole of dst, at scale device pixels per dip.
func (p *Painter) Paint(dst *image.RGBA, l *List, scale float64) {
	p.prepare(dst.Bounds(), l, scale)
	b := dst.Bounds()
	if b.Dx()*b.Dy() < twoBands || runtime.GOMAXPROCS(0) == 1 {
		p.paintBand(dst, b, l.Background, p.bands[0])
		return
	}
	upper, lower := b, b
	upper.Max.Y = (b.Min.Y + b.Max.Y) / 2
	lower.Min.Y = upper.Max.Y
	var done sync.WaitGroup
	done.Go(func() { p.paintBand(dst, upper, l.Background, p.bands[0]) })
	p.paintBand(dst, lower, l.Background, p.bands[1])
	done.Wait()
}

func (p *Painter) paintBand(dst *image.RGBA, band image.Rectangle, ground Color, r *raster.Rasterizer) {
	clearBand(dst, band, ground)
	r.SetBounds(band.Dx(), band.Dy())
	r.UseNonZeroWinding = true
	for i := range p.marks {
		m := &p.marks[i]
		box := m.box.Intersect(band)
		switch {
		case box.Empty():
		case m.mask != nil:
			stamp(dst, box, m)
		case m.first == m.end:
			fillRect(dst, box, m.color)
		default:
			p.fillPolygons(dst, band, m, r)
		}
	}
}

// prepare fills p.marks for a frame.
func (p *Painter) prepare(view image.Rectangle, l *List, scale float64) {
	p.marks = p.marks[:0]
	p.shape.reset()
	for _, item := range l.Items {
		switch it := item.(type) {
		case *Shape:
			p.prepareShape(view, it, scale)
		case *Text:
			p.prepareText(view, it, scale)
		case *Discs:
			p.prepareDiscs(view, it, scale)
		case *Grid:
			p.prepareGrid(view, it, scale)
		}
	}
}

// farthest is how far from the image, in device pixels, a shape may reach; one
// that reaches further is not painted.
const farthest = 200_000

func (p *Painter) prepareShape(view image.Rectangle, s *Shape, scale float64) {
	width := s.Width * scale
	if s.Stroke.A != 0 {
		width = max(width, 0.8)
		if s.Crisp || s.Width == 0 {
			width = max(1, math.Round(width))
		}
	}
	bounds := s.Path.Bounds().Grow(2 * (s.Width + 1))
	if !(max(-bounds.X, -bounds.Y, bounds.X+bounds.W, bounds.Y+bounds.H)*scale < farthest) {
		return // NaN too
	}
	seen := image.Rect(
		int(math.Floor(bounds.X*scale)), int(math.Floor(bounds.Y*scale)),
		int(math.Ceil((bounds.X+bounds.W)*scale)), int(math.Ceil((bounds.Y+bounds.H)*scale)))
	if !seen.Overlaps(view) {
		return
	}
	path := s.Path.onto(scale, s.Crisp, int(width)%2 == 1 && s.Stroke.A != 0)
	pieces, closed := path.Flatten(1)
	if s.Fill.A != 0 {
		first := len(p.shape.ends)
		for _, pts := range pieces {
			p.shape.points = append(p.shape.points, pts...)
			p.shape.end()
		}
		p.addPolygons(first, s.Fill)
	}
	if s.Stroke.A == 0 {
		return
	}
	first := len(p.shape.ends)
	with := pen{half: width / 2, round: s.Round}
	for i, pts := range pieces {
		if len(s.Dash) == 0 {
			p.shape.stroke(pts, closed[i], with)
			continue
		}
		lengths := make([]float64, len(s.Dash))
		for j, d := range s.Dash {
			lengths[j] = d * scale
		}
		for _, dash := range dashes(pts, closed[i], lengths) {
			p.shape.stroke(dash, false, with)
		}
	}
	p.addPolygons(first, s.Stroke)
}

// onto scales a path to device pixels; crisp moves its points onto pixel
// borders, or pixel middles for a stroke of odd width.
func (p *Path) onto(scale float64, crisp, odd bool) Path {
	q := Path{ops: p.ops, points: make([]Point, len(p.points))}
	shift := 0.0
	if odd {
		shift = 0.5
	}
	for i, pt := range p.points {
		pt = pt.Times(scale)
		if crisp {
			pt = Point{math.Round(pt.X-shift) + shift, math.Round(pt.Y-shift) + shift}
		}
		q.points[i] = pt
	}
	return q
}

// addPolygons makes one mark of the polygons from first on.
func (p *Painter) addPolygons(first int, c Color) {
	end := len(p.shape.ends)
	if first == end {
		return
	}
	start := 0
	if first > 0 {
		start = p.shape.ends[first-1]
	}
	part := outline{points: p.shape.points[start:]}
	x0, y0, x1, y1 := part.box()
	p.marks = append(p.marks, mark{box: image.Rect(x0, y0, x1, y1), color: c, first: first, end: end})
}

// tallest is the size of text, in device pixels, beyond which it is not
// painted: a zoom that large shows one letter.
const tallest = 400

func (p *Painter) prepareText(view image.Rectangle, t *Text, scale float64) {
	size := math.Round(t.Size*scale*4) / 4
	if size < 1 || size > tallest || t.Color.A == 0 {
		return
	}
	x := t.At.X * scale
	if t.Anchor != Start {
		w := Measure(t.Text, t.Face, size)
		if t.Anchor == Middle {
			w /= 2
		}
		x -= w
	}
	base := math.Round(t.At.Y * scale)
	if !(base > float64(view.Min.Y)-size && base < float64(view.Max.Y)+2*size && math.Abs(x) < farthest) {
		return // NaN too
	}
	y := int(base)
	face := typefaces[t.Face]()
	for _, r := range t.Text {
		g := face.glyph(r)
		quarters := int(math.Round(x * 4))
		m := p.masks.find(maskKey{face: t.Face, shift: uint8(quarters & 3), id: g.id, size: uint16(size * 4)})
		p.addMask(m, quarters>>2, y, t.Color)
		x += float64(g.advance) * size
	}
}

func (p *Painter) prepareDiscs(view image.Rectangle, d *Discs, scale float64) {
	r := math.Round(d.Radius * scale * 4)
	if r < 1 || d.Color.A == 0 {
		return
	}
	for _, c := range d.Centres {
		if !(max(math.Abs(c.X), math.Abs(c.Y))*scale < farthest) {
			continue // NaN too
		}
		x, y := int(math.Round(c.X*scale*4)), int(math.Round(c.Y*scale*4))
		m := p.masks.find(maskKey{disc: true, shift: uint8(x&3 | y&3<<2), size: uint16(r)})
		p.addMask(m, x>>2, y>>2, d.Color)
	}
}

func (p *Painter) addMask(m *mask, x, y int, c Color) {
	if m.w == 0 {
		return
	}
	box := image.Rect(x+m.x, y+m.y, x+m.x+m.w, y+m.y+m.h)
	p.marks = append(p.marks, mark{box: box, color: c, mask: m})
}

func (p *Painter) prepareGrid(view image.Rectangle, g *Grid, scale float64) {
	side := max(1, int(math.Round(g.Size*scale)))
	if g.Step*scale < 4 {
		return
	}
	first := func(from, origin float64) float64 {
		return origin + math.Ceil((from-origin)/g.Step)*g.Step
	}
	for y := first(g.Within.Y, g.Origin.Y); y <= g.Within.Y+g.Within.H; y += g.Step {
		for x := first(g.Within.X, g.Origin.X); x <= g.Within.X+g.Within.W; x += g.Step {
			at := image.Pt(int(math.Floor(x*scale)), int(math.Floor(y*scale)))
			box := image.Rectangle{Min: at, Max: at.Add(image.Pt(side, side))}
			if box.Overlaps(view) {
				p.marks = append(p.marks, mark{box: box, color: g.Color})
			}
		}
	}
}
