package effect

import (
	"math/rand/v2"
	"slices"

	"arrowroot/compile/model"
)

// weigh gives every row its weight: alike, or by a Bayesian bootstrap (Rubin
// 1981) of the outermost groups; crossed ones multiply (Owen 2007). For a
// target at a plate's level the rows of one unit share what one unit gets:
// it has one value, however many rows repeat it.
func (b *bench) weigh(seed uint64) {
	base := b.weights[0]
	for i := range base {
		base[i] = 1
	}
	if b.bootstrap {
		b.resample(base, rand.New(rand.NewPCG(seed, 0)))
	}
	for plate, weights := range b.weights[1:] {
		if weights == nil {
			continue
		}
		for i, unit := range b.rows.of[plate] {
			weights[i] = base[i] / b.rows.counts[plate][unit]
		}
		normalise(weights)
	}
	normalise(base)
}

func (b *bench) resample(weights []float64, rng *rand.Rand) {
	if len(b.outer) == 0 {
		for i := range weights {
			weights[i] = rng.ExpFloat64()
		}
	}
	for _, p := range b.outer {
		group := make([]float64, len(b.m.Plates[p].Levels))
		for g := range group {
			group[g] = rng.ExpFloat64()
		}
		for i, g := range b.rows.of[p] {
			weights[i] *= group[g]
		}
	}
}

func normalise(weights []float64) {
	total := 0.0
	for _, x := range weights {
		total += x
	}
	for i := range weights {
		weights[i] /= total
	}
}

// outermost lists the plates that lie within no other plate.
func outermost(m *model.Model) []int {
	var out []int
	for i, p := range m.Plates {
		inside := false
		for j, q := range m.Plates {
			if i != j && within(p, q) && (j < i || !within(q, p)) {
				inside = true
			}
		}
		if !inside {
			out = append(out, i)
		}
	}
	return out
}

// within reports whether each level of p has all its rows in one level of q.
func within(p, q *model.Plate) bool {
	in := slices.Repeat([]int32{-1}, len(p.Levels))
	for row, level := range p.Of {
		if in[level] >= 0 && in[level] != q.Of[row] {
			return false
		}
		in[level] = q.Of[row]
	}
	return true
}
