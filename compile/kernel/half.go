package kernel

import "math"

// HalfNormal is the normal with mean 0 folded onto y ≥ 0; its argument is the
// scale (the sd of the normal before folding).
var HalfNormal = &Density{Name: "half-normal", Args: 1, Block: halfNormalBlock}

// HalfT is Student's t around 0 folded onto y ≥ 0; arguments scale and
// degrees of freedom.
var HalfT = &Density{Name: "half-t", Args: 2, Block: halfTBlock}

func halfNormalBlock(n int, y []float64, args [][]float64, dy []float64, dargs [][]float64, _, _ []float64) float64 {
	scale, dscale := args[0], wanted(dargs, 0)
	iy, is := mask(y), mask(scale)
	last, inv, logscale := math.NaN(), 0.0, 0.0
	sum := 0.0
	for i := range n {
		if s := scale[i&is]; s != last {
			if s <= 0 {
				return math.Inf(-1)
			}
			last, inv, logscale = s, 1/s, math.Log(s)
		}
		if y[i&iy] < 0 {
			return math.Inf(-1)
		}
		z := y[i&iy] * inv
		sum += -0.5*z*z - logscale
		if dy != nil {
			dy[i&iy] -= z * inv
		}
		if dscale != nil {
			dscale[i&is] += (z*z - 1) * inv
		}
	}
	return sum + float64(n)*(math.Ln2-halfLog2Pi)
}

func halfTBlock(n int, y []float64, args [][]float64, dy []float64, dargs [][]float64, _, _ []float64) float64 {
	scale, df := args[0], args[1]
	dscale, ddf := wanted(dargs, 0), wanted(dargs, 1)
	iy, is, id := mask(y), mask(scale), mask(df)
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
		if y[i&iy] < 0 {
			return math.Inf(-1)
		}
		z := y[i&iy] * inv
		v, dz, dnu := studentRow(z, lastNu, half, dhalf)
		sum += v - logscale
		if dy != nil {
			dy[i&iy] += dz * inv
		}
		if dscale != nil {
			dscale[i&is] -= (dz*z + 1) * inv
		}
		if ddf != nil {
			ddf[i&id] += dnu
		}
	}
	return sum + float64(n)*math.Ln2
}
