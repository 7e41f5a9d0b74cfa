package effect

import (
	"context"
	"math/rand/v2"

	"arrowroot/compile/causal"
	"arrowroot/compile/graph"
	"arrowroot/compile/model"
	"arrowroot/compile/study"
)

// Nodes gives every variable of the model but the exposure: the change of its
// expectation under the question's intervention, in its plausible widths
// (SEMANTICS G). The graph decides for each variable by itself whether its
// change may be simulated (SEMANTICS B2).
func Nodes(ctx context.Context, m *model.Model, g *graph.Graph, q study.Question, draws [][]float64, src rand.Source, opt Options) ([]NodeEffect, error) {
	p, err := newPlanner(m)
	if err != nil {
		return nil, err
	}
	exposure, ok := p.variables[q.Exposure]
	x := g.Index(q.Exposure)
	if !ok || x < 0 {
		return nil, &unknownError{q.Exposure}
	}
	from, to, err := arms(m.Variables[exposure], &q)
	if err != nil {
		return nil, err
	}
	below := g.Descendants(x)
	var out []NodeEffect
	for i, v := range m.Variables {
		at := g.Index(v.ID)
		if i == exposure {
			continue
		}
		n := NodeEffect{Variable: v.ID}
		if at < 0 || !below[at] || (p.laws[i] == nil && p.computed[i] == nil) {
			n.Plain = true
			out = append(out, n)
			continue
		}
		kind, district, _ := causal.InterventionCase(g, x, at)
		if kind == causal.NotSimulated {
			n.Refused = true
			out = append(out, n)
			continue
		}
		var ids []string
		if kind == causal.ObservedForDistrict {
			for _, member := range district {
				ids = append(ids, g.Names[member])
			}
		}
		if err := p.node(ctx, &n, exposure, i, ids, from, to, draws, src, opt); err != nil {
			return nil, err
		}
		out = append(out, n)
	}
	return out, nil
}

func (p *planner) node(ctx context.Context, n *NodeEffect, exposure, variable int, district []string, from, to arm, draws [][]float64, src rand.Source, opt Options) error {
	plan, err := p.plan(exposure, variable, p.indices(district), false)
	if err != nil {
		return err
	}
	s, err := p.paintScale(variable)
	if err != nil {
		return err
	}
	n.Unsigned = s.parts() > 1
	sim := &simulation{planner: p, plan: plan, scale: s, arms: []arm{from, to}, draws: draws, opt: opt.share()}
	sim.summary = func(sides [][]float64) float64 { return change(s, sides[0], sides[1]) }
	if err := sim.run(ctx, src); err != nil {
		return err
	}
	width := p.width(variable)
	for _, v := range sim.values {
		n.Values = append(n.Values, v/width)
	}
	return nil
}

// An unknownError names a variable that a fit does not hold.
type unknownError struct{ id string }

func (e *unknownError) Error() string { return e.id + " is not in this fit" }
