package kernel

import "math"

// BetaBinomial has arguments mean (of the probability), precision κ and
// trials: the probability itself is beta with that mean and precision, anew
// for every row (J. G. Skellam, J. Royal Statistical Society B 10, 1948).
// Trials are whole numbers and have no derivative.
var BetaBinomial = &Density{Name: "beta-binomial", Args: 3, Block: betaBinomialBlock, Prepare: betaBinomialPrepare}

// BetaBinomialLogit has the logit of the mean in its place.
var BetaBinomialLogit = &Density{Name: "beta-binomial logit", Args: 3, Block: betaBinomialLogitBlock, Prepare: betaBinomialPrepare}

func betaBinomialPrepare(y []float64, args [][]float64) []float64 {
	if len(args) < 3 {
		return nil
	}
	return binomialPrepare(y, args[1:])
}

// betaBinomialRow returns the log density, without the binomial coefficient,
// of v successes in t trials, and its derivatives in logit m and in κ. With
// rising factorials taken relative to m κ, (1-m) κ and κ, it is the binomial's
// and three terms that vanish as κ grows.
func betaBinomialRow(v, t, m, w, logm, logw, k float64) (value, dlogit, dk float64) {
	won, pa := risen(v, m*k, logm, k)
	lost, pb := risen(t-v, w*k, logw, k)
	all, sk := logRising(k, t)
	return won + lost - all, v*w - (t-v)*m + w*pa - m*pb, (pa+pb)/k - sk
}

// risen returns log[(a)(a+1)…(a+v-1) / kᵛ] for a = m k, and a times the
// derivative in a of that, less v.
func risen(v, a, logm, k float64) (value, slope float64) {
	switch {
	case v == 0:
		return 0, 0
	case a < 1e-200: // only the first factor knows of a, by its log
		return logm - (v-1)*math.Log(k) + logFactorial(v-1), 1 - v
	}
	r, s := logRising(a, v)
	return r + v*logm, a * s
}

func betaBinomialBlock(n int, y []float64, args [][]float64, _ []float64, dargs [][]float64, aux, _ []float64) float64 {
	mean, precision, trials := args[0], args[1], args[2]
	dmean, dprecision := wanted(dargs, 0), wanted(dargs, 1)
	iy, im, ik, it, ia := mask(y), mask(mean), mask(precision), mask(trials), mask(aux)
	sum := 0.0
	for i := range n {
		v, m, k, t := y[i&iy], mean[i&im], precision[i&ik], trials[i&it]
		if !inTrials(v, t) {
			return outside(v + t)
		}
		if m <= 0 || m >= 1 || k <= 0 {
			return math.Inf(-1)
		}
		w := 1 - m
		value, dlogit, dk := betaBinomialRow(v, t, m, w, math.Log(m), math.Log1p(-m), k)
		sum += value + chosenWays(t, v, aux, i&ia)
		if dmean != nil {
			dmean[i&im] += dlogit / (m * w)
		}
		if dprecision != nil {
			dprecision[i&ik] += dk
		}
	}
	return sum
}

func betaBinomialLogitBlock(n int, y []float64, args [][]float64, _ []float64, dargs [][]float64, aux, _ []float64) float64 {
	eta, precision, trials := args[0], args[1], args[2]
	deta, dprecision := wanted(dargs, 0), wanted(dargs, 1)
	iy, ie, ik, it, ia := mask(y), mask(eta), mask(precision), mask(trials), mask(aux)
	sum := 0.0
	for i := range n {
		v, e, k, t := y[i&iy], eta[i&ie], precision[i&ik], trials[i&it]
		if !inTrials(v, t) {
			return outside(v + t)
		}
		if k <= 0 {
			return math.Inf(-1)
		}
		far := math.Abs(e)
		small, m := softplusSigmoid(-far)
		w, logm, logw := 1-m, -far-small, -small
		if e > 0 {
			m, w, logm, logw = w, m, logw, logm
		}
		value, dlogit, dk := betaBinomialRow(v, t, m, w, logm, logw, k)
		sum += value + chosenWays(t, v, aux, i&ia)
		if deta != nil {
			deta[i&ie] += dlogit
		}
		if dprecision != nil {
			dprecision[i&ik] += dk
		}
	}
	return sum
}
