package summary

import "math"

// RHat is the larger of the rank-normalised split R-hat of the draws and of
// their distances from the median (Vehtari et al. 2021, section 4). NaN for a
// constant and for chains of fewer than four draws.
func RHat(chains [][]float64) float64 { return sampleOf(chains).rHat() }

// potentialScale is R-hat of the chains as they are (Gelman & Rubin 1992;
// Vehtari et al. 2021, equations 1–4).
func potentialScale(chains [][]float64) float64 {
	within, plus := variances(chains)
	return math.Sqrt(plus / within)
}
