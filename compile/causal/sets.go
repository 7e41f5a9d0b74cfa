package causal

import (
	"cmp"
	"slices"

	"arrowroot/compile/graph"
)

// mark makes a set of nodes of an n-node graph a slice of flags.
func mark(n int, nodes []int) []bool {
	in := make([]bool, n)
	for _, v := range nodes {
		in[v] = true
	}
	return in
}

// list gives the marked nodes in order; never nil.
func list(in []bool) []int {
	nodes := []int{}
	for v, yes := range in {
		if yes {
			nodes = append(nodes, v)
		}
	}
	return nodes
}

// tidy sorts a set of nodes and drops what is named twice; never nil.
func tidy(nodes []int) []int {
	s := append([]int{}, nodes...)
	slices.Sort(s)
	return slices.Compact(s)
}

// minus is the set difference a \ b of sorted sets.
func minus(a, b []int) []int {
	rest := []int{}
	for _, v := range a {
		if !slices.Contains(b, v) {
			rest = append(rest, v)
		}
	}
	return rest
}

// union is the sorted union of sets.
func union(sets ...[]int) []int { return tidy(slices.Concat(sets...)) }

// within reports whether every member of a is in b.
func within(a, b []int) bool {
	for _, v := range a {
		if !slices.Contains(b, v) {
			return false
		}
	}
	return true
}

// sortSets orders sets by size, then by the names of their members.
func sortSets(g *graph.Graph, sets [][]int) {
	slices.SortFunc(sets, func(a, b []int) int {
		if c := cmp.Compare(len(a), len(b)); c != 0 {
			return c
		}
		for i := range a {
			if c := cmp.Compare(g.Names[a[i]], g.Names[b[i]]); c != 0 {
				return c
			}
		}
		return slices.Compare(a, b)
	})
}

// available marks what can be had as data: measured nodes, a computed one only
// if all it is computed from can be had.
func available(g *graph.Graph) []bool {
	can := make([]bool, g.Len())
	for _, v := range g.Order {
		can[v] = g.Measured[v]
		if g.Computed[v] {
			for _, p := range g.Parents[v] {
				can[v] = can[v] && can[p]
			}
		}
	}
	return can
}
