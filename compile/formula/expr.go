// Package formula is the small language of laws: predictors ("log rate =
// alpha_bees by farm + beta_hedge_bees * (hedge - 90)"), distribution phrases
// ("normal with mean 0, sd 1") and sentences that join a variable to one
// ("bees ~ Poisson with rate r"). It knows syntax alone; which names exist and
// what they mean is for its reader to say.
//
// Read the files in this order: expr.go (the tree), grammar.txt (what is
// accepted), names.go (Greek and its typed form), scan.go (text to tokens),
// parse.go and phrase.go (tokens to trees), format.go (the typed form of a
// tree), pretty.go (the printed form), walk.go, replace.go and caret.go.
package formula

// A Span is a half-open range of bytes in the text that was parsed.
type Span struct {
	Start, End int
}

// An Expr is a node of a parsed formula. Trees never change after parsing;
// what a name means is kept in tables beside the tree.
type Expr interface {
	Where() Span
	expr()
}

// A Number is a literal.
type Number struct {
	Span  Span
	Value float64
}

// A Name is a variable or a parameter. Greek letters are held in their typed
// form (alpha_bees), arrows as underscores: β_hedge→bees is beta_hedge_bees.
type Name struct {
	Span Span
	ID   string
}

// A By takes a name at the level of each of the plates: "alpha_bees by farm",
// "alpha by farm and year".
type By struct {
	Span   Span
	Name   *Name
	Plates []string
}

// An Of takes the entry of a named vector at the level of a category or
// ordered variable: "step_soil_flowers of soil".
type Of struct {
	Span     Span
	Vector   *Name
	Variable *Name
}

// An Element takes one fixed entry of a named vector, counted from 0. It is
// made by the compiler, never parsed.
type Element struct {
	Span   Span
	Vector Expr // *Name or *By
	At     int
}

// A Unary is "-x".
type Unary struct {
	Span Span
	Op   byte // '-'
	X    Expr
}

// A Binary is "x op y".
type Binary struct {
	Span Span
	Op   byte // + - * / ^
	X, Y Expr
}

// A Call is a function of the trade: "log rate" or "log(rate + 1)".
type Call struct {
	Span     Span
	Function string
	Args     []Expr
}

func (e *Number) Where() Span  { return e.Span }
func (e *Name) Where() Span    { return e.Span }
func (e *By) Where() Span      { return e.Span }
func (e *Of) Where() Span      { return e.Span }
func (e *Element) Where() Span { return e.Span }
func (e *Unary) Where() Span   { return e.Span }
func (e *Binary) Where() Span  { return e.Span }
func (e *Call) Where() Span    { return e.Span }

func (*Number) expr()  {}
func (*Name) expr()    {}
func (*By) expr()      {}
func (*Of) expr()      {}
func (*Element) expr() {}
func (*Unary) expr()   {}
func (*Binary) expr()  {}
func (*Call) expr()    {}

// A Predictor is a whole formula line: "log rate = …". Link is the function on
// the left ("" = identity), Subject the argument it predicts ("" if the text
// gave only the right-hand side).
type Predictor struct {
	Link    string // "", "log", "logit", "softmax", "cumulative logit", "cumulative probit"
	Subject string
	Right   Expr
}

// A Phrase is a distribution in words: "normal with mean 0, sd 1".
type Phrase struct {
	Span      Span
	Family    string
	Arguments []PhraseArgument // in the order typed
}

// A PhraseArgument is one named argument of a Phrase.
type PhraseArgument struct {
	Span  Span
	Name  string
	Value Expr
}

// A Sentence is a typed law: "bees ~ negative binomial with mean rate,
// overdispersion k_bees".
type Sentence struct {
	Variable *Name
	Law      *Phrase
}

// An Error is a mistake at a place in the text.
type Error struct {
	Span    Span
	Message string
	Repair  string // what to put in the place of Span; "" = no suggestion
}

func (e *Error) Error() string { return e.Message }
