package model

import (
	"testing"
	"unicode/utf8"

	"arrowroot/compile/study"
)

// FuzzTyped puts any text where people type: Build must not panic, must say
// something if there is no model, and must point inside the text.
func FuzzTyped(f *testing.F) {
	f.Add("log rate = alpha_bees by farm + beta_hedge_bees * (hedge - 90)", "normal with mean 0, sd 1", "k_bees", "beta_hedge_bees")
	f.Add("alpha_bees by farm and farm", "normal with mean mu, sd tau", "2", "theta by farm")
	f.Add("step_soil_bees of soil + alpha_bees_farm by farm", "gamma with mean k_bees, shape 2", "hours", "k_bees")
	f.Add("log(0) + 1/0 + hedge^0.5^temp", "uniform with low 0, high 1", "log(0)", "σ_bees")
	f.Add("x of soil + alpha_flowers", "half-normal with scale x", "alpha_bees", "x")
	f.Fuzz(func(t *testing.T, predictor, prior, argument, parameter string) {
		for _, text := range []string{predictor, prior, argument, parameter} {
			if !utf8.ValidString(text) || len(text) > 200 {
				return
			}
		}
		s := hedgerows()
		*law(s, "bees") = study.Law{
			Formula:   predictor,
			Arguments: []study.Argument{{Name: "overdispersion", Text: argument}},
			Priors:    []study.Prior{{Parameter: parameter, Text: prior}, {Parameter: "mu", Text: "normal with mean 0, sd 1"}, {Parameter: "tau", Text: "half-normal with scale 1"}},
		}
		for _, kind := range []Kind{Full, Held} {
			m, problems := Build(s, "R", beesQuestion(), traps(), kind)
			if m == nil && !Stops(problems) {
				t.Fatal("no model and nothing that stops it")
			}
			for i := range problems {
				p := &problems[i]
				if p.Text != "" && (p.Span.Start < 0 || p.Span.End > len(p.Text) || p.Span.Start > p.Span.End) {
					t.Fatalf("%s points at %v of %d bytes", p.Message, p.Span, len(p.Text))
				}
				p.Display()
				for _, r := range p.Repairs {
					r.Edit.Apply(s)
				}
			}
			if m != nil {
				m.Statement()
			}
		}
	})
}
