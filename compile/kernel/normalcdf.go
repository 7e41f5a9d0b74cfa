package kernel

import "math"

// LogNormalCDF returns log Φ(z), the log of the standard normal distribution
// function, and its derivative φ(z)/Φ(z), the inverse Mills ratio. Both are
// accurate in both tails; the slope tends to -z on the left.
func LogNormalCDF(z float64) (logCDF, slope float64) {
	switch {
	case z < -5:
		m := mills(-z)
		return -0.5*z*z - halfLog2Pi + math.Log(m), 1 / m
	case z < 0:
		p := 0.5 * math.Erfc(-z/math.Sqrt2)
		return math.Log(p), math.Exp(-0.5*z*z-halfLog2Pi) / p
	case z >= 0:
		q := 0.5 * math.Erfc(z/math.Sqrt2)
		return math.Log1p(-q), math.Exp(-0.5*z*z-halfLog2Pi) / (1 - q)
	}
	return math.NaN(), math.NaN()
}

// mills returns (1 - Φ(x))/φ(x) for x ≥ 5 by Laplace's continued fraction
// 1/(x + 1/(x + 2/(x + 3/(x + …)))), NIST DLMF 7.9.2.
func mills(x float64) float64 {
	// At x = 5, 50 levels leave less than 1e-17.
	f := x
	for k := 50; k >= 1; k-- {
		f = x + float64(k)/f
	}
	return 1 / f
}
