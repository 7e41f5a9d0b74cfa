package kernel

import "math"

// Categorical has K arguments, the probabilities of the levels 0 … K-1, which
// are taken as given and not rescaled.
var Categorical = &Density{Name: "categorical", Args: -1, Block: categoricalBlock}

// CategoricalSoftmax has K predictors; probabilities are their softmax.
var CategoricalSoftmax = &Density{Name: "categorical softmax", Args: -1, Block: softmaxBlock}

// isLevel reports whether v is one of 0 … k-1.
func isLevel(v float64, k int) bool { return v >= 0 && v < float64(k) && v == math.Floor(v) }

func categoricalBlock(n int, y []float64, args [][]float64, _ []float64, dargs [][]float64, _, _ []float64) float64 {
	iy := mask(y)
	sum := 0.0
	for i := range n {
		v := y[i&iy]
		if !isLevel(v, len(args)) {
			return outside(v)
		}
		k := int(v)
		j := i & mask(args[k])
		p := args[k][j]
		if p < 0 || p > 1 {
			return math.Inf(-1)
		}
		sum += math.Log(p)
		if d := wanted(dargs, k); d != nil {
			d[j] += 1 / p
		}
	}
	return sum
}

func softmaxBlock(n int, y []float64, args [][]float64, _ []float64, dargs [][]float64, _, scratch []float64) float64 {
	iy, levels := mask(y), len(args)
	if levels > len(scratch) {
		panic("kernel: more categories than scratch has room for")
	}
	e := scratch[:levels]
	sum := 0.0
	for i := range n {
		v := y[i&iy]
		if !isLevel(v, levels) {
			return outside(v)
		}
		k := int(v)
		top, at := math.Inf(-1), 0
		for j, a := range args {
			e[j] = a[i&mask(a)]
			if e[j] > top {
				top, at = e[j], j
			}
		}
		own := e[k] - top
		// rest is the sum over all levels but the top one, whose term is 1.
		rest := 0.0
		for j := range e {
			e[j] = Exp(e[j] - top)
			if j != at {
				rest += e[j]
			}
		}
		sum += own - math.Log1p(rest)
		if dargs == nil {
			continue
		}
		scale := 1 / (1 + rest)
		for j, d := range dargs {
			if d == nil {
				continue
			}
			g := -e[j] * scale
			if j == k {
				if j == at {
					g = rest * scale
				} else {
					g++
				}
			}
			d[i&mask(d)] += g
		}
	}
	return sum
}
