package summary

import (
	"cmp"
	"slices"

	"gonum.org/v1/gonum/mathext"
)

// normalScores replaces draws by the normal quantiles of their pooled ranks,
// ties averaged (Blom 1958 offset). What is no number ranks first, each by
// itself.
func normalScores(chains [][]float64) [][]float64 {
	type place struct {
		value    float64
		chain, i int
	}
	places := make([]place, 0, len(chains)*len(chains[0]))
	for c, x := range chains {
		for i, v := range x {
			places = append(places, place{v, c, i})
		}
	}
	slices.SortFunc(places, func(a, b place) int { return cmp.Compare(a.value, b.value) })
	scores := make([][]float64, len(chains))
	for c, x := range chains {
		scores[c] = make([]float64, len(x))
	}
	total := float64(len(places))
	for from := 0; from < len(places); {
		to := from + 1 // NaN does not equal itself
		for to < len(places) && places[to].value == places[from].value {
			to++
		}
		rank := float64(from+to+1) / 2
		z := mathext.NormalQuantile((rank - 0.375) / (total + 0.25))
		for _, p := range places[from:to] {
			scores[p.chain][p.i] = z
		}
		from = to
	}
	return scores
}
