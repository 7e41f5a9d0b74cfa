package kernel

import "math"

// OrderedProbit has one predictor η and then K-1 ascending cut points:
// P(y ≤ j) = Φ(cut_j - η) (J. Aitchison & S. D. Silvey, "The generalization of
// probit analysis to the case of multiple responses", Biometrika 44, 1957).
var OrderedProbit = &Density{Name: "ordered probit", Args: -1, Block: orderedProbitBlock}

func orderedProbitBlock(n int, y []float64, args [][]float64, _ []float64, dargs [][]float64, _, _ []float64) float64 {
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
		lo, hi := math.Inf(-1), math.Inf(1)
		if k > 0 {
			lo = cuts[k-1][i&mask(cuts[k-1])]
		}
		if k < levels-1 {
			hi = cuts[k][i&mask(cuts[k])]
		}
		gap := hi - lo
		if gap <= 0 {
			return math.Inf(-1)
		}
		value, da, db, shift := logNormalBetween(lo-e, hi-e, gap)
		sum += value
		if deta != nil {
			deta[i&ie] -= shift
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
