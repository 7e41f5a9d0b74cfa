package kernel

import "math"

// NegativeBinomial has arguments mean and overdispersion k: variance is
// mean + mean²/k, so that it tends to a Poisson as k grows.
var NegativeBinomial = &Density{
	Name: "negative binomial", Args: 2, Prepare: perRow(logFactorial),
	Block: negBinomialBlock(true),
	Tally: &Tally{Arg: 1, Rows: &Density{Name: "negative binomial, by row", Args: 2, Block: negBinomialBlock(false)}, Values: negBinomialValues},
}

// NegativeBinomialLog has the log of the mean in its place.
var NegativeBinomialLog = &Density{
	Name: "negative binomial log", Args: 2, Prepare: perRow(logFactorial),
	Block: negBinomialLogBlock(true),
	Tally: &Tally{Arg: 1, Rows: &Density{Name: "negative binomial log, by row", Args: 2, Block: negBinomialLogBlock(false), Prepare: perRow(notCount)}, Values: negBinomialValues},
}

// negBinomialValues is the part of both that depends on y and k alone, times
// a count: see Tally.
var negBinomialValues = &Density{Name: "negative binomial, by value", Args: 2, Block: negBinomialValuesBlock}

func negBinomialValuesBlock(n int, y []float64, args [][]float64, _ []float64, dargs [][]float64, _, _ []float64) float64 {
	over, count := args[0], args[1]
	dover := wanted(dargs, 0)
	iy, ik, ic := mask(y), mask(over), mask(count)
	sum := 0.0
	for i := range n {
		v, k, c := y[i&iy], over[i&ik], count[i&ic]
		if !isCount(v) {
			return outside(v)
		}
		if k <= 0 {
			return math.Inf(-1)
		}
		t, dt := logRising(k, v)
		sum += c * (t - logFactorial(v))
		if dover != nil {
			dover[i&ik] += c * dt
		}
	}
	return sum
}

// negBinomialBlock without whole leaves out what negBinomialValues has.
func negBinomialBlock(whole bool) func(n int, y []float64, args [][]float64, _ []float64, dargs [][]float64, aux, _ []float64) float64 {
	return func(n int, y []float64, args [][]float64, _ []float64, dargs [][]float64, aux, _ []float64) float64 {
		mean, over := args[0], args[1]
		dmean, dover := wanted(dargs, 0), wanted(dargs, 1)
		iy, im, ik, ia := mask(y), mask(mean), mask(over), mask(aux)
		sum := 0.0
		for i := range n {
			v, m, k := y[i&iy], mean[i&im], over[i&ik]
			if !isCount(v) {
				return outside(v)
			}
			if k <= 0 || m < 0 || m == 0 && v > 0 {
				return math.Inf(-1)
			}
			var t, dt float64
			switch {
			case !whole:
			case aux != nil:
				t, dt = logRising(k, v)
				t -= aux[i&ia]
			default:
				t, dt = logRising(k, v)
				t -= logFactorial(v)
			}
			r := m / k
			l := math.Log1p(r)
			sum += t - (v+k)*l
			if v > 0 {
				sum += v * math.Log(m)
			}
			s := r / (1 + r)
			if dmean != nil {
				if v == 0 {
					dmean[i&im] -= 1 / (1 + r)
				} else {
					dmean[i&im] += (v - m) / m / (1 + r)
				}
			}
			if dover != nil {
				dover[i&ik] += dt + v/k*s + ratioMinusLog(r)
			}
		}
		return sum
	}
}

func negBinomialLogBlock(whole bool) func(n int, y []float64, args [][]float64, _ []float64, dargs [][]float64, aux, scratch []float64) float64 {
	return func(n int, y []float64, args [][]float64, _ []float64, dargs [][]float64, aux, scratch []float64) float64 {
		eta, over := args[0], args[1]
		deta, dover := wanted(dargs, 0), wanted(dargs, 1)
		if k := over[0]; !whole && k > 0 && len(over) == 1 && isColumn(y, n) && isColumn(eta, n) && isColumn(aux, n) {
			var slope *float64
			if dover != nil {
				slope = &dover[0]
			}
			return negBinomialLogColumn(y, eta, deta, k, slope, aux, scratch)
		}
		iy, ie, ik, ia := mask(y), mask(eta), mask(over), mask(aux)
		last, logk := math.NaN(), 0.0
		sum := 0.0
		for i := range n {
			v, e, k := y[i&iy], eta[i&ie], over[i&ik]
			if !isCount(v) {
				return outside(v)
			}
			if k != last {
				if k <= 0 {
					return math.Inf(-1)
				}
				last, logk = k, math.Log(k)
			}
			var t, dt float64
			switch {
			case !whole:
			case aux != nil:
				t, dt = logRising(k, v)
				t -= aux[i&ia]
			default:
				t, dt = logRising(k, v)
				t -= logFactorial(v)
			}
			// With u = log(mean/k), log(1 + mean/k) is softplus(u); the branch
			// with the smaller exponential serves both signs of u.
			u := e - logk
			small, q := softplusSigmoid(-math.Abs(u))
			sp, s, w := small, q, 1-q
			if u > 0 {
				sp, s, w = small+u, 1-q, q
				t += v*(logk-small) - k*sp
			} else {
				t += v*e - (v+k)*sp
			}
			sum += t
			if deta != nil {
				deta[i&ie] += v*w - k*s
			}
			if dover != nil {
				dover[i&ik] += dt + v/k*s + sigmoidMinusSoftplus(u, sp, s)
			}
		}
		return sum
	}
}

// notCount is 0 for a count, else +Inf: minus the log density that follows.
func notCount(y float64) float64 {
	if !isCount(y) {
		return -outside(y)
	}
	return 0
}

// sigmoidMinusSoftplus returns s - sp where they are the sigmoid and softplus
// of u, without the cancellation when both are small.
func sigmoidMinusSoftplus(u, sp, s float64) float64 {
	if u > -2 {
		return s - sp
	}
	return ratioMinusLog(Exp(u))
}
