package kernel

import "math"

// Uniform has arguments low and high.
var Uniform = &Density{Name: "uniform", Args: 2, Block: uniformBlock}

func uniformBlock(n int, y []float64, args [][]float64, _ []float64, dargs [][]float64, _, _ []float64) float64 {
	low, high := args[0], args[1]
	dlow, dhigh := wanted(dargs, 0), wanted(dargs, 1)
	iy, il, ih := mask(y), mask(low), mask(high)
	sum := 0.0
	for i := range n {
		v, l, h := y[i&iy], low[i&il], high[i&ih]
		if v < l || v > h || l >= h {
			return math.Inf(-1)
		}
		width := h - l
		if width != width || v != v {
			return math.NaN()
		}
		sum -= math.Log(width)
		if dlow != nil {
			dlow[i&il] += 1 / width
		}
		if dhigh != nil {
			dhigh[i&ih] -= 1 / width
		}
	}
	return sum
}
