package kernel

import "math"

// Gamma has arguments mean and shape: variance is mean²/shape.
var Gamma = &Density{Name: "gamma", Args: 2, Block: gammaBlock, Prepare: perRow(math.Log)}

// GammaLog is Gamma with the log of the mean in its place.
var GammaLog = &Density{Name: "gamma log", Args: 2, Block: gammaLogBlock, Prepare: perRow(math.Log)}

// gammaConstant returns log[s^s e^(-s) / Γ(s)] and its derivative: what is
// left of the log density, plus log y, at y = mean.
func gammaConstant(s float64) (value, slope float64) {
	if s < stirlingFrom {
		l, d := LogGamma(s)
		return s*math.Log(s) - s - l, math.Log(s) - d
	}
	return 0.5*math.Log(s) - halfLog2Pi - stirling(s), logMinusDigamma(s)
}

func gammaBlock(n int, y []float64, args [][]float64, dy []float64, dargs [][]float64, aux, _ []float64) float64 {
	mean, shape := args[0], args[1]
	dmean, dshape := wanted(dargs, 0), wanted(dargs, 1)
	iy, im, is, ia := mask(y), mask(mean), mask(shape), mask(aux)
	last, con, dcon := math.NaN(), 0.0, 0.0
	sum := 0.0
	for i := range n {
		s, m, v := shape[i&is], mean[i&im], y[i&iy]
		if s != last {
			if s <= 0 {
				return math.Inf(-1)
			}
			last = s
			con, dcon = gammaConstant(s)
		}
		if v <= 0 || m <= 0 {
			return math.Inf(-1)
		}
		var logy float64
		if aux != nil {
			logy = aux[i&ia]
		} else {
			logy = Log(v)
		}
		// log r - r + 1 for r = y/mean, which is flat at r = 1.
		d := (v - m) / m
		var dev float64
		if math.Abs(d) < 0.5 {
			dev = log1pmx(d)
		} else {
			dev = logy - math.Log(m) - d
		}
		sum += s*dev + con - logy
		if dy != nil {
			dy[i&iy] += (-s*d - 1) / v
		}
		if dmean != nil {
			dmean[i&im] += s * d / m
		}
		if dshape != nil {
			dshape[i&is] += dev + dcon
		}
	}
	return sum
}

func gammaLogBlock(n int, y []float64, args [][]float64, dy []float64, dargs [][]float64, aux, _ []float64) float64 {
	eta, shape := args[0], args[1]
	deta, dshape := wanted(dargs, 0), wanted(dargs, 1)
	iy, ie, is, ia := mask(y), mask(eta), mask(shape), mask(aux)
	last, con, dcon := math.NaN(), 0.0, 0.0
	sum := 0.0
	for i := range n {
		s, v := shape[i&is], y[i&iy]
		if s != last {
			if s <= 0 {
				return math.Inf(-1)
			}
			last = s
			con, dcon = gammaConstant(s)
		}
		if v <= 0 {
			return math.Inf(-1)
		}
		var logy float64
		if aux != nil {
			logy = aux[i&ia]
		} else {
			logy = Log(v)
		}
		u := logy - eta[i&ie]
		dev := -expm1mx(u) // log r - r + 1 for r = y/mean
		d := u - dev
		sum += s*dev + con - logy
		if dy != nil {
			dy[i&iy] += (-s*d - 1) / v
		}
		if deta != nil {
			deta[i&ie] += s * d
		}
		if dshape != nil {
			dshape[i&is] += dev + dcon
		}
	}
	return sum
}
