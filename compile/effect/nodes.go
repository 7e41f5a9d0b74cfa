package effect

import (
	"context"
	"fmt"
	"maps"
	"math/rand/v2"
	"slices"

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
	var out []NodeEffect
	exposure, ok := p.variables[q.Exposure]
	x := g.Index(q.Exposure)
	if x < 0 {
		return nil, &unknownError{q.Exposure}
	}
	if !ok { // no law reads it: nothing modelled descends from it
		for _, v := range m.Variables {
			out = append(out, NodeEffect{Variable: v.ID, Plain: true})
		}
		return out, nil
	}
	from, to, err := arms(m.Variables[exposure], &q)
	if err != nil {
		return nil, err
	}
	fixed := make(map[int]bool)
	for _, f := range q.Fixed {
		fixed[g.Index(f.Variable)] = true
	}
	below := g.Keep(func(_, to int) bool { return !fixed[to] }, nil).Descendants(x)
	together := make(map[string][]int) // by districts that read what would have been: places in out
	districts := make(map[string]map[string][]string)
	for i, v := range m.Variables {
		if i == exposure || v.MeanOf != "" { // a group mean is no node
			continue
		}
		n := NodeEffect{Variable: v.ID}
		at := g.Index(v.ID)
		if at < 0 || !below[at] || fixed[at] || (p.laws[i] == nil && p.computed[i] == nil) {
			n.Plain = true
			out = append(out, n)
			continue
		}
		kind, reading, _ := Districts(g, &q, at)
		if n.Refused = kind == causal.NotSimulated; !n.Refused {
			key := fmt.Sprint(reading)
			together[key] = append(together[key], len(out))
			districts[key] = reading
		}
		out = append(out, n)
	}
	for _, key := range slices.Sorted(maps.Keys(together)) {
		var nodes []*NodeEffect
		for _, at := range together[key] {
			nodes = append(nodes, &out[at])
		}
		pins, err := p.pins(exposure, districts[key], &q)
		if err != nil {
			return nil, err
		}
		if err := p.nodes(ctx, nodes, pins, [2]arm{from, to}, &q, draws, src, opt); err != nil {
			return nil, err
		}
	}
	return out, nil
}

// nodes fills the values of variables that the same simulation serves.
func (p *planner) nodes(ctx context.Context, nodes []*NodeEffect, pins []pin, arms [2]arm, q *study.Question, draws [][]float64, src rand.Source, opt Options) error {
	var targets []target
	for _, n := range nodes {
		v := p.variables[n.Variable]
		s, err := p.paintScale(v)
		if err != nil {
			return err
		}
		targets = append(targets, target{variable: v, scale: s})
	}
	plan, err := p.plan(pins, false, targets...)
	if err != nil {
		return err
	}
	sim := &simulation{
		planner: p, plan: plan, arms: arms[:], draws: draws, opt: opt.share(),
		newGroups: q.Groups == study.NewGroups, byGroups: q.Weigh == study.ByGroups,
	}
	if err := sim.run(ctx, src); err != nil {
		return err
	}
	for i := range sim.picked {
		from, to := sim.mean(i, 0), sim.mean(i, 1)
		for k, t := range plan.targets {
			parts := t.scale.parts()
			by := change(t.scale, from[t.at:t.at+parts], to[t.at:t.at+parts])
			nodes[k].Values = append(nodes[k].Values, by/p.width(t.variable))
			nodes[k].Unsigned = parts > 1
		}
	}
	return nil
}

// An unknownError names a variable that a fit does not hold.
type unknownError struct{ id string }

func (e *unknownError) Error() string { return e.id + " is not in this fit" }
