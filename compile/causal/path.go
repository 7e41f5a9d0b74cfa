package causal

import "arrowroot/compile/graph"

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
func (p *Path) Text(g *graph.Graph) string { return "" }
