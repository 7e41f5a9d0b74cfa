package scene

import (
	"math"

	"arrowroot/canvas/draw"
)

// A curve is a cubic Bézier curve.
type curve [4]draw.Point

// bow is the curve from a to b whose middle lies d to the left of the straight
// line (on the screen).
func bow(a, b draw.Point, d float64) curve {
	side := b.Sub(a).Unit().Left().Times(d * 4 / 3)
	return curve{a, a.Add(b.Sub(a).Times(1. / 3)).Add(side), a.Add(b.Sub(a).Times(2. / 3)).Add(side), b}
}

func (c curve) at(t float64) draw.Point { return draw.CubicAt(c[0], c[1], c[2], c[3], t) }

// split cuts a curve at t (de Casteljau).
func (c curve) split(t float64) (before, after curve) {
	mix := func(a, b draw.Point) draw.Point { return a.Add(b.Sub(a).Times(t)) }
	ab, bc, cd := mix(c[0], c[1]), mix(c[1], c[2]), mix(c[2], c[3])
	abc, bcd := mix(ab, bc), mix(bc, cd)
	m := mix(abc, bcd)
	return curve{c[0], ab, abc, m}, curve{m, bcd, cd, c[3]}
}

// part is the curve between two shares.
func (c curve) part(from, to float64) curve {
	_, c = c.split(from)
	c, _ = c.split((to - from) / (1 - from))
	return c
}

// straight reports whether the curve hardly bends.
func (c curve) straight() bool {
	chord := c[3].Sub(c[0])
	n := chord.Unit().Left()
	off := func(p draw.Point) float64 { d := p.Sub(c[0]); return math.Abs(d.X*n.X + d.Y*n.Y) }
	return off(c[1]) < 0.05 && off(c[2]) < 0.05
}

// line gives points along the curve.
func (c curve) line() []draw.Point {
	if c.straight() {
		return []draw.Point{c[0], c[3]}
	}
	p := c.path()
	pieces, _ := p.Flatten(1)
	return pieces[0]
}

func (c curve) path() draw.Path {
	var p draw.Path
	p.Move(c[0])
	if c.straight() {
		p.Line(c[3])
	} else {
		p.Cubic(c[1], c[2], c[3])
	}
	return p
}

// outOf finds the share at which a curve that starts inside a body leaves it,
// gap dips outside of its outline.
func (c curve) outOf(b *body, gap float64) float64 {
	const steps = 32
	for k := 1; k <= steps; k++ {
		t := float64(k) / steps
		if b.edge(c.at(t)) < gap {
			continue
		}
		lo, hi := float64(k-1)/steps, t
		for range 12 {
			if m := (lo + hi) / 2; b.edge(c.at(m)) < gap {
				lo = m
			} else {
				hi = m
			}
		}
		return hi
	}
	return 1
}

func (c curve) reverse() curve { return curve{c[3], c[2], c[1], c[0]} }

// between cuts off what lies inside the two bodies; ok is false if nothing is
// left.
func (c curve) between(a, b *body, gapA, gapB float64) (curve, bool) {
	from, to := c.outOf(a, gapA), 1-c.reverse().outOf(b, gapB)
	if to-from < 1e-3 {
		return c, false
	}
	return c.part(from, to), true
}

// bends says how far each arrow bows so that it passes behind no node: the
// least bow that meets no other node and, if that is cheap, no dot strip.
// Positions are those of the bodies; z is the zoom.
func bends(all []*body, arrows [][2]int, z float64) []float64 {
	const (
		behindNode  = 1000.0
		acrossStrip = 60.0
		clearance   = 7.0
	)
	result := make([]float64, len(arrows))
	steps := [...]float64{0, 20, -20, 34, -34, 50, -50, 68, -68, 90, -90, 116, -116, 148, -148, 186, -186, 230, -230}
	type obstacle struct{ solid, soft, both draw.Rect }
	obstacles := make([]obstacle, len(all))
	for k, b := range all {
		solid, soft := b.rect().Grow(clearance*z), b.skirt(z)
		obstacles[k] = obstacle{solid, soft, solid.Union(soft)}
	}
	var pts []draw.Point
	for i, a := range arrows {
		from, to := all[a[0]].at, all[a[1]].at
		length := to.Sub(from).Len() / z
		best := math.Inf(1)
		for _, d := range steps {
			if math.Abs(d) > 0.5*length+20 || math.Abs(d) >= best {
				break
			}
			cost := math.Abs(d)
			c := bow(from, to, d*z)
			box := c.box()
			pts = pts[:0]
			for k := range obstacles {
				o := &obstacles[k]
				if k == a[0] || k == a[1] || !o.both.Meets(box) {
					continue
				}
				if len(pts) == 0 {
					pts = appendSample(pts, c, 14*z)
				}
				hit, brush := 0, false
				for _, p := range pts {
					if o.solid.Contains(p) {
						hit++
					} else if o.soft.Contains(p) {
						brush = true
					}
				}
				if hit > 0 {
					cost += behindNode + 20*float64(hit)
				} else if brush {
					cost += acrossStrip
				}
				if cost >= best {
					break
				}
			}
			if cost < best {
				best, result[i] = cost, d*z
			}
			if cost == 0 {
				break
			}
		}
	}
	return result
}

// box holds the curve.
func (c curve) box() draw.Rect {
	lo := draw.Point{X: min(c[0].X, c[1].X, c[2].X, c[3].X), Y: min(c[0].Y, c[1].Y, c[2].Y, c[3].Y)}
	hi := draw.Point{X: max(c[0].X, c[1].X, c[2].X, c[3].X), Y: max(c[0].Y, c[1].Y, c[2].Y, c[3].Y)}
	return draw.Rect{X: lo.X, Y: lo.Y, W: hi.X - lo.X, H: hi.Y - lo.Y}
}

// sample gives points on a curve about step apart.
func sample(c curve, step float64) []draw.Point { return appendSample(nil, c, step) }

func appendSample(pts []draw.Point, c curve, step float64) []draw.Point {
	n := min(max(int(c[3].Sub(c[0]).Len()/step), 4), 80)
	for i := range n + 1 {
		pts = append(pts, c.at(float64(i)/float64(n)))
	}
	return pts
}
