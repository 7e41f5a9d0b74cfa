package catalog

import (
	"math"

	"gonum.org/v1/gonum/integrate/quad"
)

// A rule is a Gauss–Legendre rule on 0 … 1.
type rule struct{ at, weight []float64 }

func newRule(n int) rule {
	r := rule{make([]float64, n), make([]float64, n)}
	quad.Legendre{}.FixedLocations(r.at, r.weight, 0, 1)
	return r
}

var fine = newRule(48)

// over integrates f from a to b.
func (r rule) over(a, b float64, f func(x float64) float64) float64 {
	sum := 0.0
	for i, x := range r.at {
		sum += r.weight[i] * f(a+(b-a)*x)
	}
	return (b - a) * sum
}

// inverted returns the z with cdf(z) = u for a curve of about unit spread, by
// Newton steps kept inside what is known to bracket it.
func inverted(u, guess float64, cdf, density func(z float64) float64) float64 {
	lo, hi, z := math.Inf(-1), math.Inf(1), guess
	width := 1.0
	for range 200 {
		off := cdf(z) - u
		if off == 0 {
			return z
		}
		if off < 0 {
			lo = z
		} else {
			hi = z
		}
		next := z - off/density(z)
		if !(next > lo && next < hi) || math.Abs(next-z) > width {
			switch {
			case math.IsInf(lo, 0):
				next, width = hi-width, 2*width
			case math.IsInf(hi, 0):
				next, width = lo+width, 2*width
			default:
				next = 0.5 * (lo + hi)
			}
		}
		if math.Abs(next-z) <= 1e-15*(1+math.Abs(z)) {
			return next
		}
		z = next
	}
	return z
}
