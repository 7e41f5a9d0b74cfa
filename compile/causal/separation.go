package causal

import (
	"slices"

	"arrowroot/compile/graph"
)

// Separated reports whether given d-separates every node of a from every node
// of b. An arc counts as an unmeasured cause of both its ends (m-separation,
// Richardson 2003). A computed node whose parents are all given counts as
// given itself where it would let a path through (Geiger, Verma & Pearl 1990).
// A node of a or b that is also given is separated from everything.
func Separated(g *graph.Graph, a, b []int, given []int) bool {
	m := make(marks, g.Len())
	for _, v := range given {
		m[v] |= isHeld | isFixed
	}
	if slices.Contains(g.Computed, true) {
		for v, yes := range fixed(g, mark(g.Len(), given)) {
			if yes {
				m[v] |= isFixed
			}
		}
	}
	for _, v := range b {
		m[v] |= isGoal
	}
	return !m.walk(g, a)
}

func separated(g *graph.Graph, a, b []int, held, fixed []bool) bool {
	m := newMarks(held, fixed)
	for _, v := range b {
		m[v] |= isGoal
	}
	return !m.walk(g, a)
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
// marks from too, unless fixed.
func reachable(g *graph.Graph, from []int, held, fixed []bool) []bool {
	m := newMarks(held, fixed)
	m.walk(g, from)
	touched := make([]bool, g.Len())
	for v := range touched {
		touched[v] = m[v]&(leftByAny|cameInto) != 0
	}
	return touched
}

// marks are what a walk knows of each node.
type marks []uint8

const (
	isHeld    = 1 << iota
	isFixed   // held, or computed from fixed nodes alone
	isOpener  // acts on a held node: a collider that lets a walk through
	isGoal    // where the walk may end
	leftByAny // met as if from a child: by the tail of an arrow
	cameInto  // met by an arrowhead
)

func newMarks(held, fixed []bool) marks {
	m := make(marks, len(held))
	for v := range m {
		if held[v] {
			m[v] |= isHeld
		}
		if fixed[v] {
			m[v] |= isFixed
		}
	}
	return m
}

// walk marks all that open walks from the nodes meet; it stops with true at a
// goal that is not fixed. A state of the walk is a node and whether the edge
// just walked points into it; every state is visited once, so the cost is that
// of the edges (Shachter 1998).
func (m marks) walk(g *graph.Graph, from []int) (met bool) {
	var room [64]int32
	stack := room[:0]
	for v := range m {
		if m[v]&isHeld != 0 && m[v]&isOpener == 0 {
			m[v] |= isOpener
			stack = append(stack, int32(v))
		}
	}
	for len(stack) > 0 {
		v := stack[len(stack)-1]
		stack = stack[:len(stack)-1]
		for _, p := range g.Parents[v] {
			if m[p]&isOpener == 0 {
				m[p] |= isOpener
				stack = append(stack, int32(p))
			}
		}
	}
	// On the stack a state is twice the node, plus one if by an arrowhead.
	for _, v := range from {
		if m[v]&(isFixed|leftByAny) == 0 {
			m[v] |= leftByAny
			stack = append(stack, int32(2*v))
			met = met || m[v]&isGoal != 0
		}
	}
	for len(stack) > 0 && !met {
		state := stack[len(stack)-1]
		stack = stack[:len(stack)-1]
		v, into := state>>1, state&1 == 1
		free := m[v]&isFixed == 0
		if free { // a chain or a fork
			for _, c := range g.Children[v] {
				if m[c]&cameInto == 0 {
					m[c] |= cameInto
					stack = append(stack, int32(2*c+1))
					met = met || m[c]&(isGoal|isFixed) == isGoal
				}
			}
		}
		if into && m[v]&isOpener != 0 || !into && free { // a collider; else a chain or a fork
			for _, p := range g.Parents[v] {
				if m[p]&leftByAny == 0 {
					m[p] |= leftByAny
					stack = append(stack, int32(2*p))
					met = met || m[p]&(isGoal|isFixed) == isGoal
				}
			}
			for _, s := range g.Siblings[v] {
				if m[s]&cameInto == 0 {
					m[s] |= cameInto
					stack = append(stack, int32(2*s+1))
					met = met || m[s]&(isGoal|isFixed) == isGoal
				}
			}
		}
	}
	return met
}
