package kernel

import "math"

// Ordered has K arguments, the probabilities of the levels 0 … K-1.
var Ordered = &Density{Name: "ordered", Args: -1, Block: categoricalBlock}

// OrderedLogit has one predictor η and then K-1 ascending cut points:
// logit P(y ≤ j) = cut_j - η (P. McCullagh, "Regression models for ordinal
// data", 1980).
var OrderedLogit = &Density{Name: "ordered logit", Args: -1, Block: orderedLogitBlock}

func orderedLogitBlock(n int, y []float64, args [][]float64, _ []float64, dargs [][]float64, _, _ []float64) float64 {
	eta, cuts := args[0], args[1:]
	deta := wanted(dargs, 0)
	iy, ie, levels := mask(y), mask(eta), len(args)
	sum := 0.0
	for i := range n {
		v := y[i&iy]
		if !isLevel(v, levels) {
			return outside(v)
		}
		k := int(v)
		e := eta[i&ie]
		var da, db float64 // derivatives in the lower and the upper cut point
		switch {
		case levels == 1:
		case k == 0:
			sp, s := SoftplusSigmoid(e - cuts[0][i&mask(cuts[0])])
			sum -= sp
			db = s
		case k == levels-1:
			sp, s := SoftplusSigmoid(cuts[k-1][i&mask(cuts[k-1])] - e)
			sum -= sp
			da = -s
		default:
			// log(σ(b) - σ(a)) = log(1 - e^(a-b)) - softplus(-b) - softplus(a).
			lo, hi := cuts[k-1][i&mask(cuts[k-1])], cuts[k][i&mask(cuts[k])]
			gap := hi - lo
			if gap <= 0 {
				return math.Inf(-1)
			}
			spb, sb := SoftplusSigmoid(e - hi)
			spa, sa := SoftplusSigmoid(lo - e)
			sum += Log1mExp(-gap) - spb - spa
			g := 1 / math.Expm1(gap)
			da, db = -g-sa, g+sb
		}
		if deta != nil {
			deta[i&ie] -= da + db
		}
		if k > 0 {
			if d := wanted(dargs, k); d != nil {
				d[i&mask(d)] += da
			}
		}
		if k < levels-1 {
			if d := wanted(dargs, k+1); d != nil {
				d[i&mask(d)] += db
			}
		}
	}
	return sum
}
