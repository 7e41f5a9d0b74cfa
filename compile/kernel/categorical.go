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
		// log p = -log(1 + Σ exp(η_j - η_k)) over the other levels j. Nothing
		// cancels, and only a difference beyond 700 needs another way.
		own := args[k][i&mask(args[k])]
		for j, a := range args {
			e[j] = a[i&mask(a)] - own
		}
		ExpTo(e, e)
		e[k] = 0
		rest := 0.0
		for _, t := range e {
			rest += t
		}
		scale := 1 / (1 + rest)
		mine := rest * scale // 1 - p_k
		if rest < math.MaxFloat64 {
			sum -= log1p(rest)
		} else {
			var value float64
			value, scale = softmaxFar(e, args, i, k)
			sum += value
			mine = 1
		}
		if dargs == nil {
			continue
		}
		for j, d := range dargs {
			if d == nil {
				continue
			}
			g := -e[j] * scale
			if j == k {
				g = mine
			}
			d[i&mask(d)] += g
		}
	}
	return sum
}

// softmaxFar is one row whose own level k is too far below the top one for
// exp of the difference, so that p_k is 0 beside 1. It fills e with terms that
// scale turns into probabilities.
func softmaxFar(e []float64, args [][]float64, i, k int) (value, scale float64) {
	top := math.Inf(-1)
	for _, a := range args {
		v := a[i&mask(a)]
		if v != v {
			return v, v
		}
		top = max(top, v)
	}
	total := 0.0
	for j, a := range args {
		e[j] = Exp(a[i&mask(a)] - top)
		total += e[j]
	}
	return args[k][i&mask(args[k])] - top - math.Log(total), 1 / total
}
