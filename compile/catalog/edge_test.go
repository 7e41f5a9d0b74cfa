package catalog

import (
	"math"
	"testing"
)

// Distribution functions are 0 below the support and 1 above it.
func TestDistributionEnds(t *testing.T) {
	eachSetting(t, func(t *testing.T, f *Family, args []float64) {
		low, high := f.CDF(-1e300, args), f.CDF(1e300, args)
		if f.Support == Reals {
			low = math.Round(low * 1e6) // heavy tails reach there
		}
		if low != 0 || math.Abs(high-1) > 1e-6 {
			t.Errorf("%v: %v far below, %v far above", args, low, high)
		}
	})
}

// Common knowledge of the trade: a Student t has a mean from above 1 degree of
// freedom on, and an sd from above 2; so have its half, and Pareto and inverse
// gamma by their shapes.
func TestMomentsThatDoNotExist(t *testing.T) {
	for _, c := range []struct {
		family   string
		args     []float64
		mean, sd float64
	}{
		{"Student t", []float64{3, 1, 1}, math.NaN(), math.NaN()},
		{"Student t", []float64{3, 1, 2}, 3, math.Inf(1)},
		{"half-t", []float64{1, 1}, math.Inf(1), math.NaN()},
		{"half-t", []float64{1, 2}, math.Sqrt2, math.Inf(1)},
		{"Cauchy", []float64{3, 1}, math.NaN(), math.NaN()},
		{"half-Cauchy", []float64{3}, math.Inf(1), math.NaN()},
		{"Pareto", []float64{2, 1}, math.Inf(1), math.NaN()},
		{"Pareto", []float64{2, 2}, 4, math.Inf(1)},
		{"inverse gamma", []float64{2, 1}, math.Inf(1), math.NaN()},
		{"inverse gamma", []float64{2, 2}, 2, math.Inf(1)},
	} {
		f := FamilyByName(c.family)
		same := func(a, b float64) bool { return a == b || a != a && b != b || math.Abs(a-b) < 1e-14 }
		if m, s := f.Mean(c.args), f.SD(c.args); !same(m, c.mean) || !same(s, c.sd) {
			t.Errorf("%s %v: mean %v and sd %v, want %v and %v", c.family, c.args, m, s, c.mean, c.sd)
		}
	}
}
