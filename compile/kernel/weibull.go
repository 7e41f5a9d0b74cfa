package kernel

import "math"

// Weibull has arguments scale (63 % of values lie below) and shape: with
// shape 1 nothing ages, above 1 it wears out, below 1 it hardens.
var Weibull = &Density{Name: "weibull", Args: 2, Block: weibullBlock, Prepare: perRow(math.Log)}

// WeibullLog has the log of the scale in its place.
var WeibullLog = &Density{Name: "weibull log", Args: 2, Block: weibullLogBlock, Prepare: perRow(math.Log)}

// weibullRow returns the log density at t = log y - log scale, without -log y,
// and its derivatives in t and in the shape k.
func weibullRow(t, k float64) (value, dt, dk float64) {
	z := k * t
	if z > 710 { // e^z is beyond range
		return math.Inf(-1), 0, 0
	}
	g := -math.Expm1(z) // 1 - (y/scale)^k
	return math.Log(k) + z - math.Exp(z), k * g, 1/k + t*g
}

func weibullBlock(n int, y []float64, args [][]float64, dy []float64, dargs [][]float64, aux, _ []float64) float64 {
	scale, dscale := args[0], wanted(dargs, 0)
	is := mask(scale)
	for i := range min(n, len(scale)) {
		if scale[i] <= 0 {
			return math.Inf(-1)
		}
	}
	return weibullSum(n, y, args[1], dy, wanted(dargs, 1), aux, func(i int) float64 { return math.Log(scale[i&is]) }, func(i int, slope float64) {
		if dscale != nil {
			dscale[i&is] += slope / scale[i&is]
		}
	})
}

func weibullLogBlock(n int, y []float64, args [][]float64, dy []float64, dargs [][]float64, aux, _ []float64) float64 {
	eta, deta := args[0], wanted(dargs, 0)
	ie := mask(eta)
	return weibullSum(n, y, args[1], dy, wanted(dargs, 1), aux, func(i int) float64 { return eta[i&ie] }, func(i int, slope float64) {
		if deta != nil {
			deta[i&ie] += slope
		}
	})
}

func weibullSum(n int, y, shape, dy, dshape, aux []float64, logScale func(i int) float64, add func(i int, slope float64)) float64 {
	iy, ik, ia := mask(y), mask(shape), mask(aux)
	sum := 0.0
	for i := range n {
		v, k := y[i&iy], shape[i&ik]
		if v <= 0 || k <= 0 {
			return math.Inf(-1)
		}
		logy := 0.0
		if aux != nil {
			logy = aux[i&ia]
		} else {
			logy = math.Log(v)
		}
		value, dt, dk := weibullRow(logy-logScale(i), k)
		sum += value - logy
		add(i, -dt)
		if dy != nil {
			dy[i&iy] += (dt - 1) / v
		}
		if dshape != nil {
			dshape[i&ik] += dk
		}
	}
	return sum
}
