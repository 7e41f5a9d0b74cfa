package summary

import (
	"math"
	"slices"
)

// A sample is the draws of one quantity, made ready for several diagnostics,
// so that none sorts or ranks what another did.
type sample struct {
	halves [][]float64
	sorted []float64   // the draws of the halves
	ranked [][]float64 // normal scores of the halves; nil until asked for
	same   bool        // all draws are equal
}

func sampleOf(chains [][]float64) *sample {
	s := &sample{halves: split(chains)}
	s.sorted = pooled(s.halves)
	slices.Sort(s.sorted)
	s.same = constant(s.halves)
	return s
}

// without reports whether half chains have fewer draws than least, or do not
// move.
func (s *sample) without(least int) bool { return len(s.halves[0]) < least || s.same }

func (s *sample) scores() [][]float64 {
	if s.ranked == nil {
		s.ranked = normalScores(s.halves)
	}
	return s.ranked
}

func (s *sample) rHat() float64 {
	if s.without(2) {
		return math.NaN()
	}
	bulk := potentialScale(s.scores())
	middle := Quantile(s.sorted, 0.5)
	folded := mapped(s.halves, func(x float64) float64 { return math.Abs(x - middle) })
	if constant(folded) {
		return bulk
	}
	return math.Max(bulk, potentialScale(normalScores(folded)))
}

func (s *sample) bulkESS() float64 {
	if s.without(4) {
		return math.NaN()
	}
	return effective(s.scores())
}

func (s *sample) tailESS() float64 {
	if s.without(4) {
		return math.NaN()
	}
	low := indicatorESS(s.halves, Quantile(s.sorted, 0.05))
	high := indicatorESS(s.halves, Quantile(s.sorted, 0.95))
	return math.Min(low, high)
}

func (s *sample) meanESS() float64 {
	if s.without(4) {
		return math.NaN()
	}
	return effective(s.halves)
}
