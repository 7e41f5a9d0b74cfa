package catalog

import (
	"math"

	"arrowroot/compile/kernel"
)

// incBeta returns the regularised incomplete beta function I_x(a, b) and its
// complement, each to full relative accuracy. y is 1-x; both are given because
// one of them may be tiny. It is the continued fraction NIST DLMF 8.17.22
// evaluated by W. J. Lentz's method (Applied Optics 15, 1976), on the side of
// the peak where it converges in some √(a+b) steps, and keeps its accuracy
// for parameters of 1e12, where differences of log-gammas have none left.
func incBeta(a, b, x, y float64) (lower, upper float64) {
	switch {
	case x <= 0:
		return 0, 1
	case y <= 0:
		return 1, 0
	case x > (a+1)/(a+b+2):
		upper, lower = incBeta(b, a, y, x)
		return lower, upper
	}
	const tiny = 1e-300
	f, c, d := 1.0, 1.0, 0.0
	for m := 0.0; m < 1e5; m++ {
		before := f
		for _, term := range [2]float64{
			-(a + m) * (a + b + m) * x / ((a + 2*m) * (a + 2*m + 1)),
			(m + 1) * (b - m - 1) * x / ((a + 2*m + 1) * (a + 2*m + 2)),
		} {
			if d = 1 + term*d; math.Abs(d) < tiny {
				d = tiny
			}
			if c = 1 + term/c; math.Abs(c) < tiny {
				c = tiny
			}
			d = 1 / d
			f *= c * d
		}
		if math.Abs(f-before) <= 2e-16*math.Abs(f) {
			break
		}
	}
	lower = math.Exp(kernel.LogBetaTerm(a, b, x, y)) / (a * f)
	return lower, 1 - lower
}
