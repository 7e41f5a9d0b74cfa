package summary

import (
	"math"
	"sort"
)

// BulkESS is the effective sample size of the rank-normalised split chains.
func BulkESS(chains [][]float64) float64 {
	halves := split(chains)
	if len(halves[0]) < 4 || constant(halves) {
		return math.NaN()
	}
	return effective(normalScores(halves))
}

// TailESS is the smaller effective sample size of the 5 % and 95 % quantiles.
func TailESS(chains [][]float64) float64 {
	halves := split(chains)
	if len(halves[0]) < 4 || constant(halves) {
		return math.NaN()
	}
	all := pooled(halves)
	sort.Float64s(all)
	low := indicatorESS(halves, Quantile(all, 0.05))
	high := indicatorESS(halves, Quantile(all, 0.95))
	return math.Min(low, high)
}

// MeanESS is the effective sample size for the mean: of the raw split chains.
func MeanESS(chains [][]float64) float64 {
	halves := split(chains)
	if len(halves[0]) < 4 || constant(halves) {
		return math.NaN()
	}
	return effective(halves)
}

func indicatorESS(halves [][]float64, at float64) float64 {
	steps := mapped(halves, func(x float64) float64 {
		if x <= at {
			return 1
		}
		return 0
	})
	if constant(steps) {
		return math.NaN()
	}
	return effective(steps)
}

// effective is the effective sample size by Geyer's initial monotone sequence
// (Vehtari et al. 2021, equations 10–13), at most S log10 S.
func effective(chains [][]float64) float64 {
	m, n := len(chains), len(chains[0])
	total := float64(m * n)
	within, plus := variances(chains)
	if !(plus > 0) {
		return math.NaN()
	}
	covariance := make([]float64, n) // mean over chains, lag by lag
	transform := newAutocovariance(n)
	for _, c := range chains {
		transform.add(covariance, c, float64(m))
	}
	correlation := func(lag int) float64 { return 1 - (within-covariance[lag])/plus }
	sum, previous := 0.0, math.Inf(1)
	// The last pair is left out: its autocovariance is a single product.
	for lag := 0; lag+2 < n; lag += 2 {
		pair := correlation(lag) + correlation(lag+1)
		if lag == 0 {
			pair = 1 + correlation(1)
		}
		if pair <= 0 {
			break
		}
		previous = math.Min(previous, pair)
		sum += previous
	}
	tau := math.Max(-1+2*sum, 1/math.Log10(total))
	return total / tau
}
