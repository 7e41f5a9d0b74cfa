package effect

import (
	"context"
	"testing"

	"arrowroot/compile/causal"
	"arrowroot/compile/model"
	"arrowroot/compile/study"
)

// Each draw fills in missing entries with its own values (SEMANTICS B4), of
// variables that the outcome reads and of the exposure that a shift starts
// from. With yield = x², x + 1 against x gives 2 mean(x) + 1.
func TestMissingEntriesFromTheDraw(t *testing.T) {
	s := newSketch(t, 4)
	x := s.variable("x", study.Real, []float64{1, 99, 3, 99})
	x.Missing = []int32{1, 3}
	s.variable("y", study.Real, []float64{0, 0, 0, 0})
	s.law("x", "normal", "0", "1")
	s.law("y", "normal", "x * x", "1")
	s.vector("missing_x", model.Unrecorded, 2, 4).Of = 0
	q := study.Question{Exposure: "x", Outcome: "y", Shift: 1}
	draws := [][]float64{{2, 4}, {-2, 6}, {0, 0}}
	c, err := Simulate(context.Background(), s.m, causal.PinAndSimulate, nil, q, draws, source(), Options{})
	if err != nil {
		t.Fatal(err)
	}
	for i, want := range []float64{2*10.0/4 + 1, 2*8.0/4 + 1, 2*4.0/4 + 1} {
		near(t, "the shift", c.Values[i], want, 1e-12)
	}
}

// A group mean is what was observed, whatever the exposure is set to.
func TestGroupMeansStay(t *testing.T) {
	s := newSketch(t, 4)
	s.plate("farm", 2, []int32{0, 0, 1, 1})
	s.variable("x", study.Real, []float64{1, 3, 5, 7})
	mean := s.variable("mean_x_farm", study.Real, []float64{2, 6})
	mean.Plate, mean.MeanOf = 0, "x"
	s.variable("y", study.Real, []float64{0, 0, 0, 0})
	s.law("y", "normal", "0.5 * x + 10 * mean_x_farm", "1")
	q := study.Question{Exposure: "x", Outcome: "y", From: &study.Setting{Number: 0}, To: &study.Setting{Number: 2}}
	c, err := Simulate(context.Background(), s.m, causal.PinAndSimulate, nil, q, [][]float64{{}}, source(), Options{})
	if err != nil {
		t.Fatal(err)
	}
	near(t, "the contrast", c.Values[0], 1, 1e-12)
	near(t, "expected at 0", c.Expected.From[0], 40, 1e-12)
}
