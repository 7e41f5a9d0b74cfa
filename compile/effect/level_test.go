package effect

import (
	"context"
	"math"
	"math/rand/v2"
	"strings"
	"testing"

	"arrowroot/compile/causal"
	"arrowroot/compile/study"
)

// An outcome that lives at a plate's level has one value per unit: farms with
// many rows count no more than farms with one. By hand: farm 0 has five of six
// rows and size exp(0), farm 1 one row and size exp(2); hedge multiplies both
// by e.
func TestOutcomeOfAPlateCountsUnits(t *testing.T) {
	s := newSketch(t, 6)
	s.plate("farm", 2, []int32{0, 0, 0, 0, 0, 1})
	s.variable("soil", study.Real, []float64{0, 2}).Plate = 0
	s.variable("hedge", study.Real, []float64{0, 1}).Plate = 0
	s.variable("size", study.Positive, []float64{1, 9}).Plate = 0
	s.law("size", "gamma", "soil + hedge", "2")
	got, err := Simulate(context.Background(), s.m, causal.PinAndSimulate, nil, ask("hedge", "size", 0, 1), s.draws(3), source(), Options{})
	if err != nil {
		t.Fatal(err)
	}
	want := (1 + math.Exp(2)) / 2
	near(t, "expected size", got.Expected.From[0], want, 1e-12)
	near(t, "change", got.Values[0], want*(math.E-1), 1e-12)
	if got.Words != "over the 2 levels of farm in these 6 rows, each farm alike" {
		t.Errorf("words: %q", got.Words)
	}
	q := ask("hedge", "size", 0, 1)
	q.Over = study.PopulationAlike
	if got, err = Simulate(context.Background(), s.m, causal.PinAndSimulate, nil, q, s.draws(20000), source(), Options{}); err != nil {
		t.Fatal(err)
	}
	// The weight of one of two groups under a Bayesian bootstrap is uniform on
	// (0, 1), so the mean is that of equal weights, the sd e²−1 over √12.
	near(t, "bootstrapped size", mean(got.Expected.From), want, 0.06)
	if !strings.HasSuffix(got.Words, "weighed by group: farm (2)") {
		t.Errorf("words: %q", got.Words)
	}
}

// A computed outcome is worked out of draws from the law behind it: z = exp y
// with y normal is log-normal, with mean exp(mean + sd²/2).
func TestFromLawThroughAFormula(t *testing.T) {
	full := newSketch(t, 400)
	full.variable("z", study.Positive, make([]float64, 400)).Computed = full.parse("exp y")
	s := newSketch(t, 400)
	s.variable("x", study.Real, spreadOut(400, -1, 1))
	s.variable("y", study.Real, spreadOut(400, -1, 1))
	rng := rand.New(rand.NewPCG(3, 4))
	s.parameter("a", 0)
	s.parameter("s", 0)
	s.law("y", "normal", "a + 0.5 * x", "s")
	var draws [][]float64
	for range 1000 {
		draws = append(draws, []float64{0.2 + 0.1*rng.NormFloat64(), 0.6 + 0.03*rng.NormFloat64()})
	}
	got, err := FromLawThrough(context.Background(), s.m, full.m.Variables, ask("x", "z", 0, 1), draws, source(), Options{})
	if err != nil {
		t.Fatal(err)
	}
	bias := 0.0
	for i, v := range got.Values {
		d := draws[got.Draws[i]]
		want := math.Exp(d[0]+d[1]*d[1]/2) * (math.Exp(0.5) - 1)
		bias += (v - want) / float64(len(got.Values))
	}
	near(t, "bias against the log-normal mean", bias, 0, 0.003)
	if len(s.m.Variables) != 2 {
		t.Error("the model was changed")
	}
}

// Where no arrows lead to the outcome there is exactly no change, whether or
// not a law reads the exposure.
func TestNoChange(t *testing.T) {
	s := newSketch(t, 3)
	s.variable("soil", study.Real, []float64{0, 1, 2})
	s.variable("yield", study.Real, []float64{0, 1, 2})
	s.parameter("b", 2)
	s.law("yield", "normal", "b * soil", "1")
	for _, as := range []string{study.Difference, study.Ratio} {
		q := ask("hedge", "yield", 40, 90)
		q.As = as
		got, err := NoChange(context.Background(), s.m, q, s.draws(4), source(), Options{})
		if err != nil {
			t.Fatal(err)
		}
		want := 0.0
		if as == study.Ratio {
			want = 1
		}
		if got.Values[3] != want || !got.Exact || got.Expected.From[3] != 2 || got.Expected.To[3] != 2 {
			t.Errorf("%s: %+v", as, got)
		}
	}
}
