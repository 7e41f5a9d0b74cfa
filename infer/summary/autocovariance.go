package summary

import "gonum.org/v1/gonum/dsp/fourier"

// An autocovariance computes autocovariances through a Fourier transform
// padded so that nothing wraps round.
type autocovariance struct {
	n         int
	transform *fourier.FFT
	padded    []float64
	spectrum  []complex128
}

func newAutocovariance(n int) *autocovariance {
	size := 1
	for size < 2*n {
		size *= 2
	}
	return &autocovariance{n: n, transform: fourier.NewFFT(size), padded: make([]float64, size)}
}

// add puts the autocovariances of x, with divisor n rescaled by n/(n−1) so
// that lag 0 is the sample variance, over share into dst.
func (a *autocovariance) add(dst, x []float64, share float64) {
	mean, _ := meanVariance(x)
	clear(a.padded)
	for i, v := range x {
		a.padded[i] = v - mean
	}
	a.spectrum = a.transform.Coefficients(a.spectrum, a.padded)
	for i, c := range a.spectrum {
		a.spectrum[i] = complex(real(c)*real(c)+imag(c)*imag(c), 0)
	}
	a.padded = a.transform.Sequence(a.padded, a.spectrum)
	scale := 1 / (float64(len(a.padded)) * float64(a.n-1) * share)
	for i := range dst {
		dst[i] += a.padded[i] * scale
	}
}
