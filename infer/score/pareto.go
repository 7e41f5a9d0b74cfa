// Package score says how well a fitted model predicts data that it has not
// seen: leaving out one unit at a time by smoothed importance sampling, the
// differences between models with their errors, and weights for a mixture of
// them. It works on log predictive densities by unit and draw and knows
// nothing of models.
//
// Read pareto.go (smoothed importance weights), leaveout.go (scores by unit),
// compare.go (differences and weights).
package score

import (
	"math"
	"slices"

	"gonum.org/v1/gonum/floats"
)

// Weights are normalised importance weights of draws, with the verdict on
// them.
type Weights struct {
	Log []float64 // log weights; their exponentials sum to 1
	K   float64   // shape of the tail of the raw ratios; +Inf where the tail cannot be fitted
}

// Smooth normalises importance ratios given by their logs, after replacing the
// largest of them by the expected order statistics of a generalised Pareto
// distribution fitted to their tail (A. Vehtari, D. Simpson, A. Gelman, Y. Yao
// & J. Gabry, "Pareto smoothed importance sampling", JMLR 25, 2024). relative
// is the effective number of draws divided by their number, 1 if independent.
func Smooth(logRatios []float64, relative float64) Weights {
	total := len(logRatios)
	log := slices.Clone(logRatios)
	most := slices.Max(log)
	for i := range log {
		log[i] -= most
	}
	w := Weights{Log: log, K: math.Inf(1)}
	s := float64(total)
	tail := int(math.Ceil(min(0.2*s, 3*math.Sqrt(s/relative))))
	if tail >= 5 && tail < total {
		w.K = smoothTail(log, tail)
	}
	norm := floats.LogSumExp(log)
	for i := range log {
		log[i] -= norm
	}
	return w
}

// smoothTail replaces the tail of log ratios, whose largest is 0, and returns
// the shape of the tail.
func smoothTail(log []float64, tail int) (k float64) {
	order := make([]int, len(log))
	for i := range order {
		order[i] = i
	}
	slices.SortStableFunc(order, func(a, b int) int {
		switch {
		case log[a] < log[b]:
			return -1
		case log[a] > log[b]:
			return 1
		}
		return 0
	})
	first := len(order) - tail
	cut := math.Exp(log[order[first-1]])
	beyond := make([]float64, tail)
	for i := range beyond {
		beyond[i] = math.Exp(log[order[first+i]]) - cut
	}
	if beyond[tail-1] <= 0 || beyond[0] == beyond[tail-1] {
		return 0 // the largest ratios are all alike: nothing to smooth
	}
	k, sigma := fitPareto(beyond)
	if math.IsNaN(k) || math.IsInf(k, 0) {
		return math.Inf(1)
	}
	n := float64(tail)
	k = (n*k + 5) / (n + 10) // a weak prior towards ½, as ten further values
	for i := range beyond {
		p := (float64(i) + 0.5) / n
		log[order[first+i]] = min(0, math.Log(cut+quantilePareto(p, k, sigma)))
	}
	return k
}

// quantilePareto is the quantile of the generalised Pareto distribution.
func quantilePareto(p, k, sigma float64) float64 {
	if math.Abs(k) < 1e-12 {
		return -sigma * math.Log1p(-p)
	}
	return sigma / k * math.Expm1(-k*math.Log1p(-p))
}

// fitPareto estimates shape and scale of a generalised Pareto distribution
// from ascending values above 0 (J. Zhang & M. A. Stephens, "A new and
// efficient estimation method for the generalized Pareto distribution",
// Technometrics 51, 2009).
func fitPareto(x []float64) (k, sigma float64) {
	n := len(x)
	grid := 30 + int(math.Sqrt(float64(n)))
	quarter := x[int(float64(n)/4+0.5)-1]
	b, fit := make([]float64, grid), make([]float64, grid)
	shape := func(b float64) float64 {
		sum := 0.0
		for _, v := range x {
			sum += math.Log1p(-b * v)
		}
		return sum / float64(n)
	}
	for j := range b {
		b[j] = 1/x[n-1] + (1-math.Sqrt(float64(grid)/(float64(j)+0.5)))/(3*quarter)
		s := shape(b[j])
		fit[j] = float64(n) * (math.Log(-b[j]/s) - s - 1)
	}
	norm := floats.LogSumExp(fit)
	middle := 0.0
	for j := range b {
		middle += b[j] * math.Exp(fit[j]-norm)
	}
	k = shape(middle)
	return k, -k / middle
}

// Reliable is the largest K at which so many draws still estimate a mean well:
// 0.7, or less for few draws (same paper, section 3.2.4).
func Reliable(draws int) float64 { return min(1-1/math.Log10(float64(draws)), 0.7) }

// Enough is how many draws a tail of shape k asks for (same paper, eq. 14).
func Enough(k float64) float64 {
	if k >= 1 {
		return math.Inf(1)
	}
	return math.Pow(10, 1/(1-max(0, k)))
}

// Effective is the effective number of draws behind a mean under the weights:
// 1 / Σ w².
func (w Weights) Effective() float64 {
	sum := 0.0
	for _, l := range w.Log {
		sum += math.Exp(2 * l)
	}
	return 1 / sum
}

// Mean is the weighted mean of values, one for each draw.
func (w Weights) Mean(values []float64) float64 {
	sum := 0.0
	for i, l := range w.Log {
		sum += math.Exp(l) * values[i]
	}
	return sum
}
