package scene

import (
	"math"
	"slices"

	"arrowroot/canvas/draw"
)

// A Map knows what stands where in a picture that Build made.
type Map struct {
	nodes  []*body
	index  map[string]int
	arrows []*line
	arcs   []*line
	plates []*frame
	notes  []*slip
	zoom   float64
}

// How far from a line or a rim the pointer may be, in dips. A line answers in
// a band of 24 dips (WCAG 2.2, 2.5.8 target size).
const (
	lineReach = 12.0
	rimInside = 5.0
	rimBeyond = 7.0
)

// Hit says what is at a place of the widget. Nodes come before notes, notes
// before lines, lines before plates; among lines the nearest counts.
func (m *Map) Hit(p draw.Point) Target {
	for _, n := range slices.Backward(m.nodes) {
		if n.depth(p) <= -min(rimInside, 0.18*n.h) {
			return Target{Kind: OnNode, Node: n.id}
		}
	}
	for _, n := range slices.Backward(m.nodes) {
		if n.depth(p) <= rimBeyond {
			return Target{Kind: OnEdge, Node: n.id}
		}
	}
	for _, s := range slices.Backward(m.notes) {
		if s.box.Contains(p) {
			return Target{Kind: OnNote, Note: s.note}
		}
	}
	best, found := lineReach, Target{}
	near := func(kind Kind, lines []*line) {
		for _, l := range lines {
			if d := distance(p, l.pts); d < best {
				best, found = d, Target{Kind: kind, Pair: l.pair}
			}
		}
	}
	near(OnArrow, m.arrows)
	near(OnArc, m.arcs)
	if found.Kind != Nothing {
		return found
	}
	for _, f := range slices.Backward(m.plates) {
		if f.tab.Contains(p) || f.box.Grow(4).Contains(p) && !f.box.Grow(-4).Contains(p) {
			return Target{Kind: OnPlate, Plate: f.plate.Name}
		}
	}
	return Target{}
}

// Within names the nodes whose middle lies in a rectangle of the widget.
func (m *Map) Within(r draw.Rect) []string {
	var ids []string
	for _, n := range m.nodes {
		if r.Contains(n.at) {
			ids = append(ids, n.id)
		}
	}
	return ids
}

// Bounds is the rectangle that everything on the sheet fills, in dips of the
// widget; ok is false for an empty sheet.
func (m *Map) Bounds() (r draw.Rect, ok bool) {
	add := func(s draw.Rect) {
		if ok {
			s = s.Union(r)
		}
		r, ok = s, true
	}
	for _, n := range m.nodes {
		s := n.rect()
		s.H += 28 * m.zoom
		add(s)
	}
	for _, l := range slices.Concat(m.arrows, m.arcs) {
		for _, p := range l.pts {
			add(draw.Rect{X: p.X, Y: p.Y})
		}
	}
	for _, f := range m.plates {
		add(f.box)
	}
	for _, s := range m.notes {
		add(s.box)
	}
	return r, ok
}

// NodeRect is where a node stands, in dips of the widget.
func (m *Map) NodeRect(id string) (r draw.Rect, ok bool) {
	i, ok := m.index[id]
	if !ok {
		return r, false
	}
	return m.nodes[i].rect(), true
}

// LineMiddle is the middle of an arrow or arc, in dips of the widget.
func (m *Map) LineMiddle(pair [2]string) (p draw.Point, ok bool) {
	for _, l := range slices.Concat(m.arrows, m.arcs) {
		if l.pair == pair {
			return l.run.at(0.5), true
		}
	}
	return p, false
}

// distance is how far a point is from a polyline.
func distance(p draw.Point, pts []draw.Point) float64 {
	best := math.Inf(1)
	for i := 1; i < len(pts); i++ {
		a, d := pts[i-1], pts[i].Sub(pts[i-1])
		t := 0.0
		if l := d.X*d.X + d.Y*d.Y; l > 0 {
			t = min(max(((p.X-a.X)*d.X+(p.Y-a.Y)*d.Y)/l, 0), 1)
		}
		best = min(best, p.Sub(a.Add(d.Times(t))).Len())
	}
	return best
}
