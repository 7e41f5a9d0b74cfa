// Package causal reads what follows from a rival's arrows alone: which paths
// join exposure and outcome and which of them are open, what may not be held,
// which sets of measured variables make the effect readable, whether it is
// identified at all, and what a fit must condition on once unmeasured
// variables are left out. It knows nothing of laws or data, so a half-typed
// formula never blanks it.
//
// Read the files in this order: reading.go (what is handed over), separation.go
// (which sets separate), path.go, walk.go and stream.go (the paths), forbidden.go
// and faults.go (what must not be held), adjust.go over separators.go and flow.go
// (the sets), precision.go, ways.go, project.go, identify.go with culprits.go,
// carriers.go and intervene.go (what SEMANTICS A1 and B2 ask for), plates.go and
// shared.go (comparing within groups), verdict.go (all of it in a sentence, with
// words.go). sets.go and bitset.go hold sets of nodes.
//
// A Reading is cheap enough to follow the hand. What takes longer is asked for
// by itself: estimand.go and formula.go (identification with a formula), aim.go,
// direct.go and controls.go (adjustment in full), frontdoors.go and
// instruments.go, implications.go, functional.go and tetrads.go (what the data
// could contradict), pattern.go, equivalence.go and compare.go (what they never
// could), selection.go, kept.go and missingness.go. What could go on without end is bounded
// by budget.go and says what it left out.
//
// Nodes are numbers 0…n-1 of a *graph.Graph throughout; sets are sorted slices.
package causal

import (
	"slices"

	"arrowroot/compile/graph"
)

// A Query is what is asked of a graph: the total effect of one exposure on one
// outcome while some nodes are held.
type Query struct {
	Exposure, Outcome int // -1 = not said yet
	Held              []int
	Selected          []int // rows were kept by these: held by the rows themselves, measured or not; sets leave them out
	MaxPaths          int   // listed; 0 = 500
	MaxSets           int   // listed; 0 = 100
	Within            []int // held plates of the graph: the comparison is within their groups
}

// A Reading is everything the arrows say about a query. It never changes.
type Reading struct {
	Graph *graph.Graph
	Query Query

	Paths     []Path // shortest first, then by place of the nodes in the graph
	MorePaths bool   // there are more than MaxPaths

	Forbidden []Forbidden // in order of the nodes; the outcome included when there is an effect

	Sets     [][]int // all minimal adjustment sets from measured variables, by (size, names); nil = none, [[]] = nothing needed
	MoreSets bool    // there are more than MaxSets
	Precise  int     // the place in Sets of the most precise one where that is known, else -1
	Optimal  []int   // the most precise set of all, minimal or not (the O-set); nil when none is known

	Effect     bool // some causal path is drawn
	HeldValid  bool // the held set is a valid adjustment set
	HeldFaults []Fault

	Groups      []Groups     // what holding a plate gives, of each at whose level something lives
	PlateFaults []PlateFault // of held plates

	Kept *Kept // what the rows show if some nodes kept them; nil = all rows are there

	Identifiable bool // from measured variables, by adjustment or any other way; if rows were kept, by adjustment

	// With no set: what else could give the effect.
	FrontDoor   *FrontDoor // nil = none found
	Instruments []Instrument

	// With no set: the unmeasured nodes, and the arcs (both ends), that would
	// give one if they were measured. Any one of them would do, unless
	// CulpritsAll says that they are needed together.
	Culprits    []int
	CulpritArcs [][2]int
	CulpritsAll bool

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

// Read reads a query off a graph. It never fails and never hangs: with no
// exposure or outcome yet (-1, or the same node twice) the verdict says so and
// the rest is empty. A node number outside the graph panics.
func Read(g *graph.Graph, q Query) *Reading {
	q.Selected, q.Within = tidy(q.Selected), tidy(q.Within)
	q.Held = minus(tidy(q.Held), q.Selected)
	maxPaths, maxSets := limit(q.MaxPaths, enoughPaths), limit(q.MaxSets, enoughSets)
	q.MaxPaths, q.MaxSets = max(maxPaths, enoughPaths), max(maxSets, enoughSets)
	r := &Reading{Graph: g, Query: q, Precise: -1}
	defer r.shorten(maxPaths, maxSets)
	if q.Exposure < 0 || q.Outcome < 0 || q.Exposure == q.Outcome {
		r.Verdict = r.incomplete()
		return r
	}
	c := newComparison(g, []int{q.Exposure}, []int{q.Outcome})
	c.keep(q.Selected)
	r.Effect = c.effect()
	r.findPaths()
	r.Forbidden = c.whyForbidden()
	r.Sets, r.MoreSets = c.minimal(nil, q.MaxSets)
	if optimal, ok := c.optimal(); ok {
		r.Optimal = optimal
		r.Precise = slices.IndexFunc(r.Sets, func(z []int) bool { return slices.Equal(z, optimal) })
	}
	if r.Precise < 0 && !r.MoreSets {
		r.Precise = c.best(r.Sets)
	}
	// What an exposure is computed from never varies while it stays put, so the
	// identification algorithm's positive distribution cannot be had.
	can := available(g)
	r.Identifiable = r.Sets != nil && can[q.Exposure] && can[q.Outcome] ||
		len(q.Selected) == 0 && !g.Computed[q.Exposure] && Identifiable(g, q.Exposure, q.Outcome)
	r.HeldValid = c.valid(q.Held)
	if len(q.Selected) > 0 {
		r.Kept = c.kept(q.Held)
	}
	r.HeldFaults = r.faults(c)
	if r.Sets == nil {
		r.findCulprits()
		if r.Effect && len(q.Selected) == 0 && can[q.Exposure] && can[q.Outcome] && !g.Computed[q.Exposure] {
			r.FrontDoor = c.frontDoor()
			r.Instruments = c.instruments()
		}
	}
	r.Verdict = r.verdict(c)
	r.compareWithin(c)
	return r
}

// However few paths and sets are to be listed, so many are looked at, so that
// the verdict is the same.
const (
	enoughPaths = 500
	enoughSets  = 100
)

// shorten keeps to what was to be listed.
func (r *Reading) shorten(maxPaths, maxSets int) {
	r.Query.MaxPaths, r.Query.MaxSets = maxPaths, maxSets
	if len(r.Paths) > maxPaths {
		r.Paths, r.MorePaths = r.Paths[:maxPaths], true
	}
	if len(r.Sets) > maxSets {
		r.Sets, r.MoreSets = r.Sets[:maxSets], true
	}
	if r.Precise >= len(r.Sets) {
		r.Precise = -1
	}
}

// given is all that the comparison is made within: what is held, and what kept
// the rows.
func (r *Reading) given() []int { return union(r.Query.Held, r.Query.Selected) }

func (r *Reading) findPaths() {
	s := newStatus(r.Graph, r.given())
	left := pathBudget
	for p := range paths(r.Graph, r.Query.Exposure, r.Query.Outcome) {
		if len(r.Paths) == r.Query.MaxPaths || left.spent() {
			r.MorePaths = true
			return
		}
		left.spend(r.Graph, len(p.Edges))
		s.judge(p)
		r.Paths = append(r.Paths, *p)
	}
}
