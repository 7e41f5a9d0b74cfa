package kernel

import "math"

// LogNormal has arguments median and the sd of log y.
var LogNormal = &Density{Name: "log-normal", Args: 2, Block: logNormalBlock, Prepare: perRow(math.Log)}

// LogNormalLog is LogNormal with the log of the median, which is the mean of
// log y, in place of the median.
var LogNormalLog = &Density{Name: "log-normal log", Args: 2, Block: logNormalLogBlock, Prepare: perRow(math.Log)}

func logNormalBlock(n int, y []float64, args [][]float64, dy []float64, dargs [][]float64, aux, _ []float64) float64 {
	return logNormalRows(n, y, args, dy, dargs, aux, false)
}

func logNormalLogBlock(n int, y []float64, args [][]float64, dy []float64, dargs [][]float64, aux, _ []float64) float64 {
	return logNormalRows(n, y, args, dy, dargs, aux, true)
}

func logNormalRows(n int, y []float64, args [][]float64, dy []float64, dargs [][]float64, aux []float64, linked bool) float64 {
	center, sd := args[0], args[1]
	dcenter, dsd := wanted(dargs, 0), wanted(dargs, 1)
	iy, im, is, ia := mask(y), mask(center), mask(sd), mask(aux)
	last, inv, logsd := math.NaN(), 0.0, 0.0
	sum := 0.0
	for i := range n {
		if s := sd[i&is]; s != last {
			if s <= 0 {
				return math.Inf(-1)
			}
			last, inv, logsd = s, 1/s, math.Log(s)
		}
		v, c := y[i&iy], center[i&im]
		if v <= 0 {
			return math.Inf(-1)
		}
		dc := 1.0
		if !linked {
			if c <= 0 {
				return math.Inf(-1)
			}
			dc = 1 / c
			c = math.Log(c)
		}
		var logy float64
		if aux != nil {
			logy = aux[i&ia]
		} else {
			logy = Log(v)
		}
		z := (logy - c) * inv
		sum += -0.5*z*z - logsd - logy
		if dy != nil {
			dy[i&iy] -= (z*inv + 1) / v
		}
		if dcenter != nil {
			dcenter[i&im] += z * inv * dc
		}
		if dsd != nil {
			dsd[i&is] += (z*z - 1) * inv
		}
	}
	return sum - float64(n)*halfLog2Pi
}
