package kernel

import "math"

// Binomial has arguments probability and trials. Trials are whole numbers and
// have no derivative.
var Binomial = &Density{Name: "binomial", Args: 2, Block: binomialBlock, Prepare: binomialPrepare}

// BinomialLogit has the logit of the probability in its place.
var BinomialLogit = &Density{Name: "binomial logit", Args: 2, Block: binomialLogitBlock, Prepare: binomialPrepare}

// binomialPrepare needs the trials as well as the successes.
func binomialPrepare(y []float64, args [][]float64) []float64 {
	if len(args) < 2 || args[1] == nil {
		return nil
	}
	trials := args[1]
	iy, it := mask(y), mask(trials)
	out := make([]float64, max(len(y), len(trials)))
	for i := range out {
		out[i] = logChoose(trials[i&it], y[i&iy])
	}
	return out
}

// chosenWays is the log of the binomial coefficient, from what was prepared if
// anything was.
func chosenWays(t, v float64, aux []float64, at int) float64 {
	if aux != nil {
		return aux[at]
	}
	return logChoose(t, v)
}

// inTrials reports whether v successes of t trials are possible.
func inTrials(v, t float64) bool { return v >= 0 && v <= t && v == math.Floor(v) && t == math.Floor(t) }

func binomialBlock(n int, y []float64, args [][]float64, _ []float64, dargs [][]float64, aux, _ []float64) float64 {
	prob, trials := args[0], args[1]
	dprob := wanted(dargs, 0)
	iy, ip, it, ia := mask(y), mask(prob), mask(trials), mask(aux)
	sum := 0.0
	for i := range n {
		v, p, t := y[i&iy], prob[i&ip], trials[i&it]
		if !inTrials(v, t) {
			return outside(v + t)
		}
		if p < 0 || p > 1 {
			return math.Inf(-1)
		}
		sum += chosenWays(t, v, aux, i&ia)
		if v > 0 {
			sum += v * math.Log(p)
		}
		if v < t {
			sum += (t - v) * math.Log1p(-p)
		}
		if dprob != nil {
			switch {
			case v == 0:
				dprob[i&ip] -= t / (1 - p)
			case v == t:
				dprob[i&ip] += t / p
			default:
				dprob[i&ip] += (v - t*p) / (p * (1 - p))
			}
		}
	}
	return sum
}

func binomialLogitBlock(n int, y []float64, args [][]float64, _ []float64, dargs [][]float64, aux, _ []float64) float64 {
	eta, trials := args[0], args[1]
	deta := wanted(dargs, 0)
	iy, ie, it, ia := mask(y), mask(eta), mask(trials), mask(aux)
	sum := 0.0
	for i := range n {
		v, e, t := y[i&iy], eta[i&ie], trials[i&it]
		if !inTrials(v, t) {
			return outside(v + t)
		}
		sum += chosenWays(t, v, aux, i&ia)
		// log p = -softplus(-η) and log(1-p) = -softplus(η); the two differ by
		// η, so the one with the smaller exponential gives both.
		small, q := softplusSigmoid(-math.Abs(e))
		p, minusLogP, minusLogQ := q, small-e, small
		if e > 0 {
			p, minusLogP, minusLogQ = 1-q, small, small+e
		} else {
			q = 1 - q
		}
		sum -= v*minusLogP + (t-v)*minusLogQ
		if deta != nil {
			deta[i&ie] += v*q - (t-v)*p
		}
	}
	return sum
}
