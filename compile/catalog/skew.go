package catalog

import (
	"math"

	"gonum.org/v1/gonum/mathext"

	"arrowroot/compile/kernel"
)

// owen returns Owen's T function for 0 ≤ a ≤ 1 by integration of its
// definition (D. B. Owen, Annals of Mathematical Statistics 27, 1956), to
// about 1e-16 absolutely.
func owen(h, a float64) float64 {
	f := func(x float64) float64 { return math.Exp(-0.5*h*h*(1+x*x)) / (1 + x*x) }
	return fine.over(0, a, f) / (2 * math.Pi)
}

// skewStandardCDF is Φ(z) - 2 T(z, a).
func skewStandardCDF(z, a float64) float64 {
	switch {
	case a < 0: // the mirror image
		return 1 - skewStandardCDF(-z, -a)
	case a <= 1:
		return max(0, standardNormalCDF(z)-2*owen(math.Abs(z), a))
	}
	// T(h, a) + T(ah, 1/a) = ½ p + ½ q - p q for h ≥ 0, with p and q the normal
	// tails beyond h and ah.
	h := math.Abs(z)
	p, q := standardNormalCDF(-h), standardNormalCDF(-a*h)
	rest := 2*owen(a*h, 1/a) - q + 2*p*q
	if z < 0 {
		return max(0, rest)
	}
	return min(1, 1-2*p+rest)
}

func skewNormalCDF(x float64, a []float64) float64 { return skewStandardCDF((x-a[0])/a[1], a[2]) }

func skewNormalQuantile(u float64, a []float64) float64 {
	cdf := func(z float64) float64 { return skewStandardCDF(z, a[2]) }
	density := func(z float64) float64 {
		l, _ := kernel.LogNormalCDF(a[2] * z)
		return math.Sqrt(2/math.Pi) * math.Exp(l-0.5*z*z)
	}
	return a[0] + a[1]*inverted(u, mathext.NormalQuantile(u), cdf, density)
}

func skewNormalMean(a []float64) float64 {
	return a[0] + a[1]*skewDelta(a[2])*math.Sqrt(2/math.Pi)
}

func skewNormalSD(a []float64) float64 {
	d := skewDelta(a[2])
	return a[1] * math.Sqrt(1-2*d*d/math.Pi)
}

func skewDelta(skew float64) float64 { return skew / math.Hypot(1, skew) }
