package effect

import (
	"math/rand/v2"
)

// weigh gives every row its weight: alike, or by a Bayesian bootstrap (Rubin
// 1981) of the outermost groups; crossed ones multiply (Owen 2007). Weighed by
// groups, the units of one group share what one group gets. For a target at a
// plate's level the rows of one unit share what one unit gets: it has one
// value, however many rows repeat it.
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
		if b.byGroups {
			b.share(weights, b.rows.unitsWithin(plate, b.outer[0]))
		}
		normalise(weights)
	}
	if b.byGroups {
		b.share(base, b.rows.counts[b.outer[0]])
	}
	normalise(base)
}

// share divides what each group gets among its units.
func (b *bench) share(weights, units []float64) {
	for i, g := range b.rows.of[b.outer[0]] {
		weights[i] /= units[g]
	}
}

// unitsWithin counts the levels of a plate that have a row here, by level of
// an outer plate.
func (s *rowset) unitsWithin(plate, outer int) []float64 {
	out := make([]float64, len(s.counts[outer]))
	seen := make([]bool, len(s.counts[plate]))
	for i, unit := range s.of[plate] {
		if !seen[unit] {
			seen[unit] = true
			out[s.of[outer][i]]++
		}
	}
	return out
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
