package effect

import (
	"context"
	"encoding/json"
	"errors"
	"math"
	"math/rand/v2"
	"os"
	"strings"
	"testing"

	"arrowroot/compile/causal"
	"arrowroot/compile/model"
	"arrowroot/compile/study"
)

func source() rand.Source { return rand.NewPCG(7, 11) }

func near(t *testing.T, what string, got, want, tolerance float64) {
	t.Helper()
	if !(math.Abs(got-want) <= tolerance) {
		t.Errorf("%s is %.6f, want %.6f ± %g", what, got, want, tolerance)
	}
}

// Linear structural models of testdata/numeric/causal/causal.json (closed
// forms by covariance algebra). The laws have their exact fitted coefficients;
// mirrored uniforms make the simulation exact for laws that are linear in
// their noise.
func TestLinearGaussian(t *testing.T) {
	text, err := os.ReadFile("../../testdata/numeric/causal/causal.json")
	if err != nil {
		t.Fatal(err)
	}
	var all struct {
		Linear map[string]struct {
			Coefficient map[string]float64 `json:"coefficient_of_first_regressor"`
			Effect      map[string]float64 `json:"true_total_effect"`
		} `json:"linear_sem"`
	}
	if err := json.Unmarshal(text, &all); err != nil {
		t.Fatal(err)
	}
	normals := spreadOut(200, -2, 2)
	other := make([]float64, len(normals))
	for i := range other {
		other[i] = normals[(i*37)%len(normals)]
	}

	t.Run("confounder", func(t *testing.T) {
		c := all.Linear["confounder"]
		s := newSketch(t, 200)
		s.variable("Z", study.Real, normals)
		s.variable("X", study.Real, other)
		s.variable("Y", study.Real, normals)
		s.parameter("b", c.Coefficient["Y ~ X+Z"])
		s.law("Y", "normal", "b * X + 0.6 * Z", "1")
		s.law("X", "normal", "0.8 * Z", "1")
		got, err := Simulate(context.Background(), s.m, causal.PinAndSimulate, nil, ask("X", "Y", 0, 1), s.draws(5), source(), Options{})
		if err != nil {
			t.Fatal(err)
		}
		near(t, "effect", got.Values[0], c.Effect["X->Y"], 1e-12)
	})
	t.Run("mediator", func(t *testing.T) {
		c := all.Linear["mediator"]
		s := newSketch(t, 200)
		s.variable("X", study.Real, normals)
		s.variable("M", study.Real, other)
		s.variable("Y", study.Real, normals)
		s.parameter("b", c.Coefficient["Y ~ X+M"])
		s.law("M", "normal", "0.8 * X", "1")
		s.law("Y", "normal", "b * X + 0.5 * M", "1")
		got, err := Simulate(context.Background(), s.m, causal.PinAndSimulate, nil, ask("X", "Y", 0, 1), s.draws(5), source(), Options{})
		if err != nil {
			t.Fatal(err)
		}
		near(t, "total effect", got.Values[3], c.Effect["X->Y total"], 1e-9)
		alone, err := FromLaw(context.Background(), s.m, ask("X", "Y", 0, 1), s.draws(1), source(), Options{})
		if err != nil {
			t.Fatal(err)
		}
		near(t, "direct effect", alone.Values[0], c.Effect["direct"], 1e-12)
		shift := study.Question{Exposure: "X", Outcome: "Y", Shift: 2}
		if got, err = Simulate(context.Background(), s.m, causal.PinAndSimulate, nil, shift, s.draws(1), source(), Options{}); err != nil {
			t.Fatal(err)
		}
		near(t, "effect of a shift by 2", got.Values[0], 2*c.Effect["X->Y total"], 1e-9)
	})
	t.Run("front door", func(t *testing.T) {
		c := all.Linear["front_door"]
		s := newSketch(t, 200)
		s.variable("X", study.Real, normals)
		s.variable("M", study.Real, other)
		s.variable("Y", study.Real, normals)
		s.parameter("b", c.Coefficient["Y ~ X+M"])
		s.parameter("c", c.Coefficient["Y ~ M+X"])
		s.law("M", "normal", "0.6 * X", "1")
		s.law("Y", "normal", "b * X + c * M", "1")
		q := ask("X", "Y", 0, 1)
		got, err := Simulate(context.Background(), s.m, causal.ObservedForDistrict, map[string][]string{"X": {"X", "Y"}}, q, s.draws(1), source(), Options{})
		if err != nil {
			t.Fatal(err)
		}
		near(t, "effect by rule (b)", got.Values[0], c.Effect["X->Y"], 1e-9)
		pinned, err := Simulate(context.Background(), s.m, causal.PinAndSimulate, nil, q, s.draws(1), source(), Options{})
		if err != nil {
			t.Fatal(err)
		}
		near(t, "carriers pinned", pinned.Values[0], c.Coefficient["Y ~ X"], 1e-9)
	})
	t.Run("not simulated", func(t *testing.T) {
		s := newSketch(t, 1)
		_, err := Simulate(context.Background(), s.m, causal.NotSimulated, nil, ask("X", "Y", 0, 1), nil, source(), Options{})
		var not *NotSimulated
		if !errors.As(err, &not) || not.Exposure != "X" || not.Outcome != "Y" {
			t.Errorf("got %v, want NotSimulated", err)
		}
	})
}

// The front-door table (Pearl, Causality, 2nd ed. 2009, Table 3.1, from
// memory, arithmetic rechecked): 400 smokers of 800, tar and cancer as below.
// The three answers are those of SEMANTICS B2.
func TestFrontDoorTable(t *testing.T) {
	const n = 800
	smoke, tar := make([]float64, n), make([]float64, n)
	for i := range n {
		smoke[i] = float64(i % 2)
		tar[i] = smoke[i]
		if i%40 < 2 { // 5 % of smokers have none, 5 % of the others have some
			tar[i] = 1 - tar[i]
		}
	}
	logit := func(p float64) float64 { return math.Log(p / (1 - p)) }
	build := func(carried bool) *sketch {
		s := newSketch(t, n)
		s.variable("smoke", study.Binary, smoke)
		s.variable("tar", study.Binary, tar)
		s.variable("cancer", study.Binary, tar)
		s.parameter("a", logit(0.05))
		s.parameter("b", logit(0.95)-logit(0.05))
		s.law("tar", "Bernoulli", "a + b * smoke")
		if carried {
			// P(cancer | tar, smoke): .10, .90 without tar, .05, .85 with it
			s.vector("c", model.Vector, logit(0.10), logit(0.05)-logit(0.10), logit(0.90)-logit(0.10),
				logit(0.85)-logit(0.05)-logit(0.90)+logit(0.10))
			s.parameter("c0", logit(0.10))
			s.parameter("c1", logit(0.05)-logit(0.10))
			s.parameter("c2", logit(0.90)-logit(0.10))
			s.parameter("c3", logit(0.85)-logit(0.05)-logit(0.90)+logit(0.10))
			s.law("cancer", "Bernoulli", "c0 + c1 * tar + c2 * smoke + c3 * tar * smoke")
		} else {
			// P(cancer | tar) in this population: (.475·.1 + .025·.9)/.5, (.025·.05 + .475·.85)/.5
			s.parameter("c0", logit(0.14))
			s.parameter("c1", logit(0.81)-logit(0.14))
			s.law("cancer", "Bernoulli", "c0 + c1 * tar")
		}
		return s
	}
	for _, c := range []struct {
		name            string
		carried         bool
		kind            causal.Case
		districts       map[string][]string
		smoker, another float64
	}{
		{"rule (b)", true, causal.ObservedForDistrict, map[string][]string{"smoke": {"smoke", "cancer"}}, 0.4525, 0.4975},
		{"drawn laws", false, causal.PinAndSimulate, nil, 0.7765, 0.1735},
		{"pinned carriers", true, causal.PinAndSimulate, nil, 0.8525, 0.0975},
	} {
		s := build(c.carried)
		got, err := Simulate(context.Background(), s.m, c.kind, c.districts, ask("smoke", "cancer", 0, 1), s.draws(300), source(), Options{Budget: 2e6})
		if err != nil {
			t.Fatal(err)
		}
		// 300 draws × 2 rounds × 1600 tar values: standard error about 0.0004
		near(t, c.name+", smokers", mean(got.Expected.To), c.smoker, 0.002)
		near(t, c.name+", others", mean(got.Expected.From), c.another, 0.002)
	}
}

// A logistic law averaged over a confounder and through a mediator: what comes
// out is the average over people, not the coefficient. The truth is simulated
// here with another generator and plain loops.
func TestLogisticIsAveraged(t *testing.T) {
	const n = 500
	s := newSketch(t, n)
	z := spreadOut(n, -3, 3)
	x := make([]float64, n)
	for i := range x {
		x[i] = float64(i % 2)
	}
	s.variable("z", study.Real, z)
	s.variable("x", study.Binary, x)
	s.variable("m", study.Real, z)
	s.variable("y", study.Binary, x)
	s.law("m", "normal", "0.7 * x + 0.4 * z", "1.3")
	s.law("y", "Bernoulli", "-0.5 + 1.2 * m - 0.8 * x + 1.5 * z")
	got, err := Simulate(context.Background(), s.m, causal.PinAndSimulate, nil, ask("x", "y", 0, 1), s.draws(400), source(), Options{Budget: 2e6})
	if err != nil {
		t.Fatal(err)
	}
	rng := rand.New(rand.NewChaCha8([32]byte{1}))
	truth := [2]float64{}
	const each = 4000
	for _, zi := range z {
		for range each {
			noise := rng.NormFloat64()
			for a := range truth {
				m := 0.7*float64(a) + 0.4*zi + 1.3*noise
				truth[a] += 1 / (1 + math.Exp(-(-0.5 + 1.2*m - 0.8*float64(a) + 1.5*zi))) / (n * each)
			}
		}
	}
	near(t, "P(y) at 0", mean(got.Expected.From), truth[0], 0.001)
	near(t, "P(y) at 1", mean(got.Expected.To), truth[1], 0.001)
	near(t, "difference", mean(got.Values), truth[1]-truth[0], 0.001)

	q := ask("x", "y", 0, 1)
	q.As = study.Ratio
	ratio, err := Simulate(context.Background(), s.m, causal.PinAndSimulate, nil, q, s.draws(400), source(), Options{Budget: 2e6})
	if err != nil {
		t.Fatal(err)
	}
	near(t, "ratio of averages", mean(ratio.Values), truth[1]/truth[0], 0.003)
	q.As, q.OutcomeLevels = "", []string{"no"}
	s.m.Variables[3].Levels = []string{"no", "yes"}
	no, err := Simulate(context.Background(), s.m, causal.PinAndSimulate, nil, q, s.draws(400), source(), Options{Budget: 2e6})
	if err != nil {
		t.Fatal(err)
	}
	near(t, "difference in P(no)", mean(no.Values), truth[0]-truth[1], 0.001)
}

// SEMANTICS B5: logit, sd 1.5 between groups; averaged .171, at zero .231.
// Groups stand at the normal quantiles, so that the average is an integral.
func TestKnownGroupsUseTheirEffects(t *testing.T) {
	const groups = 4000
	s := newSketch(t, groups)
	of := make([]int32, groups)
	effects := make([]float64, groups)
	for i := range of {
		of[i] = int32(i)
		effects[i] = 1.5 * math.Sqrt2 * math.Erfinv(2*(float64(i)+0.5)/groups-1)
	}
	s.plate("farm", groups, of)
	s.variable("x", study.Real, spreadOut(groups, 0, 1))
	s.variable("y", study.Binary, make([]float64, groups))
	s.vector("alpha_y_farm", model.ByPlate, effects...)
	s.parameter("beta", 1)
	s.law("y", "Bernoulli", "alpha_y_farm by farm + beta * x")
	got, err := FromLaw(context.Background(), s.m, ask("x", "y", 0, 1), s.draws(1), source(), Options{})
	if err != nil {
		t.Fatal(err)
	}
	near(t, "averaged over farms", got.Values[0], 0.171, 0.0005)
	clear(s.draw[:groups])
	if got, err = FromLaw(context.Background(), s.m, ask("x", "y", 0, 1), s.draws(1), source(), Options{}); err != nil {
		t.Fatal(err)
	}
	near(t, "at zero", got.Values[0], 0.231, 0.0005)
}

// Mediators are replicated until the simulation error is small beside the
// posterior sd (B1), and the spread over draws is that of the parameters.
func TestSimulationErrorIsSmall(t *testing.T) {
	const n = 40
	s := newSketch(t, n)
	x := spreadOut(n, 0, 1)
	s.variable("x", study.Real, x)
	s.variable("m", study.Count, make([]float64, n))
	s.variable("y", study.Positive, x)
	s.parameter("b", 0)
	s.law("m", "Poisson", "0.5 + b * x")
	s.law("y", "gamma", "0.3 * m", "2")
	rng := rand.New(rand.NewPCG(3, 4))
	var draws [][]float64
	exact := make([]float64, 200)
	for i := range exact {
		b := 0.5 + 0.15*rng.NormFloat64()
		draws = append(draws, []float64{b})
		// E exp(.3 m) for a Poisson m of mean λ is exp(λ (e^.3 − 1))
		at := func(x float64) float64 { return math.Exp(math.Exp(0.5+b*x) * (math.Exp(0.3) - 1)) }
		exact[i] = at(1) - at(0)
	}
	got, err := Simulate(context.Background(), s.m, causal.PinAndSimulate, nil, ask("x", "y", 0, 1), draws, source(), Options{})
	if err != nil {
		t.Fatal(err)
	}
	sd := func(v []float64) float64 {
		m, sum := mean(v), 0.0
		for _, x := range v {
			sum += (x - m) * (x - m)
		}
		return math.Sqrt(sum / float64(len(v)-1))
	}
	if got.Error > 0.06*sd(exact) {
		t.Errorf("simulation error %.4f against a posterior sd of %.4f", got.Error, sd(exact))
	}
	near(t, "mean", mean(got.Values), mean(exact), 0.02*sd(exact))
	near(t, "sd", sd(got.Values)/sd(exact), 1, 0.01)
}

func TestOutcomesOfLevels(t *testing.T) {
	s := newSketch(t, 3)
	s.variable("x", study.Real, []float64{0, 1, 2})
	grade := s.variable("grade", study.Ordered, []float64{0, 1, 2})
	grade.Levels = []string{"low", "medium", "high"}
	s.vector("cut_grade", model.Cuts, -1, 1)
	l := s.law("grade", "ordered", "0.5 * x")
	l.Cutpoints = "cut_grade"
	q := ask("x", "grade", 0, 2)
	if _, err := FromLaw(context.Background(), s.m, q, s.draws(1), source(), Options{}); err == nil || !strings.Contains(err.Error(), "grade") {
		t.Errorf("levels left open: %v", err)
	}
	q.OutcomeLevels = []string{"medium", "high"}
	got, err := FromLaw(context.Background(), s.m, q, s.draws(1), source(), Options{})
	if err != nil {
		t.Fatal(err)
	}
	// P(medium or above) = logistic(predictor − first cut)
	near(t, "from", got.Expected.From[0], 1/(1+math.Exp(-1)), 1e-12)
	near(t, "to", got.Expected.To[0], 1/(1+math.Exp(-2)), 1e-12)
}

func TestBinomialIsAProbability(t *testing.T) {
	s := newSketch(t, 2)
	s.variable("x", study.Real, []float64{0, 1})
	s.variable("n", study.Count, []float64{10, 90})
	s.variable("k", study.Count, []float64{1, 2})
	s.law("k", "binomial", "x", "n")
	got, err := FromLaw(context.Background(), s.m, ask("x", "k", 0, 1), s.draws(1), source(), Options{})
	if err != nil {
		t.Fatal(err)
	}
	near(t, "from", got.Expected.From[0], 0.5, 1e-12)
	near(t, "to", got.Expected.To[0], 1/(1+math.Exp(-1)), 1e-12)
	if want := "as the probability in one trial, over these 2 rows, each row alike"; got.Words != want {
		t.Errorf("%q, want %q", got.Words, want)
	}

	// Of more zeros than a binomial has, a share 1 − 0.25 is left, whatever the trials.
	s = newSketch(t, 2)
	s.variable("x", study.Real, []float64{0, 1})
	s.variable("n", study.Count, []float64{10, 90})
	s.variable("k", study.Count, []float64{0, 2})
	s.law("k", "zero-inflated binomial", "x", "n", "0.25")
	if got, err = FromLaw(context.Background(), s.m, ask("x", "k", 0, 1), s.draws(1), source(), Options{}); err != nil {
		t.Fatal(err)
	}
	near(t, "from, inflated", got.Expected.From[0], 0.75*0.5, 1e-12)
	near(t, "to, inflated", got.Expected.To[0], 0.75/(1+math.Exp(-1)), 1e-12)
}

// An offset is each row's own, an exposure can live at a plate's level, and a
// computed variable follows what it is computed from.
func TestPlatesOffsetsAndComputed(t *testing.T) {
	s := newSketch(t, 4)
	s.plate("farm", 2, []int32{0, 0, 1, 1})
	x := s.variable("x", study.Real, []float64{1, 3})
	x.Plate = 0
	twice := s.variable("twice", study.Real, []float64{2, 2, 6, 6})
	twice.Computed = s.parse("2 * x")
	s.variable("hours", study.Positive, []float64{1, 2, 3, 4})
	s.variable("y", study.Count, []float64{0, 0, 0, 0})
	s.law("y", "Poisson", "0.1 * twice + log hours")
	got, err := FromLaw(context.Background(), s.m, study.Question{Exposure: "x", Outcome: "y", Shift: 1}, s.draws(1), source(), Options{})
	if err != nil {
		t.Fatal(err)
	}
	want := func(shift float64) float64 {
		return (3*math.Exp(0.2*(1+shift)) + 7*math.Exp(0.2*(3+shift))) / 4
	}
	near(t, "own values", got.Expected.From[0], want(0), 1e-12)
	near(t, "shifted", got.Expected.To[0], want(1), 1e-12)
	if got.Rows != 4 || got.Words != "over these 4 rows, each row alike" {
		t.Errorf("%d rows, %q", got.Rows, got.Words)
	}
}

// With "a population like these" the weights of the outermost groups vary from
// draw to draw: the sd of a mean of G group values is close to their sd / √(G+1)
// (Rubin 1981).
func TestPopulationAlike(t *testing.T) {
	const groups, each = 30, 4
	s := newSketch(t, groups*each)
	of := make([]int32, groups*each)
	z := make([]float64, groups*each)
	for i := range of {
		of[i] = int32(i / each)
		z[i] = float64(i / each)
	}
	s.plate("school", groups, of)
	s.variable("z", study.Real, z)
	s.variable("x", study.Real, z)
	s.variable("y", study.Real, z)
	s.law("y", "normal", "z * x", "1")
	q := ask("x", "y", 0, 1)
	q.Over = study.PopulationAlike
	got, err := FromLaw(context.Background(), s.m, q, s.draws(4000), source(), Options{})
	if err != nil {
		t.Fatal(err)
	}
	m, sum, spread := mean(got.Values), 0.0, 0.0
	for _, v := range got.Values {
		sum += (v - m) * (v - m)
	}
	for g := range groups {
		spread += math.Pow(float64(g)-(groups-1)/2.0, 2) / groups
	}
	near(t, "mean", m, (groups-1)/2.0, 0.1)
	near(t, "sd", math.Sqrt(sum/4000)/math.Sqrt(spread/(groups+1)), 1, 0.05)
	if !strings.Contains(got.Words, "weighed by group: school (30)") {
		t.Errorf("words: %q", got.Words)
	}
}

// Thinning takes draws and rows evenly; the same source gives the same values
// however many goroutines run; a cancelled run stops.
func TestThinningSameSeedAndCancel(t *testing.T) {
	s := newSketch(t, 5000)
	x := spreadOut(5000, 0, 1)
	s.variable("x", study.Real, x)
	s.variable("m", study.Real, x)
	s.variable("y", study.Real, x)
	s.law("m", "normal", "x", "1")
	s.law("y", "Poisson", "0.2 * m + x")
	run := func(opt Options) *Contrast {
		c, err := Simulate(context.Background(), s.m, causal.PinAndSimulate, nil, ask("x", "y", 0, 1), s.draws(3000), source(), opt)
		if err != nil {
			t.Fatal(err)
		}
		return c
	}
	a, b := run(Options{Budget: 1e6}), run(Options{Budget: 1e6})
	if len(a.Values) >= 3000 || len(a.Values) < fewestDraws || a.Rows >= 5000 || a.Rows < fewestRows {
		t.Errorf("%d draws and %d rows", len(a.Values), a.Rows)
	}
	for i := range a.Values {
		if a.Values[i] != b.Values[i] {
			t.Fatal("the same source gave two values")
		}
	}
	ctx, cancel := context.WithCancel(context.Background())
	told := 0
	_, err := Simulate(ctx, s.m, causal.PinAndSimulate, nil, ask("x", "y", 0, 1), s.draws(3000), source(), Options{Progress: func(done, of int) {
		told++
		cancel()
	}})
	if !errors.Is(err, context.Canceled) || told == 0 || told > 100 {
		t.Errorf("after %d reports: %v", told, err)
	}
}

// Exposures with levels are set by their words; a plate's mediator has one
// value per level; a computed outcome is averaged as it stands.
func TestWordsPlateMediatorsAndComputedOutcomes(t *testing.T) {
	s := newSketch(t, 4)
	s.plate("farm", 2, []int32{0, 0, 1, 1})
	crop := s.variable("crop", study.Category, []float64{0, 1})
	crop.Plate, crop.Levels = 0, []string{"oats", "rye"}
	size := s.variable("size", study.Real, []float64{3, 4})
	size.Plate = 0
	double := s.variable("double", study.Real, []float64{6, 6, 8, 8})
	double.Computed = s.parse("2 * size")
	s.vector("step", model.ZeroSum, 1.5, -1.5)
	s.law("size", "normal", "10 + step of crop", "1")
	q := study.Question{Exposure: "crop", Outcome: "double", From: &study.Setting{Word: "oats"}, To: &study.Setting{Word: "rye"}}
	got, err := Simulate(context.Background(), s.m, causal.PinAndSimulate, nil, q, s.draws(3), source(), Options{})
	if err != nil {
		t.Fatal(err)
	}
	near(t, "oats", got.Expected.From[1], 23, 1e-9)
	near(t, "rye against oats", got.Values[2], -6, 1e-9)
	q.To.Word = "wheat"
	if _, err := Simulate(context.Background(), s.m, causal.PinAndSimulate, nil, q, s.draws(3), source(), Options{}); err == nil || err.Error() != `crop has no level "wheat"` {
		t.Errorf("an unknown level: %v", err)
	}
	q = study.Question{Exposure: "crop", Outcome: "double", Shift: 1}
	if _, err := Simulate(context.Background(), s.m, causal.PinAndSimulate, nil, q, s.draws(3), source(), Options{}); err == nil || !strings.Contains(err.Error(), "not a shift") {
		t.Errorf("a shift of levels: %v", err)
	}
	if _, err := FromLaw(context.Background(), s.m, ask("crop", "bees", 0, 1), s.draws(3), source(), Options{}); err == nil || err.Error() != "bees is not in this fit" {
		t.Errorf("an outcome that is not there: %v", err)
	}
}
