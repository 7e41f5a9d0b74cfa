package score

import (
	"math"

	"gonum.org/v1/gonum/floats"
)

// By holds log predictive densities of units, and what makes them up.
type By struct {
	Unit       []float64 // log predictive density of each unit when it is left out
	Fit        []float64 // of each unit when it is kept in
	K          []float64 // tail of each unit's importance ratios; nil where none were used
	Relied     float64   // the largest K at which a score is reliable
	Parameters float64   // effective number: what fitting gains over predicting
}

// LeaveOneOut scores each unit by the draws of a fit that had it, reweighted
// as if it had not been there (A. Vehtari, A. Gelman & J. Gabry, "Practical
// Bayesian model evaluation using leave-one-out cross-validation and WAIC",
// Statistics and Computing 27, 2017). logDensity holds a row of draws for each
// unit; relative as in Smooth, one for each unit or nil for 1.
func LeaveOneOut(logDensity [][]float64, relative []float64) *By {
	out := newBy(len(logDensity))
	out.K = make([]float64, len(logDensity))
	for i, draws := range logDensity {
		ratios := make([]float64, len(draws))
		for s, v := range draws {
			ratios[s] = -v
		}
		r := 1.0
		if relative != nil {
			r = relative[i]
		}
		w := Smooth(ratios, r)
		for s, v := range draws {
			ratios[s] = w.Log[s] + v
		}
		out.Unit[i], out.K[i] = floats.LogSumExp(ratios), w.K
		out.Fit[i] = floats.LogSumExp(draws) - math.Log(float64(len(draws)))
		out.Parameters += out.Fit[i] - out.Unit[i]
		out.Relied = Reliable(len(draws))
	}
	return out
}

// Widely scores each unit by the widely applicable information criterion (S.
// Watanabe, JMLR 11, 2010): its fit less the posterior variance of its log
// density. shaky counts units whose variance is above 0.4, where it is not to
// be trusted (Vehtari, Gelman & Gabry 2017).
func Widely(logDensity [][]float64) (scores *By, shaky int) {
	out := newBy(len(logDensity))
	for i, draws := range logDensity {
		n := float64(len(draws))
		mean, square := 0.0, 0.0
		for _, v := range draws {
			mean += v / n
		}
		for _, v := range draws {
			square += (v - mean) * (v - mean)
		}
		variance := square / (n - 1)
		if variance > 0.4 {
			shaky++
		}
		out.Fit[i] = floats.LogSumExp(draws) - math.Log(n)
		out.Unit[i] = out.Fit[i] - variance
		out.Parameters += variance
	}
	return out, shaky
}

func newBy(units int) *By {
	return &By{Unit: make([]float64, units), Fit: make([]float64, units), Relied: math.Inf(1)}
}

// Unreliable lists the units whose score by reweighting cannot be relied on
// and asks for a fit without them.
func (b *By) Unreliable() []int {
	var out []int
	for i, k := range b.K {
		if !(k < b.Relied) {
			out = append(out, i)
		}
	}
	return out
}

// Total is the sum of the units' scores, with its standard error: √n times the
// sd of the units' scores.
func (b *By) Total() (score, standardError float64) { return total(b.Unit) }

func total(x []float64) (sum, standardError float64) {
	n := float64(len(x))
	for _, v := range x {
		sum += v
	}
	square := 0.0
	for _, v := range x {
		square += (v - sum/n) * (v - sum/n)
	}
	return sum, math.Sqrt(n * square / (n - 1))
}
