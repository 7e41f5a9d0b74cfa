// Package causal reads what follows from a rival's arrows alone: which paths
// join exposure and outcome and which of them are open, what may not be held,
// which sets of measured variables make the effect readable, whether it is
// identified at all, and what a fit must condition on once unmeasured
// variables are left out. It knows nothing of laws or data, so a half-typed
// formula never blanks it.
//
// Read the files in this order: separation.go (which sets separate), path.go
// and walk.go (the paths), adjust.go and separators.go (the sets),
// precision.go, project.go, identify.go, carriers.go and intervene.go (what
// SEMANTICS A1 and B2 ask for), verdict.go (all of it in a sentence).
//
// Nodes are numbers 0…n-1 of a *graph.Graph throughout; sets are sorted slices.
package causal

import "arrowroot/compile/graph"

// A Query is what is asked of a graph: the total effect of one exposure on one
// outcome while some nodes are held.
type Query struct {
	Exposure, Outcome int // -1 = not said yet
	Held              []int
	MaxPaths          int // 0 = 500
	MaxSets           int // 0 = 100
}

// A Reading is everything the arrows say about a query. It never changes.
type Reading struct {
	Graph *graph.Graph
	Query Query

	Paths     []Path // shortest first, then by place of the nodes in the graph
	MorePaths bool   // there are more than MaxPaths

	Forbidden []Forbidden // by node, the outcome included when there is an effect

	Sets     [][]int // all minimal adjustment sets from measured variables, by (size, names); nil = none, [[]] = nothing needed
	MoreSets bool    // there are more than MaxSets
	Precise  int     // the place in Sets of the most precise one where that is known, else -1
	Optimal  []int   // the most precise set of all, minimal or not (the O-set); nil when none is known

	Effect     bool // some causal path is drawn
	HeldValid  bool // the held set is a valid adjustment set
	HeldFaults []Fault

	Identifiable bool  // from measured variables, by adjustment or any other way
	Culprits     []int // unmeasured nodes each of which, or (if none would do alone) all of which, if measured, would give a set
	CulpritsAll  bool  // all of Culprits are needed together

	Verdict Verdict
}

// Forbidden is a variable that no adjustment set may hold.
type Forbidden struct {
	Node   int
	Path   []int // arrows from the exposure to the node, or through it to the outcome
	Reason string
}

// A Fault is a held variable that spoils the held set.
type Fault struct {
	Node   int
	Reason string
	Path   []int // the path that is cut or opened; nil when the fault is the node itself
}

// VerdictKind sorts verdicts by what the user can do next.
type VerdictKind int

// The kinds of verdict.
const (
	Incomplete VerdictKind = iota // no exposure or no outcome yet
	Confounded                    // hold the proposed set
	Readable                      // the held set is valid
	OverHeld                      // something held must be left free
	NoSet                         // no set of measured variables works
	NoEffect                      // no causal path is drawn
)

// A Verdict is the reading in one sentence.
type Verdict struct {
	Kind        VerdictKind
	Sentence    string
	Propose     []int // the set to hold instead of the present one
	HasProposal bool
	Way         string // what else could be done; "" = nothing to add
}
