package causal

import (
	"fmt"
	"math"
	"math/rand/v2"
	"slices"
	"testing"
)

// varies is the largest change of a formula when a node's value is changed.
func varies(p joint, f Functional, nodes int) float64 {
	most := 0.0
	cache := map[string]float64{}
	for state := range 1 << nodes {
		most = max(most, math.Abs(p.value(f.Formula, state, cache)-p.value(f.Formula, state^1<<f.FreeOf, cache)))
	}
	return most
}

// Source: testdata/causal/SOURCE.md.
func TestFunctionalsOfReference(t *testing.T) {
	for _, c := range readReference(t, "beyond.json") {
		if c.Question.Type != "verma" {
			continue
		}
		var want struct {
			Free bool `json:"functional_free_of_A"`
		}
		c.answer(t, &want)
		g := c.graph(t)
		all, more := Functionals(g)
		var texts []string
		for _, f := range all {
			texts = append(texts, f.Sentence(g))
		}
		wanted := []string(nil)
		if want.Free {
			wanted = []string{"Your arrows say that ∑{B} [P(B | A) P(D | A, B, C)] is the same whatever A is. No independence says so: nothing measured separates A and D."}
		}
		if more || !slices.Equal(texts, wanted) {
			t.Errorf("%s: got %q", c.ID, texts)
		}
	}
}

// Functional constraints hold in every binary model of the graph, and not in
// an arbitrary distribution.
func TestFunctionalsInBinaryModels(t *testing.T) {
	r := rand.New(rand.NewPCG(71, 2026))
	found := 0
	for range rounds(5000, 50000) {
		s := sketch{nodes: 4 + r.IntN(2), arrows: 0.4, unmeasured: 0.1, arcs: 0.3}
		g := s.draw(t, r)
		all, _ := Functionals(g)
		if len(all) == 0 || g.Len()+len(g.Arcs) > 10 {
			continue
		}
		m := newBinaryModel(g, r)
		any := make(joint, 1<<g.Len())
		for at := range any {
			if at&^bitsOf(list(g.Measured)) == 0 {
				any[at] = 0.2 + r.Float64()
			}
		}
		for _, f := range all {
			found++
			if most := varies(m.seen, f, g.Len()); most > 1e-9 {
				t.Errorf("%s: %s It varies by %g", describe(g), f.Sentence(g), most)
			}
			if most := varies(any, f, g.Len()); most < 1e-6 {
				t.Errorf("%s: %s So it is in any distribution", describe(g), f.Sentence(g))
			}
		}
	}
	if found < 20 {
		t.Errorf("only %d constraints", found)
	}
}

// Source: testdata/causal/SOURCE.md.
func TestTetradsOfReference(t *testing.T) {
	for _, c := range readReference(t, "beyond.json") {
		if c.Question.Type != "tetrads" {
			continue
		}
		var want struct{ Vanishing [][2][2][2]string }
		c.answer(t, &want)
		products := func(pairs [2][2][2]string) string {
			var all []string
			for _, p := range pairs {
				var one []string
				for _, q := range p {
					one = append(one, min(q[0], q[1])+max(q[0], q[1]))
				}
				slices.Sort(one)
				all = append(all, fmt.Sprint(one))
			}
			slices.Sort(all)
			return fmt.Sprint(all)
		}
		var wanted, got []string
		for _, v := range want.Vanishing {
			wanted = append(wanted, products(v))
		}
		g := c.graph(t)
		all, more := Tetrads(g, 0)
		for _, v := range all {
			n := func(at int) string { return g.Names[at] }
			got = append(got, products([2][2][2]string{{{n(v.A), n(v.C)}, {n(v.B), n(v.D)}}, {{n(v.A), n(v.D)}, {n(v.B), n(v.C)}}}))
		}
		slices.Sort(wanted)
		slices.Sort(got)
		if more || !slices.Equal(got, wanted) {
			t.Errorf("%s: got %v, want %v", c.ID, got, wanted)
		}
	}
}

// A tetrad is listed if and only if it vanishes in a random linear model
// without both its products vanishing.
func TestTetradsInLinearModels(t *testing.T) {
	r := rand.New(rand.NewPCG(72, 2026))
	listed := 0
	for range rounds(300, 3000) {
		s := sketch{nodes: 5 + r.IntN(2), arrows: 0.3 + 0.2*r.Float64(), unmeasured: 0.25, arcs: 0.1}
		g := s.draw(t, r)
		m := drawLinear(g, r)
		all, _ := Tetrads(g, 0)
		listed += len(all)
		nodes := list(available(g))
		for at := range 1 << len(nodes) {
			four := subset(nodes, at)
			if len(four) != 4 {
				continue
			}
			a, b, c, d := four[0], four[1], four[2], four[3]
			for _, q := range []Tetrad{{a, b, c, d}, {a, c, b, d}, {a, d, b, c}} {
				first, second := m.cov[q.A][q.C]*m.cov[q.B][q.D], m.cov[q.A][q.D]*m.cov[q.B][q.C]
				want := near(first, second) && math.Abs(first) > 1e-12
				if got := slices.Contains(all, q); got != want {
					t.Errorf("%s: %+v listed %v; %g and %g", describe(g), q, got, first, second)
				}
			}
		}
	}
	if listed < 100 {
		t.Errorf("only %d listed", listed)
	}
}

func TestConstraintsOfLargeDiagrams(t *testing.T) {
	g := large(t)
	Functionals(g)
	Tetrads(g, 0)
	Basis(g)
	if s := Separations(g, 3); len(s) != 25*24/2 {
		t.Errorf("%d pairs of 25 measured variables", len(s))
	}
}
