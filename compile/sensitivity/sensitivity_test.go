package sensitivity

import (
	"encoding/json"
	"math"
	"math/rand/v2"
	"os"
	"strings"
	"testing"

	"arrowroot/compile/study"
	"gonum.org/v1/gonum/mat"
)

func near(t *testing.T, what string, got, want, tolerance float64) {
	t.Helper()
	if !(math.Abs(got-want) <= tolerance) {
		t.Errorf("%s: %.6g, want %.6g ± %g", what, got, want, tolerance)
	}
}

// Source: testdata/causal/SOURCE.md.
func TestReferenceCases(t *testing.T) {
	text, err := os.ReadFile("../../testdata/causal/sensitivity.json")
	if err != nil {
		t.Fatal(err)
	}
	var cases []struct {
		ID       string
		Question struct {
			T, DF, RR, Lo, Hi float64
		}
		Answer struct {
			PartialR2 float64 `json:"partial_R2"`
			RV        float64
			RVAlpha   float64 `json:"RV_alpha_0.05"`
			E         float64
			ECI       float64 `json:"E_ci"`
		}
	}
	if err := json.Unmarshal(text, &cases); err != nil {
		t.Fatal(err)
	}
	if len(cases) != 2 {
		t.Fatalf("%d cases", len(cases))
	}
	for _, c := range cases {
		q, a := c.Question, c.Answer
		if q.RR > 0 {
			near(t, c.ID+" E", eOf(q.RR), a.E, 1e-12)
			near(t, c.ID+" limit", eLimit(q.Lo, q.Hi), a.ECI, 1e-12)
			continue
		}
		near(t, c.ID+" partial R2", partialR2(q.T, q.DF), a.PartialR2, 1e-12)
		near(t, c.ID+" RV", RobustnessValue(q.T, q.DF, 1), a.RV, 1e-12)
		near(t, c.ID+" RV at 95 %", robustnessLimit(q.T, q.DF, 1, 0.95), a.RVAlpha, 1e-6) // gonum inverts the beta function to about that
	}
}

// VanderWeele & Ding (2017): E-values of 3.9, 1.8 and 2; a ratio below 1 is
// that of its inverse; the limit is 1 where the interval covers 1.
func TestEValues(t *testing.T) {
	near(t, "3.9", eOf(3.9), 7.26, 0.005)
	near(t, "1.8", eOf(1.8), 3.00, 0.005)
	near(t, "2", eOf(2), 3.41, 0.005)
	near(t, "1/2", eOf(0.5), eOf(2), 1e-12)
	near(t, "1", eOf(1), 1, 0)
	near(t, "covers 1", eLimit(0.9, 2), 1, 0)
	near(t, "below 1", eLimit(0.4, 0.5), eOf(2), 1e-12)
	// The E-value is where the bounding factor of two equal ratios is the ratio.
	for _, rr := range []float64{1.1, 2, 7} {
		near(t, "bounding factor", boundingFactor(eOf(rr), eOf(rr)), rr, 1e-12)
	}
}

// An unmeasured cause that explains the robustness value of both ends leaves no
// effect, by the bias formula itself.
func TestRobustnessValueLeavesNothing(t *testing.T) {
	for _, c := range [][2]float64{{4.18, 783}, {1.2, 20}, {30, 50}} {
		rv := RobustnessValue(c[0], c[1], 1)
		near(t, "bias in spreads", biasOf(1, c[1], rv, rv), c[0], 1e-9)
	}
}

// The benchmark of Cinelli & Hazlett (2020), their table 1 and figure 2: from
// memory. One variable explains 0.91 % of the exposure and 10.9 % of the
// outcome; causes 1, 2 and 3 times as strong leave 0.075, 0.053 and 0.030 of
// 0.097.
func TestBenchmarkOfThePaper(t *testing.T) {
	r := &Result{Input: &Input{Estimate: 0.097, Spread: 0.0233}, Robustness: &Robustness{Freedom: 783}}
	for i, want := range []float64{0.075, 0.053, 0.030} {
		b := timesAsStrong(float64(i+1), 0.0091, 0.1094)
		near(t, "left", r.Adjusted(b.WithExposure, b.WithOutcome), want, 0.001)
		if i == 0 {
			near(t, "share of exposure", b.WithExposure, 0.0092, 0.0001)
			near(t, "share of outcome", b.WithOutcome, 0.1246, 0.002)
		}
	}
}

// regress gives the coefficient of the first column, its standard error and
// the degrees of freedom, by gonum's QR.
func regress(y []float64, columns ...[]float64) (b, se, df float64) {
	n, p := len(y), len(columns)+1
	x := mat.NewDense(n, p, nil)
	for i := range n {
		for j, c := range columns {
			x.Set(i, j, c[i])
		}
		x.Set(i, p-1, 1)
	}
	var qr mat.QR
	qr.Factorize(x)
	var beta, fitted, inverse mat.Dense
	target := mat.NewDense(n, 1, append([]float64(nil), y...))
	if err := qr.SolveTo(&beta, false, target); err != nil {
		panic(err)
	}
	fitted.Mul(x, &beta)
	s := 0.0
	for i := range n {
		s += math.Pow(y[i]-fitted.At(i, 0), 2)
	}
	df = float64(n - p)
	inverse.Mul(x.T(), x)
	if err := inverse.Inverse(&inverse); err != nil {
		panic(err)
	}
	return beta.At(0, 0), math.Sqrt(s / df * inverse.At(0, 0)), df
}

// With the true strengths of an omitted cause the adjusted estimate is that of
// the regression that has it, to the last digit; with none it is the estimate
// itself. The cause is as strong as the held one, so that the benchmark covers
// it.
func TestOmittedCauseIsRecovered(t *testing.T) {
	rng := rand.New(rand.NewPCG(1, 7))
	n := 400
	z, u, x, y := make([]float64, n), make([]float64, n), make([]float64, n), make([]float64, n)
	for i := range n {
		z[i], u[i] = rng.NormFloat64(), rng.NormFloat64()
		x[i] = 0.4*z[i] + 0.4*u[i] + rng.NormFloat64()
		y[i] = 0.3*x[i] + 0.5*z[i] + 0.5*u[i] + rng.NormFloat64()
	}
	short, se, df := regress(y, x, z)
	long, _, _ := regress(y, x, z, u)
	width := 1.65 * se
	r := Of(&Input{
		ExposureName: "x", OutcomeName: "y", Estimate: short, Low: short - width, High: short + width, Spread: se, Level: 0.9,
		Scale: study.Real, Exposure: [][]float64{x}, Outcome: y, OutcomeSD: 1.5, Covariates: []Covariate{{"z", [][]float64{z}}},
	})
	if r.Robustness == nil || r.Robustness.Freedom != df {
		t.Fatalf("%+v, %s", r.Robustness, r.NoRobustness)
	}
	near(t, "nothing omitted", r.Adjusted(0, 0), short, 1e-12)
	withX, withY := share(x, [][]float64{z}, [][]float64{u}), share(y, [][]float64{z, x}, [][]float64{u})
	near(t, "with the true strengths", r.Adjusted(withX, withY), long, 1e-9)
	near(t, "partial R² of z with x is that of its t", r.Benchmarks[0].OfExposure, func() float64 {
		b, se, df := regress(x, z)
		return partialR2(b/se, df)
	}(), 1e-9)
	if got := r.Benchmarks[0].Times[0].Adjusted; got > long+0.06 || got < long-0.2 {
		t.Errorf("a cause as strong as z leaves %.3f, the true estimate is %.3f", got, long)
	}
	text := strings.Join(r.Sentences, " ")
	for _, says := range []string{"as strong as z", "E-value", "robustness value"} {
		if !strings.Contains(text, says) {
			t.Errorf("%q is not said in %s", says, text)
		}
	}
}

// A value never stands alone: without benchmarks it is said why.
func TestNeverAlone(t *testing.T) {
	y := []float64{1, 2, 4, 3, 5, 7, 8, 6, 9, 12}
	x := []float64{1, 2, 3, 4, 5, 6, 7, 8, 9, 10}
	in := Input{ExposureName: "x", OutcomeName: "y", Estimate: 1, Low: 0.8, High: 1.2, Spread: 0.1, Level: 0.9, Exposure: [][]float64{x}, Outcome: y, OutcomeSD: 3}
	if r := Of(&in); r.NoBenchmarks == "" || !strings.Contains(strings.Join(r.Sentences, " "), "nothing to compare that with") {
		t.Errorf("%+v", r.Sentences)
	}
	in.Exposure = append(in.Exposure, y)
	if r := Of(&in); r.NoRobustness == "" || r.NoBenchmarks == "" || !strings.Contains(strings.Join(r.Sentences, " "), "nothing to compare that with") {
		t.Errorf("%+v", r.Sentences)
	}
}

// A covariate that explains nothing, all, or follows from the others is no
// fault.
func TestOddCovariates(t *testing.T) {
	y := []float64{1, 2, 4, 3, 5, 7, 8, 6, 9, 12}
	x := []float64{1, 2, 3, 4, 5, 6, 7, 8, 9, 10.5}
	flat := make([]float64, 10)
	for _, z := range [][]float64{flat, x, y} {
		r := Of(&Input{ExposureName: "x", OutcomeName: "y", Estimate: 1, Low: 0.8, High: 1.2, Spread: 0.1, Level: 0.9,
			Exposure: [][]float64{x}, Outcome: y, OutcomeSD: 3, Covariates: []Covariate{{"z", [][]float64{z}}, {"w", [][]float64{{3, 1, 4, 1, 5, 9, 2, 6, 5, 3}}}}})
		for _, line := range r.Sentences {
			if strings.Contains(line, "NaN") || strings.Contains(line, "Inf") {
				t.Error(line)
			}
		}
	}
}
