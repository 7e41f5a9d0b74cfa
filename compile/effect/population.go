package effect

import (
	"math/rand/v2"
	"slices"

	"arrowroot/compile/model"
)

// weigh gives every row its weight: alike, or by a Bayesian bootstrap (Rubin
// 1981) of the outermost groups; crossed ones multiply (Owen 2007).
func (b *bench) weigh(seed uint64) {
	n := float64(b.rows.n)
	for i := range b.weights {
		b.weights[i] = 1 / n
	}
	if !b.bootstrap {
		return
	}
	rng := rand.New(rand.NewPCG(seed, 0))
	if len(b.outer) == 0 {
		for i := range b.weights {
			b.weights[i] = rng.ExpFloat64()
		}
	}
	for _, p := range b.outer {
		group := make([]float64, len(b.m.Plates[p].Levels))
		for g := range group {
			group[g] = rng.ExpFloat64()
		}
		for i, g := range b.rows.of[p] {
			b.weights[i] *= group[g]
		}
	}
	total := 0.0
	for _, x := range b.weights {
		total += x
	}
	for i := range b.weights {
		b.weights[i] /= total
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
