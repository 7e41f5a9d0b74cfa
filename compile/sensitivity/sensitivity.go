// Package sensitivity says how strong an unmeasured cause of exposure and
// outcome would have to be to explain an effect away, and sets beside it how
// strong the measured ones are: neither number means much alone (Ioannidis, Tan
// & Blum 2019).
//
// Read the files in this order: sensitivity.go (what goes in and comes out),
// robustness.go (shares of variation), evalue.go (risk ratios), benchmark.go
// (measured causes as a yardstick), sentences.go.
package sensitivity

import (
	"math"

	"arrowroot/compile/study"
)

// An Input is a contrast with the rows that it rests on.
type Input struct {
	ExposureName, OutcomeName string

	Estimate, Low, High float64 // of the contrast: a difference, or a ratio
	Spread              float64 // its sd; of a ratio, of its logarithm
	Ratio               bool
	Level               float64 // of Low to High

	Scale    study.Scale // of the outcome
	Chance   bool        // the contrast is one of probabilities
	Baseline float64     // expected outcome under the first setting; NaN = not known

	// Exposure has a column, or one for each level but one of a category;
	// Outcome is on a scale where effects add up (see OnLinkScale). Both, and all
	// columns of Covariates, are of the same rows.
	Exposure    [][]float64
	Outcome     []float64
	Covariates  []Covariate // what is held
	NotCompared []string    // held too, but not to be had as columns
	OutcomeSD   float64     // of the outcome in its own unit
}

// A Covariate is a held variable as columns of a regression.
type Covariate struct {
	Name    string
	Columns [][]float64
}

// A Result is how wrong it could be. It never changes.
type Result struct {
	Input *Input

	Robustness   *Robustness // nil with a reason
	NoRobustness string
	E            *EValue // nil with a reason
	NoE          string

	Benchmarks   []Benchmark // one for each covariate, in the order given
	NoBenchmarks string      // why there are none; "" beside some

	Sentences []string // all of it, for people
}

// Of computes all that can be said.
func Of(in *Input) *Result {
	r := &Result{Input: in}
	r.Robustness, r.NoRobustness = robustnessOf(in)
	r.E, r.NoE = eValueOf(in)
	r.Benchmarks, r.NoBenchmarks = benchmarksOf(in)
	r.Sentences = r.say()
	return r
}

// OnLinkScale puts values of an outcome on the scale on which its default law
// adds up effects, so that a linear regression can stand in for it: the
// logarithm of counts (½ added) and positive numbers, the logit of proportions
// (kept off 0 and 1 by ½ %). Others stay as they are.
func OnLinkScale(values []float64, scale study.Scale) []float64 {
	out := make([]float64, len(values))
	for i, x := range values {
		switch scale {
		case study.Count:
			x = math.Log(x + 0.5)
		case study.Positive:
			x = math.Log(math.Max(x, 1e-300))
		case study.Proportion:
			x = math.Max(0.005, math.Min(0.995, x))
			x = math.Log(x / (1 - x))
		}
		out[i] = x
	}
	return out
}

// onAddingScale is the contrast where no effect is 0: the logarithm of a ratio.
func (in *Input) onAddingScale(x float64) float64 {
	if in.Ratio {
		return math.Log(x)
	}
	return x
}

func (in *Input) back(x float64) float64 {
	if in.Ratio {
		return math.Exp(x)
	}
	return x
}
