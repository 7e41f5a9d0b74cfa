package kernel

import "math"

// InverseGamma has arguments scale and shape: 1/y is gamma with that shape and
// rate equal to the scale, so that the mean is scale/(shape-1).
var InverseGamma = &Density{Name: "inverse gamma", Args: 2, Block: inverseGammaBlock}

func inverseGammaBlock(n int, y []float64, args [][]float64, dy []float64, dargs [][]float64, _, _ []float64) float64 {
	scale, shape := args[0], args[1]
	dscale, dshape := wanted(dargs, 0), wanted(dargs, 1)
	iy, ib, ia := mask(y), mask(scale), mask(shape)
	sum := 0.0
	for i := range n {
		v, b, a := y[i&iy], scale[i&ib], shape[i&ia]
		if v <= 0 || b <= 0 || a <= 0 {
			return math.Inf(-1)
		}
		// With x = (b/y)/a - 1 the log density is, up to -log y, that of a
		// gamma with mean 1 at 1+x, in which no large terms cancel.
		con, dcon := gammaConstant(a)
		r := b / v
		d := math.Log(r / a)
		x := r/a - 1
		less := d - x
		if math.Abs(x) < 0.5 {
			d = math.Log1p(x)
			less = log1pmx(x)
		}
		sum += con + a*less - math.Log(v)
		if dy != nil {
			dy[i&iy] += (r - a - 1) / v
		}
		if dscale != nil {
			dscale[i&ib] += a/b - 1/v
		}
		if dshape != nil {
			dshape[i&ia] += dcon + d
		}
	}
	return sum
}
