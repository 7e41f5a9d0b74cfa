package kernel

import "math"

// StudentT has arguments mean (location), scale and degrees of freedom. With
// the identity link it is its own link-scale kernel.
var StudentT = &Density{Name: "student t", Args: 3, Block: studentBlock}

// studentRow returns the log density at z = (y-mean)/scale, without -log
// scale, and its derivatives in z and in the degrees of freedom. half and
// dhalf are halfStep(nu/2).
func studentRow(z, nu, half, dhalf float64) (value, dz, dnu float64) {
	w := z / nu * z
	if math.IsInf(w, 1) {
		// z² is beyond range, log(1 + z²/ν) is not.
		l := 2*math.Log(math.Abs(z)) - math.Log(nu)
		return half - halfLog2Pi - 0.5*(nu+1)*l, -(nu + 1) / z, 0.5 * (dhalf - l + 1 + 1/nu)
	}
	l, p := log1p(w), w/(1+w)
	less := p - l
	if w < 1e-3 { // where p and l agree in too many digits
		less = ratioMinusLog(w)
	}
	value = half - halfLog2Pi - 0.5*(nu+1)*l
	dnu = 0.5 * (dhalf + less + p/nu)
	return value, -(nu + 1) * z / (nu * (1 + w)), dnu
}

func studentBlock(n int, y []float64, args [][]float64, dy []float64, dargs [][]float64, _, _ []float64) float64 {
	mean, scale, df := args[0], args[1], args[2]
	dmean, dscale, ddf := wanted(dargs, 0), wanted(dargs, 1), wanted(dargs, 2)
	iy, im, is, id := mask(y), mask(mean), mask(scale), mask(df)
	last, inv, logscale := math.NaN(), 0.0, 0.0
	lastNu, half, dhalf := math.NaN(), 0.0, 0.0
	sum := 0.0
	for i := range n {
		if s := scale[i&is]; s != last {
			if s <= 0 {
				return math.Inf(-1)
			}
			last, inv, logscale = s, 1/s, math.Log(s)
		}
		if nu := df[i&id]; nu != lastNu {
			if nu <= 0 {
				return math.Inf(-1)
			}
			lastNu = nu
			half, dhalf = halfStep(nu / 2)
		}
		v, dz, dnu := studentRow((y[i&iy]-mean[i&im])*inv, lastNu, half, dhalf)
		sum += v - logscale
		if dy != nil {
			dy[i&iy] += dz * inv
		}
		if dmean != nil {
			dmean[i&im] -= dz * inv
		}
		if dscale != nil {
			z := (y[i&iy] - mean[i&im]) * inv
			dscale[i&is] -= (dz*z + 1) * inv
		}
		if ddf != nil {
			ddf[i&id] += dnu
		}
	}
	return sum
}
