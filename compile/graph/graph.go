// Package graph is the dense view of one rival's arrows that algorithms work
// on: nodes are 0…n-1, neighbours are slices. It knows nothing of laws, layout
// or data. A Graph never changes once it is made.
//
// Read graph.go (what it holds), order.go (topological order), keep.go (parts).
package graph

import (
	"fmt"
	"strings"
)

// A Spec says what a graph is made of. Nodes are named by their place in Names.
type Spec struct {
	Names      []string
	Arrows     [][2]int // from, to
	Arcs       [][2]int // both ends share an unmeasured cause that nobody named
	Unmeasured []int    // drawn, but never available for holding or as data
	Computed   []int    // deterministic functions of their parents

	// Where rows come in groups: the plates, and by node and by arc (in the
	// order of Arcs) those at whose level it lives, several where it has one
	// value for each pair of their groups. Nil or an empty entry is the row.
	Plates    []Plate
	Levels    [][]int
	ArcLevels [][]int
}

// A Plate puts rows into groups.
type Plate struct {
	Name   string
	Within int // the coarser plate in whose groups its own lie; -1 = none
}

// A Graph is an acyclic directed graph with arcs (an acyclic directed mixed
// graph, Richardson 2003), in dense form.
type Graph struct {
	Names    []string
	Measured []bool
	Computed []bool
	Parents  [][]int // sorted
	Children [][]int // sorted
	Siblings [][]int // the other ends of a node's arcs, sorted
	Arrows   [][2]int
	Arcs     [][2]int
	Order    []int // a topological order; ties by place in Names

	Plates    []Plate
	Levels    [][]int // by node: the plates at whose level it lives; an empty entry is the row
	ArcLevels [][]int // likewise, in the order of Arcs
}

// A CycleError names the arrows that close a cycle, first node repeated last.
type CycleError struct {
	Cycle []string
}

func (e *CycleError) Error() string {
	return "the arrows close a cycle: " + strings.Join(e.Cycle, " → ")
}

// New makes a graph. It fails with a *CycleError if the arrows close a cycle;
// a node number outside Names is a programming error and panics.
func New(spec Spec) (*Graph, error) {
	n := len(spec.Names)
	g := &Graph{
		Names:    append([]string(nil), spec.Names...),
		Measured: make([]bool, n),
		Computed: make([]bool, n),
		Parents:  make([][]int, n),
		Children: make([][]int, n),
		Siblings: make([][]int, n),
		Plates:   append([]Plate(nil), spec.Plates...),
		Levels:   make([][]int, n),
	}
	copy(g.Levels, spec.Levels)
	for i := range g.Measured {
		g.Measured[i] = true
	}
	for _, i := range spec.Unmeasured {
		g.Measured[i] = false
	}
	for _, i := range spec.Computed {
		g.Computed[i] = true
	}
	for _, a := range spec.Arrows {
		if a[0] == a[1] {
			return nil, &CycleError{Cycle: []string{spec.Names[a[0]], spec.Names[a[0]]}}
		}
		if insert(&g.Parents[a[1]], a[0]) {
			insert(&g.Children[a[0]], a[1])
			g.Arrows = append(g.Arrows, a)
		}
	}
	for i, a := range spec.Arcs {
		if a[0] == a[1] {
			panic(fmt.Sprintf("graph: an arc from %s to itself", spec.Names[a[0]]))
		}
		if insert(&g.Siblings[a[0]], a[1]) {
			insert(&g.Siblings[a[1]], a[0])
			g.Arcs = append(g.Arcs, a)
			var level []int
			if i < len(spec.ArcLevels) {
				level = spec.ArcLevels[i]
			}
			g.ArcLevels = append(g.ArcLevels, level)
		}
	}
	if cycle := g.sort(); cycle != nil {
		return nil, &CycleError{Cycle: cycle}
	}
	return g, nil
}

// Len is the number of nodes.
func (g *Graph) Len() int { return len(g.Names) }

// NamesOf gives the names of nodes, in their order; none for none.
func (g *Graph) NamesOf(nodes []int) []string {
	names := make([]string, len(nodes))
	for i, v := range nodes {
		names[i] = g.Names[v]
	}
	return names
}

// Index finds a node by name; -1 if there is none.
func (g *Graph) Index(name string) int {
	for i, s := range g.Names {
		if s == name {
			return i
		}
	}
	return -1
}

// Plate finds a plate by name; -1 if there is none.
func (g *Graph) Plate(name string) int {
	for i, p := range g.Plates {
		if p.Name == name {
			return i
		}
	}
	return -1
}

// HasArrow reports whether there is an arrow from → to.
func (g *Graph) HasArrow(from, to int) bool {
	for _, c := range g.Children[from] {
		if c == to {
			return true
		}
	}
	return false
}

// Ancestors marks the given nodes and everything that reaches them by arrows.
func (g *Graph) Ancestors(of ...int) []bool { return reach(g.Parents, of) }

// Descendants marks the given nodes and everything they reach by arrows.
func (g *Graph) Descendants(of ...int) []bool { return reach(g.Children, of) }

func reach(next [][]int, from []int) []bool {
	seen := make([]bool, len(next))
	stack := make([]int, 0, len(next))
	for _, v := range from {
		if !seen[v] {
			seen[v] = true
			stack = append(stack, v)
		}
	}
	for len(stack) > 0 {
		v := stack[len(stack)-1]
		stack = stack[:len(stack)-1]
		for _, w := range next[v] {
			if !seen[w] {
				seen[w] = true
				stack = append(stack, w)
			}
		}
	}
	return seen
}

// insert keeps a sorted set; it reports whether v is new.
func insert(set *[]int, v int) bool {
	s := *set
	i := 0
	for i < len(s) && s[i] < v {
		i++
	}
	if i < len(s) && s[i] == v {
		return false
	}
	s = append(s, 0)
	copy(s[i+1:], s[i:])
	s[i] = v
	*set = s
	return true
}
