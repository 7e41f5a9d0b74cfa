package kernel

import "math"

// Exponential has the argument mean.
var Exponential = &Density{Name: "exponential", Args: 1, Block: exponentialBlock}

// ExponentialLog has the log of the mean in its place.
var ExponentialLog = &Density{Name: "exponential log", Args: 1, Block: exponentialLogBlock}

func exponentialBlock(n int, y []float64, args [][]float64, dy []float64, dargs [][]float64, _, _ []float64) float64 {
	mean, dmean := args[0], wanted(dargs, 0)
	iy, im := mask(y), mask(mean)
	last, inv, logm := math.NaN(), 0.0, 0.0
	sum := 0.0
	for i := range n {
		if m := mean[i&im]; m != last {
			if m <= 0 {
				return math.Inf(-1)
			}
			last, inv, logm = m, 1/m, math.Log(m)
		}
		if y[i&iy] < 0 {
			return math.Inf(-1)
		}
		r := y[i&iy] * inv
		sum -= r + logm
		if dy != nil {
			dy[i&iy] -= inv
		}
		if dmean != nil {
			dmean[i&im] += (r - 1) * inv
		}
	}
	return sum
}

func exponentialLogBlock(n int, y []float64, args [][]float64, dy []float64, dargs [][]float64, _, _ []float64) float64 {
	eta, deta := args[0], wanted(dargs, 0)
	iy, ie := mask(y), mask(eta)
	sum := 0.0
	for i := range n {
		v, e := y[i&iy], eta[i&ie]
		if v < 0 {
			return math.Inf(-1)
		}
		inv := Exp(-e)
		r := v * inv
		if v == 0 {
			r = 0 // where exp(-η) is beyond range
		}
		sum -= r + e
		if dy != nil {
			dy[i&iy] -= inv
		}
		if deta != nil {
			deta[i&ie] += r - 1
		}
	}
	return sum
}
