package draw

import "math"

// A Point of a picture, in dips.
type Point struct{ X, Y float64 }

// Add, Sub, Times: the vector arithmetic of points.
func (p Point) Add(q Point) Point { return Point{p.X + q.X, p.Y + q.Y} }

// Sub gives p − q.
func (p Point) Sub(q Point) Point { return Point{p.X - q.X, p.Y - q.Y} }

// Times stretches p by f.
func (p Point) Times(f float64) Point { return Point{p.X * f, p.Y * f} }

// Len is the distance from the origin.
func (p Point) Len() float64 { return math.Hypot(p.X, p.Y) }

// Unit is p at length 1; (1, 0) for the origin, so that callers need no case.
func (p Point) Unit() Point {
	l := p.Len()
	if l == 0 {
		return Point{1, 0}
	}
	return Point{p.X / l, p.Y / l}
}

// Left is p turned a quarter turn to the left of its direction on the screen.
func (p Point) Left() Point { return Point{p.Y, -p.X} }

// A Rect is the rectangle from (X, Y) to (X+W, Y+H).
type Rect struct{ X, Y, W, H float64 }

// Contains reports whether p lies in r.
func (r Rect) Contains(p Point) bool {
	return p.X >= r.X && p.X <= r.X+r.W && p.Y >= r.Y && p.Y <= r.Y+r.H
}

// Grow moves every side of r outwards by d.
func (r Rect) Grow(d float64) Rect { return Rect{r.X - d, r.Y - d, r.W + 2*d, r.H + 2*d} }

// Meets reports whether r and s share a point.
func (r Rect) Meets(s Rect) bool {
	return r.X <= s.X+s.W && s.X <= r.X+r.W && r.Y <= s.Y+s.H && s.Y <= r.Y+r.H
}

// Union is the smallest rectangle that holds both.
func (r Rect) Union(s Rect) Rect {
	x, y := min(r.X, s.X), min(r.Y, s.Y)
	return Rect{x, y, max(r.X+r.W, s.X+s.W) - x, max(r.Y+r.H, s.Y+s.H) - y}
}

// Centre is the middle of r.
func (r Rect) Centre() Point { return Point{r.X + r.W/2, r.Y + r.H/2} }

// A Path is a sequence of lines and cubic curves in one or more pieces.
type Path struct {
	ops    []op
	points []Point
}

type op uint8

const (
	opMove  op = iota // 1 point
	opLine            // 1 point
	opCubic           // 3 points
	opClose           // none
)

// Move begins a new piece at p.
func (p *Path) Move(to Point) { p.ops = append(p.ops, opMove); p.points = append(p.points, to) }

// Line goes on straight.
func (p *Path) Line(to Point) { p.ops = append(p.ops, opLine); p.points = append(p.points, to) }

// Cubic goes on along a cubic Bézier curve.
func (p *Path) Cubic(a, b, to Point) {
	p.ops = append(p.ops, opCubic)
	p.points = append(p.points, a, b, to)
}

// Close goes back to the start of the piece.
func (p *Path) Close() { p.ops = append(p.ops, opClose) }

// Append adds the pieces of q.
func (p *Path) Append(q Path) {
	p.ops = append(p.ops, q.ops...)
	p.points = append(p.points, q.points...)
}

// Empty reports whether nothing was drawn.
func (p *Path) Empty() bool { return len(p.ops) == 0 }

// Bounds holds every point and control point of the path.
func (p *Path) Bounds() Rect {
	if len(p.points) == 0 {
		return Rect{}
	}
	lo, hi := p.points[0], p.points[0]
	for _, q := range p.points[1:] {
		lo.X, lo.Y = min(lo.X, q.X), min(lo.Y, q.Y)
		hi.X, hi.Y = max(hi.X, q.X), max(hi.Y, q.Y)
	}
	return Rect{lo.X, lo.Y, hi.X - lo.X, hi.Y - lo.Y}
}

// Polyline joins points by straight lines.
func Polyline(points ...Point) Path {
	var p Path
	for i, q := range points {
		if i == 0 {
			p.Move(q)
		} else {
			p.Line(q)
		}
	}
	return p
}

// Polygon is a closed Polyline.
func Polygon(points ...Point) Path {
	p := Polyline(points...)
	p.Close()
	return p
}

// arcShare puts the control points of a cubic so that it follows a quarter
// circle to 0.03 % of its radius: 4/3·(√2 − 1).
const arcShare = 0.5522847498307936

// RoundRect is a rectangle with corners of the given radius (at most half the
// shorter side).
func RoundRect(r Rect, radius float64) Path {
	c := min(radius, r.W/2, r.H/2)
	if c <= 0 {
		return Polygon(Point{r.X, r.Y}, Point{r.X + r.W, r.Y}, Point{r.X + r.W, r.Y + r.H}, Point{r.X, r.Y + r.H})
	}
	x0, y0, x1, y1 := r.X, r.Y, r.X+r.W, r.Y+r.H
	k := c * (1 - arcShare)
	var p Path
	p.Move(Point{x0 + c, y0})
	p.Line(Point{x1 - c, y0})
	p.Cubic(Point{x1 - k, y0}, Point{x1, y0 + k}, Point{x1, y0 + c})
	p.Line(Point{x1, y1 - c})
	p.Cubic(Point{x1, y1 - k}, Point{x1 - k, y1}, Point{x1 - c, y1})
	p.Line(Point{x0 + c, y1})
	p.Cubic(Point{x0 + k, y1}, Point{x0, y1 - k}, Point{x0, y1 - c})
	p.Line(Point{x0, y0 + c})
	p.Cubic(Point{x0, y0 + k}, Point{x0 + k, y0}, Point{x0 + c, y0})
	p.Close()
	return p
}

// Circle is a circle as four cubics.
func Circle(centre Point, radius float64) Path {
	return RoundRect(Rect{centre.X - radius, centre.Y - radius, 2 * radius, 2 * radius}, radius)
}

// Flatten gives the pieces of the path as polylines that stay within about a
// quarter of a unit/scale of the curves; closed says which pieces are closed.
func (p *Path) Flatten(scale float64) (pieces [][]Point, closed []bool) {
	var now []Point
	end := func(shut bool) {
		if len(now) > 0 {
			pieces, closed = append(pieces, now), append(closed, shut)
		}
		now = nil
	}
	i := 0
	for _, o := range p.ops {
		switch o {
		case opMove:
			end(false)
			now = append(now, p.points[i])
			i++
		case opLine:
			now = append(now, p.points[i])
			i++
		case opCubic:
			now = appendCubic(now, p.points[i], p.points[i+1], p.points[i+2], scale)
			i += 3
		case opClose:
			end(true)
		}
	}
	end(false)
	return pieces, closed
}

// appendCubic adds points along a cubic that starts at the last point. The
// number of pieces follows from the second differences of the control points:
// a chord of a curve with |second derivative| ≤ M strays by at most M/(8n²).
func appendCubic(to []Point, a, b, end Point, scale float64) []Point {
	start := to[len(to)-1]
	m := 6 * max(
		math.Hypot(start.X-2*a.X+b.X, start.Y-2*a.Y+b.Y),
		math.Hypot(a.X-2*b.X+end.X, a.Y-2*b.Y+end.Y))
	const stray = 0.12 // device pixels
	n := int(math.Ceil(math.Sqrt(m * scale / (8 * stray))))
	n = min(max(n, 1), 200)
	for k := 1; k < n; k++ {
		to = append(to, CubicAt(start, a, b, end, float64(k)/float64(n)))
	}
	return append(to, end)
}

// CubicAt is the point at share t of a cubic Bézier curve.
func CubicAt(p0, p1, p2, p3 Point, t float64) Point {
	u := 1 - t
	a, b, c, d := u*u*u, 3*u*u*t, 3*u*t*t, t*t*t
	return Point{a*p0.X + b*p1.X + c*p2.X + d*p3.X, a*p0.Y + b*p1.Y + c*p2.Y + d*p3.Y}
}
