package draw

import "math"

// An outline collects polygons in device pixels. Overlaps count once, as the
// rasteriser fills by nonzero winding with all polygons turning the same way.
type outline struct {
	points []Point
	ends   []int // of each polygon, in points
}

func (o *outline) reset() { o.points, o.ends = o.points[:0], o.ends[:0] }

func (o *outline) end() {
	if n := len(o.points); len(o.ends) == 0 || o.ends[len(o.ends)-1] < n {
		o.ends = append(o.ends, n)
	}
}

// A pen says how a polyline becomes an outline.
type pen struct {
	half  float64 // half the width
	round bool    // round line ends
}

// stroke adds the outline of a polyline.
func (o *outline) stroke(pts []Point, closed bool, p pen) {
	pts = distinct(pts, closed)
	switch {
	case len(pts) == 0:
		return
	case len(pts) == 1:
		if p.round {
			o.turn(pts[0], Point{p.half, 0}, 2*math.Pi)
			o.end()
		}
		return
	case closed && len(pts) > 2:
		o.side(pts, true, p.half)
		o.end()
		o.side(reversed(pts), true, p.half)
		o.end()
		return
	}
	back := reversed(pts)
	o.side(pts, false, p.half)
	if p.round {
		n := pts[len(pts)-1].Sub(pts[len(pts)-2]).Unit().Left().Times(p.half)
		o.turn(pts[len(pts)-1], n, math.Pi)
	}
	o.side(back, false, p.half)
	if p.round {
		n := back[len(back)-1].Sub(back[len(back)-2]).Unit().Left().Times(p.half)
		o.turn(back[len(back)-1], n, math.Pi)
	}
	o.end()
}

// side adds the line that runs to the left of a polyline at a distance.
func (o *outline) side(pts []Point, closed bool, half float64) {
	n := len(pts)
	for i, at := range pts {
		var in, out Point
		switch {
		case i > 0:
			in = at.Sub(pts[i-1])
		case closed:
			in = at.Sub(pts[n-1])
		}
		switch {
		case i < n-1:
			out = pts[i+1].Sub(at)
		case closed:
			out = pts[0].Sub(at)
		}
		if in == (Point{}) {
			in = out
		}
		if out == (Point{}) {
			out = in
		}
		o.join(at, in, out, half)
	}
}

// join adds the left side of one corner. Gentle turns and square corners are
// mitred; where a mitre would stick out more than twice the width the corner
// is cut off.
func (o *outline) join(at, in, out Point, half float64) {
	d0, d1 := in.Unit(), out.Unit()
	n0, n1 := d0.Left(), d1.Left()
	cos := d0.X*d1.X + d0.Y*d1.Y
	inner := d0.X*d1.Y-d0.Y*d1.X < 0 // the path turns towards this side
	short := min(in.Len(), out.Len()) < 2*half
	if cos > 0.9 || (cos > -0.5 && !(inner && short)) {
		o.points = append(o.points, at.Add(n0.Add(n1).Times(half/(1+cos))))
		return
	}
	o.points = append(o.points, at.Add(n0.Times(half)))
	if inner {
		o.points = append(o.points, at)
	}
	o.points = append(o.points, at.Add(n1.Times(half)))
}

// turn adds a circular arc about a centre that starts at centre+from and goes
// clockwise on the screen.
func (o *outline) turn(centre, from Point, angle float64) {
	r := from.Len()
	n := max(4, int(math.Ceil(angle*math.Sqrt(r)*1.6)))
	for i := range n + 1 {
		s, c := math.Sincos(angle * float64(i) / float64(n))
		o.points = append(o.points, centre.Add(Point{c*from.X - s*from.Y, s*from.X + c*from.Y}))
	}
}

// dashes cuts a polyline into its dashes.
func dashes(pts []Point, closed bool, lengths []float64) [][]Point {
	if closed && len(pts) > 0 {
		pts = append(append([]Point(nil), pts...), pts[0])
	}
	total := 0.0
	for _, l := range lengths {
		total += l
	}
	if total <= 0.5 || len(pts) < 2 {
		return [][]Point{pts}
	}
	var all [][]Point
	now := []Point{pts[0]}
	at, left, on := 0, lengths[0], true
	for i := 1; i < len(pts); i++ {
		a, b := pts[i-1], pts[i]
		length := b.Sub(a).Len()
		gone := 0.0
		for length-gone > left {
			gone += left
			cut := a.Add(b.Sub(a).Times(gone / length))
			if on {
				all = append(all, append(now, cut))
			}
			now = []Point{cut}
			at = (at + 1) % len(lengths)
			left, on = lengths[at], !on
		}
		left -= length - gone
		if on {
			now = append(now, b)
		}
	}
	if on && len(now) > 1 {
		all = append(all, now)
	}
	return all
}

// Offset gives the polyline that runs beside another at a distance d to its
// left on the screen.
func Offset(pts []Point, d float64) []Point {
	pts = distinct(pts, false)
	if len(pts) < 2 {
		return pts
	}
	moved := make([]Point, len(pts))
	for i, at := range pts {
		in, out := at.Sub(pts[max(i-1, 0)]), pts[min(i+1, len(pts)-1)].Sub(at)
		if i == 0 {
			in = out
		}
		if i == len(pts)-1 {
			out = in
		}
		d0, d1 := in.Unit(), out.Unit()
		cos := max(d0.X*d1.X+d0.Y*d1.Y, -0.5)
		moved[i] = at.Add(d0.Left().Add(d1.Left()).Times(d / (1 + cos)))
	}
	return moved
}

// distinct leaves out points that coincide with the one before.
func distinct(pts []Point, closed bool) []Point {
	const same = 1e-4
	kept := make([]Point, 0, len(pts))
	for _, p := range pts {
		if n := len(kept); n == 0 || math.Abs(p.X-kept[n-1].X) > same || math.Abs(p.Y-kept[n-1].Y) > same {
			kept = append(kept, p)
		}
	}
	if n := len(kept); closed && n > 1 && kept[0].Sub(kept[n-1]).Len() <= same {
		kept = kept[:n-1]
	}
	return kept
}

func reversed(pts []Point) []Point {
	r := make([]Point, len(pts))
	for i, p := range pts {
		r[len(pts)-1-i] = p
	}
	return r
}
