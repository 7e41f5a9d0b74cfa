package kernel

import "math"

// Geometric has the argument probability, of success; y is the number of
// failures before the first success.
var Geometric = &Density{Name: "geometric", Args: 1, Block: geometricBlock}

// GeometricLogit has the logit of the probability in its place.
var GeometricLogit = &Density{Name: "geometric logit", Args: 1, Block: geometricLogitBlock}

func geometricBlock(n int, y []float64, args [][]float64, _ []float64, dargs [][]float64, _, _ []float64) float64 {
	prob, dprob := args[0], wanted(dargs, 0)
	iy, ip := mask(y), mask(prob)
	sum := 0.0
	for i := range n {
		v, p := y[i&iy], prob[i&ip]
		if !isCount(v) {
			return outside(v)
		}
		if p < 0 || p > 1 {
			return math.Inf(-1)
		}
		sum += math.Log(p)
		slope := 1 / p
		if v > 0 {
			sum += v * math.Log1p(-p)
			slope -= v / (1 - p)
		}
		if dprob != nil {
			dprob[i&ip] += slope
		}
	}
	return sum
}

func geometricLogitBlock(n int, y []float64, args [][]float64, _ []float64, dargs [][]float64, _, _ []float64) float64 {
	eta, deta := args[0], wanted(dargs, 0)
	iy, ie := mask(y), mask(eta)
	sum := 0.0
	for i := range n {
		v, e := y[i&iy], eta[i&ie]
		if !isCount(v) {
			return outside(v)
		}
		// log p = -softplus(-η), log(1-p) = -softplus(η).
		down, q := softplusSigmoid(-e)
		up, p := softplusSigmoid(e)
		sum -= down
		if v > 0 {
			sum -= v * up
		}
		if deta != nil {
			deta[i&ie] += q - v*p
		}
	}
	return sum
}
