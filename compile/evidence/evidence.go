// Package evidence holds what a rival's arrows promise against the data: each
// implied independence with its size, its interval and a verdict, the arrow
// that would repair the diagram where one is contradicted, constraints that are
// no independences, and negative controls.
//
// Read the files in this order: evidence.go (what goes in and comes out),
// columns.go (ledger and table to numbers), scores.go (any scale to scores),
// residuals.go (what the given variables explain), association.go (size,
// interval, p), design.go and bench.go (many statements side by side),
// verdict.go (what is made of them, in words), repair.go, controls.go, tetrad.go,
// functional.go, weights.go and laws.go, untested.go, and test.go (the whole of it).
package evidence

import (
	"context"

	"arrowroot/compile/causal"
	"arrowroot/compile/graph"
	"arrowroot/compile/study"
	"arrowroot/compile/table"
)

// A Request says what is held against which data.
type Request struct {
	Study *study.Study
	Rival string
	Table *table.Table

	// Graph is the rival's graph with perhaps more nodes behind those of the
	// sheet; nil = the study's own. Selected are nodes that the rows were chosen
	// by, so that the data show them held.
	Graph    *graph.Graph
	Selected []int

	// Statements are the independences to test; nil = the pairs of a basis, from
	// which all others follow. Each has one node on either side.
	Statements []causal.Independence

	Question *study.Question // for negative controls; nil = none are looked for
	Held     []string        // the held set that negative controls check; nil = the question's, or what the reading proposes

	Level float64 // of intervals; 0 = 0.9
	Most  int     // statements tested; 0 = 2000
}

// Evidence is all that the data say about a rival's arrows. It never changes.
type Evidence struct {
	Rival string
	Graph *graph.Graph
	Level float64
	Rows  int // of the table, or of those that are kept

	Findings    []Finding    // worst first
	Untested    []Untested   // what the arrows promise and these data cannot show
	Tetrads     []Tetrad     // worst first; they bind only if all laws are linear
	Functionals []Functional // worst first
	Controls    []Control    // negative controls, by kind and node

	Contradicted int    // of Findings
	Summary      string // what it comes to, in a sentence or two
	Method       string // how it was tested, in a few sentences
	LeftOut      string // what a limit cut off, in a sentence; "" = nothing
}

// An Effect is how strongly two variables go together once the given ones are
// known: 0 = not at all, 1 = either fixes the other. It has a sign, from −1 to
// 1, where both have an order.
type Effect struct {
	Value, Low, High float64
	Signed           bool
}

// A Loss counts rows in which a variable is missing; a row can count twice.
type Loss struct {
	Variable string
	Rows     int
}

// A Finding is one independence and what the data say of it.
type Finding struct {
	causal.Independence        // one node on either side
	Key                 string // "soil | bees | flowers, hedge": stable while names are
	Claim               string // what the arrows say, in a sentence

	Verdict  Verdict
	Sentence string // claim, what the data show and what would account for it
	Short    string // the verdict alone: "holds within ±0.08"

	Effect
	Bent     bool    // what was found bends back: neither rises nor falls over all, so that it has no sign
	P        float64 // of no association, this one alone
	Adjusted float64 // p after Holm (1979) over all that were tested

	Rows, Read int
	Lost       []Loss // rows read and not used, by variable in the order of the statement
	Groups     int    // independent groups of rows that the interval rests on; 0 = rows are independent
	Plate      string // the plate that they belong to

	Repair *Repair // nil unless contradicted, or if no arrow would do
}

// A Repair is one arrow or arc that takes the promise away.
type Repair struct {
	From, To string
	Arc      bool // an unnamed common cause, where neither arrow can be drawn
	Mends    int  // contradicted independences that it takes away, this one counted
	Edit     study.Edit
	Sentence string // "An arrow soil → bees would account for it."
}

// An Untested statement cannot be contradicted by these data.
type Untested struct {
	causal.Independence
	Sentence string
	Reason   string
}

// A Tetrad is a product of covariances that equals another in every linear
// model of the arrows.
type Tetrad struct {
	causal.Tetrad
	Effect      // difference of the products of correlations, −1 to 1
	P, Adjusted float64
	Rows        int
	Verdict     Verdict
	Sentence    string
	Short       string
}

// A Functional is a constraint that is no independence. It is tested on a cross
// table where all that it names has few levels, and else as an independence
// among weighted rows.
type Functional struct {
	causal.Functional
	Effect      // typical (root mean square) difference of a probability, 0 to 1; of weighted rows, that of an independence
	Bent        bool
	P, Adjusted float64
	Rows        int
	Weighted    bool
	Effective   int // how many equal rows the weighted ones are worth
	Verdict     Verdict
	Sentence    string
	Short       string
}

// ControlKind sorts negative controls.
type ControlKind int

// The kinds (Lipsitch, Tchetgen Tchetgen & Cohen 2010).
const (
	ControlOutcome  ControlKind = iota // the exposure cannot affect it
	ControlExposure                    // it cannot affect the outcome
)

// A Control is a variable that shares causes with exposure or outcome but must
// be unrelated to the one it stands in for once the held set is enough.
type Control struct {
	Kind     ControlKind
	Node     int
	Finding         // the independence that is expected
	Offer    string // why it can serve, in a sentence
	Expected string // what holding enough would show, in a sentence
}

// Test tests. Errors are those of the study (no such rival, a cycle), of the
// data (none at all), and of ctx; what a single statement lacks is its verdict.
// The same request gives the same evidence. Watch is told of every statement
// that is done, from one goroutine at a time; it may be nil.
func Test(ctx context.Context, req Request, watch func(done, total int)) (*Evidence, error) {
	return test(ctx, req, watch)
}
