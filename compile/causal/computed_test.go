package causal

import (
	"fmt"
	"math"
	"math/rand/v2"
	"slices"
	"testing"

	"arrowroot/compile/graph"
)

// The oracle for computed variables is the definition of D-separation (Geiger,
// Verma & Pearl 1990): a path is open if no node on it but a collider is
// determined by what is held, and every collider is held or acts on what is.

// determined marks what the held nodes determine: each is held, or computed
// from determined nodes alone.
func determined(g *graph.Graph, held []int) []bool {
	known := mark(g.Len(), held)
	for range g.Len() {
		for v := range known {
			if g.Computed[v] && !slices.ContainsFunc(g.Parents[v], func(p int) bool { return !known[p] }) {
				known[v] = true
			}
		}
	}
	return known
}

func openWithComputed(g *graph.Graph, p *Path, held []int) bool {
	known := determined(g, held)
	for i, v := range p.Nodes {
		switch inner := i > 0 && i < len(p.Nodes)-1; {
		case inner && p.Edges[i-1].into(v) && p.Edges[i].into(v):
			below := g.Descendants(v)
			if !slices.ContainsFunc(held, func(z int) bool { return below[z] }) {
				return false
			}
		case known[v]: // an end too: it does not vary
			return false
		}
	}
	return true
}

func TestComputedAgainstOracle(t *testing.T) {
	r := rand.New(rand.NewPCG(13, 2026))
	var closed, sets, byComputing int
	for i := range rounds(1000, 10000) {
		s := sketch{nodes: 4 + r.IntN(3), arrows: 0.3 + 0.4*r.Float64(), unmeasured: 0.15 * r.Float64(), arcs: 0.1 * r.Float64(), computed: 0.4}
		g := s.draw(t, r)
		fail := func(format string, args ...any) {
			t.Helper()
			t.Fatalf("graph %d:%s\n%s", i, describe(g), fmt.Sprintf(format, args...))
		}
		everyone := list(everything(g))
		for a := range g.Len() {
			for b := range a {
				z := minus(subset(everyone, r.IntN(1<<g.Len())), []int{b, a})
				open := slices.ContainsFunc(oraclePaths(g, a, b), func(p Path) bool { return openWithComputed(g, &p, z) })
				if Separated(g, []int{a}, []int{b}, z) == open {
					fail("%d and %d given %v: an open path %v", a, b, z, open)
				}
				if !open && !oracleSeparated(g, a, b, z) {
					closed++
				}
			}
		}
		const x, y = 0, 1
		all := oraclePaths(g, x, y)
		held := minus(subset(everyone, r.IntN(1<<g.Len())&r.IntN(1<<g.Len())), []int{x, y})
		for _, p := range Read(g, Query{Exposure: x, Outcome: y, Held: held, MaxPaths: 1e6}).Paths {
			known := determined(g, held)
			if want := openWithComputed(g, &p, held); p.Open != want && !known[x] && !known[y] {
				fail("path %s given %v: open %v", p.Text(g), held, p.Open)
			}
		}
		forbidden := oracleForbidden(g, all)
		candidates := slices.DeleteFunc(list(available(g)), func(v int) bool { return v == x || v == y })
		valid := func(z []int) bool {
			if slices.ContainsFunc(z, func(v int) bool { return forbidden[v] }) || determined(g, z)[x] {
				return false
			}
			return !slices.ContainsFunc(all, func(p Path) bool { return !forward(&p) && openWithComputed(g, &p, z) })
		}
		got, more := Minimal(g, x, y, nil, 1e6)
		want := oracleMinimal(candidates, nil, valid)
		if more || !slices.Equal(spelled(g, got), spelled(g, want)) {
			fail("minimal sets %v, want %v", got, want)
		}
		sets += len(got)
		plain := *g
		plain.Computed = make([]bool, g.Len())
		if ordinary, _ := Minimal(&plain, x, y, nil, 1e6); !slices.Equal(spelled(g, ordinary), spelled(g, got)) {
			byComputing++
		}
	}
	if closed < 100 || byComputing < 20 {
		t.Errorf("closed by computing %d, sets that it changes in %d diagrams", closed, byComputing)
	}
	t.Logf("%d pairs closed by what is computed; %d sets, changed by it in %d diagrams", closed, sets, byComputing)
}

// seldom is less than any probability that is not in truth zero: computed values
// that never occur have one that is only not quite zero.
const seldom = 1e-12

// What is said to be separated is independent, and what is said to be valid gives
// the effect, in exact binary models with random functions.
func TestComputedInBinaryModels(t *testing.T) {
	r := rand.New(rand.NewPCG(14, 2026))
	apart, effects := 0, 0
	for range rounds(400, 4000) {
		s := sketch{nodes: 4 + r.IntN(3), arrows: 0.3 + 0.4*r.Float64(), computed: 0.4}
		g := s.draw(t, r)
		m := newBinaryModel(g, r)
		everyone := list(everything(g))
		for a := range g.Len() {
			for b := range a {
				z := minus(subset(everyone, r.IntN(1<<g.Len())), []int{b, a})
				if !Separated(g, []int{a}, []int{b}, z) {
					continue
				}
				apart++
				for state := range 1 << g.Len() {
					with, without := m.seen.given([]int{a}, union(z, []int{b}), state), m.seen.given([]int{a}, z, state)
					if m.seen.given(union(z, []int{b}), nil, state) > seldom && math.Abs(with-without) > 1e-9 {
						t.Fatalf("%s: %d and %d given %v: %g and %g", describe(g), a, b, z, with, without)
					}
				}
			}
		}
		const x, y = 0, 1
		sets, _ := Minimal(g, x, y, nil, 5)
		truth := m.doing([]int{x})
		for _, z := range sets {
			for state := range 4 {
				got := m.seen.average(x, y, z, nil, state)
				never := false // some held values never go with this exposure
				for at := range 1 << g.Len() {
					at = at&^1 | state&1
					never = never || m.seen.given(z, nil, at) > seldom && m.seen.given(union(z, []int{x}), nil, at) < seldom
				}
				if want := truth.given([]int{y}, []int{x}, state); !never && math.Abs(got-want) > 1e-9 {
					t.Fatalf("%s: held %v gives %g, truth %g", describe(g), z, got, want)
				}
				if !never {
					effects++
				}
			}
		}
	}
	if apart < 500 || effects < 500 {
		t.Errorf("only %d separations and %d effects", apart, effects)
	}
}
