package causal

import (
	"math"
	"math/rand/v2"
	"testing"
)

// fix does one round of fixings exactly: every law is that of p before the
// round, and what a node gets instead is its law given what is known.
func (p joint) fix(round []Fixing) joint {
	next := make(joint, len(p))
	for state, w := range p {
		if next[state] = w; w == 0 {
			continue
		}
		for _, f := range round {
			next[state] *= p.given([]int{f.Node}, f.Known, state) / p.given([]int{f.Node}, f.Given, state)
		}
	}
	return next
}

// In random binary models with unmeasured causes, the two ends of every
// functional constraint are independent once the fixings are done: the weighted
// distribution, reckoned from the truncated factorisation of the whole model, is
// a distribution and gives the node the same law whatever the other end is.
func TestFixingsInBinaryModels(t *testing.T) {
	r := rand.New(rand.NewPCG(73, 2026))
	tested, several, dependent := 0, 0, 0
	for range rounds(6000, 60000) {
		s := sketch{nodes: 5 + r.IntN(2), arrows: 0.3 + 0.3*r.Float64(), arcs: 0.2 + 0.2*r.Float64()}
		g := s.draw(t, r)
		if named, _ := nameArcs(g); named.Len() > 12 {
			continue
		}
		all, _ := Functionals(g)
		if len(all) == 0 {
			continue
		}
		m := newBinaryModel(g, r)
		for _, f := range all {
			p := m.seen
			for _, round := range f.Fixings {
				p = p.fix(round)
			}
			tested++
			if len(f.Fixings) > 1 {
				several++
			}
			total, apart := 0.0, 0.0
			for _, w := range p {
				total += w
			}
			given := union(f.Given, []int{f.FreeOf})
			for state, w := range p {
				if w > 0 {
					apart = math.Max(apart, math.Abs(p.given([]int{f.Node}, given, state)-p.given([]int{f.Node}, f.Given, state)))
				}
			}
			if math.Abs(total-1) > 1e-9 || apart > 1e-9 {
				t.Errorf("%s: %s: total %g, apart by %g; %+v given %v", describe(g), f.Sentence(g), total, apart, f.Fixings, f.Given)
			}
			for state, w := range m.seen { // nothing to test unless the data themselves show them dependent
				if w > 0 && math.Abs(m.seen.given([]int{f.Node}, given, state)-m.seen.given([]int{f.Node}, f.Given, state)) > 1e-9 {
					dependent++
					break
				}
			}
		}
	}
	t.Logf("%d tested, %d of several rounds, %d dependent before", tested, several, dependent)
	if tested < 100 || several < 1 || dependent < tested {
		t.Errorf("%d tested, %d of several rounds, %d dependent before", tested, several, dependent)
	}
}
