package causal

import (
	"slices"
	"testing"
)

// Paths from several exposures are proper, come shortest first, and are as many
// as counting finds: a list made by hand.
func TestBetween(t *testing.T) {
	g := sheet(t, "A -> B -> Y, A -> Y, C -> A, C -> Y, B <-> Y")
	var got []string
	list, all := Between(g, numbers(g, []string{"A", "B"}), numbers(g, []string{"Y"}), numbers(g, []string{"C"}), 0)
	if !all {
		t.Error("there are more")
	}
	for _, p := range list {
		got = append(got, p.Text(g))
		if p.Open == slices.Contains(p.Nodes, g.Index("C")) {
			t.Errorf("%s: open %v with C held", p.Text(g), p.Open)
		}
	}
	// A reaches Y past B alone, B by its arrow and its arc: what goes through
	// the other exposure is no proper path.
	if want := []string{"A → Y", "B → Y", "B ↔ Y", "A ← C → Y"}; !slices.Equal(got, want) {
		t.Errorf("%q, want %q", got, want)
	}
	if n, exact := CountPaths(g, numbers(g, []string{"A", "B"}), numbers(g, []string{"Y"})); n != len(got) || !exact {
		t.Errorf("counted %d, exact %v", n, exact)
	}
}

// Counting agrees with listing on the large diagrams that can be listed, and
// gives up on the others with a number that is not too high.
func TestCountPaths(t *testing.T) {
	for _, c := range readReference(t, "random.json")[:60] {
		g := c.graph(t)
		for x := range g.Len() {
			y := (x + 1) % g.Len()
			listed := 0
			for range paths(g, x, y) {
				listed++
			}
			if n, exact := CountPaths(g, []int{x}, []int{y}); n != listed || !exact {
				t.Errorf("%s, %s to %s: counted %d (exact %v), listed %d", c.ID, g.Names[x], g.Names[y], n, exact, listed)
			}
		}
	}
	if n, exact := CountPaths(large(t), []int{12}, []int{26}); exact || n < 1000 {
		t.Errorf("large: counted %d, exact %v", n, exact)
	}
}
