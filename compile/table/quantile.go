package table

import (
	"math"
	"slices"
)

// Quantiles gives the n values at the probabilities 0.5/n, 1.5/n, … of those
// values that are not NaN, by linear interpolation between order statistics
// (definition 7 of Hyndman & Fan 1996). Without values it gives nil.
func Quantiles(values []float64, n int) []float64 {
	sorted := make([]float64, 0, len(values))
	for _, v := range values {
		if !math.IsNaN(v) {
			sorted = append(sorted, v)
		}
	}
	if len(sorted) == 0 || n <= 0 {
		return nil
	}
	slices.Sort(sorted)
	quantiles := make([]float64, n)
	for i := range quantiles {
		at := (float64(i) + 0.5) / float64(n) * float64(len(sorted)-1)
		low := int(at)
		high := min(low+1, len(sorted)-1)
		quantiles[i] = sorted[low]
		if part := at - float64(low); part > 0 && sorted[high] != sorted[low] {
			quantiles[i] += part * (sorted[high] - sorted[low])
		}
	}
	return quantiles
}
