package graph

import (
	"errors"
	"fmt"
	"testing"
)

func TestNew(t *testing.T) {
	g, err := New(Spec{
		Names:      []string{"a", "b", "c", "d"},
		Arrows:     [][2]int{{2, 1}, {1, 0}, {2, 0}, {2, 1}},
		Arcs:       [][2]int{{0, 3}, {3, 0}},
		Unmeasured: []int{3},
		Computed:   []int{0},
	})
	if err != nil {
		t.Fatal(err)
	}
	got := fmt.Sprint(g.Order, g.Parents, g.Children, g.Siblings, g.Arrows, g.Arcs, g.Measured, g.Computed)
	want := "[2 1 0 3] [[1 2] [2] [] []] [[] [0] [0 1] []] [[3] [] [] [0]] [[2 1] [1 0] [2 0]] [[0 3]] [true true true false] [true false false false]"
	if got != want {
		t.Errorf("got  %s\nwant %s", got, want)
	}
	if got := fmt.Sprint(g.Ancestors(1), g.Descendants(1)); got != "[false true true false] [true true false false]" {
		t.Errorf("ancestors and descendants of b: %s", got)
	}
	if g.Index("c") != 2 || g.Index("z") != -1 || !g.HasArrow(2, 0) || g.HasArrow(0, 2) {
		t.Errorf("lookups are wrong")
	}
}

func TestCycleIsNamed(t *testing.T) {
	_, err := New(Spec{Names: []string{"hedge", "flowers", "bees", "rain"}, Arrows: [][2]int{{3, 0}, {0, 1}, {1, 2}, {2, 0}}})
	var cycle *CycleError
	if !errors.As(err, &cycle) {
		t.Fatalf("got %v", err)
	}
	if got := err.Error(); got != "the arrows close a cycle: hedge → flowers → bees → hedge" {
		t.Errorf("got %q", got)
	}
}

func TestKeep(t *testing.T) {
	g, err := New(Spec{Names: []string{"a", "b", "c"}, Arrows: [][2]int{{0, 1}, {1, 2}, {0, 2}}, Arcs: [][2]int{{0, 1}, {1, 2}}})
	if err != nil {
		t.Fatal(err)
	}
	kept := g.Keep(func(from, to int) bool { return to == 2 }, func(a, b int) bool { return a == 0 })
	if got := fmt.Sprint(kept.Arrows, kept.Arcs, kept.Parents, kept.Children, kept.Siblings); got != "[[1 2] [0 2]] [[0 1]] [[] [] [0 1]] [[2] [2] []] [[1] [0] []]" {
		t.Errorf("got %s", got)
	}
	sum, err := New(Spec{Names: []string{"a", "b", "sum"}, Arrows: [][2]int{{0, 2}, {1, 2}}, Computed: []int{2}})
	if err != nil {
		t.Fatal(err)
	}
	part := sum.Keep(func(from, _ int) bool { return from != 0 }, nil)
	if part.Computed[2] || !sum.Computed[2] || !sum.Keep(nil, nil).Computed[2] {
		t.Errorf("a computed node that lost an arrow: computed %v, before %v", part.Computed[2], sum.Computed[2])
	}
	if got := fmt.Sprint(g.Keep(nil, nil).Arrows, g.Keep(nil, nil).Arcs); got != fmt.Sprint(g.Arrows, g.Arcs) {
		t.Errorf("keeping all: %s", got)
	}
}
