package kernel

import "math"

// Pareto has arguments minimum and shape: P(y > t) = (minimum/t)^shape.
var Pareto = &Density{Name: "pareto", Args: 2, Block: paretoBlock, Prepare: perRow(math.Log)}

func paretoBlock(n int, y []float64, args [][]float64, dy []float64, dargs [][]float64, aux, _ []float64) float64 {
	minimum, shape := args[0], args[1]
	dminimum, dshape := wanted(dargs, 0), wanted(dargs, 1)
	iy, im, is, ia := mask(y), mask(minimum), mask(shape), mask(aux)
	sum := 0.0
	for i := range n {
		v, m, a := y[i&iy], minimum[i&im], shape[i&is]
		if v < m || m <= 0 || a <= 0 {
			return math.Inf(-1)
		}
		logy := 0.0
		if aux != nil {
			logy = aux[i&ia]
		} else {
			logy = math.Log(v)
		}
		d := math.Log1p((v - m) / m) // log(y/minimum)
		sum += math.Log(a) - a*d - logy
		if dy != nil {
			dy[i&iy] -= (a + 1) / v
		}
		if dminimum != nil {
			dminimum[i&im] += a / m
		}
		if dshape != nil {
			dshape[i&is] += 1/a - d
		}
	}
	return sum
}
