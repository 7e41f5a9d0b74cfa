package kernel

import "math"

// Bernoulli has the argument probability, of y = 1.
var Bernoulli = &Density{Name: "bernoulli", Args: 1, Block: bernoulliBlock}

// BernoulliLogit has the logit of the probability in its place.
var BernoulliLogit = &Density{Name: "bernoulli logit", Args: 1, Block: bernoulliLogitBlock}

func bernoulliBlock(n int, y []float64, args [][]float64, _ []float64, dargs [][]float64, _, _ []float64) float64 {
	prob, dprob := args[0], wanted(dargs, 0)
	iy, ip := mask(y), mask(prob)
	sum := 0.0
	for i := range n {
		p := prob[i&ip]
		if p < 0 || p > 1 {
			return math.Inf(-1)
		}
		var slope float64
		switch v := y[i&iy]; {
		case v == 1:
			sum += math.Log(p)
			slope = 1 / p
		case v == 0:
			sum += math.Log1p(-p)
			slope = -1 / (1 - p)
		case v != v:
			return v
		default:
			return math.Inf(-1)
		}
		if dprob != nil {
			dprob[i&ip] += slope
		}
	}
	return sum
}

func bernoulliLogitBlock(n int, y []float64, args [][]float64, _ []float64, dargs [][]float64, _, scratch []float64) float64 {
	eta, deta := args[0], wanted(dargs, 0)
	if isColumn(y, n) && isColumn(eta, n) {
		if sum, ok := bernoulliLogitColumn(y, eta, deta, scratch); ok {
			return sum
		}
	}
	iy, ie := mask(y), mask(eta)
	sum := 0.0
	for i := range n {
		// log p(y) = -softplus(t) with t = -η for y = 1 and η for y = 0.
		v := y[i&iy]
		if v*(v-1) != 0 { // neither 0 nor 1, in one foreseeable branch
			return outside(v)
		}
		sign := 1 - 2*v
		sp, sg := softplusSigmoid(sign * eta[i&ie])
		sum -= sp
		if deta != nil {
			deta[i&ie] -= sign * sg
		}
	}
	return sum
}

// outside is the log density of a value that is not in the support.
func outside(v float64) float64 {
	if v != v {
		return v
	}
	return math.Inf(-1)
}
