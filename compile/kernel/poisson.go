package kernel

import "math"

// Poisson has the argument rate.
var Poisson = &Density{Name: "poisson", Args: 1, Block: poissonBlock, Prepare: perRow(poissonAtMean)}

// PoissonLog has the log of the rate in its place.
var PoissonLog = &Density{Name: "poisson log", Args: 1, Block: poissonLogBlock, Prepare: perRow(countFactorial)}

// countFactorial is log y!, +Inf where y is no count, which makes its density 0.
func countFactorial(y float64) float64 {
	if !isCount(y) {
		return -outside(y)
	}
	return logFactorial(y)
}

// isCount reports whether v is one of 0, 1, 2, …
func isCount(v float64) bool { return v >= 0 && v == math.Floor(v) && !math.IsInf(v, 1) }

// poissonAtMean returns minus the log probability of y when the rate is y.
func poissonAtMean(y float64) float64 {
	if y == 0 {
		return 0
	}
	return stirling(y) + halfLog2Pi + 0.5*math.Log(y)
}

func poissonBlock(n int, y []float64, args [][]float64, _ []float64, dargs [][]float64, aux, _ []float64) float64 {
	rate, drate := args[0], wanted(dargs, 0)
	iy, ir, ia := mask(y), mask(rate), mask(aux)
	sum := 0.0
	for i := range n {
		v, r := y[i&iy], rate[i&ir]
		if !isCount(v) {
			return outside(v)
		}
		if r < 0 || r == 0 && v > 0 {
			return math.Inf(-1)
		}
		if v == 0 {
			sum -= r
			if drate != nil {
				drate[i&ir]--
			}
			continue
		}
		if aux != nil {
			sum -= aux[i&ia]
		} else {
			sum -= poissonAtMean(v)
		}
		// y (log r - r + 1) with r = rate/y (C. Loader 2000).
		d := (r - v) / v
		if math.Abs(d) < 0.5 {
			sum += v * log1pmx(d)
		} else {
			sum += v * (math.Log(r/v) - d)
		}
		if drate != nil {
			drate[i&ir] += (v - r) / r
		}
	}
	return sum
}

func poissonLogBlock(n int, y []float64, args [][]float64, _ []float64, dargs [][]float64, aux, scratch []float64) float64 {
	eta, deta := args[0], wanted(dargs, 0)
	if isColumn(y, n) && isColumn(eta, n) && isColumn(aux, n) {
		return poissonLogColumn(y, eta, deta, aux, scratch[:n])
	}
	iy, ie, ia := mask(y), mask(eta), mask(aux)
	sum := 0.0
	for i := range n {
		v, e := y[i&iy], eta[i&ie]
		if !isCount(v) {
			return outside(v)
		}
		r := Exp(e)
		if r > math.MaxFloat64 {
			return math.Inf(-1)
		}
		if aux != nil {
			sum += v*e - r - aux[i&ia]
		} else {
			sum += v*e - r - logFactorial(v)
		}
		if deta != nil {
			deta[i&ie] += v - r
		}
	}
	return sum
}
