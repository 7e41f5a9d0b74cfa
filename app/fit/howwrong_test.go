package fit

import (
	"math"
	"math/rand/v2"
	"strconv"
	"strings"
	"testing"

	"arrowroot/compile/sensitivity"
	"arrowroot/compile/study"
	"arrowroot/compile/table"
)

// The robustness value of a fitted linear law is that of least squares on the
// same rows: the posterior's mean and spread stand in for coefficient and
// standard error, and the default priors move them by little in 400 rows. Held
// variables are benchmarks with the partial R² of least squares.
func TestHowWrongOfALinearLaw(t *testing.T) {
	rng := rand.New(rand.NewPCG(1, 12))
	var text strings.Builder
	text.WriteString("z,x,y\n")
	n := 400
	columns := make([][]float64, 3)
	for range n {
		z := rng.NormFloat64()
		x := 0.5*z + rng.NormFloat64()
		y := 0.4*x + 0.6*z + rng.NormFloat64()
		for i, v := range []float64{z, x, y} {
			columns[i] = append(columns[i], v)
			if i > 0 {
				text.WriteByte(',')
			}
			text.WriteString(strconv.FormatFloat(v, 'g', -1, 64))
		}
		text.WriteByte('\n')
	}
	s, err := study.Read("t.arrowroot", []byte(`{"arrowroot": 1, "data": [{"name": "t", "file": "t.csv"}],
 "variables": [{"id": "z", "scale": "real", "column": "z", "range": [-3, 3]}, {"id": "x", "scale": "real", "column": "x", "range": [-3, 3]}, {"id": "y", "scale": "real", "column": "y", "range": [-4, 4]}],
 "rivals": [{"name": "r", "arrows": [{"from": "z", "to": "x"}, {"from": "z", "to": "y"}, {"from": "x", "to": "y"}]}],
 "questions": [{"exposure": "x", "outcome": "y", "from": 0, "to": 1, "held": ["z"]}, {"exposure": "x", "outcome": "y", "from": 0, "to": 1, "held": []}]}`))
	if err != nil {
		t.Fatal(err)
	}
	data, err := table.Read("t.csv", strings.NewReader(text.String()), table.Options{})
	if err != nil {
		t.Fatal(err)
	}
	req := Request{Study: s, Rival: "r", Question: s.Questions[0], Table: data, Seed: 1, Draws: 500, NoPaint: true}
	e := run(t, req).Effect
	r := e.Sensitivity
	if r == nil || r.Robustness == nil || r.E == nil || len(r.Benchmarks) != 1 || r.Benchmarks[0].Name != "z" {
		t.Fatalf("%+v, %s", r, e.NoSensitivity)
	}
	if r.Robustness.Freedom != float64(n-3) {
		t.Errorf("%g degrees of freedom", r.Robustness.Freedom)
	}
	// Least squares by partial correlations (Yule 1907).
	correlation := func(a, b []float64) float64 {
		var ma, mb, saa, sbb, sab float64
		for i := range a {
			ma, mb = ma+a[i]/float64(n), mb+b[i]/float64(n)
		}
		for i := range a {
			saa, sbb, sab = saa+(a[i]-ma)*(a[i]-ma), sbb+(b[i]-mb)*(b[i]-mb), sab+(a[i]-ma)*(b[i]-mb)
		}
		return sab / math.Sqrt(saa*sbb)
	}
	zx, zy, xy := correlation(columns[0], columns[1]), correlation(columns[0], columns[2]), correlation(columns[1], columns[2])
	partial := (xy - zx*zy) / math.Sqrt((1-zx*zx)*(1-zy*zy))
	df := float64(n - 3)
	tStatistic := partial * math.Sqrt(df/(1-partial*partial))
	within(t, "robustness value", r.Robustness.Value, sensitivity.RobustnessValue(tStatistic, df, 1), 0.03)
	within(t, "z of x", r.Benchmarks[0].OfExposure, zx*zx, 1e-9)
	zyx := (zy - zx*xy) / math.Sqrt((1-zx*zx)*(1-xy*xy))
	within(t, "z of y", r.Benchmarks[0].OfOutcome, zyx*zyx, 1e-9)

	req.Question = s.Questions[1] // holding nothing is not enough, so that the full model's number is meant
	if e = run(t, req).Effect; e.Sensitivity == nil || e.Sensitivity.NoBenchmarks == "" {
		t.Errorf("with nothing held: %+v, %q", e.Sensitivity, e.NoSensitivity)
	}
}
