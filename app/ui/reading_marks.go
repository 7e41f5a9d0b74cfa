package ui

import (
	"slices"
	"strings"

	"arrowroot/app/findings"
	"arrowroot/canvas/scene"
	"arrowroot/compile/causal"
)

// markOf is what the sheet shows of a finding: the path that is the reason, the
// set as if it were held, the part of the diagram that fails, the arrows that
// could be turned round, the pair that no arrow joins.
func markOf(f *findings.Findings, section string, i int, x *findings.Finding) *scene.Mark {
	names := func(nodes []int) []string { return f.Graph.NamesOf(nodes) }
	switch section {
	case findings.AdjustmentSection:
		if isSet(x) {
			return &scene.Mark{Box: names(x.Nodes)}
		}
	case findings.ControlSection:
		c := &f.Controls.List[i]
		m := &scene.Mark{Ring: names([]int{c.Node})}
		if len(x.Edges) > 0 {
			m.Trails = []scene.Trail{{Look: lookOf(c.Path, x.Edges), Legs: legs(f, x.Edges)}}
		}
		return m
	case findings.BeyondSection:
		if m := beyondMark(f, x); m != nil {
			return m
		}
	case findings.ContradictionSection:
		if m := promiseMark(x); m != nil {
			return m
		}
	case findings.EquivalenceSection:
		if len(x.Edges) > 0 {
			m := &scene.Mark{}
			for _, e := range x.Edges {
				m.Turn = append(m.Turn, [2]string{f.Graph.Names[e.From], f.Graph.Names[e.To]})
			}
			return m
		}
	}
	m := &scene.Mark{Ring: names(x.Nodes)}
	switch {
	case x.Path != nil:
		return &scene.Mark{Trails: []scene.Trail{trailOf(f, x.Path)}}
	case len(x.Edges) > 0:
		m.Trails = []scene.Trail{{Look: scene.EffectTrail, Legs: legs(f, x.Edges)}}
	}
	return m
}

// beyondMark shows the parts that stand in the way of a formula, a front door
// with what must be given, an instrument with what must be given; nil = nothing
// of its own.
func beyondMark(f *findings.Findings, x *findings.Finding) *scene.Mark {
	names := func(nodes []int) []string { return f.Graph.NamesOf(nodes) }
	b := f.Beyond
	switch x.Kind {
	case "not identified":
		if id := b.Identification; id.Whole != nil {
			return &scene.Mark{Outer: names(id.Whole), Inner: names(id.Part)}
		}
	case "front door":
		for _, d := range b.Doors {
			if sameSet(names(x.Nodes), names(slices.Concat(d.Through, d.Given, f.Exposures, f.Outcomes))) {
				return &scene.Mark{Ring: names(d.Through), Box: names(d.Given)}
			}
		}
	case "instrument", "instrument for the arrow":
		for _, z := range slices.Concat(b.TotalInstruments, b.ArrowInstruments) {
			if strings.HasSuffix(x.Key, "instrument "+f.Graph.Names[z.Node]) || strings.HasSuffix(x.Key, "arrow "+f.Graph.Names[z.Node]) {
				return &scene.Mark{Ring: names([]int{z.Node}), Box: names(z.Given[0])}
			}
		}
	}
	return nil
}

// promiseMark shows an independence as the pair that no arrow joins, what is
// known as held; nil for what is no independence. The key has the names.
func promiseMark(x *findings.Finding) *scene.Mark {
	parts := strings.Split(x.Key, " | ")
	if len(parts) != 3 {
		return nil
	}
	m := &scene.Mark{Ring: parts[:2], Apart: [][2]string{{parts[0], parts[1]}}}
	if parts[2] != "" {
		m.Box = strings.Split(parts[2], ", ")
	}
	return m
}

// lookOf marks a path that begins at the exposure and follows the arrows as
// what carries the effect, and every other as what mixes something in.
func lookOf(nodes []int, edges []causal.Edge) scene.TrailLook {
	for i, e := range edges {
		if e.Arc || i+1 >= len(nodes) || e.From != nodes[i] || e.To != nodes[i+1] {
			return scene.BiasTrail
		}
	}
	return scene.EffectTrail
}

// trailOf marks a path as what it is.
func trailOf(f *findings.Findings, p *causal.Path) scene.Trail {
	t := scene.Trail{Legs: legs(f, p.Edges)}
	switch {
	case p.Open && p.Kind == causal.Causal:
	case p.Open:
		t.Look = scene.BiasTrail
	default:
		t.Look = scene.ClosedTrail
		for _, s := range p.ClosedAt {
			t.Stops = append(t.Stops, f.Graph.Names[s.Node])
		}
	}
	return t
}

func legs(f *findings.Findings, edges []causal.Edge) []scene.Leg {
	var out []scene.Leg
	for _, e := range edges {
		out = append(out, scene.Leg{From: f.Graph.Names[e.From], To: f.Graph.Names[e.To], Arc: e.Arc})
	}
	return out
}
