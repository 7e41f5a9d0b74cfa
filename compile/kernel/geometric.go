package kernel

import "math"

// Geometric has the argument mean; y is the number of failures before the
// first success, whose probability is 1/(1 + mean).
var Geometric = &Density{Name: "geometric", Args: 1, Block: geometricBlock}

// GeometricLog has the log of the mean in its place.
var GeometricLog = &Density{Name: "geometric log", Args: 1, Block: geometricLogBlock}

func geometricBlock(n int, y []float64, args [][]float64, _ []float64, dargs [][]float64, _, _ []float64) float64 {
	mean, dmean := args[0], wanted(dargs, 0)
	iy, im := mask(y), mask(mean)
	sum := 0.0
	for i := range n {
		v, m := y[i&iy], mean[i&im]
		if !isCount(v) {
			return outside(v)
		}
		if m < 0 || m == 0 && v > 0 {
			return math.Inf(-1)
		}
		sum -= (v + 1) * math.Log1p(m)
		slope := -(v + 1) / (1 + m)
		if v > 0 {
			sum += v * math.Log(m)
			slope += v / m
		}
		if dmean != nil {
			dmean[i&im] += slope
		}
	}
	return sum
}

func geometricLogBlock(n int, y []float64, args [][]float64, _ []float64, dargs [][]float64, _, _ []float64) float64 {
	eta, deta := args[0], wanted(dargs, 0)
	iy, ie := mask(y), mask(eta)
	sum := 0.0
	for i := range n {
		v, e := y[i&iy], eta[i&ie]
		if !isCount(v) {
			return outside(v)
		}
		// With p the probability of success, log p = -softplus(η) and
		// log(1-p) = -softplus(-η).
		up, q := softplusSigmoid(e)
		sum -= up
		if v > 0 {
			down, _ := softplusSigmoid(-e)
			sum -= v * down
		}
		if deta != nil {
			deta[i&ie] += v*(1-q) - q
		}
	}
	return sum
}
