package kernel

import "math"

// Beta has arguments mean and precision κ: a = mean κ, b = (1-mean) κ, and
// variance is mean (1-mean)/(1+κ).
var Beta = &Density{Name: "beta", Args: 2, Block: betaBlock}

// BetaLogit is Beta with the logit of the mean in its place.
var BetaLogit = &Density{Name: "beta logit", Args: 2, Block: betaLogitBlock}

// betaRow returns the log density at y with mean m, where w = 1-m, and its
// derivatives in y, m and κ.
func betaRow(y, m, w, k float64) (value, dy, dm, dk float64) {
	a, b := m*k, w*k
	logy, log1y := math.Log(y), math.Log1p(-y)
	dy = (a-1)/y - (b-1)/(1-y)
	qa, qb, qk := logMinusDigamma(a), logMinusDigamma(b), logMinusDigamma(k)
	// log(y/m) and log((1-y)/(1-m)), near 0 where the density is large.
	r, s := (y-m)/m, (m-y)/w
	ly, lw := logy-math.Log(m), log1y-math.Log(w)
	if math.Abs(r) < 0.5 {
		ly = math.Log1p(r)
	}
	if math.Abs(s) < 0.5 {
		lw = math.Log1p(s)
	}
	value = a*ly + b*lw - logy - log1y + 0.5*math.Log(m*w*k) - halfLog2Pi - (stirling(a) + stirling(b) - stirling(k))
	dm = k * (ly - lw + qa - qb)
	dk = m*(ly+qa) + w*(lw+qb) - qk
	return value, dy, dm, dk
}

func betaBlock(n int, y []float64, args [][]float64, dy []float64, dargs [][]float64, _, _ []float64) float64 {
	mean, precision := args[0], args[1]
	dmean, dprecision := wanted(dargs, 0), wanted(dargs, 1)
	iy, im, ik := mask(y), mask(mean), mask(precision)
	sum := 0.0
	for i := range n {
		v, m, k := y[i&iy], mean[i&im], precision[i&ik]
		if v <= 0 || v >= 1 || m <= 0 || m >= 1 || k <= 0 {
			return math.Inf(-1)
		}
		value, gy, gm, gk := betaRow(v, m, 1-m, k)
		sum += value
		if dy != nil {
			dy[i&iy] += gy
		}
		if dmean != nil {
			dmean[i&im] += gm
		}
		if dprecision != nil {
			dprecision[i&ik] += gk
		}
	}
	return sum
}

func betaLogitBlock(n int, y []float64, args [][]float64, dy []float64, dargs [][]float64, _, _ []float64) float64 {
	eta, precision := args[0], args[1]
	deta, dprecision := wanted(dargs, 0), wanted(dargs, 1)
	iy, ie, ik := mask(y), mask(eta), mask(precision)
	sum := 0.0
	for i := range n {
		v, e, k := y[i&iy], eta[i&ie], precision[i&ik]
		if v <= 0 || v >= 1 || k <= 0 {
			return math.Inf(-1)
		}
		m, w := Sigmoid(e), Sigmoid(-e)
		if m*k == 0 || w*k == 0 {
			return math.Inf(-1) // η beyond ±700: all mass at an end
		}
		value, gy, gm, gk := betaRow(v, m, w, k)
		sum += value
		if dy != nil {
			dy[i&iy] += gy
		}
		if deta != nil {
			deta[i&ie] += gm * m * w
		}
		if dprecision != nil {
			dprecision[i&ik] += gk
		}
	}
	return sum
}
