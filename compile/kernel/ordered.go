package kernel

import "math"

// Ordered has K arguments, the probabilities of the levels 0 … K-1.
var Ordered = &Density{Name: "ordered", Args: -1, Block: categoricalBlock}

// OrderedLogit has one predictor η and then K-1 ascending cut points:
// logit P(y ≤ j) = cut_j - η (P. McCullagh, "Regression models for ordinal
// data", 1980).
var OrderedLogit = &Density{Name: "ordered logit", Args: -1, Block: orderedLogitBlock}

func orderedLogitBlock(n int, y []float64, args [][]float64, _ []float64, dargs [][]float64, _, scratch []float64) float64 {
	eta, cuts := args[0], args[1:]
	deta := wanted(dargs, 0)
	iy, ie, levels := mask(y), mask(eta), len(args)
	// The part of a level that depends on its two cut points alone is the same
	// for all rows if they are; then it is worked out once.
	shared := n > levels && 2*levels <= len(scratch)
	for _, c := range cuts {
		shared = shared && len(c) == 1
	}
	if shared {
		for k := 1; k < levels-1; k++ {
			scratch[2*k], scratch[2*k+1] = logGap(cuts[k][0] - cuts[k-1][0])
		}
	}
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
			sp, s := softplusSigmoid(e - cuts[0][i&mask(cuts[0])])
			sum -= sp
			db = s
		case k == levels-1:
			sp, s := softplusSigmoid(cuts[k-1][i&mask(cuts[k-1])] - e)
			sum -= sp
			da = -s
		default:
			// log(σ(b) - σ(a)) = log(1 - e^(a-b)) - softplus(-b) - softplus(a).
			lo, hi := cuts[k-1][i&mask(cuts[k-1])], cuts[k][i&mask(cuts[k])]
			gap := hi - lo
			if gap <= 0 {
				return math.Inf(-1)
			}
			var l, g float64
			if shared {
				l, g = scratch[2*k], scratch[2*k+1]
			} else {
				l, g = logGap(gap)
			}
			spb, sb := softplusSigmoid(e - hi)
			spa, sa := softplusSigmoid(lo - e)
			sum += l - spb - spa
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

// logGap returns log(1 - exp(-gap)) and its derivative.
func logGap(gap float64) (value, slope float64) {
	return log1mExp(-gap), 1 / math.Expm1(gap)
}
