package summary

import (
	"math"
	"sort"
)

// RHat is the larger of the rank-normalised split R-hat of the draws and of
// their distances from the median (Vehtari et al. 2021, section 4). NaN for a
// constant and for chains of fewer than four draws.
func RHat(chains [][]float64) float64 {
	halves := split(chains)
	if len(halves[0]) < 2 || constant(halves) {
		return math.NaN()
	}
	bulk := potentialScale(normalScores(halves))
	all := pooled(halves)
	sort.Float64s(all)
	middle := Quantile(all, 0.5)
	folded := mapped(halves, func(x float64) float64 { return math.Abs(x - middle) })
	if constant(folded) {
		return bulk
	}
	return math.Max(bulk, potentialScale(normalScores(folded)))
}

// potentialScale is R-hat of the chains as they are (Gelman & Rubin 1992;
// Vehtari et al. 2021, equations 1–4).
func potentialScale(chains [][]float64) float64 {
	within, plus := variances(chains)
	return math.Sqrt(plus / within)
}
