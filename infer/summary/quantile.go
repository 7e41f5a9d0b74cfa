package summary

import "math"

// Quantile is the p quantile of sorted values, linear between order
// statistics (Hyndman & Fan 1996, definition 7).
func Quantile(sorted []float64, p float64) float64 {
	if len(sorted) == 0 {
		return math.NaN()
	}
	at := p * float64(len(sorted)-1)
	low := int(math.Floor(at))
	if low >= len(sorted)-1 {
		return sorted[len(sorted)-1]
	}
	return sorted[low] + (at-float64(low))*(sorted[low+1]-sorted[low])
}
