package fit

import (
	"fmt"
	"math"
	"math/rand/v2"
	"strings"
	"testing"

	"arrowroot/compile/study"
	"arrowroot/compile/table"
	"arrowroot/infer/summary"
)

// Each form of an arrow, simulated from known numbers (300 rows, normal noise of
// sd 1) and recovered through the path of a user's study: parameters, the
// contrast of the full model, and the paint of the arrow. The truth is within
// three posterior sds with the fixed seed.
func TestFormsRecovered(t *testing.T) {
	levels := []string{"none", "little", "some", "much"}
	shares := []float64{0, 0.2, 0.9, 1}
	set := func(x float64) *study.Setting { return &study.Setting{Number: x} }
	for _, c := range []struct {
		form     string
		x        study.Variable
		draw     func(r *rand.Rand) float64
		of       func(x float64) float64
		from, to *study.Setting
		effect   float64
		words    string
		truth    map[string]float64
	}{
		{study.Log, study.Variable{Scale: study.Positive, Range: &study.Range{Low: 1, High: 100}},
			func(r *rand.Rand) float64 { return math.Exp(4.6 * r.Float64()) },
			func(x float64) float64 { return 1.5 * math.Log(x/10) },
			set(5), set(50), 1.5 * math.Log(10), "", map[string]float64{"beta_x_y": 1.5, "alpha_y": 2, "sigma_y": 1}},
		{study.Threshold, study.Variable{Scale: study.Real, Range: &study.Range{Low: 0, High: 10}},
			func(r *rand.Rand) float64 { return 10 * r.Float64() },
			func(x float64) float64 { return 1.2 * math.Max(0, x-6) },
			set(2), set(9), 3.6, " from 0.776 to 9.16", map[string]float64{"beta_x_y": 1.2, "theta_x_y": 6, "alpha_y": 2}},
		{study.Saturating, study.Variable{Scale: study.Positive, Range: &study.Range{Low: 0, High: 20}},
			func(r *rand.Rand) float64 { return 20*r.Float64() + 0.01 },
			func(x float64) float64 { return 8*x/(x+3) - 8*10.0/13 },
			set(1), set(15), 8 * (15.0/18 - 1.0/4), "", map[string]float64{"beta_x_y": 8, "half_x_y": 3, "alpha_y": 2}},
		{study.OneWay, study.Variable{Scale: study.Ordered, Levels: levels},
			func(r *rand.Rand) float64 { return float64(r.IntN(4)) },
			func(x float64) float64 { return 2.5 * (shares[int(x)] - 0.5) },
			&study.Setting{Word: "none"}, &study.Setting{Word: "some"}, 2.5 * 0.9, ", much against none",
			map[string]float64{"beta_x_y": 2.5, "share_x_y[little]": 0.2, "share_x_y[some]": 0.9, "alpha_y": 2}},
	} {
		t.Run(c.form, func(t *testing.T) {
			t.Parallel()
			rng := rand.New(rand.NewPCG(4, 4))
			var csv strings.Builder
			csv.WriteString("x,y\n")
			for range 300 {
				x := c.draw(rng)
				y := 2 + c.of(x) + rng.NormFloat64()
				word := fmt.Sprintf("%.4f", x)
				if c.form == study.OneWay {
					word = levels[int(x)]
				}
				fmt.Fprintf(&csv, "%s,%.4f\n", word, y)
			}
			data, err := table.Read("d", strings.NewReader(csv.String()), table.Options{})
			if err != nil {
				t.Fatal(err)
			}
			x := c.x
			x.ID, x.Column = "x", "x"
			y := &study.Variable{ID: "y", Column: "y", Scale: study.Real, Range: &study.Range{Low: -6, High: 10}}
			s := &study.Study{
				Variables: []*study.Variable{&x, y},
				Rivals: []*study.Rival{{Name: "R", Layout: &study.Layout{}, Diagram: &study.Diagram{
					Nodes:  []*study.Node{{Variable: "x"}, {Variable: "y"}},
					Arrows: []*study.Arrow{{From: "x", To: "y", Form: c.form}},
				}}},
			}
			r := run(t, Request{Study: s, Rival: "R", Table: data, Seed: 1, Draws: 500,
				Question: &study.Question{Exposure: "x", Outcome: "y", From: c.from, To: c.to}})
			if r.Effect == nil || r.Effect.Full == nil {
				t.Fatalf("no effect: %+v", r.Unanswered)
			}
			full := r.Effect.Full
			within(t, "effect", full.Centre, c.effect, 3*full.Spread)
			if full.Spread > 0.6 || full.Trust.Verdict >= summary.Unusable {
				t.Errorf("effect with sd %.3f, %v", full.Spread, full.Trust)
			}
			if crude := r.Effect.Crude; crude == nil || math.Abs(crude.Centre-full.Centre) > full.Spread {
				t.Errorf("crude %+v, which is the same law, differs from %.3f", crude, full.Centre)
			}
			found := 0
			for _, q := range r.Full.Quantities {
				want, known := c.truth[q.Name]
				if known {
					found++
					within(t, q.Name, q.Centre, want, 3*q.Spread)
				}
				if q.Trust.Verdict >= summary.Unusable {
					t.Errorf("%s: %v", q.Name, q.Trust)
				}
			}
			if found != len(c.truth) {
				t.Errorf("found %d of %v", found, c.truth)
				for _, q := range r.Full.Quantities {
					t.Log(q.Name, q.Centre, q.Spread)
				}
			}
			band, ok := r.Full.Band("x", "y", 9, 0.9)
			if !ok || len(band.X) < 4 {
				t.Fatalf("no band: %+v", band)
			}
			for i, at := range band.X {
				// What the arrow adds is counted from 0 at the middle of the range,
				// where of() is 0 as well; the interval is of 90 %, so it may miss.
				if off := math.Abs(band.Middle[i] - c.of(at)); off > 3*(band.High[i]-band.Low[i])/3.29+0.02 {
					t.Errorf("the band at %v is %.2f to %.2f, not around %.2f", at, band.Low[i], band.High[i], c.of(at))
				}
			}
			if c.words != "" && (len(r.Arrows) != 1 || !strings.HasSuffix(r.Arrows[0].Words, c.words)) {
				t.Errorf("paint: %+v", r.Arrows)
			}
			if len(r.Arrows) != 1 || !(r.Arrows[0].Centre > 0) {
				t.Errorf("paint: %+v", r.Arrows)
			}
		})
	}
}
