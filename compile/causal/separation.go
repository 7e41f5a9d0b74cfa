package causal

import "arrowroot/compile/graph"

// Separated reports whether given d-separates every node of a from every node
// of b. An arc counts as an unmeasured cause of both its ends (m-separation,
// Richardson 2003). A computed node whose parents are all given counts as
// given itself where it would let a path through (Geiger, Verma & Pearl 1990).
// A node of a or b that is also given is separated from everything.
func Separated(g *graph.Graph, a, b []int, given []int) bool {
	held := mark(g.Len(), given)
	return separated(g, a, b, held, fixed(g, held))
}

func separated(g *graph.Graph, a, b []int, held, fixed []bool) bool {
	touched := reachable(g, a, held, fixed)
	for _, v := range b {
		if touched[v] && !fixed[v] {
			return false
		}
	}
	return true
}

// fixed marks the held nodes and everything computed from fixed nodes alone.
func fixed(g *graph.Graph, held []bool) []bool {
	known := make([]bool, g.Len())
	for _, v := range g.Order {
		known[v] = held[v]
		if !known[v] && g.Computed[v] && len(g.Siblings[v]) == 0 {
			known[v] = true
			for _, p := range g.Parents[v] {
				known[v] = known[v] && known[p]
			}
		}
	}
	return known
}

// reachable marks every node that some open walk joins to a node of from; it
// marks from too, unless fixed. A state of the walk is a node and whether the
// edge just walked points into it; every state is visited once, so the cost is
// that of the edges (Shachter 1998).
func reachable(g *graph.Graph, from []int, held, fixed []bool) []bool {
	type state struct {
		node int
		into bool
	}
	n := g.Len()
	opens := g.Ancestors(list(held)...) // colliders that let a walk through
	var seen [2][]bool
	seen[0], seen[1] = make([]bool, n), make([]bool, n)
	var stack []state
	visit := func(v int, into bool) {
		i := 0
		if into {
			i = 1
		}
		if !seen[i][v] {
			seen[i][v] = true
			stack = append(stack, state{v, into})
		}
	}
	for _, v := range from {
		if !fixed[v] {
			visit(v, false) // as if come from a child: every edge may be left by
		}
	}
	for len(stack) > 0 {
		at := stack[len(stack)-1]
		stack = stack[:len(stack)-1]
		v := at.node
		if !fixed[v] { // a chain or a fork
			for _, c := range g.Children[v] {
				visit(c, true)
			}
		}
		if at.into && opens[v] || !at.into && !fixed[v] { // a collider; else a chain or a fork
			for _, p := range g.Parents[v] {
				visit(p, false)
			}
			for _, s := range g.Siblings[v] {
				visit(s, true)
			}
		}
	}
	touched := make([]bool, n)
	for v := range touched {
		touched[v] = seen[0][v] || seen[1][v]
	}
	return touched
}
