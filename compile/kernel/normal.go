package kernel

import "math"

// Normal has arguments mean and sd. With the identity link it is its own
// link-scale kernel.
var Normal = &Density{Name: "normal", Args: 2, Block: normalBlock}

func normalBlock(n int, y []float64, args [][]float64, dy []float64, dargs [][]float64, _, _ []float64) float64 {
	mean, sd := args[0], args[1]
	dmean, dsd := wanted(dargs, 0), wanted(dargs, 1)
	if len(sd) == 1 && isColumn(y, n) && isColumn(mean, n) && dy == nil {
		if s := sd[0]; s > 0 {
			ss := normalColumn(y, mean, dmean, 1/s)
			if dsd != nil {
				dsd[0] += (ss - float64(n)) / s
			}
			return -0.5*ss - float64(n)*(math.Log(s)+halfLog2Pi)
		}
	}
	if len(sd) == 1 && len(mean) == 1 && isColumn(y, n) {
		if s := sd[0]; s > 0 {
			inv := 1 / s
			ss, sz := normalEffects(y, dy, mean[0], inv)
			if dmean != nil {
				dmean[0] += sz * inv
			}
			if dsd != nil {
				dsd[0] += (ss - float64(n)) * inv
			}
			return -0.5*ss - float64(n)*(math.Log(s)+halfLog2Pi)
		}
	}
	iy, im, is := mask(y), mask(mean), mask(sd)
	last, inv, logsd := math.NaN(), 0.0, 0.0
	sum := 0.0
	for i := range n {
		if s := sd[i&is]; s != last {
			if s <= 0 {
				return math.Inf(-1)
			}
			last, inv, logsd = s, 1/s, math.Log(s)
		}
		z := (y[i&iy] - mean[i&im]) * inv
		sum += -0.5*z*z - logsd
		if dy != nil {
			dy[i&iy] -= z * inv
		}
		if dmean != nil {
			dmean[i&im] += z * inv
		}
		if dsd != nil {
			dsd[i&is] += (z*z - 1) * inv
		}
	}
	return sum - float64(n)*halfLog2Pi
}
