package kernel

import "math"

// Log returns the natural logarithm of x.
func Log(x float64) float64 { return math.Log(x) }

// LogTo stores log(src[i]) in dst[i]; dst may be src.
func LogTo(dst, src []float64) {
	dst = dst[:len(src)]
	for i, x := range src {
		dst[i] = Log(x)
	}
}
