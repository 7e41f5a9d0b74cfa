package summary

import "gonum.org/v1/gonum/dsp/fourier"

// directLags are summed lag by lag: chains that mix well need no others, and
// this many cost less than the transform.
const directLags = 24

// An autocovariance gives autocovariances averaged over chains, with divisor n
// rescaled by n/(n−1) so that lag 0 is the sample variance. All lags beyond the
// first come at once through a Fourier transform, when one of them is asked for.
type autocovariance struct {
	chains [][]float64
	means  []float64
	all    []float64
}

func newAutocovariance(chains [][]float64) *autocovariance {
	a := &autocovariance{chains: chains}
	for _, c := range chains {
		mean, _ := meanVariance(c)
		a.means = append(a.means, mean)
	}
	return a
}

func (a *autocovariance) at(lag int) float64 {
	if lag >= directLags {
		if a.all == nil {
			a.transform()
		}
		return a.all[lag]
	}
	sum := 0.0
	for c, x := range a.chains {
		mean := a.means[c]
		for i, v := range x[lag:] {
			sum += (v - mean) * (x[i] - mean)
		}
	}
	return sum * a.share()
}

func (a *autocovariance) share() float64 {
	return 1 / (float64(len(a.chains[0])-1) * float64(len(a.chains)))
}

// transform fills all; padding keeps the ends from wrapping round.
func (a *autocovariance) transform() {
	n, size := len(a.chains[0]), 1
	for size < 2*n {
		size *= 2
	}
	transform := fourier.NewFFT(size)
	padded := make([]float64, size)
	var spectrum []complex128
	a.all = make([]float64, n)
	scale := a.share() / float64(size)
	for c, x := range a.chains {
		clear(padded)
		for i, v := range x {
			padded[i] = v - a.means[c]
		}
		spectrum = transform.Coefficients(spectrum, padded)
		for i, z := range spectrum {
			spectrum[i] = complex(real(z)*real(z)+imag(z)*imag(z), 0)
		}
		padded = transform.Sequence(padded, spectrum)
		for i := range a.all {
			a.all[i] += padded[i] * scale
		}
	}
}
