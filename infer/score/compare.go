package score

import (
	"fmt"
	"math"
)

// A Difference is by how much one model predicts the same units better than
// another.
type Difference struct {
	Score         float64 // first less second
	StandardError float64 // of the paired differences
	Units         int
}

// Small is a difference in score below which no model should be preferred,
// whatever its standard error says (T. Sivula, M. Magnusson & A. Vehtari,
// "Uncertainty in Bayesian leave-one-out cross-validation based model
// comparison", 2020).
const Small = 4

// Few is the number of units below which the standard error is itself too
// uncertain to go by (same paper).
const Few = 100

// Compare pairs the scores of the same units.
func Compare(a, b *By) (Difference, error) {
	if len(a.Unit) != len(b.Unit) {
		return Difference{}, fmt.Errorf("%d and %d units were scored: scores of different rows cannot be compared", len(a.Unit), len(b.Unit))
	}
	paired := make([]float64, len(a.Unit))
	for i := range paired {
		paired[i] = a.Unit[i] - b.Unit[i]
	}
	d := Difference{Units: len(paired)}
	d.Score, d.StandardError = total(paired)
	return d, nil
}

// Decided reports whether the difference is large enough, and known well
// enough, to name a better predictor: above Small and above two standard
// errors.
func (d Difference) Decided() bool {
	return math.Abs(d.Score) > Small && math.Abs(d.Score) > 2*d.StandardError
}

// Stack returns weights, summing to 1, of the mixture of predictive
// distributions that predicts left-out units best (Y. Yao, A. Vehtari, D.
// Simpson & A. Gelman, "Using stacking to average Bayesian predictive
// distributions", Bayesian Analysis 13, 2018). scores holds the units' scores
// of each model. The target is concave; the fixed-point steps of the EM
// algorithm for mixture weights climb it.
func Stack(scores [][]float64) []float64 {
	models, units := len(scores), 0
	if models > 0 {
		units = len(scores[0])
	}
	weights, gain := make([]float64, models), make([]float64, models)
	for m := range weights {
		weights[m] = 1 / float64(models)
	}
	if units == 0 {
		return weights
	}
	density := make([][]float64, models) // relative to the best model of each unit
	for m := range density {
		density[m] = make([]float64, units)
	}
	for i := range units {
		best := math.Inf(-1)
		for m := range scores {
			best = max(best, scores[m][i])
		}
		for m := range scores {
			density[m][i] = math.Exp(scores[m][i] - best)
		}
	}
	for range 100_000 {
		clear(gain)
		for i := range units {
			mix := 0.0
			for m, w := range weights {
				mix += w * density[m][i]
			}
			for m := range gain {
				gain[m] += density[m][i] / mix / float64(units)
			}
		}
		moved := 0.0
		for m := range weights {
			next := weights[m] * gain[m]
			moved = max(moved, math.Abs(next-weights[m]))
			weights[m] = next
		}
		if moved < 1e-10 {
			break
		}
	}
	return weights
}
