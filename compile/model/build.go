package model

import (
	"errors"
	"fmt"

	"arrowroot/compile/catalog"
	"arrowroot/compile/causal"
	"arrowroot/compile/formula"
	"arrowroot/compile/graph"
	"arrowroot/compile/study"
	"arrowroot/compile/table"
)

// Build makes the model of one rival for one question from a table. Problems
// come law by law, parents first. The model is nil where it could not be made;
// a problem that Stops forbids a fit even where a model came along: a study
// without data (t nil) still has a statement if every range is given.
//
// Rows are complete cases over what the fit uses: nothing is missing in a used
// row, so that a root with missing entries and no arc can be given as well
// (SEMANTICS A2 asks for more once entries are imputed).
func Build(s *study.Study, rival string, q study.Question, t *table.Table, kind Kind) (*Model, []Problem) {
	b := &builder{
		study: s, question: q, table: t, kind: kind,
		scope: make(map[string]meaning), names: make(map[meaning]string),
		declared: make(map[string]*declaration),
		columns:  make(map[string]*column),
		at:       make(map[string]int),
		aside:    make(map[string]string),
		means:    make(map[string]groupMean),
		ledger:   make(map[string]*study.Variable, len(s.Variables)),
	}
	for _, v := range s.Variables {
		b.ledger[v.ID] = v
	}
	for _, phase := range phases() {
		phase(b, rival)
		if b.broken {
			return nil, b.problems
		}
	}
	return b.model, b.problems
}

// phases turn a rival into its model, each from what the ones before it left
// in the builder. A phase sets broken where the next could not go on.
func phases() []func(b *builder, rival string) {
	return []func(*builder, string){
		(*builder).frame,    // the rival, its graph
		(*builder).ends,     // the question's variables
		(*builder).choose,   // which laws are fitted, on what
		(*builder).parse,    // what the user typed
		(*builder).gather,   // columns, levels, rows
		(*builder).explain,  // predictors, arguments, parameters, priors
		(*builder).examine,  // what the data say against the laws
		(*builder).compared, // what the question compares
		(*builder).finish,   // symbols, centring, what is given
	}
}

// Problems lists what is wrong with a rival's laws and data while it is being
// drawn. It is what Build would say of the full model.
func Problems(s *study.Study, rival string, q study.Question, t *table.Table) []Problem {
	_, problems := Build(s, rival, q, t, Full)
	return problems
}

// Stops reports whether one of the problems forbids a fit.
func Stops(problems []Problem) bool {
	for _, p := range problems {
		if p.Stops {
			return true
		}
	}
	return false
}

// A builder holds what the phases hand on.
type builder struct {
	study    *study.Study
	rival    *study.Rival
	question study.Question
	table    *table.Table // nil = no data yet
	kind     Kind

	graph    *graph.Graph
	drafts   []*draft
	scope    map[string]meaning      // what the canonical name of a parameter stands for
	names    map[meaning]string      // and back
	declared map[string]*declaration // priors that the user gave, by canonical name
	columns  map[string]*column      // by variable ID, over all rows of the table
	ledger   map[string]*study.Variable
	bare     []*study.Variable // columns that arguments read, not in the study's ledger
	plates   []*plateColumn
	means    map[string]groupMean // by the ID of the variable that each becomes
	outside  []bool               // rows of the table that its row filter leaves out; nil = none
	model    *Model
	at       map[string]int // variable ID → index in model.Variables

	without []string          // mediators that a model of the outcome alone leaves out
	trimmed bool              // and whether its typed formula lost summands
	aside   map[string]string // stated priors that do not hold in this model: why, by canonical name

	making   []string // parameters whose priors are being read
	problems []Problem
	broken   bool
}

// A draft is a law on its way.
type draft struct {
	variable *study.Variable
	user     study.Law // what the user said; the zero value if nothing
	arrows   []*study.Arrow
	carried  []carrier
	within   []grouped
	family   *catalog.Family
	formula  formula.Expr   // right-hand side as typed, nil = from the arrows
	given    []formula.Expr // arguments as typed, in the family's order
	law      *Law
	terms    int                // k of SEMANTICS C3
	products int                // of them
	span     linkRange          // of the child
	anchor   map[meaning]string // the plate whose entries vary around a parameter itself
	around0  []meaning          // entries that were typed as deviations
}

// A carrier is a carried term by name.
type carrier struct {
	id   string
	sake []string // the unmeasured causes it stands in for
}

// frame finds the rival and its graph.
func (b *builder) frame(rival string) {
	b.rival = b.study.Rival(rival)
	if b.rival == nil {
		b.stop(Problem{Code: "rival", Message: fmt.Sprintf("There is no rival named %s in this study.", rival)})
		return
	}
	g, err := b.study.Graph(rival)
	var cycle *graph.CycleError
	switch {
	case errors.As(err, &cycle):
		b.stop(b.cycle(cycle))
	case err != nil:
		b.stop(Problem{Code: "sheet", Place: "sheet", Message: capital(err.Error()) + "."})
	}
	b.graph = g
}

// cycle names the arrows that close a cycle and offers to delete each.
func (b *builder) cycle(e *graph.CycleError) Problem {
	p := Problem{Code: "cycle", Variable: e.Cycle[0], Place: "sheet", Message: capital(e.Error()) + "."}
	for i := range len(e.Cycle) - 1 {
		from, to := e.Cycle[i], e.Cycle[i+1]
		p.Repairs = append(p.Repairs, Repair{Label: "Delete " + from + " → " + to, Edit: removeArrow(b.rival.Name, from, to)})
	}
	return p
}

// fitted lists the rival's measured laws in fitting order.
func (b *builder) fitted() []causal.Fitted {
	x, y := b.graph.Index(b.question.Exposure), b.graph.Index(b.question.Outcome)
	return causal.CarriersFor(causal.AsFitted(b.graph, x, y), x, y)
}

// variable finds a variable of the ledger, or a column that a law's argument
// reads without being one.
func (b *builder) variable(id string) *study.Variable { return b.ledger[id] }

func (b *builder) variables() []*study.Variable {
	if len(b.bare) == 0 {
		return b.study.Variables
	}
	return append(append([]*study.Variable(nil), b.study.Variables...), b.bare...)
}

func (b *builder) onSheet(id string) bool { return b.graph.Index(id) >= 0 }
