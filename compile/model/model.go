// Package model is the checked model: a rival's laws with every name resolved,
// every prior a number, every unmeasured variable projected out, and the data
// it will be fitted to. The statement, the log density, the simulator and the
// effects all come from this one value.
//
// Read the files in this order: model.go (what comes out), build.go (the
// phases), choose.go and choose_outcome.go (which laws), names.go and parse.go
// (what parameters are called, what the user typed), scope.go (what names mean
// there), gather.go, columns.go, plates.go and outermost.go, and conditions.go
// (data), impute.go (missing entries that stay), ranges.go and priors.go
// (SEMANTICS C), stated.go (priors of the user's), explain.go with predictor.go
// and resolve.go (laws), over expr.go, forms.go (what an arrow's form makes of
// its parent), band.go (its picture), within.go (group means), examine.go,
// bounds.go, marks.go and finite.go (data against laws), question.go and ask.go
// (what is asked), finish.go, statement.go and typed.go (the model in print),
// fingerprint.go, without.go (entries left out). problem.go and repair.go hold
// what goes wrong and how it is mended.
package model

import (
	"arrowroot/compile/catalog"
	"arrowroot/compile/formula"
	"arrowroot/compile/study"
)

// Kind says which of the three fits of one question a model is (SEMANTICS B8).
type Kind int

// The kinds.
const (
	Full  Kind = iota // every modelled variable of the rival
	Held              // the outcome's law on the exposure and the held set alone
	Crude             // the outcome's law on the exposure alone
)

// A Model never changes once it is checked.
type Model struct {
	Kind       Kind
	Rival      string
	Exposure   string // whose fit this is: it orders the carriers
	Outcome    string // of the question; "" if it has none
	Rows       Rows
	Asked      *Subset // the used rows that the question asks about; nil = all of them
	Plates     []*Plate
	Variables  []*Variable // every measured variable that a law reads or explains
	Parameters []*Parameter
	Laws       []*Law // parents before children
	Given      []string
}

// Rows says which rows of the table are used and why the others are not.
type Rows struct {
	Read, Used int
	Filtered   int // outside the row filter: of those read, nothing else was looked at
	Lost       []Loss
	Index      []int // of each used row in the table
}

// A Loss counts rows that a variable lost; a row can be counted twice.
type Loss struct {
	Variable string
	Rows     int
}

// A Plate with its levels found in the data. Every level has a used row.
type Plate struct {
	Name   string
	Levels []string
	Of     []int32 // level of each used row
}

// A Variable with its data in used rows, or one value per level of its plate.
type Variable struct {
	ID, Label, Unit string
	Scale           study.Scale
	Levels          []string  // binary, category, ordered
	Plate           int       // index in Model.Plates, -1 = row
	Values          []float64 // codes for category and ordered; 0/1 for binary
	Low, High       float64   // plausible range on the variable's own scale
	RangeGiven      bool      // false: seen in the data, and every prior made from it says so
	Computed        formula.Expr
	MeanOf          string  // the variable whose mean within the groups of Plate this is, as observed (SEMANTICS A6); "" = none
	Missing         []int32 // units whose entries are missing and not lost: Values holds a stand-in there (SEMANTICS A2)
	ShareOf         string  // with MeanOf: the level whose share it is instead; "" = the mean
	Nudge           float64 // exact ends of the scale were moved inwards by this …
	Nudged          int     // … in so many used rows
}

// A Law is the fitted law of one variable.
type Law struct {
	Variable int
	Family   *catalog.Family
	Plate    int // the level at which it contributes one factor per unit; -1 = row
	Trials   formula.Expr
	// Predictors holds the predicted argument on the link scale: one
	// expression, or K for a softmax law. Names in it are variables or
	// parameters by typed name; see Model.Name.
	//
	// A vector that varies by a plate is read as By{Name, Plates: one plate},
	// where Name is the typed name of a ByPlate parameter ("alpha_bees_farm")
	// of that very plate; its Mean is inside its entries and not added again.
	// Steps are read as Of{Vector, Variable}; the entry of a zero-sum vector
	// that a softmax predictor uses as Element{Vector, At}.
	Predictors []formula.Expr
	// Arguments holds the other arguments in the family's order, the
	// predicted one nil: a parameter's name, a number, or an expression. The
	// trials of a binomial law stand here and in Trials.
	// Cut points of an ordered law are the vector parameter Cutpoints.
	Arguments []formula.Expr
	Cutpoints string
	Terms     []Term // what each term of a default predictor is, for painting and priors; empty for a typed formula
	Drawn     []int  // variables that are drawn parents
	Carried   []Carried
	Within    []Within
	Typed     bool // the predictor was typed by the user
}

// A Carried term conditions on a variable that is no drawn parent, for the
// sake of an unmeasured one that was left out.
type Carried struct {
	Variable int
	For      []string // names of the unmeasured variables, or "an unnamed common cause"
}

// Within says that a law compares within the groups of a plate: its baseline
// varies by the plate, and the means of what it reads stand beside it.
type Within struct {
	Plate int
	Means []int    // variables with MeanOf
	For   []string // the left-out causes it is for, as in Carried; nil = the question holds the plate
}

// TermKind says what a term of a linear predictor is.
type TermKind int

// The kinds of term.
const (
	Baseline TermKind = iota
	Slope
	Steps
	Offset
	Product
	GroupMean // mean of a parent within a held plate (SEMANTICS A6)
	Log
	OneWay     // steps of an ordered parent that all go the same way
	Threshold  // no change below a point
	Saturating // less and less change towards a limit
)

// A Term of a default linear predictor.
type Term struct {
	Kind       TermKind
	Variable   int          // the parent; -1 for a baseline
	With       int          // the other parent of a product; -1 otherwise
	Parameters []int        // coefficients first
	Inner      []int        // those of Parameters that shape what the coefficient takes: a threshold, the shares of a rise
	Part       formula.Expr // what it adds to the predictor; of a category child to that of its first level
	Center     float64      // the value of the parent at which the term is 0
	WithCenter float64
	VariesBy   int // plate, -1 = none
	Carried    bool
}

// On says what function of a parameter its prior is about (SEMANTICS C5).
type On int

// The functions.
const (
	Itself          On = iota
	InverseRoot        // 1/√k
	InverseRootPlus    // 1/√(1+κ)
)

// Shape is how the entries of a vector parameter hang together.
type Shape int

// The shapes.
const (
	Scalar     Shape = iota
	Vector           // entries free
	ZeroSum          // entries sum to zero; Prior, a normal with mean 0, is of the DIFFERENCE of any two entries: entries = B z with B orthonormal and z ~ normal(0, sd/√2)
	Simplex          // entries positive with sum 1
	ByPlate          // one entry per level of a plate, normal around Mean with sd SD; Prior is empty
	Unrecorded       // missing entries of the variable Of, in the order of Variable.Missing; its law is their prior, and Prior is empty
	Rising           // the first entry is 0, the last 1, those between uniform in rising order: the rises are Dirichlet(1); Prior is empty
	Cuts             // K-1 ordered cut points; the K shares of the levels at predictor 0 are Dirichlet(1); Prior is empty
)

// A Parameter is an unknown of the model. Its typed name is canonical.
type Parameter struct {
	Name    string // beta_hedge_bees
	Symbol  string // β_hedge→bees
	Unit    string // "per m/ha, log scale"
	Shape   Shape
	Size    int             // entries; 1 for a scalar
	Entries []string        // names of the entries of a vector
	Support catalog.Support // of each entry
	Prior   Prior
	Plate   int    // ByPlate
	Mean    string // ByPlate: parameter around which entries vary ("" = zero)
	SD      string // ByPlate: parameter that is their spread
	Stem    string // ByPlate: what stands before "by" in the typed form: "alpha_bees" by farm
	Centred bool   // ByPlate: sample entries themselves, not their standard scores
	Of      int    // index of the variable whose law it belongs to
	Why     string // how the default prior came about, in words; "" if the user gave it
}

// A Prior is a family with its arguments as expressions (numbers, mostly).
type Prior struct {
	Family    *catalog.Family
	Arguments []formula.Expr
	On        On
	FromUser  bool
	FromData  bool // some range behind it was seen in the data, not given
}

// A Problem is something that stops a fit, or that the user should know.
type Problem struct {
	Code     string       // stable: "formula", "cycle", "column-gone", "text-in-number", …
	Variable string       // ID, "" if none
	Place    string       // "law", "formula", "data", "prior", "arrow", …
	From     string       // of an arrow into Variable that it is about; "" if none
	Text     string       // what was typed, where the problem is in it; "" if none
	Span     formula.Span // in Text
	Message  string       // one sentence with the user's names, the place and the reason
	Repairs  []Repair
	Stops    bool // no fit until mended

	part string // of the place, where that is more than one word: "prior of beta_hedge_bees"
	bare string // Message without variable and place, to stand under the text it is about
}

// A Repair is one click: a label and the edit it makes.
type Repair struct {
	Label string
	Edit  study.Edit
}

// Name finds what a typed name means: a variable index, a parameter index;
// -1 where it is not one.
func (m *Model) Name(id string) (variable, parameter int) {
	variable, parameter = -1, -1
	for i, v := range m.Variables {
		if v.ID == id {
			variable = i
		}
	}
	for i, p := range m.Parameters {
		if p.Name == id {
			parameter = i
		}
	}
	return variable, parameter
}
