package kernel

import "math"

// Exp returns exp(x).
func Exp(x float64) float64 { return math.Exp(x) }

// ExpTo stores exp(src[i]) in dst[i]; dst may be src.
func ExpTo(dst, src []float64) {
	dst = dst[:len(src)]
	for i, x := range src {
		dst[i] = Exp(x)
	}
}
