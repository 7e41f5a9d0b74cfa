package scene

import (
	"slices"

	"arrowroot/canvas/draw"
	"arrowroot/compile/causal"
)

// mostPaths is how many open confounding paths are marked at once; beyond it
// the marks would hide the diagram, and only the one picked out is marked.
const mostPaths = 5

// drawPaths marks the paths of the reading under the arrows: open confounding
// ones with an amber halo, causal ones with two thin rails, the one picked out
// alone, closed ones only when picked out.
func (b *builder) drawPaths() {
	if !b.in.Mark.empty() {
		b.drawMarks()
		return
	}
	r := b.in.Reading
	if r == nil || r.Graph == nil || b.in.HidePaths {
		return
	}
	if lit := b.in.LitPath; lit >= 0 && lit < len(r.Paths) {
		b.drawLit(&r.Paths[lit])
		return
	}
	var halo, rails []*line
	open := 0
	for i := range r.Paths {
		p := &r.Paths[i]
		switch {
		case !p.Open:
		case p.Kind == causal.Causal:
			rails = b.along(rails, p)
		default:
			open++
			halo = b.along(halo, p)
		}
	}
	if open <= mostPaths && !r.MorePaths {
		b.halo(halo)
	}
	b.rails(rails)
}

func (b *builder) drawLit(p *causal.Path) {
	lines := b.along(nil, p)
	switch {
	case p.Open && p.Kind == causal.Causal:
		b.rails(lines)
	case p.Open:
		b.halo(lines)
	default:
		var stops []string
		for _, stop := range p.ClosedAt {
			stops = append(stops, b.in.Reading.Graph.Names[stop.Node])
		}
		b.closed(lines, stops)
	}
}

// along adds the lines of a path that are not there yet.
func (b *builder) along(lines []*line, p *causal.Path) []*line {
	names := b.in.Reading.Graph.Names
	for _, e := range p.Edges {
		l := b.find(names[e.From], names[e.To], e.Arc)
		if l != nil && !slices.Contains(lines, l) {
			lines = append(lines, l)
		}
	}
	return lines
}

// full is the line from the middle of one node to the middle of the other, so
// that marks meet under the nodes.
func (l *line) full() []draw.Point { return joining(l.from.at, l.to.at, l.bend).line() }

// halo lays a soft amber band with one-pixel edges under lines. All bands are
// one shape, so that where they overlap they are not darker.
func (b *builder) halo(lines []*line) {
	half := 6.5 * min(max(b.zoom, 0.7), 1.6)
	var bands, edges draw.Path
	for _, l := range lines {
		pts := l.full()
		left, right := draw.Offset(pts, half), draw.Offset(pts, -half)
		edges.Append(draw.Polyline(left...))
		edges.Append(draw.Polyline(right...))
		slices.Reverse(right)
		bands.Append(draw.Polygon(append(left, right...)...))
	}
	p := &b.in.Palette
	b.list.Add(
		&draw.Shape{Path: bands, Fill: p.Halo},
		&draw.Shape{Path: edges, Stroke: p.HaloEdge, Width: 1},
	)
}

// rails lay two thin lines beside causal lines.
func (b *builder) rails(lines []*line) {
	var p draw.Path
	for _, l := range lines {
		d := b.look(l).width/2 + 3.6*min(max(b.zoom, 0.75), 1.6)
		pts := l.full()
		p.Append(draw.Polyline(draw.Offset(pts, d)...))
		p.Append(draw.Polyline(draw.Offset(pts, -d)...))
	}
	b.list.Add(&draw.Shape{Path: p, Stroke: b.in.Palette.Ink, Width: 1})
}

// closed draws a closed path in thin grey with a tick across it beside each
// node that closes it.
func (b *builder) closed(lines []*line, stops []string) {
	var bands, ticks draw.Path
	for _, l := range lines {
		for _, d := range []float64{4, -4} {
			bands.Append(draw.Polyline(draw.Offset(l.full(), d)...))
		}
		for _, name := range stops {
			at, towards := l.run.at(0.12), l.run.at(0.13).Sub(l.run.at(0.11)).Unit()
			if l.to.id == name {
				at, towards = l.run.at(0.8), l.run.at(0.81).Sub(l.run.at(0.79)).Unit()
			} else if l.from.id != name {
				continue
			}
			side := towards.Left().Times(9)
			ticks.Append(draw.Polyline(at.Add(side), at.Sub(side)))
		}
	}
	b.list.Add(
		&draw.Shape{Path: bands, Stroke: b.in.Palette.Border, Width: 1},
		&draw.Shape{Path: ticks, Stroke: b.in.Palette.Ink, Width: 2.5},
	)
}
