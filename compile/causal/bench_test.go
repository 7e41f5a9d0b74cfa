package causal

import (
	"math"
	"math/rand/v2"
	"testing"

	"arrowroot/compile/graph"
)

// large has 28 nodes and 99 arrows, some nodes unmeasured.
func large(t testing.TB) *graph.Graph {
	r := rand.New(rand.NewPCG(28, 99))
	spec := graph.Spec{Unmeasured: []int{3, 9, 17}}
	for v := range 28 {
		spec.Names = append(spec.Names, string(rune('a'+v%26))+string(rune('0'+v/26)))
	}
	seen := map[[2]int]bool{}
	for len(seen) < 99 {
		a, b := r.IntN(28), r.IntN(28)
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

// BenchmarkReading reads a large diagram beside a yardstick of the same run: a
// reading should take less than 100 ms, which is what a hand feels, where a
// million square roots take a few.
func BenchmarkReading(b *testing.B) {
	g := large(b)
	b.Run("28 nodes, 99 arrows", func(b *testing.B) {
		b.ReportAllocs()
		for b.Loop() {
			Read(g, Query{Exposure: 12, Outcome: 26, Held: []int{2, 5}})
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
