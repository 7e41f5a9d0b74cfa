package score

import (
	"encoding/json"
	"math"
	"math/rand/v2"
	"os"
	"slices"
	"testing"

	"gonum.org/v1/gonum/mathext"
)

// Source of the expected values: testdata/numeric/diagnostics (SOURCE.md
// there), computed outside the project.
type fixtures struct {
	Pareto map[string]struct {
		S    int
		Tail int       `json:"M_tail"`
		K    float64   `json:"k_hat"`
		Top  []float64 `json:"smoothed_log_ratio_top5"`
		ESS  float64   `json:"ess"`
		Mean float64   `json:"log_mean_ratio_smoothed"`
	} `json:"psis"`
	Normal struct {
		Scores     []float64 `json:"scores_smoothed"`
		K          []float64 `json:"k_hat"`
		Score      float64   `json:"score_smoothed"`
		Exact      float64   `json:"score_exact"`
		Fit        float64   `json:"fit_score"`
		Parameters float64   `json:"waic_parameters"`
	} `json:"psis_loo_normal_known_sd"`
	Thresholds []struct {
		S int
		K float64 `json:"k_threshold"`
	} `json:"k_thresholds"`
	Enough []struct {
		K float64 `json:"k"`
		S float64 `json:"min_S"`
	} `json:"min_sample_size"`
}

func read(t *testing.T) *fixtures {
	t.Helper()
	text, err := os.ReadFile("../../testdata/numeric/diagnostics/diagnostics.json")
	if err != nil {
		t.Fatal(err)
	}
	var f fixtures
	if err := json.Unmarshal(text, &f); err != nil {
		t.Fatal(err)
	}
	return &f
}

func near(t *testing.T, what string, got, want, tolerance float64) {
	t.Helper()
	if math.Abs(got-want) > tolerance*max(1, math.Abs(want)) {
		t.Errorf("%s: %.12g, want %.12g", what, got, want)
	}
}

func TestSmoothingAgainstFixtures(t *testing.T) {
	shapes := map[string]float64{"quantiles_k=0.1": 0.1, "quantiles_k=0.3": 0.3, "quantiles_k=0.5": 0.5, "quantiles_k=0.7": 0.7, "quantiles_k=1.2": 1.2}
	f := read(t)
	if len(f.Pareto) < len(shapes) {
		t.Fatalf("%d fixtures", len(f.Pareto))
	}
	for name, want := range f.Pareto {
		k, ok := shapes[name]
		if !ok {
			t.Errorf("fixture %s is not used", name)
		}
		log := make([]float64, want.S)
		for i := range log {
			log[i] = -k * math.Log(1-(float64(i)+0.5)/float64(want.S))
		}
		w := Smooth(log, 1)
		near(t, name+" shape", w.K, want.K, 1e-9)
		near(t, name+" effective draws", w.Effective(), want.ESS, 1e-7)
		// Log weights differ from smoothed log ratios by one constant.
		top := slices.Sorted(slices.Values(w.Log))[want.S-5:]
		shift := want.Top[0] - top[0]
		for i := range top {
			near(t, name+" top ratios", top[i]+shift, want.Top[i], 1e-9)
		}
		near(t, name+" mean ratio", shift-math.Log(float64(want.S)), want.Mean, 1e-9)
	}
}

func TestThresholdsAgainstFixtures(t *testing.T) {
	f := read(t)
	for _, c := range f.Thresholds {
		near(t, "reliable", Reliable(c.S), c.K, 1e-12)
	}
	for _, c := range f.Enough {
		near(t, "enough", Enough(c.K), c.S, 1e-12)
	}
	if !math.IsInf(Enough(1), 1) {
		t.Error("no number of draws is enough for a tail of shape 1")
	}
}

// The exact scores and the data: testdata/numeric/diagnostics; the sleep
// differences of Student (Biometrika 6, 1908) under y ~ normal(μ, 2), μ ~
// normal(0, 10).
func TestLeaveOneOutAgainstFixtures(t *testing.T) {
	f := read(t)
	y := []float64{1.2, 2.4, 1.3, 1.3, 0.0, 1.0, 1.8, 0.8, 4.6, 1.4}
	precision := 1/100. + float64(len(y))/4
	mean := 0.0
	for _, v := range y {
		mean += v / 4 / precision
	}
	const draws = 4000
	log := make([][]float64, len(y))
	for i := range log {
		log[i] = make([]float64, draws)
		for s := range draws {
			theta := mean + mathext.NormalQuantile((float64(s)+0.5)/draws)/math.Sqrt(precision)
			z := (y[i] - theta) / 2
			log[i][s] = -0.5*z*z - math.Log(2*math.Sqrt(2*math.Pi))
		}
	}
	by := LeaveOneOut(log, nil)
	for i := range y {
		near(t, "score", by.Unit[i], f.Normal.Scores[i], 1e-9)
		near(t, "shape", by.K[i], f.Normal.K[i], 1e-7)
	}
	score, _ := by.Total()
	near(t, "total", score, f.Normal.Score, 1e-9)
	near(t, "exact", score, f.Normal.Exact, 1e-3)
	if by.Unreliable() != nil {
		t.Errorf("unreliable units %v", by.Unreliable())
	}
	wide, shaky := Widely(log)
	fit := 0.0
	for _, v := range wide.Fit {
		fit += v
	}
	near(t, "fit", fit, f.Normal.Fit, 1e-9)
	near(t, "parameters", wide.Parameters, f.Normal.Parameters, 1e-3)
	if shaky != 0 {
		t.Errorf("%d shaky units", shaky)
	}
}

// A copy of a model differs by nothing and gets no preference; a clearly
// better one does. Common practice, no source.
func TestCompare(t *testing.T) {
	r := rand.New(rand.NewPCG(1, 2))
	a, b := newBy(200), newBy(200)
	for i := range a.Unit {
		a.Unit[i] = -1 + 0.3*r.NormFloat64()
		b.Unit[i] = a.Unit[i] - 0.1 + 0.2*r.NormFloat64()
	}
	same, err := Compare(a, a)
	if err != nil || same.Score != 0 || same.Decided() {
		t.Errorf("a copy differs by %+v (%v)", same, err)
	}
	d, err := Compare(a, b)
	if err != nil || !d.Decided() || math.Abs(d.Score-20) > 4*0.2*math.Sqrt(200) {
		t.Errorf("better by %+v (%v)", d, err)
	}
	if _, err := Compare(a, newBy(3)); err == nil {
		t.Error("different rows were compared")
	}
}

// Oracle: search over a fine grid of weights.
func TestStackIsBestMixture(t *testing.T) {
	r := rand.New(rand.NewPCG(3, 4))
	for range 20 {
		scores := [][]float64{make([]float64, 60), make([]float64, 60)}
		for i := range scores[0] {
			scores[0][i], scores[1][i] = r.NormFloat64(), 0.3*r.NormFloat64()+0.4*r.Float64()
		}
		value := func(w float64) float64 {
			sum := 0.0
			for i := range scores[0] {
				sum += math.Log(w*math.Exp(scores[0][i]) + (1-w)*math.Exp(scores[1][i]))
			}
			return sum
		}
		best := 0.0
		for w := 0.0; w <= 1; w += 1e-4 {
			if value(w) > value(best) {
				best = w
			}
		}
		got := Stack(scores)
		if math.Abs(got[0]-best) > 2e-4 || math.Abs(got[0]+got[1]-1) > 1e-9 {
			t.Errorf("weights %v, the grid gives %v", got, best)
		}
	}
	if w := Stack([][]float64{{-1, -2}, {-1, -2}}); math.Abs(w[0]-0.5) > 1e-9 {
		t.Errorf("two copies get %v", w)
	}
}

// Tails that cannot be fitted are never called reliable, and ratios that are
// all alike need no smoothing.
func TestOddRatios(t *testing.T) {
	flat := make([]float64, 400)
	if w := Smooth(flat, 1); w.K != 0 || math.Abs(w.Effective()-400) > 1e-9 {
		t.Errorf("equal ratios: %v, effective %v", w.K, w.Effective())
	}
	if w := Smooth([]float64{0, 1, 2}, 1); !math.IsInf(w.K, 1) {
		t.Errorf("three draws have a tail of %v", w.K)
	}
	one := make([]float64, 400)
	for i := range one {
		one[i] = -800 + 1e-3*float64(i)
	}
	one[7] = 0
	if w := Smooth(one, 1); w.K < Reliable(400) {
		t.Errorf("one draw has all the weight, tail %v", w.K)
	}
}
