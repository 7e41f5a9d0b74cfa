package scene

import (
	"slices"

	"arrowroot/canvas/draw"
)

// A Mark is what a list beside the sheet points at. While there is one, the
// paths of the reading are not marked, so that what it points at stands alone.
// Every kind differs in shape, not in colour only.
type Mark struct {
	Trails []Trail     // paths
	Ring   []string    // variables that it is about
	Box    []string    // variables drawn as if they were held
	Outer  []string    // a part of the diagram
	Inner  []string    // a smaller part within Outer
	Turn   [][2]string // arrows that could be turned round
	Apart  [][2]string // pairs that no arrow joins
	Offer  [][2]string // arrows that are not drawn and could be: from, to
}

// A Trail is a path to be marked.
type Trail struct {
	Look  TrailLook
	Legs  []Leg
	Stops []string // nodes that close it
}

// A Leg is one step of a trail: an arrow, whichever way it is walked, or an arc.
type Leg struct {
	From, To string
	Arc      bool
}

// TrailLook says how a trail is marked.
type TrailLook uint8

// The looks of a trail.
const (
	EffectTrail TrailLook = iota // two rails beside the arrows
	BiasTrail                    // an amber halo
	ClosedTrail                  // thin grey, with a tick where it is closed
)

// empty reports whether a mark, or none, points at nothing.
func (m *Mark) empty() bool {
	return m == nil || len(m.Trails)+len(m.Ring)+len(m.Box)+len(m.Outer)+len(m.Inner)+len(m.Turn)+len(m.Apart)+len(m.Offer) == 0
}

// boxes reports whether a mark shows a variable as held.
func (m *Mark) boxes(id string) bool { return m != nil && slices.Contains(m.Box, id) }

// drawMarks draws what lies under the arrows.
func (b *builder) drawMarks() {
	m := b.in.Mark
	b.part(m.Outer, m.Inner)
	for _, t := range m.Trails {
		var lines []*line
		for _, g := range t.Legs {
			l := b.find(g.From, g.To, g.Arc)
			if l == nil {
				l = b.find(g.To, g.From, g.Arc)
			}
			if l != nil {
				lines = append(lines, l)
			}
		}
		switch t.Look {
		case EffectTrail:
			b.rails(lines)
		case BiasTrail:
			b.halo(lines)
		default:
			b.closed(lines, t.Stops)
		}
	}
	for _, pair := range m.Turn {
		if l := b.find(pair[0], pair[1], false); l != nil {
			b.turn(l)
		}
	}
	for _, pair := range m.Apart {
		if l := b.ghost(pair); l != nil {
			b.list.Add(&draw.Shape{Path: l.run.path(), Stroke: b.in.Palette.Muted, Width: 2, Dash: []float64{1.5, 5}, Round: true})
		}
	}
	for _, pair := range m.Offer {
		if l := b.ghost(pair); l != nil {
			k := min(max(b.zoom, 0.75), 1.8)
			h := headFor(2*k, k)
			shaft, end := beforeHead(l.run, h.length*0.85)
			b.list.Add(
				&draw.Shape{Path: shaft.path(), Stroke: b.in.Palette.Action, Width: 2 * k, Dash: []float64{6 * k, 4 * k}},
				&draw.Shape{Path: h.path(end), Fill: b.in.Palette.Action},
			)
		}
	}
}

// ghost is a line between two nodes that no arrow joins; nil where one is off
// the sheet. It bows, so that it is not taken for an arrow behind it.
func (b *builder) ghost(pair [2]string) *line {
	from, ok := b.index[pair[0]]
	to, ok2 := b.index[pair[1]]
	if !ok || !ok2 || from == to {
		return nil
	}
	l := &line{pair: pair, from: b.nodes[from], to: b.nodes[to]}
	l.bend = b.arcBend(l.from, l.to)
	if !l.lay(1.5, 1.5) {
		return nil
	}
	return l
}

// part lays a grey band under a part of the diagram and an amber one under a
// smaller part within it.
func (b *builder) part(outer, inner []string) {
	inside := func(nodes []string) (lines []*line) {
		for _, l := range slices.Concat(b.arrows, b.arcs) {
			if slices.Contains(nodes, l.from.id) && slices.Contains(nodes, l.to.id) {
				lines = append(lines, l)
			}
		}
		return lines
	}
	if len(outer) > 0 {
		var band draw.Path
		for _, l := range inside(outer) {
			band.Append(draw.Polyline(l.full()...))
		}
		b.list.Add(&draw.Shape{Path: band, Stroke: draw.Alpha(b.in.Palette.Ink, 0.12), Width: 17 * min(max(b.zoom, 0.7), 1.6)})
	}
	if len(inner) > 0 {
		b.halo(inside(inner))
	}
}

// turn draws a small arrow the other way beside an arrow.
func (b *builder) turn(l *line) {
	k := min(max(b.zoom, 0.75), 1.6)
	pts := draw.Offset(l.run.part(0.22, 0.78).line(), 7*k)
	slices.Reverse(pts)
	n := len(pts)
	if n < 2 {
		return
	}
	h := headFor(1.6*k, k)
	ink := b.in.Palette.Action
	b.list.Add(
		&draw.Shape{Path: draw.Polyline(pts...), Stroke: ink, Width: 1.8 * k},
		&draw.Shape{Path: h.path(tip{pts[n-1], pts[n-1].Sub(pts[n-2]).Unit()}), Fill: ink},
	)
}

// markRing marks a node that a finding is about; it reports whether it did.
func (b *builder) markRing(n *body) bool {
	m, p := b.in.Mark, &b.in.Palette
	if m.empty() {
		return false
	}
	grow := func(d float64) draw.Path { return draw.RoundRect(n.rect().Grow(d), n.corner()+d) }
	switch {
	case slices.Contains(m.Box, n.id):
		b.list.Add(&draw.Shape{Path: grow(4), Fill: draw.Alpha(p.Action, 0.18)})
	case slices.Contains(m.Ring, n.id):
		b.list.Add(&draw.Shape{Path: grow(4), Stroke: p.Action, Width: 2})
	case slices.Contains(m.Inner, n.id):
		b.list.Add(&draw.Shape{Path: grow(4), Stroke: p.HaloEdge, Width: 2})
	case slices.Contains(m.Outer, n.id):
		b.list.Add(&draw.Shape{Path: grow(4), Stroke: p.Muted, Width: 1.5, Dash: []float64{4, 3}})
	default:
		return false
	}
	return true
}
