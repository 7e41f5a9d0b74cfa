package causal

import (
	"math/rand/v2"
	"testing"
	"time"

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

func BenchmarkReading(b *testing.B) {
	g := large(b)
	b.ReportAllocs()
	for b.Loop() {
		Read(g, Query{Exposure: 12, Outcome: 26, Held: []int{2, 5}})
	}
}

// Every question about a large diagram is read while a hand draws; the bound
// is loose for a busy machine (the aim is 100 ms for one reading).
func TestLargeDiagramsAreQuick(t *testing.T) {
	g := large(t)
	start := time.Now()
	longest, readings := time.Duration(0), 0
	for x := range g.Len() {
		for y := range g.Len() {
			if (x+y)%5 != 0 {
				continue
			}
			began := time.Now()
			Read(g, Query{Exposure: x, Outcome: y, Held: []int{2, 5}})
			longest = max(longest, time.Since(began))
			readings++
		}
	}
	t.Logf("%d readings, %v on average, longest %v", readings, time.Since(start)/time.Duration(readings), longest)
	if longest > time.Second {
		t.Errorf("one reading took %v", longest)
	}
}
