// Package catalog is the one table of names that a law may use: families of
// distributions and functions, with support, arguments, link, kernels,
// sampler, documentation and citation. The checker, the statement, completion,
// help and lowering all read it.
package catalog

import "arrowroot/compile/kernel"

// Support is where values of a family, or of an argument, can lie.
type Support int

// The supports.
const (
	Reals        Support = iota
	Positives            // > 0
	Unit                 // 0 < x < 1
	Counts               // 0, 1, 2, …
	ZeroOne              // 0 or 1
	UpTo                 // 0 … trials
	Levels               // 0 … K-1
	Between              // between two arguments (uniform)
	NonNegatives         // ≥ 0 (half-normal, exponential)
)

// A Link maps the predicted argument to the line of reals.
type Link string

// The links.
const (
	Identity Link = ""
	Log      Link = "log"
	Logit    Link = "logit"
	Softmax  Link = "softmax"          // K zero-sum predictors
	Cumulate Link = "cumulative logit" // one predictor, K-1 ordered cut points
)

// An Argument of a family.
type Argument struct {
	Name    string // the trade's word, as typed: "sd", "degrees of freedom"
	Greek   string // typed stem of its default parameter: "sigma" gives sigma_bees
	Support Support
	Doc     string
}

// A Family is one row of the catalogue.
type Family struct {
	Name      string // "negative binomial"
	Support   Support
	Discrete  bool
	Arguments []Argument // in the order of Natural's args; the predicted one is Arguments[Predicted]
	Predicted int        // -1 if no argument can be predicted
	Link      Link       // of the predicted argument

	Natural *kernel.Density // arguments as named above
	Linked  *kernel.Density // predicted argument(s) on the link scale first, then the others in order; nil if not predictable

	// Quantile is the inverse distribution function at 0 < u < 1, arguments
	// natural; for Levels families args are the K probabilities. Sampling is
	// Quantile of a uniform: common random numbers then mean common draws.
	Quantile func(u float64, args []float64) float64
	CDF      func(x float64, args []float64) float64
	Mean     func(args []float64) float64
	SD       func(args []float64) float64

	Doc    string // what it is for, in one sentence for the person who chooses
	Source string // citation
}

// A Function is one row of the catalogue of functions.
type Function struct {
	Name  string // "log", "inverse logit"
	Args  int
	Doc   string
	Value func(args []float64) float64
}
