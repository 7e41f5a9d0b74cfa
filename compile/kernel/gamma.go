package kernel

import (
	"math"

	"gonum.org/v1/gonum/mathext"
)

const halfLog2Pi = 0.91893853320467274178032973640561763986139747363778

// LogGamma returns log Γ(x) and its derivative, the digamma function, for
// x > 0.
func LogGamma(x float64) (lgamma, digamma float64) {
	lgamma, _ = math.Lgamma(x)
	return lgamma, mathext.Digamma(x)
}

// LogGammaTo stores log Γ(src[i]) in dst[i] and, where slope is not nil, the
// digamma function in slope[i].
func LogGammaTo(dst, slope, src []float64) {
	dst = dst[:len(src)]
	for i, x := range src {
		l, d := LogGamma(x)
		dst[i] = l
		if slope != nil {
			slope[i] = d
		}
	}
}

// Trigamma returns the second derivative of log Γ(x), for x > 0.
func Trigamma(x float64) float64 { return mathext.Zeta(2, x) }

// LogFactorial returns log y! for a whole y ≥ 0.
func LogFactorial(y float64) float64 {
	l, _ := LogGamma(y + 1)
	return l
}
