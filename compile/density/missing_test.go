package density

import (
	"math"
	"testing"

	"arrowroot/compile/catalog"
	"arrowroot/compile/model"
	"arrowroot/compile/study"
)

// unknown makes the missing entries of a variable unknowns.
func (s *sketch) unknown(id string, missing ...int32) {
	at, _ := s.m.Name(id)
	v := s.m.Variables[at]
	v.Missing = missing
	var support catalog.Support
	for _, l := range s.m.Laws {
		if l.Variable == at {
			support = l.Family.Support
		}
	}
	s.m.Parameters = append(s.m.Parameters, &model.Parameter{Name: "missing_" + id, Symbol: id,
		Shape: model.Unrecorded, Size: len(missing), Support: support, Of: at})
}

// incomplete adds models with missing entries: of every support that can have
// them, of one entry and of several, at the level of a plate, and of an outcome
// that nothing reads.
func incomplete(t *testing.T, out map[string]*model.Model) {
	for name, c := range map[string]struct {
		family  string
		scale   study.Scale
		values  []float64
		missing []int32
	}{
		"missing reals":       {"normal", study.Real, []float64{0.2, 1.1, -0.4, 0.9, 0.3, 2}, []int32{1, 4}},
		"missing positives":   {"log-normal", study.Positive, []float64{0.2, 1.1, 0.4, 0.9, 0.3, 2}, []int32{0, 2, 5}},
		"missing proportions": {"beta", study.Proportion, []float64{0.2, 0.1, 0.4, 0.9, 0.3, 0.7}, []int32{3}},
	} {
		s := newSketch(t, len(c.values))
		s.variable("x", study.Real, -1, 1, -0.5, 0.25, 2, -1, 0.5)
		s.variable("z", c.scale, -1, c.values...)
		s.variable("y", study.Count, -1, 0, 4, 2, 1, 7, 3)
		s.parameter("alpha_z", catalog.Reals, "normal", "0", "1")
		s.parameter("beta_x_z", catalog.Reals, "normal", "0", "0.5")
		s.parameter("spread_z", catalog.Positives, "half-normal", "2")
		s.parameter("beta_z_y", catalog.Reals, "normal", "0", "0.5")
		s.law("z", c.family, []string{"alpha_z + beta_x_z * x"}, "spread_z")
		s.law("y", "Poisson", []string{"0.5 + beta_z_y * (z - 0.3)"})
		s.unknown("z", c.missing...)
		out[name] = s.m
	}
	s := newSketch(t, 6)
	farm := s.plate("farm", []int32{0, 0, 1, 1, 2, 2}, "north", "south", "west")
	s.variable("size", study.Real, farm, 1.2, 3, 0.7)
	s.variable("y", study.Real, -1, 0.3, -1, 2, 0.1, 1.5, -0.7)
	s.parameter("alpha_size", catalog.Reals, "normal", "0", "1")
	s.parameter("beta_size_y", catalog.Reals, "normal", "0", "1")
	s.parameter("sigma_y", catalog.Positives, "half-normal", "2")
	s.law("size", "normal", []string{"alpha_size"}, "1.5")
	s.law("y", "normal", []string{"beta_size_y * size"}, "sigma_y")
	s.unknown("size", 1, 2)
	s.m.Variables[1].Missing = []int32{0, 3} // nothing reads y
	out["missing at farm, and an outcome"] = s.m
}

// With everything else fixed, missing entries between two normal laws have a
// closed form: x ~ normal(m, s), y ~ normal(b x, r) gives x the precision
// 1/s² + b²/r² and the mean (m/s² + b y/r²) over it.
func TestMissingBetweenNormals(t *testing.T) {
	const m, s, b, r = 1.5, 2.0, -0.8, 0.5
	k := newSketch(t, 4)
	k.variable("x", study.Real, -1, 1, 1, 3, 1)
	y := k.variable("y", study.Real, -1, -0.7, 0.4, -2.5, 1.1)
	k.law("x", "normal", []string{"1.5"}, "2")
	k.law("y", "normal", []string{"-0.8 * x"}, "0.5")
	k.unknown("x", 1, 3)
	d, err := Lower(k.m)
	if err != nil {
		t.Fatal(err)
	}
	if len(d.Blocks) != 1 || d.Blocks[0].Dim() != 2 || d.Blocks[0].Name != "x, y" {
		t.Fatalf("blocks: %+v", d.Blocks)
	}
	block := d.Blocks[0]
	e := block.Evaluator()
	precision := 1/(s*s) + b*b/(r*r)
	log := func(x []float64) float64 {
		total := 0.0
		for i, at := range []int{1, 3} {
			mean := (m/(s*s) + b*y.Values[at]/(r*r)) / precision
			total -= (x[i] - mean) * (x[i] - mean) * precision / 2
		}
		return total
	}
	points := [][]float64{{0, 0}, {1, -1}, {-2, 0.5}, {0.3, 3}}
	var shift float64
	for i, q := range points {
		x := make([]float64, 2)
		block.Natural(x, q)
		got := e.LogDensity(make([]float64, 2), q) - log(x)
		if i == 0 {
			shift = got
		}
		if math.Abs(got-shift) > 1e-10 {
			t.Errorf("at %v the log density is off by %g", x, got-shift)
		}
	}
}
