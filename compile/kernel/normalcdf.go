package kernel

import "math"

// LogNormalCDF returns log Φ(z), the log of the standard normal distribution
// function, and its derivative φ(z)/Φ(z), the inverse Mills ratio.
func LogNormalCDF(z float64) (logCDF, slope float64) {
	p := math.Erfc(-z/math.Sqrt2) / 2
	return math.Log(p), math.Exp(-z*z/2) / math.Sqrt(2*math.Pi) / p
}
