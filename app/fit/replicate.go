package fit

import (
	"context"
	"math/rand/v2"

	"arrowroot/compile/replicate"
	"arrowroot/infer"
)

// Replicate checks whether a fit can reproduce its data, with replicates from
// an even selection of its draws.
func (f *Fitted) Replicate(ctx context.Context, seed uint64, progress func(done, of int)) (*replicate.Checks, error) {
	source := func(variable string) rand.Source { return rand.NewChaCha8(infer.Key(seed, 0, "replicate", variable)) }
	return replicate.Run(ctx, f.Model, evenly(f.Pooled(), replicate.Replicates), source, replicate.Options{Progress: progress})
}

// evenly is an evenly spaced selection of at most n draws.
func evenly(draws [][]float64, n int) [][]float64 {
	if len(draws) <= n {
		return draws
	}
	out := make([][]float64, n)
	for i := range out {
		out[i] = draws[i*len(draws)/n]
	}
	return out
}
