package kernel

import "math"

// Beta has arguments mean and precision κ: a = mean κ, b = (1-mean) κ, and
// variance is mean (1-mean)/(1+κ).
var Beta = &Density{Name: "beta", Args: 2, Block: betaBlock}

// BetaLogit is Beta with the logit of the mean in its place.
var BetaLogit = &Density{Name: "beta logit", Args: 2, Block: betaLogitBlock}

// betaRow returns the log density at y with mean m, where w = 1-m, and its
// derivatives in logit m and in κ. Logs of m, w and κ come along, so that m
// may be as small as a logit makes it. With ly = log(y/m), lw = log((1-y)/w)
// and Stirling's series for the constant, no large terms cancel.
func betaRow(y, m, w, logm, logw, k, logk, leftK, xqK float64) (value, dlogit, dk float64) {
	a, b := m*k, w*k
	logy, log1y := Log(y), math.Log1p(-y)
	ly, lw := logy-logm, log1y-logw
	if k > 1e3 { // what rounds off here is multiplied by κ
		if r := (y - m) / m; math.Abs(r) < 0.5 {
			ly = math.Log1p(r)
		}
		if r := (m - y) / w; math.Abs(r) < 0.5 {
			lw = math.Log1p(r)
		}
	}
	leftA, xqA := stirlingAt(a, logm+logk)
	leftB, xqB := stirlingAt(b, logw+logk)
	value = a*ly + b*lw - logy - log1y + 0.5*(logm+logw+logk) - halfLog2Pi - (leftA + leftB - leftK)
	pa, pb := a*ly+xqA, b*lw+xqB
	return value, w*pa - m*pb, (pa + pb - xqK) / k
}

func betaBlock(n int, y []float64, args [][]float64, dy []float64, dargs [][]float64, _, _ []float64) float64 {
	mean, precision := args[0], args[1]
	dmean, dprecision := wanted(dargs, 0), wanted(dargs, 1)
	iy, im, ik := mask(y), mask(mean), mask(precision)
	last, logk, leftK, xqK := math.NaN(), 0.0, 0.0, 0.0
	sum := 0.0
	for i := range n {
		v, m, k := y[i&iy], mean[i&im], precision[i&ik]
		if v <= 0 || v >= 1 || m <= 0 || m >= 1 || k <= 0 {
			return math.Inf(-1)
		}
		if k != last {
			last, logk = k, Log(k)
			leftK, xqK = stirlingAt(k, logk)
		}
		w := 1 - m
		value, dlogit, dk := betaRow(v, m, w, Log(m), math.Log1p(-m), k, logk, leftK, xqK)
		sum += value
		if dy != nil {
			dy[i&iy] += (m*k-1)/v - (w*k-1)/(1-v)
		}
		if dmean != nil {
			dmean[i&im] += dlogit / (m * w)
		}
		if dprecision != nil {
			dprecision[i&ik] += dk
		}
	}
	return sum
}

func betaLogitBlock(n int, y []float64, args [][]float64, dy []float64, dargs [][]float64, _, _ []float64) float64 {
	eta, precision := args[0], args[1]
	deta, dprecision := wanted(dargs, 0), wanted(dargs, 1)
	iy, ie, ik := mask(y), mask(eta), mask(precision)
	last, logk, leftK, xqK := math.NaN(), 0.0, 0.0, 0.0
	sum := 0.0
	for i := range n {
		v, e, k := y[i&iy], eta[i&ie], precision[i&ik]
		if v <= 0 || v >= 1 || k <= 0 {
			return math.Inf(-1)
		}
		if k != last {
			last, logk = k, Log(k)
			leftK, xqK = stirlingAt(k, logk)
		}
		// The smaller of m and 1-m and its log come from one exponential.
		far := math.Abs(e)
		small, m := softplusSigmoid(-far)
		w, logm, logw := 1-m, -far-small, -small
		if e > 0 {
			m, w, logm, logw = w, m, logw, logm
		}
		value, dlogit, dk := betaRow(v, m, w, logm, logw, k, logk, leftK, xqK)
		sum += value
		if dy != nil {
			dy[i&iy] += (m*k-1)/v - (w*k-1)/(1-v)
		}
		if deta != nil {
			deta[i&ie] += dlogit
		}
		if dprecision != nil {
			dprecision[i&ik] += dk
		}
	}
	return sum
}
