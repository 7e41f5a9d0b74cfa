package causal

import (
	"fmt"
	"strings"

	"arrowroot/compile/graph"
)

// PathKind says what a path does for the effect.
type PathKind int

// The kinds of path from exposure to outcome.
const (
	Causal    PathKind = iota // all arrows point to the outcome
	BackDoor                  // an arrowhead at the exposure
	NonCausal                 // leaves the exposure by an arrow, yet is not causal: it meets a collider
)

// Role is what a node is on a path.
type Role int

// The roles of an inner node.
const (
	Chain    Role = iota // one of the two edges points into it
	Fork                 // none does
	Collider             // both do
)

// An Edge is one step of a path, in walking order of the path. From and To are
// the arrow's own direction, not the walk's; an arc is given as it is walked.
type Edge struct {
	From, To int
	Arc      bool
}

// into reports whether the edge has an arrowhead at v.
func (e Edge) into(v int) bool { return e.Arc || e.To == v }

// A Stop is a node at which a path is closed.
type Stop struct {
	Node   int
	Role   Role
	Reason string
}

// An Opening is a collider that lets a path through because By, the collider
// itself or a descendant of it, is held.
type Opening struct {
	Node, By int
}

// A Path joins exposure and outcome without meeting a node twice.
type Path struct {
	Nodes    []int
	Edges    []Edge
	Kind     PathKind
	Open     bool
	ClosedAt []Stop    // every node that closes it
	OpenedAt []Opening // every collider that is opened
}

// Text writes the path with its arrows: "hedge ← soil → flowers → bees".
func (p *Path) Text(g *graph.Graph) string {
	var b strings.Builder
	b.WriteString(g.Names[p.Nodes[0]])
	for i, e := range p.Edges {
		next := p.Nodes[i+1]
		switch {
		case e.Arc:
			b.WriteString(" ↔ ")
		case e.To == next:
			b.WriteString(" → ")
		default:
			b.WriteString(" ← ")
		}
		b.WriteString(g.Names[next])
	}
	return b.String()
}

// role is what the i-th node, an inner one, is on the path.
func (p *Path) role(i int) Role {
	v := p.Nodes[i]
	before, after := p.Edges[i-1].into(v), p.Edges[i].into(v)
	switch {
	case before && after:
		return Collider
	case before || after:
		return Chain
	}
	return Fork
}

// A status decides which nodes let a path through while a set is held.
type status struct {
	g           *graph.Graph
	held, fixed []bool
	by          []int // for a collider: the nearest held node among itself and its descendants; -1 = none
}

func newStatus(g *graph.Graph, held []int) *status {
	s := &status{g: g, held: mark(g.Len(), held), by: make([]int, g.Len())}
	s.fixed = fixed(g, s.held)
	for v := range s.by {
		s.by[v] = -1
	}
	// All held nodes climb to their parents in step, so the nearest arrives
	// first; among equals the first in the graph.
	now := list(s.held)
	for _, v := range now {
		s.by[v] = v
	}
	for len(now) > 0 {
		var next []int
		for _, v := range now {
			for _, p := range g.Parents[v] {
				if s.by[p] < 0 {
					s.by[p] = s.by[v]
					next = append(next, p)
				}
			}
		}
		now = next
	}
	return s
}

// judge fills in what kind of path p is and whether it is open.
func (s *status) judge(p *Path) {
	p.Kind = Causal
	for i, e := range p.Edges {
		if e.Arc || e.To != p.Nodes[i+1] {
			p.Kind = NonCausal
		}
	}
	if p.Edges[0].into(p.Nodes[0]) {
		p.Kind = BackDoor
	}
	p.Open, p.ClosedAt, p.OpenedAt = true, nil, nil
	for i := 1; i < len(p.Nodes)-1; i++ {
		v, role := p.Nodes[i], p.role(i)
		name := s.g.Names[v]
		switch {
		case role == Collider && s.by[v] >= 0:
			p.OpenedAt = append(p.OpenedAt, Opening{v, s.by[v]})
		case role == Collider:
			reason := fmt.Sprintf("two arrows meet at %s, and neither it nor anything it acts on is held", name)
			if len(s.g.Children[v]) == 0 {
				reason = fmt.Sprintf("two arrows meet at %s, and it is not held", name)
			}
			p.ClosedAt = append(p.ClosedAt, Stop{v, role, reason})
		case s.held[v]:
			p.ClosedAt = append(p.ClosedAt, Stop{v, role, name + " is held"})
		case s.fixed[v]:
			p.ClosedAt = append(p.ClosedAt, Stop{v, role, name + " is computed from what is held"})
		}
	}
	p.Open = len(p.ClosedAt) == 0
}
