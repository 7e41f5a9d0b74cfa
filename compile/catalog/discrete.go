package catalog

import (
	"math"

	"gonum.org/v1/gonum/mathext"
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

// guess is a quantile of the normal with the same mean and sd.
func guess(u, mean, sd float64) float64 { return mean + sd*mathext.NormalQuantile(u) }

func poissonCDF(x float64, a []float64) float64 {
	if x < 0 {
		return 0
	}
	return mathext.GammaIncRegComp(math.Floor(x)+1, a[0])
}

func poissonQuantile(u float64, a []float64) float64 {
	return search(u, guess(u, a[0], poissonSD(a)), mostCount, func(x float64) float64 { return poissonCDF(x, a) })
}

func poissonSD(a []float64) float64 { return math.Sqrt(a[0]) }

func negBinomialCDF(x float64, a []float64) float64 {
	if x < 0 {
		return 0
	}
	return mathext.RegIncBeta(a[1], math.Floor(x)+1, a[1]/(a[0]+a[1]))
}

func negBinomialQuantile(u float64, a []float64) float64 {
	return search(u, guess(u, a[0], negBinomialSD(a)), mostCount, func(x float64) float64 { return negBinomialCDF(x, a) })
}

func negBinomialSD(a []float64) float64 { return math.Sqrt(a[0] + a[0]*a[0]/a[1]) }

func binomialCDF(x float64, a []float64) float64 {
	p, n := a[0], a[1]
	x = math.Floor(x)
	switch {
	case x < 0:
		return 0
	case x >= n:
		return 1
	}
	return mathext.RegIncBeta(n-x, x+1, 1-p)
}

func binomialQuantile(u float64, a []float64) float64 {
	return search(u, guess(u, binomialMean(a), binomialSD(a)), a[1], func(x float64) float64 { return binomialCDF(x, a) })
}

func binomialMean(a []float64) float64 { return a[0] * a[1] }
func binomialSD(a []float64) float64   { return math.Sqrt(a[1] * a[0] * (1 - a[0])) }

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
