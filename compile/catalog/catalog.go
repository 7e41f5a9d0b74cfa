// Package catalog is the one table of names that a law may use: families of
// distributions and functions, with support, arguments, link, kernels,
// sampler, documentation and citation. The checker, the statement, completion,
// help and lowering all read it.
//
// Read the types here, then the rows in families.go and functions.go, and what
// is made of them: zeros.go (further zeros) and bounds.go (censored and
// truncated values). The distribution functions stand in continuous.go,
// heavy.go, skew.go, circle.go and discrete.go, over invert.go and incbeta.go.
package catalog

import (
	"math"
	"strings"

	"arrowroot/compile/kernel"
)

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
	Between              // between the first two arguments (uniform)
	NonNegatives         // ≥ 0 (half-normal, exponential)
	Above                // from the first argument on (Pareto)
	Turn                 // angles in radians, within half a turn of the first argument
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
	Probit   Link = "cumulative probit"
)

// Cumulative reports whether the predictor moves a whole distribution of
// levels past its cut points.
func (l Link) Cumulative() bool { return l == Cumulate || l == Probit }

// Inverse returns the argument whose link is x; for a cumulative link, the
// probability of staying below a cut point that lies x above the predictor.
func (l Link) Inverse(x float64) float64 {
	switch l {
	case Log:
		return math.Exp(x)
	case Logit, Cumulate:
		return kernel.Sigmoid(x)
	case Probit:
		return standardNormalCDF(x)
	}
	return x
}

// An Argument of a family.
type Argument struct {
	Name    string   // the trade's word, as typed: "sd", "degrees of freedom"
	Also    []string // other words of the trade that mean the same and may be typed
	Greek   string   // typed stem of its default parameter: "sigma" gives sigma_bees
	Support Support
	Given   bool // must be given, as a number or a column: there is no parameter to estimate
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

	// Centred says that the predicted argument is the expected value of one
	// unit: of one trial where there are trials. A center and a direction
	// stand in where there is no expected value, or none on a line.
	Centred bool

	// Masses says that a law of measurements gives some values a probability
	// and others a density, so that its scores are those of no other such law
	// (SEMANTICS D1).
	Masses bool

	// Natural takes the arguments as named above; a Levels family takes the
	// K probabilities instead. Linked takes the predicted argument on the
	// link scale first (K of them for a softmax), then the others in order
	// (for a cumulative logit, the K-1 cut points); nil if not predictable.
	Natural *kernel.Density
	Linked  *kernel.Density

	// Quantile is the inverse distribution function at 0 < u < 1, arguments
	// natural; for Levels families args are the K probabilities. Sampling is
	// Quantile of a uniform: common random numbers then mean common draws.
	// All four take arguments inside their supports; Mean and SD are NaN or
	// +Inf where the moment does not exist, and for Levels families they are
	// those of the level number.
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

// FamilyByName returns the family of that name, or nil. Case is free, and a
// hyphen may be a blank.
func FamilyByName(name string) *Family {
	name = fold(name)
	for _, f := range families {
		if fold(f.Name) == name {
			return f
		}
		for _, b := range Bounded(f) {
			if fold(b.Name) == name {
				return b
			}
		}
	}
	return nil
}

// Argument returns the index of the argument that is called name, or -1.
func (f *Family) Argument(name string) int {
	name = fold(name)
	for i, a := range f.Arguments {
		if fold(a.Name) == name {
			return i
		}
		for _, also := range a.Also {
			if fold(also) == name {
				return i
			}
		}
	}
	return -1
}

// FunctionByName returns the function of that name, or nil.
func FunctionByName(name string) *Function {
	name = fold(name)
	for _, f := range functions {
		if f.Name == name {
			return f
		}
	}
	return nil
}

// fold brings a typed name to the form in which names are compared.
func fold(name string) string {
	return strings.ToLower(strings.Join(strings.Fields(strings.ReplaceAll(name, "-", " ")), " "))
}

// Default returns the family that a variable of that scale gets before anyone
// chooses: "real", "positive", "proportion", "count", "binary", "category" or
// "ordered". It returns nil for another word.
func Default(scale string) *Family {
	if name, ok := defaults[scale]; ok {
		return FamilyByName(name)
	}
	return nil
}

var defaults = map[string]string{
	"real":       "normal",
	"positive":   "gamma",
	"proportion": "beta",
	"count":      "negative binomial",
	"binary":     "Bernoulli",
	"category":   "categorical",
	"ordered":    "ordered",
}
