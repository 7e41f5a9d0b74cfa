package summary

import "math"

// BulkESS is the effective sample size of the rank-normalised split chains.
func BulkESS(chains [][]float64) float64 { return sampleOf(chains).bulkESS() }

// TailESS is the smaller effective sample size of the 5 % and 95 % quantiles.
func TailESS(chains [][]float64) float64 { return sampleOf(chains).tailESS() }

// MeanESS is the effective sample size for the mean: of the raw split chains.
func MeanESS(chains [][]float64) float64 { return sampleOf(chains).meanESS() }

// LeastESS is the smaller of BulkESS and TailESS, for a stopping rule.
func LeastESS(chains [][]float64) float64 {
	s := sampleOf(chains)
	return math.Min(s.bulkESS(), s.tailESS())
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
	covariance := newAutocovariance(chains)
	correlation := func(lag int) float64 { return 1 - (within-covariance.at(lag))/plus }
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
