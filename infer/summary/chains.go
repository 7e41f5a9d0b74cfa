package summary

import (
	"cmp"
	"math"
	"slices"
	"sort"

	"gonum.org/v1/gonum/dsp/fourier"
	"gonum.org/v1/gonum/mathext"
)

// split cuts every chain in halves; the middle draw of an odd chain is left out.
func split(chains [][]float64) [][]float64 {
	var halves [][]float64
	for _, c := range chains {
		n := len(c) / 2
		halves = append(halves, c[:n], c[len(c)-n:])
	}
	return halves
}

// potentialScale is R-hat of the chains as they are (Gelman & Rubin 1992; Vehtari et
// al. 2021, equations 1–4).
func potentialScale(chains [][]float64) float64 {
	within, plus := variances(chains)
	return math.Sqrt(plus / within)
}

// variances gives the mean variance within chains and the pooled estimate.
func variances(chains [][]float64) (within, plus float64) {
	m, n := float64(len(chains)), float64(len(chains[0]))
	grand := 0.0
	means := make([]float64, len(chains))
	for i, c := range chains {
		mu, v := meanVariance(c)
		means[i] = mu
		grand += mu / m
		within += v / m
	}
	between := 0.0
	for _, mu := range means {
		between += (mu - grand) * (mu - grand)
	}
	if m > 1 {
		between /= m - 1
	}
	return within, (n-1)/n*within + between
}

func meanVariance(x []float64) (mean, variance float64) {
	for _, v := range x {
		mean += v
	}
	mean /= float64(len(x))
	for _, v := range x {
		variance += (v - mean) * (v - mean)
	}
	return mean, variance / float64(len(x)-1)
}

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

// An autocovariance computes autocovariances through a Fourier transform
// padded so that nothing wraps round.
type autocovariance struct {
	n         int
	transform *fourier.FFT
	padded    []float64
	spectrum  []complex128
}

func newAutocovariance(n int) *autocovariance {
	size := 1
	for size < 2*n {
		size *= 2
	}
	return &autocovariance{n: n, transform: fourier.NewFFT(size), padded: make([]float64, size)}
}

// add puts the autocovariances of x, with divisor n rescaled by n/(n−1) so
// that lag 0 is the sample variance, over share into dst.
func (a *autocovariance) add(dst, x []float64, share float64) {
	mean, _ := meanVariance(x)
	clear(a.padded)
	for i, v := range x {
		a.padded[i] = v - mean
	}
	a.spectrum = a.transform.Coefficients(a.spectrum, a.padded)
	for i, c := range a.spectrum {
		a.spectrum[i] = complex(real(c)*real(c)+imag(c)*imag(c), 0)
	}
	a.padded = a.transform.Sequence(a.padded, a.spectrum)
	scale := 1 / (float64(len(a.padded)) * float64(a.n-1) * share)
	for i := range dst {
		dst[i] += a.padded[i] * scale
	}
}

// normalScores replaces draws by the normal quantiles of their pooled ranks,
// ties averaged (Blom 1958 offset). What is no number ranks first, each by
// itself.
func normalScores(chains [][]float64) [][]float64 {
	type place struct {
		value    float64
		chain, i int
	}
	places := make([]place, 0, len(chains)*len(chains[0]))
	for c, x := range chains {
		for i, v := range x {
			places = append(places, place{v, c, i})
		}
	}
	slices.SortFunc(places, func(a, b place) int { return cmp.Compare(a.value, b.value) })
	scores := make([][]float64, len(chains))
	for c, x := range chains {
		scores[c] = make([]float64, len(x))
	}
	total := float64(len(places))
	for from := 0; from < len(places); {
		to := from + 1 // NaN does not equal itself
		for to < len(places) && places[to].value == places[from].value {
			to++
		}
		rank := float64(from+to+1) / 2
		z := mathext.NormalQuantile((rank - 0.375) / (total + 0.25))
		for _, p := range places[from:to] {
			scores[p.chain][p.i] = z
		}
		from = to
	}
	return scores
}

func pooled(chains [][]float64) []float64 {
	var all []float64
	for _, c := range chains {
		all = append(all, c...)
	}
	return all
}

func mapped(chains [][]float64, f func(float64) float64) [][]float64 {
	out := make([][]float64, len(chains))
	for i, c := range chains {
		out[i] = make([]float64, len(c))
		for k, x := range c {
			out[i][k] = f(x)
		}
	}
	return out
}

func constant(chains [][]float64) bool {
	for _, c := range chains {
		for _, x := range c {
			if x != chains[0][0] {
				return false
			}
		}
	}
	return true
}

// Quantile is the p quantile of sorted values, linear between order
// statistics (Hyndman & Fan 1996, definition 7).
func Quantile(sorted []float64, p float64) float64 {
	if len(sorted) == 0 {
		return math.NaN()
	}
	at := p * float64(len(sorted)-1)
	low := int(math.Floor(at))
	if low >= len(sorted)-1 {
		return sorted[len(sorted)-1]
	}
	return sorted[low] + (at-float64(low))*(sorted[low+1]-sorted[low])
}

// EBFMI is Betancourt's (2016) ratio of the energy's step to step variation
// to its spread, for one chain.
func EBFMI(energy []float64) float64 {
	mean := 0.0
	for _, e := range energy {
		mean += e / float64(len(energy))
	}
	steps, spread := 0.0, 0.0
	for i, e := range energy {
		spread += (e - mean) * (e - mean)
		if i > 0 {
			steps += (e - energy[i-1]) * (e - energy[i-1])
		}
	}
	return steps / spread
}
