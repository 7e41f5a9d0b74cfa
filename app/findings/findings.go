// Package findings puts in one place everything that the arrows of one rival
// tell about one question: as data, and as sentences with the user's own names.
// The window, the report and the batch program show the same findings.
//
// Read the files in this order: findings.go (what is handed over), ask.go (what
// is asked), sheet.go (the graph that is read: the sheet with row filters drawn
// as nodes), read.go (how the sections come about), then a file for each
// section (verdict.go, paths.go, adjustment.go, controls.go, direct.go,
// beyond.go, laws.go, rows.go, contradictions.go, equivalence.go), and
// sentences.go.
package findings

import (
	"arrowroot/compile/causal"
	"arrowroot/compile/graph"
	"arrowroot/compile/study"
)

// Limits bound what grows without end. What they cut off is always said.
type Limits struct {
	Paths int // paths listed; 0 = 500
	Sets  int // sets of one kind listed: to hold, separators of a pair, front doors; 0 = 100
}

// A Finding is one thing that the arrows tell.
type Finding struct {
	Key       string        // stable while its variables keep their names; Study.Dismissed refers to it
	Kind      string        // a word or two that sorts findings of one section
	Sentence  string        // one sentence
	Why       string        // the reason in a sentence; "" = the sentence has it
	Nodes     []int         // to light on the sheet
	Edges     []causal.Edge // to light on the sheet
	Path      *causal.Path  // the path that is the reason, where one is
	Dismissed string        // the user's reason for setting it aside; "" = it stands
}

// A Section is one subject, computed by itself.
type Section struct {
	Name     string // one of the names below
	Summary  string // what it comes to, in a sentence or two
	Findings []Finding
	LeftOut  string // what a limit cut off, in a sentence; "" = nothing
}

// The names of the sections, in the order in which they are computed.
const (
	PathSection          = "paths"
	AdjustmentSection    = "adjustment"
	ControlSection       = "controls"
	DirectSection        = "direct effect"
	BeyondSection        = "beyond adjustment"
	LawSection           = "fitted laws"
	RowSection           = "rows and records"
	ContradictionSection = "what the data could contradict"
	EquivalenceSection   = "what no data can tell"
)

// Findings is all that has been read so far. Sections that are not there yet,
// or that a question that lacks something cannot have, are nil. It never
// changes: Stream hands over a new one as each section is added.
type Findings struct {
	Study *study.Study
	Rival string
	Ask   Ask

	// The graph that was read: a node for each on the sheet, with the same
	// numbers, then one for each row filter. Sheet is the number of the former:
	// nodes from there on are not on the sheet.
	Graph *graph.Graph
	Sheet int

	Exposures, Outcomes, Given, Held []int
	Selected                         []int // held by the rows themselves: nodes that limit the rows, and row filters

	Lacks   string          // what the question lacks, in a sentence; "" = nothing
	Reading *causal.Reading // of one exposure and one outcome, else nil
	Verdict causal.Verdict  // what it comes to

	Paths          *Paths
	Adjustment     *Adjustment
	Controls       *Controls
	Direct         *Direct
	Beyond         *Beyond
	Laws           *Laws
	Rows           *Rows
	Contradictions *Contradictions
	Equivalence    *Equivalence

	Done bool // nothing more is to come
}

// Paths are the paths between exposures and outcomes, shortest first; finding i
// is about List[i].
type Paths struct {
	Section
	List   []causal.Path
	AtMost bool // List is all of them
	Count  int  // how many there are; at least so many if there are more than were counted
	Exact  bool // Count is exact
}

// Adjustment says what to hold. Sets leave out what limits the rows.
type Adjustment struct {
	Section
	*causal.Adjustment
	Culprits    []int    // no set, but measuring one of these would give one
	CulpritArcs [][2]int // likewise the causes behind arcs
	CulpritsAll bool     // they are needed together
}

// Controls has a verdict on every measured variable; finding i is about List[i].
type Controls struct {
	Section
	Beside []int // the set beside which each is judged: what is held, or what is proposed instead
	List   []causal.Control
}

// Direct is the controlled direct effect of the exposure: of the question's
// fixed variables if it asks for one, else around all that carries the effect.
type Direct struct {
	Section
	*causal.Direct
}

// Beyond is how an effect can be had without an adjustment set.
type Beyond struct {
	Section
	Identification   *causal.Identification
	ByHolding        *causal.Identification // the same by adjustment, shorter; nil = no set, or something is given
	Doors            []causal.FrontDoor
	ArrowInstruments []causal.InstrumentSets
	TotalInstruments []causal.InstrumentSets
}

// Laws says what each fitted law conditions on (SEMANTICS A1) and whether the
// intervention may be simulated (B2).
type Laws struct {
	Section
	List     []causal.Fitted
	Shared   []causal.Shared // what laws carry at the level of plates
	Case     causal.Case
	District []int  // laws that read the observed exposure in case (b)
	Reason   string // of the case
}

// Rows says what row filters, missing entries and errors of measurement do.
type Rows struct {
	Section
	Kept         *causal.Kept         // what the rows show of the effect; nil = nothing limits them
	Selection    *causal.Selection    // with what is measured known of all rows too; nil likewise
	Indicators   []causal.Indicator   // as drawn
	Missing      *causal.Missing      // nil = no indicator is drawn
	Complete     *causal.Kept         // what complete rows show of the effect; nil = nothing known to be missing
	CompleteCase *causal.CompleteCase // of the outcome's law on exposure and held set, likewise
	Undecided    bool                 // entries are missing of which no indicator is drawn
	Records      []Record
}

// A Record is an error-prone record of a variable that was not measured itself.
type Record struct {
	Of, Node     int
	Differential bool // something else on the sheet acts on the record, or shares a cause with it
}

// Contradictions are what the data could contradict.
type Contradictions struct {
	Section
	Basis       []causal.Independence // all others follow from these
	Pairs       []causal.Separation   // every pair of measured variables with what separates it; nil if left out
	Functionals []causal.Functional
	Tetrads     []causal.Tetrad
}

// Equivalence is what no observational data of these variables can tell.
type Equivalence struct {
	Section
	Class  *causal.Class
	Rivals []Likeness // the other rivals, in the study's order
}

// A Likeness compares this rival's independences with another's.
type Likeness struct {
	Rival string
	*causal.Sameness
}

// Sections lists those that are there, in order.
func (f *Findings) Sections() []*Section {
	var all []*Section
	if f.Paths != nil {
		all = append(all, &f.Paths.Section)
	}
	if f.Adjustment != nil {
		all = append(all, &f.Adjustment.Section)
	}
	if f.Controls != nil {
		all = append(all, &f.Controls.Section)
	}
	if f.Direct != nil {
		all = append(all, &f.Direct.Section)
	}
	if f.Beyond != nil {
		all = append(all, &f.Beyond.Section)
	}
	if f.Laws != nil {
		all = append(all, &f.Laws.Section)
	}
	if f.Rows != nil {
		all = append(all, &f.Rows.Section)
	}
	if f.Contradictions != nil {
		all = append(all, &f.Contradictions.Section)
	}
	if f.Equivalence != nil {
		all = append(all, &f.Equivalence.Section)
	}
	return all
}
