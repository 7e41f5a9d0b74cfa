package catalog

import (
	"math"

	"gonum.org/v1/gonum/mathext"

	"arrowroot/compile/kernel"
)

// search returns the smallest whole number x ≥ 0 with cdf(x) ≥ u, starting
// from a guess. It doubles the step until the answer is bracketed and then
// halves the bracket, so a poor guess costs steps and not correctness. No
// answer exceeds top.
func search(u float64, guess, top float64, cdf func(x float64) float64) float64 {
	guess = math.Floor(min(max(guess, 0), top))
	lo, hi := -1.0, guess // cdf(lo) < u ≤ cdf(hi)
	for step := 1.0; hi < top && cdf(hi) < u; step *= 2 {
		lo, hi = hi, min(hi+step, top)
	}
	if lo < 0 {
		for step := 1.0; hi-step >= 0; step *= 2 {
			if x := hi - step; cdf(x) < u {
				lo = x
				break
			}
			hi -= step
		}
	}
	for hi-lo > 1 {
		if mid := math.Floor(lo + 0.5*(hi-lo)); cdf(mid) < u {
			lo = mid
		} else {
			hi = mid
		}
	}
	return hi
}

// mostCount bounds counts to where doubles still hold every whole number.
const mostCount = 1 << 53

// A count sums the probabilities of its first values directly, which is both
// quicker and more accurate than a special function; beyond them, or where
// the first one underflows, cdf takes over.
type count struct {
	first    float64                 // probability of 0
	ratio    func(j float64) float64 // p(j+1)/p(j)
	cdf      func(x float64) float64
	mean, sd float64
	top      float64
}

const summed = 64

func (c count) sums() bool { return c.first > 1e-280 }

func (c count) below(x float64) float64 {
	x = math.Floor(x)
	switch {
	case x < 0:
		return 0
	case x >= c.top:
		return 1
	case x > summed || !c.sums():
		return c.cdf(x)
	}
	p, sum := c.first, c.first
	for j := 0.0; j < x; j++ {
		p *= c.ratio(j)
		sum += p
	}
	return min(sum, 1)
}

func (c count) quantile(u float64) float64 {
	if c.sums() {
		p, sum := c.first, c.first
		for j := 0.0; j <= min(summed, c.top); j++ {
			if sum >= u || j == c.top {
				return j
			}
			p *= c.ratio(j)
			sum += p
		}
	}
	return search(u, c.mean+c.sd*mathext.NormalQuantile(u), c.top, c.below)
}

func poissonCount(a []float64) count {
	rate := a[0]
	return count{
		first: math.Exp(-rate),
		ratio: func(j float64) float64 { return rate / (j + 1) },
		cdf:   func(x float64) float64 { return mathext.GammaIncRegComp(x+1, rate) },
		mean:  rate, sd: poissonSD(a), top: mostCount,
	}
}

func poissonCDF(x float64, a []float64) float64      { return poissonCount(a).below(x) }
func poissonQuantile(u float64, a []float64) float64 { return poissonCount(a).quantile(u) }
func poissonSD(a []float64) float64                  { return math.Sqrt(a[0]) }

func negBinomialCount(a []float64) count {
	mean, k := a[0], a[1]
	if k > 1e18*(1+mean) { // a Poisson in double precision
		return poissonCount(a)
	}
	p, q := k/(mean+k), mean/(mean+k)
	return count{
		first: math.Exp(-k * math.Log1p(mean/k)),
		ratio: func(j float64) float64 { return (k + j) / (j + 1) * q },
		cdf: func(x float64) float64 {
			lower, _ := incBeta(k, x+1, p, q)
			return lower
		},
		mean: mean, sd: negBinomialSD(a), top: mostCount,
	}
}

func negBinomialCDF(x float64, a []float64) float64      { return negBinomialCount(a).below(x) }
func negBinomialQuantile(u float64, a []float64) float64 { return negBinomialCount(a).quantile(u) }
func negBinomialSD(a []float64) float64                  { return math.Sqrt(a[0] + a[0]*a[0]/a[1]) }

func binomialCount(a []float64) count {
	p, n := a[0], a[1]
	odds := p / (1 - p)
	return count{
		first: math.Exp(n * math.Log1p(-p)),
		ratio: func(j float64) float64 { return (n - j) / (j + 1) * odds },
		cdf: func(x float64) float64 {
			lower, _ := incBeta(n-x, x+1, 1-p, p)
			return lower
		},
		mean: binomialMean(a), sd: binomialSD(a), top: n,
	}
}

func binomialCDF(x float64, a []float64) float64      { return binomialCount(a).below(x) }
func binomialQuantile(u float64, a []float64) float64 { return binomialCount(a).quantile(u) }
func binomialMean(a []float64) float64                { return a[0] * a[1] }
func binomialSD(a []float64) float64                  { return math.Sqrt(a[1] * a[0] * (1 - a[0])) }

func geometricCount(a []float64) count { return negBinomialCount([]float64{a[0], 1}) }

func geometricCDF(x float64, a []float64) float64      { return geometricCount(a).below(x) }
func geometricQuantile(u float64, a []float64) float64 { return geometricCount(a).quantile(u) }
func geometricSD(a []float64) float64                  { return math.Sqrt(a[0] + a[0]*a[0]) }

// betaBinomialMiddle returns the probability of the number of successes next
// to the mean, from where ratios lead to all others.
func betaBinomialMiddle(a []float64) (at, p float64) {
	at = math.Round(betaBinomialMean(a))
	y := [1]float64{at}
	args := [3][]float64{a[:1], a[1:2], a[2:3]}
	return at, math.Exp(kernel.BetaBinomial.Block(1, y[:], args[:], nil, nil, nil, nil))
}

// betaBinomialRatio is p(j+1)/p(j).
func betaBinomialRatio(j float64, a []float64) float64 {
	m, k, n := a[0], a[1], a[2]
	return (n - j) / (j + 1) * ((m*k + j) / ((1-m)*k + n - j - 1))
}

// betaBinomialTails returns P(y ≤ x) and P(y > x), the smaller one by adding
// up what it consists of.
func betaBinomialTails(x float64, a []float64) (lower, upper float64) {
	x = math.Floor(x)
	switch {
	case x < 0:
		return 0, 1
	case x >= a[2]:
		return 1, 0
	}
	at, p := betaBinomialMiddle(a)
	for ; at > x; at-- {
		p /= betaBinomialRatio(at-1, a)
	}
	for ; at < x; at++ {
		p *= betaBinomialRatio(at, a)
	}
	if x < betaBinomialMean(a) {
		for ; at >= 0 && p > 1e-18*lower; at-- {
			lower += p
			if at > 0 {
				p /= betaBinomialRatio(at-1, a)
			}
		}
		return lower, 1 - lower
	}
	for p *= betaBinomialRatio(at, a); at < a[2] && p > 1e-18*upper; p *= betaBinomialRatio(at, a) {
		upper += p
		at++
	}
	return 1 - upper, upper
}

// fewTrials is up to where the tails of a beta-binomial are added up. Beyond,
// shares of the trials are taken as a beta with the same mean and sd.
const fewTrials = 1e6

func betaBinomialCDF(x float64, a []float64) float64 {
	if a[2] > fewTrials {
		return betaCDF((math.Floor(x)+1)/(a[2]+1), betaBinomialShare(a))
	}
	lower, _ := betaBinomialTails(x, a)
	return lower
}

func betaBinomialShare(a []float64) []float64 {
	k, n := a[1], a[2]
	return []float64{a[0], n*((k+1)/(k+n)) - 1}
}

func betaBinomialQuantile(u float64, a []float64) float64 {
	if a[0] <= 0 || a[0] >= 1 || a[1] <= 0 {
		return math.Round(a[0]) * a[2]
	}
	if a[2] > fewTrials {
		return max(0, min(a[2], math.Ceil(betaQuantile(u, betaBinomialShare(a))*(a[2]+1))-1))
	}
	sd := betaBinomialSD(a)
	return search(u, betaBinomialMean(a)+sd*mathext.NormalQuantile(u), a[2], func(x float64) float64 { return betaBinomialCDF(x, a) })
}

func betaBinomialMean(a []float64) float64 { return a[0] * a[2] }

func betaBinomialSD(a []float64) float64 {
	m, k, n := a[0], a[1], a[2]
	return math.Sqrt(n * m * (1 - m) * ((k + n) / (k + 1)))
}

func bernoulliCDF(x float64, a []float64) float64 {
	switch {
	case x < 0:
		return 0
	case x < 1:
		return 1 - a[0]
	}
	return 1
}

func bernoulliQuantile(u float64, a []float64) float64 {
	if u > 1-a[0] {
		return 1
	}
	return 0
}

func bernoulliSD(a []float64) float64 { return math.Sqrt(a[0] * (1 - a[0])) }

func levelCDF(x float64, p []float64) float64 {
	sum := 0.0
	for k, q := range p {
		if float64(k) > x {
			break
		}
		sum += q
	}
	return sum
}

func levelQuantile(u float64, p []float64) float64 {
	sum := 0.0
	for k, q := range p {
		sum += q
		if u <= sum {
			return float64(k)
		}
	}
	return float64(len(p) - 1)
}

func levelMean(p []float64) float64 {
	sum := 0.0
	for k, q := range p {
		sum += float64(k) * q
	}
	return sum
}

func levelSD(p []float64) float64 {
	m, sum := levelMean(p), 0.0
	for k, q := range p {
		sum += (float64(k) - m) * (float64(k) - m) * q
	}
	return math.Sqrt(sum)
}
