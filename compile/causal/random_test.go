package causal

import (
	"fmt"
	"math/rand/v2"
	"os"
	"testing"

	"arrowroot/compile/graph"
)

// A sketch says what random graphs to make.
type sketch struct {
	nodes      int
	arrows     float64 // probability of each possible arrow
	arcs       float64 // of each possible arc
	unmeasured float64 // of each node but the first two
	computed   float64 // of each node with parents, the first two excepted
}

// draw makes a random graph whose topological order is not that of the
// numbers. Nodes 0 and 1 are measured, so they can serve as a question.
func (s sketch) draw(t testing.TB, r *rand.Rand) *graph.Graph {
	t.Helper()
	order := r.Perm(s.nodes)
	spec := graph.Spec{}
	parents := make([]int, s.nodes)
	for i := range s.nodes {
		spec.Names = append(spec.Names, fmt.Sprintf("v%d", i))
		for j := range i {
			if r.Float64() < s.arrows {
				spec.Arrows = append(spec.Arrows, [2]int{order[j], order[i]})
				parents[order[i]]++
			}
		}
	}
	deterministic := make([]bool, s.nodes)
	for v := 2; v < s.nodes; v++ {
		if r.Float64() < s.unmeasured {
			spec.Unmeasured = append(spec.Unmeasured, v)
		} else if parents[v] > 0 && r.Float64() < s.computed {
			spec.Computed = append(spec.Computed, v)
			deterministic[v] = true
		}
	}
	for a := range s.nodes {
		for b := range a {
			if r.Float64() < s.arcs && !deterministic[a] && !deterministic[b] {
				spec.Arcs = append(spec.Arcs, [2]int{a, b})
			}
		}
	}
	g, err := graph.New(spec)
	if err != nil {
		t.Fatal(err)
	}
	return g
}

// describe prints a graph for a failing test.
func describe(g *graph.Graph) string {
	text := ""
	for _, e := range g.Arrows {
		text += fmt.Sprintf(" %s→%s", g.Names[e[0]], g.Names[e[1]])
	}
	for _, e := range g.Arcs {
		text += fmt.Sprintf(" %s↔%s", g.Names[e[0]], g.Names[e[1]])
	}
	text += "; unmeasured"
	for v, m := range g.Measured {
		if !m {
			text += " " + g.Names[v]
		}
	}
	text += "; computed"
	for v, c := range g.Computed {
		if c {
			text += " " + g.Names[v]
		}
	}
	return text
}

func subset(nodes []int, bits int) []int {
	z := []int{}
	for i, v := range nodes {
		if bits>>i&1 == 1 {
			z = append(z, v)
		}
	}
	return z
}

// rounds is how often a random check is made: usual, or long if asked for.
func rounds(usual, long int) int {
	if os.Getenv("ARROWROOT_LONG") != "" {
		return long
	}
	return usual
}
