package scene

import (
	"math"

	"arrowroot/canvas/draw"
)

// A curve is a cubic Bézier curve.
type curve [4]draw.Point

// A bend says how far the control points of a curve lie to the left of the
// straight line (on the screen), after a third and after two thirds of it.
type bend struct{ near, far float64 }

// bow is the bend whose middle lies d to the left.
func bow(d float64) bend { return bend{d * 4 / 3, d * 4 / 3} }

// joining is the curve from a to b with a bend.
func joining(a, b draw.Point, d bend) curve {
	side := b.Sub(a).Unit().Left()
	return curve{
		a,
		a.Add(b.Sub(a).Times(1. / 3)).Add(side.Times(d.near)),
		a.Add(b.Sub(a).Times(2. / 3)).Add(side.Times(d.far)),
		b,
	}
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

// bends says how each arrow bends so that it passes behind no node: the least
// bow that meets no other node and, if that is cheap, no dot strip; where every
// bow meets a node, bends that swing out at one end are tried too. Positions
// are those of the bodies; z is the zoom.
func bends(all []*body, arrows [][2]int, z float64) []bend {
	r := router{obstacles: make([]obstacle, len(all)), z: z, many: len(arrows) > manyArrows}
	for k, b := range all {
		solid, soft := b.rect().Grow(clearance*z), b.skirt(z)
		r.obstacles[k] = obstacle{solid: solid, soft: soft}
	}
	r.survey()
	result := make([]bend, len(arrows))
	for i, a := range arrows {
		r.from, r.to = a[0], a[1]
		r.a, r.b = all[a[0]].at, all[a[1]].at
		result[i] = r.route()
	}
	return result
}

// What a route costs, in dips of bow at zoom 1.
const (
	behindNode  = 1000.0
	acrossStrip = 60.0
	clearance   = 7.0 // kept from nodes
	manyArrows  = 400 // on a sheet where no bend keeps arrows readable
)

// bowSteps are the bows that are tried, the smallest first.
var bowSteps = [...]float64{0, 20, -20, 34, -34, 50, -50, 68, -68, 90, -90, 116, -116, 148, -148, 186, -186, 230, -230}

// An obstacle is a node that arrows should not meet: its outline, and its
// dots below.
type obstacle struct {
	solid, soft draw.Rect
	hits        int // points of a curve in solid
	brushed     bool
	met         bool
}

// A router looks for obstacles in the cells of a grid, because a sheet can have
// a thousand of them and an arrow is tried with seventy bends.
type router struct {
	obstacles []obstacle
	cells     [][]int    // obstacles that reach into each cell, row by row
	corner    draw.Point // of the grid
	across    int        // cells in a row
	down      int        // rows
	many      bool       // so many arrows that few bends are tried for each
	z         float64
	from, to  int
	a, b      draw.Point
	pts       []draw.Point // scratch
	met       []int        // scratch
}

const cellSize = 96.0 // dips at zoom 1

// cell gives the column and row of a point, which may lie off the grid.
func (r *router) cell(x, y float64) (column, row int) {
	return int(math.Floor((x - r.corner.X) / (cellSize * r.z))), int(math.Floor((y - r.corner.Y) / (cellSize * r.z)))
}

// at lists the obstacles that may hold a point.
func (r *router) at(p draw.Point) []int {
	x, y := r.cell(p.X, p.Y)
	if x < 0 || y < 0 || x >= r.across || y >= r.down {
		return nil
	}
	return r.cells[y*r.across+x]
}

// survey enters every obstacle in the cells that it reaches into.
func (r *router) survey() {
	var all draw.Rect
	for k := range r.obstacles {
		box := r.obstacles[k].solid.Union(r.obstacles[k].soft)
		if k > 0 {
			box = box.Union(all)
		}
		all = box
	}
	r.corner = draw.Point{X: all.X, Y: all.Y}
	x, y := r.cell(all.X+all.W, all.Y+all.H)
	if x, y = x+1, y+1; x*y > 1<<20 {
		return // nodes so far apart that looking them up saves nothing: no arrow bends
	}
	r.across, r.down = x, y
	r.cells = make([][]int, x*y)
	for k := range r.obstacles {
		box := r.obstacles[k].solid.Union(r.obstacles[k].soft)
		left, top := r.cell(box.X, box.Y)
		right, bottom := r.cell(box.X+box.W, box.Y+box.H)
		right, bottom = min(right, r.across-1), min(bottom, r.down-1) // sums of rounded numbers can end a hair beyond the grid
		for y := top; y <= bottom; y++ {
			for x := left; x <= right; x++ {
				r.cells[y*r.across+x] = append(r.cells[y*r.across+x], k)
			}
		}
	}
}

func (r *router) route() bend {
	length := r.b.Sub(r.a).Len() / r.z
	best, least := bend{}, math.Inf(1)
	try := func(d bend, cost float64) {
		if cost >= least {
			return
		}
		if cost = r.cost(d, cost); cost < least {
			best, least = d, cost
		}
	}
	for _, d := range bowSteps {
		if math.Abs(d) > 0.5*length+20 || r.many && math.Abs(d) > 34 {
			break
		}
		try(bow(d*r.z), math.Abs(d))
	}
	if least < behindNode || r.many {
		return best
	}
	for _, d := range bowSteps[1:] {
		if math.Abs(d) > 0.5*length+20 {
			break
		}
		for _, swing := range [...]bend{{2, 0.3}, {0.3, 2}, {1.5, -1.5}} {
			try(bend{swing.near * d * r.z, swing.far * d * r.z}, 1.4*math.Abs(d))
		}
	}
	return best
}

// cost adds to a cost what the curve meets.
func (r *router) cost(d bend, cost float64) float64 {
	r.pts = appendSample(r.pts[:0], joining(r.a, r.b, d), 14*r.z)
	r.met = r.met[:0]
	for _, p := range r.pts {
		for _, k := range r.at(p) {
			if k == r.from || k == r.to {
				continue
			}
			o := &r.obstacles[k]
			solid := o.solid.Contains(p)
			if !solid && !o.soft.Contains(p) {
				continue
			}
			if !o.met {
				o.met, o.hits, o.brushed = true, 0, false
				r.met = append(r.met, k)
			}
			if solid {
				o.hits++
			} else {
				o.brushed = true
			}
		}
	}
	for _, k := range r.met {
		o := &r.obstacles[k]
		o.met = false
		if o.hits > 0 {
			cost += behindNode + 20*float64(o.hits)
		} else if o.brushed {
			cost += acrossStrip
		}
	}
	return cost
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
