package catalog

import (
	"encoding/json"
	"math"
	"os"
	"testing"
)

// Source: testdata/numeric/logpdf/logcdf.json, computed at 50 digits with
// mpmath (SOURCE.md there).
func TestPublishedDistributionFunctions(t *testing.T) {
	text, err := os.ReadFile("../../testdata/numeric/logpdf/logcdf.json")
	if err != nil {
		t.Fatal(err)
	}
	var points []struct {
		Dist   string
		Params map[string]float64
		X      float64
		CDF    float64 `json:"log_cdf"`
	}
	if err := json.Unmarshal(text, &points); err != nil {
		t.Fatal(err)
	}
	type named = map[string]float64
	cases := map[string]struct {
		family string
		args   func(p named) []float64
	}{
		"normal":     {"normal", func(p named) []float64 { return []float64{p["mu"], p["sigma"]} }},
		"Student t":  {"Student t", func(p named) []float64 { return []float64{p["mu"], p["sigma"], p["nu"]} }},
		"cauchy":     {"Cauchy", func(p named) []float64 { return []float64{p["mu"], p["scale"]} }},
		"logistic":   {"logistic", func(p named) []float64 { return []float64{p["mu"], p["s"]} }},
		"weibull":    {"Weibull", func(p named) []float64 { return []float64{p["scale"], p["shape"]} }},
		"gumbel":     {"Gumbel", func(p named) []float64 { return []float64{p["mu"], p["beta"]} }},
		"gamma":      {"gamma", func(p named) []float64 { return []float64{p["shape"] / p["rate"], p["shape"]} }},
		"beta":       {"beta", func(p named) []float64 { return []float64{p["a"] / (p["a"] + p["b"]), p["a"] + p["b"]} }},
		"log-normal": {"log-normal", func(p named) []float64 { return []float64{math.Exp(p["mu"]), p["sigma"]} }},
		"poisson":    {"Poisson", func(p named) []float64 { return []float64{p["lambda"]} }},
		"binomial":   {"binomial", func(p named) []float64 { return []float64{p["p"], p["n"]} }},
	}
	for _, p := range points {
		c, ok := cases[p.Dist]
		if !ok {
			t.Errorf("points of %s are not used", p.Dist)
			continue
		}
		got, want := FamilyByName(c.family).CDF(p.X, c.args(p.Params)), math.Exp(p.CDF)
		// exp itself turns the last place of log p into |log p| places, and
		// at -38.5 sd p is subnormal.
		if math.Abs(got-want) > 1e-12*want+1e-320 {
			t.Errorf("%s %v at %v: %.17g, want %.17g (relative %.2g)", p.Dist, p.Params, p.X, got, want, got/want-1)
		}
	}
}

// Source of the expected values: mpmath 1.3.0 at 60 digits; Student tails by
// quadrature of the density, the others by summing the probabilities.
func TestLargeParameters(t *testing.T) {
	for _, c := range []struct {
		family string
		x      float64
		args   []float64
		want   float64
	}{
		{"Student t", -0.5, []float64{0, 1, 10001}, 0.30854303911158665714},
		{"Student t", -3, []float64{0, 1, 10001}, 0.001353223762208099721},
		{"Student t", -6, []float64{0, 1, 2e4}, 1.0035728205613174024e-9},
		{"Student t", -1, []float64{0, 1, 1e5}, 0.15865646378205500803},
		{"Student t", -4, []float64{0, 1, 1e6}, 0.00003167351700502405231},
		{"negative binomial", 6, []float64{4, 1e12}, 0.88932602159700952728},
		{"negative binomial", 0, []float64{4, 1e7}, 0.018315653541247244949},
		{"negative binomial", 1000, []float64{300, 2.5}, 0.99473488148433921528},
		{"negative binomial", 0, []float64{2, 0.01}, 0.94834866991275939823},
		{"binomial", 199000, []float64{0.2, 1e6}, 0.0062085379850001847116},
		{"binomial", 2, []float64{1e-6, 1e6}, 0.91969869489855041094},
	} {
		if got := FamilyByName(c.family).CDF(c.x, c.args); math.Abs(got-c.want) > 1e-12*c.want {
			t.Errorf("%s %v at %v: %.17g, want %.17g (relative %.2g)", c.family, c.args, c.x, got, c.want, got/c.want-1)
		}
	}
}
