// Package study is the document: what a scientist knows, supposes and asks.
//
// A *Study never changes. An Edit applied to it gives a new *Study that shares
// every part the edit did not touch, so that "must this be computed again?" is
// a comparison of pointers and undo is keeping the old pointer. Read the files
// in this order: study.go (the parts), find.go (looking them up), valid.go
// (what must hold), edit.go and the files it names (how one study becomes the
// next), rename.go (how a new name gets everywhere), identifier.go and
// arrows.go (IDs and arrows from what people type), graph.go (the view that
// algorithms work on); for the .arrowroot file read.go over object.go over
// json.go, write.go and save.go. The file is described in
// assets/study.schema.json.
package study

// A Study is the whole document.
type Study struct {
	Title     string
	Note      string
	Data      []*Data
	Variables []*Variable // the ledger, shared by all rivals
	Plates    []*Plate
	Rivals    []*Rival
	Questions []*Question
	Dismissed []*Dismissal
}

// Data is a table that the study reads. Exactly one of File and Text is set,
// or neither when the data was left out on purpose.
type Data struct {
	Name   string
	File   string // relative to the study file
	Text   string // embedded CSV
	SHA256 string // of the bytes last read; "" if never read
	Rows   int
	Keep   []Condition // only the rows that meet all of these are used; nil = every row
}

// A Condition says which rows are meant: those whose value of a variable is
// one of the words or lies between the bounds, both included. Either words or
// at least one bound are given; a missing entry meets no condition.
type Condition struct {
	Variable  string
	Words     []string // levels of a category, ordered or worded binary variable
	Low, High *float64 // in the variable's unit, after any division; nil = no bound on this side
}

// Scale says what values a variable can take.
type Scale string

// The scales.
const (
	Real       Scale = "real"
	Positive   Scale = "positive"
	Proportion Scale = "proportion"
	Count      Scale = "count"
	Binary     Scale = "binary"
	Category   Scale = "category"
	Ordered    Scale = "ordered"
)

// Scales lists every scale in the order people are offered them.
var Scales = [...]Scale{Real, Positive, Proportion, Count, Binary, Category, Ordered}

// A Range is what the user holds plausible for a variable, in its own unit
// after any division; low < high.
type Range struct {
	Low, High float64
}

// A Variable is one line of the ledger.
type Variable struct {
	ID         string // letters, digits, underscore; Unicode letters allowed
	Label      string // "" = the ID
	Unit       string
	Scale      Scale    // "" = not said yet (treated as real)
	Levels     []string // binary, category and ordered: the words, in order
	Range      *Range   // nil = not given
	Plates     []string // its level: empty = the row
	Unmeasured bool
	Data       string   // name of its table; "" = the first
	Column     string   // "" = not bound
	Divide     float64  // the column is divided by this (100 for percent); 0 or 1 = as it is
	Missing    []string // words of the column that stand for a missing entry, besides the usual spellings
	Nudge      float64  // exact 0 (and 1 of a proportion) is moved inwards by this; 0 = left alone
	Computed   string   // formula of a deterministic variable; "" = not computed
	Tier       int      // time tier; 0 = not said
	Note       string
	Records    string  // this is an error-prone record of that variable; "" = of none
	Answers    string  // this says in which rows that variable is recorded; "" = of none
	Cost       float64 // what measuring it costs, in any one unit; 0 = not said
}

// Name is what people read: the label if there is one.
func (v *Variable) Name() string {
	if v.Label != "" {
		return v.Label
	}
	return v.ID
}

// A Plate repeats what it holds over the levels of a column.
type Plate struct {
	Name   string // "farm"
	Column string // the column that names the level of each row; "" = same as Name
	Within string // the plate it is nested in; "" = none (crossed or alone)
}

// A Rival is one explanation. Moving a node replaces Layout alone.
type Rival struct {
	Name    string
	Note    string
	Layout  *Layout
	Diagram *Diagram
}

// A Layout says where nodes stand, in sheet units, by variable ID. A node that
// is missing here is placed by the automatic layout. Notes are words on the
// sheet that no law and no reading knows of.
type Layout struct {
	At    map[string]Point
	Notes []*Note
}

// A Note is written on a sheet; At is its upper left corner.
type Note struct {
	At   Point
	Text string
}

// A Point on the sheet: x to the right, y down; the centre of a node.
type Point struct {
	X, Y float64
}

// A Diagram is a rival's nodes, arrows and laws.
type Diagram struct {
	Nodes  []*Node
	Arrows []*Arrow
	Arcs   []*Arc
	Absent []*Absent
}

// A Node puts a variable on a rival's sheet.
type Node struct {
	Variable string
	Law      *Law // nil = the default law of the variable's scale
	Limits   bool // only rows with one value of this variable are in the data
}

// A Law says how a variable gets its value. Empty fields mean the default.
type Law struct {
	Family    string     // catalogue name; "" = default of the scale
	Arguments []Argument // arguments other than the predicted one, by catalogue name: {"trials", "n"}, {"sd", "stderr"}, {"sd", "2.5"}
	Formula   string     // the predictor as text, "log rate = alpha_bees by farm + …"; "" = from the arrows
	VariesBy  []string   // plates over which the baseline varies
	Priors    []Prior    // priors that differ from the defaults, by typed parameter name; also declares free parameters of Formula
	Treat     string     // "" = by the rules, "given", "modelled", or "imputed": modelled, its missing entries drawn with the rest
	Note      string
}

// An Argument gives one argument of a family as formula text.
type Argument struct {
	Name, Text string
}

// A Prior is a distribution phrase for a parameter: {"beta_hedge_bees",
// "normal with mean 0, sd 0.01"}.
type Prior struct {
	Parameter, Text string
}

// An Arrow says that one variable acts on another.
type Arrow struct {
	From, To   string
	Form       string   // "" = slope (or steps, from a category or ordered); else a word below
	With       []string // other parents of To with which this arrow also acts as a product
	VariesBy   []string // plates over which its slope varies
	Prior      string   // for its coefficient; "" = default
	Why        string
	References []string
}

// An Arc joins two variables that share an unmeasured cause nobody named.
type Arc struct {
	A, B       string
	Plates     []string // the level at which the cause lives; empty = the row
	Why        string
	References []string
}

// An Absent arrow is an assumption with a reason.
type Absent struct {
	From, To   string
	Why        string
	References []string
}

// A Setting is a value given to the exposure: a number, or a level's word.
type Setting struct {
	Number float64
	Word   string // for category, ordered and worded binary exposures; "" = Number counts
}

// Words of Question.Effect, Over, Groups, Weigh and As.
const (
	TotalEffect  = "total"
	DirectEffect = "controlled direct"

	TheseRows       = "these rows"
	PopulationAlike = "a population like these"

	TheseGroups = "these groups"
	NewGroups   = "new groups"

	ByRows   = "by rows"
	ByGroups = "by groups"

	Difference = "difference"
	Ratio      = "ratio"
)

// Words of Arrow.Form and Law.Treat.
const (
	Slope      = "slope"
	Steps      = "steps"
	Offset     = "offset"
	Log        = "log"
	OneWay     = "one-way steps"
	Threshold  = "threshold"
	Saturating = "saturating"

	Given    = "given"
	Modelled = "modelled"
	Imputed  = "imputed"
)

// A Question asks for one contrast. Held marks belong to it, never to a rival.
type Question struct {
	Exposure, Outcome string
	Effect            string // "" = total
	From, To          *Setting
	Shift             float64     // with From and To nil: add this to every row's own value
	Fixed             []Fix       // controlled direct: what else is set, and at which value
	Held              []string    // variables and plates; nil = nobody said yet; empty = said to be none
	Where             []Condition // the rows asked about meet all of these; nil = every row
	Over              string      // "" = these rows
	Groups            string      // "" = these groups: the levels of the plates that are in the data
	Weigh             string      // "" = by rows; by groups: each level of the outermost plate counts the same
	As                string      // "" = difference
	OutcomeLevels     []string    // category and ordered outcomes: the levels whose probability is asked for
	Level             float64     // credible level of intervals; 0 = 0.9
}

// A Fix sets one variable more, besides the exposure: a controlled direct
// effect is the exposure's with these at one value throughout.
type Fix struct {
	Variable string
	At       Setting
}

// HoldsPlate reports whether a name in Question.Held is that of a plate. A
// variable of the same name comes first.
func (s *Study) HoldsPlate(held string) bool {
	return s.Variable(held) == nil && s.Plate(held) != nil
}

// A Dismissal sets a finding on one rival aside, with a reason. Key is the
// finding's code and what it is about, parted by spaces: "M1 hedge bees". The
// names of variables in it follow renaming.
type Dismissal struct {
	Rival, Key, Why string
}
