package causal

import (
	"fmt"
	"math"
	"math/rand/v2"
	"testing"

	"arrowroot/compile/graph"
)

// large has 28 nodes and 99 arrows, some nodes unmeasured.
func large(t testing.TB) *graph.Graph {
	return scattered(t, 28, 99, 28, []int{3, 9, 17})
}

// scattered throws arrows at random on nodes in a row.
func scattered(t testing.TB, nodes, arrows int, seed uint64, unmeasured []int) *graph.Graph {
	r := rand.New(rand.NewPCG(seed, 99))
	spec := graph.Spec{Unmeasured: unmeasured}
	for v := range nodes {
		spec.Names = append(spec.Names, fmt.Sprint("v", v))
	}
	seen := map[[2]int]bool{}
	for len(seen) < arrows {
		a, b := r.IntN(nodes), r.IntN(nodes)
		if a < b && !seen[[2]int{a, b}] {
			seen[[2]int{a, b}] = true
			spec.Arrows = append(spec.Arrows, [2]int{a, b})
		}
	}
	g, err := graph.New(spec)
	if err != nil {
		t.Fatal(err)
	}
	return g
}

// BenchmarkReading reads large diagrams beside a yardstick of the same run, a
// million square roots, which take a few milliseconds. What a hand feels is 100
// ms. Goals: all of 28 nodes and 99 arrows within 50 ms, of 100 and 300 within
// 400 ms; d-separation among 10,000 nodes and 40,000 arrows within 20 ms; a first
// minimal set of 1,000 nodes within 100 ms.
func BenchmarkReading(b *testing.B) {
	middle := scattered(b, 100, 300, 7, []int{4, 13, 22, 31, 40, 49, 58, 67, 76, 85, 94})
	for _, size := range []struct {
		name string
		g    *graph.Graph
		q    Query
	}{
		{"28 nodes, 99 arrows", large(b), Query{Exposure: 12, Outcome: 26, Held: []int{2, 5}}},
		{"100 nodes, 300 arrows", middle, Query{Exposure: 35, Outcome: 97, Held: []int{2, 5}}},
	} {
		g, q := size.g, size.q
		x, y := q.Exposure, q.Outcome
		type reading struct {
			name string
			read func()
		}
		parts := []reading{
			{"paths, sets, verdict", func() { Read(g, q) }},
			{"adjustment", func() { Adjust(g, Aim{Exposures: []int{x}, Outcomes: []int{y}}) }},
			{"controls", func() { Controls(g, x, y, q.Held) }},
			{"front doors", func() { FrontDoors(g, x, y, 0) }},
			{"instruments", func() { TotalInstruments(g, x, y) }},
			{"identification", func() { Identify(g, []int{x}, []int{y}, nil) }},
			{"basis", func() { Basis(g) }},
			{"functional constraints", func() { Functionals(g) }},
			{"tetrads", func() { Tetrads(g, 0) }},
			{"class", func() { ClassOf(g) }},
			{"carriers", func() { CarriersFor(g, x, y) }},
			{"separations, one set each", func() { Separations(g, 1) }},
		}
		for _, part := range append(parts, reading{"all of these", func() {
			for _, part := range parts {
				part.read()
			}
		}}) {
			b.Run(size.name+": "+part.name, func(b *testing.B) {
				for b.Loop() {
					part.read()
				}
			})
		}
	}
	wide := scattered(b, 1000, 3000, 8, nil)
	b.Run("1,000 nodes, 3,000 arrows: first minimal set", func(b *testing.B) {
		for b.Loop() {
			Minimal(wide, 335, 990, nil, 1)
		}
	})
	vast := scattered(b, 10_000, 40_000, 9, nil)
	b.Run("10,000 nodes, 40,000 arrows: separation", func(b *testing.B) {
		given := []int{}
		for v := range 200 {
			given = append(given, 37*v+3)
		}
		for b.Loop() {
			Separated(vast, []int{5000}, []int{9990}, given)
		}
	})
	b.Run("yardstick: a million square roots", func(b *testing.B) {
		sum := 0.0
		for b.Loop() {
			for i := range 1_000_000 {
				sum += math.Sqrt(float64(i))
			}
		}
		if sum == 0 {
			b.Fatal("nothing was added")
		}
	})
}

// Every question about a large diagram has a reading that says how much of it
// was left out.
func TestLargeDiagramsAreRead(t *testing.T) {
	g := large(t)
	for x := range g.Len() {
		for y := range g.Len() {
			if x == y || (x+y)%5 != 0 {
				continue
			}
			r := Read(g, Query{Exposure: x, Outcome: y, Held: []int{2, 5}})
			if r.Verdict.Sentence == "" || len(r.Paths) > 500 || r.MorePaths && len(r.Paths) < 500 {
				t.Errorf("%s on %s: %d paths, more %v, verdict %q", g.Names[x], g.Names[y], len(r.Paths), r.MorePaths, r.Verdict.Sentence)
			}
		}
	}
}
