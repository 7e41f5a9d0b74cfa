package fit

import (
	"context"
	"errors"
	"fmt"
	"math"
	"math/rand/v2"
	"strings"
	"testing"

	"arrowroot/compile/study"
	"arrowroot/compile/table"
	"arrowroot/infer"
	"arrowroot/infer/summary"
)

// sketched makes a request out of a study's variables, arrows and question as
// JSON, with rows of its own.
func sketched(t *testing.T, variables, rivals, question, rows string) Request {
	t.Helper()
	s, err := study.Read("plots.arrowroot", fmt.Appendf(nil, `{"arrowroot": 1, "data": [{"name": "plots", "file": "plots.csv"}],
 "variables": [%s], "rivals": [{"name": "A", %s}], "questions": [%s]}`, variables, rivals, question))
	if err != nil {
		t.Fatal(err)
	}
	data, err := table.Read("plots.csv", strings.NewReader(rows), table.Options{})
	if err != nil {
		t.Fatal(err)
	}
	req := Request{Study: s, Rival: "A", Table: data, Seed: 1, Draws: 250}
	if len(s.Questions) > 0 {
		req.Question = s.Questions[0]
	}
	return req
}

const rainAndYield = `{"id": "rain", "scale": "real", "column": "rain", "range": [-2, 2]}, {"id": "yield", "scale": "real", "column": "yield", "range": [-3, 3]}`

// rainRows is yield = 0.2 + 0.7 rain + normal noise of sd 0.5.
func rainRows(n int) string {
	rng := rand.New(rand.NewPCG(5, 6))
	var b strings.Builder
	fmt.Fprintln(&b, "rain,yield")
	for range n {
		x := rng.NormFloat64()
		fmt.Fprintf(&b, "%.5f,%.5f\n", x, 0.2+0.7*x+0.5*rng.NormFloat64())
	}
	return b.String()
}

// Where no chain can start, the sentence names the variable at fault and says
// what to change.
func TestNoPlaceToStart(t *testing.T) {
	t.Parallel()
	err := fitTraps(t, trapRows, func(s *study.Study) {
		s.Rivals[0].Diagram.Node("bees").Law = &study.Law{
			Formula: "log rate = sqrt(a - 1000) + beta_hedge_bees * hedge + beta_hours_bees * hours",
			Priors:  []study.Prior{{Parameter: "a", Text: "normal with mean 0, sd 1"}},
		}
	})
	if err == nil {
		t.Fatal("no error")
	}
	for _, part := range []string{"no place to start", "the law of bees", "Change that prior, law or formula"} {
		if !strings.Contains(err.Error(), part) {
			t.Errorf("%q does not say %q", err, part)
		}
	}
}

// A computed outcome goes through the law it is computed from. profit is
// exp(yield), so that with normal noise its expectation is that of a
// log-normal: exp(a + b rain + sd²/2). With the numbers that made the rows the
// change from 0 to 1 is exp(0.2 + 0.125) (exp(0.7) − 1) = 1.403.
func TestComputedOutcome(t *testing.T) {
	t.Parallel()
	req := sketched(t, rainAndYield+`, {"id": "profit", "scale": "positive", "computed": "exp yield"}`,
		`"arrows": [{"from": "rain", "to": "yield"}, {"from": "yield", "to": "profit"}]`,
		`{"exposure": "rain", "outcome": "profit", "from": 0, "to": 1}`, rainRows(150))
	r := run(t, req)
	e := r.Effect
	exact := summary.Of(r.Full.of(t, func(p func(string) float64) float64 {
		sd := p("sigma_yield")
		return math.Exp(p("alpha_yield")+sd*sd/2) * (math.Exp(p("beta_rain_yield")) - 1)
	}), 0.9)
	within(t, "full", e.Full.Centre, exact.Centre, 0.05*exact.Spread)
	within(t, "crude against what made the rows", e.Crude.Centre, 1.403, 3*e.Crude.Spread)
	within(t, "crude", e.Crude.Centre, exact.Centre, 0.3*exact.Spread)
	if e.Adjusted == nil || e.LawsDisagree || e.Headline() != e.Full {
		t.Errorf("crude %+v, full %+v", e.Crude.Summary, e.Full.Summary)
	}

	// Two variables behind it: there is no single law to fit.
	req = sketched(t, rainAndYield+`, {"id": "margin", "scale": "real", "computed": "yield - rain"}`,
		`"arrows": [{"from": "rain", "to": "yield"}, {"from": "yield", "to": "margin"}, {"from": "rain", "to": "margin"}]`,
		`{"exposure": "rain", "outcome": "margin", "from": 0, "to": 1}`, rainRows(150))
	e = run(t, req).Effect
	if e.Crude != nil || e.Adjusted != nil || e.CrudeRefusal != "margin is computed from yield and rain, so that no single law of it can be fitted" {
		t.Errorf("crude %v, %q", e.Crude, e.CrudeRefusal)
	}
	within(t, "margin", e.Full.Centre, 0.7-1, 3*e.Full.Spread)
}

// A question that lacks something blocks its answer, not the fit and its paint.
func TestIncompleteQuestion(t *testing.T) {
	t.Parallel()
	for question, says := range map[string]string{
		`{"exposure": "rain", "outcome": "yield"}`:                      "rain",
		`{"exposure": "rain", "from": 0, "to": 1}`:                      "outcome",
		`{"exposure": "rain", "outcome": "hail", "from": 0, "to": 1}`:   "hail",
		`{"exposure": "kind", "outcome": "yield", "shift": 1}`:          "kind",
		`{"exposure": "kind", "outcome": "yield", "from":"a","to":"x"}`: "kind",
		`{"exposure": "yield", "outcome": "kind", "from": 0, "to": 1}`:  "kind",
	} {
		rows := "rain,yield,kind\n0,1,a\n1,2,b\n2,3.5,c\n3,3,a\n4,6,b\n5,5,c\n"
		arrows := `"arrows": [{"from": "rain", "to": "yield"}, {"from": "kind", "to": "yield"}]`
		if strings.Contains(question, `"outcome": "kind"`) {
			arrows = `"arrows": [{"from": "rain", "to": "yield"}, {"from": "yield", "to": "kind"}]`
		}
		req := sketched(t, rainAndYield+`, {"id": "kind", "scale": "category", "column": "kind"}, {"id": "hail", "scale": "real", "unmeasured": true}`, arrows, "", rows)
		s, err := study.Read("q.arrowroot", fmt.Appendf(nil, `{"arrowroot": 1, "variables": [{"id": "rain"}, {"id": "yield"}, {"id": "kind"}, {"id": "hail"}], "questions": [%s]}`, question))
		if err != nil {
			t.Fatal(err)
		}
		req.Question, req.Draws = s.Questions[0], 20
		r := run(t, req)
		if r.Effect != nil || r.Unanswered == nil || !strings.Contains(r.Unanswered.Error(), says) {
			t.Errorf("%s: effect %v, %v", question, r.Effect, r.Unanswered)
			continue
		}
		if len(r.Arrows) != 2 || len(r.Nodes) == 0 || !(r.Arrows[0].Spread > 0) {
			t.Errorf("%s: not painted", question)
		}
		req.Answer = true
		var blocked *Blocked
		if _, err := Run(context.Background(), req, nil); !errors.As(err, &blocked) {
			t.Errorf("%s: %v, want a *Blocked", question, err)
		}
	}
}

// A rival without an arrow out of the exposure says that there is no effect:
// exactly no change, and what the data show is an association, which the arrows
// may or may not explain.
func TestNoEffectDrawn(t *testing.T) {
	t.Parallel()
	for name, rival := range map[string]string{
		"no arrows":     `"nodes": [{"variable": "rain"}, {"variable": "yield"}]`,
		"other way":     `"arrows": [{"from": "yield", "to": "rain"}]`,
		"unnamed cause": `"nodes": [{"variable": "rain"}, {"variable": "yield"}], "arcs": [{"between": ["rain", "yield"]}]`,
	} {
		req := sketched(t, rainAndYield, rival, `{"exposure": "rain", "outcome": "yield", "from": 0, "to": 1}`, rainRows(200))
		r := run(t, req)
		e := r.Effect
		if e == nil || !e.Identified || !e.None {
			t.Fatalf("%s: %+v", name, e)
		}
		// Without arrows the two should not go together at all, and they do; the
		// other two diagrams explain it.
		if contradicted := name == "no arrows"; e.LawsDisagree != contradicted || (e.Headline() == nil) != contradicted {
			t.Errorf("%s: laws disagree %v, headline %v", name, e.LawsDisagree, e.Headline())
		}
		if e.Full.Centre != 0 || e.Full.Low != 0 || e.Full.High != 0 || e.Full.From != e.Full.To && e.Full.From.Centre != e.Full.To.Centre {
			t.Errorf("%s: full model %+v", name, e.Full.Summary)
		}
		if !covers(e.Crude, 0.7) || !e.Crude.Association {
			t.Errorf("%s: crude %+v", name, e.Crude.Summary)
		}
	}
}

// A ratio of expectations that may be zero is refused, and the difference is
// offered; also where all outcomes seen are positive and the comparison
// reaches beyond them: the line through these is at 0 where rain is −6.
func TestRatioAcrossZero(t *testing.T) {
	t.Parallel()
	var rows strings.Builder
	fmt.Fprintln(&rows, "rain,yield")
	for i := range 40 {
		x := -2 + 4*float64(i)/39
		fmt.Fprintf(&rows, "%.4f,%.4f\n", x, 4.2+0.7*x+0.4*math.Sin(float64(7*i)))
	}
	for from, refused := range map[string]bool{"-6": true, "0": false} {
		req := sketched(t, `{"id": "rain", "scale": "real", "column": "rain", "range": [-7, 7]}, {"id": "yield", "scale": "real", "column": "yield", "range": [0.1, 9]}`,
			`"arrows": [{"from": "rain", "to": "yield"}]`,
			`{"exposure": "rain", "outcome": "yield", "from": `+from+`, "to": 1, "as": "ratio"}`, rows.String())
		r := run(t, req)
		e := r.Effect
		if e == nil {
			t.Fatal(r.Unanswered)
		}
		if refused && (e.Full != nil || e.Crude != nil || e.Headline() != nil || !strings.Contains(e.Refusal, "expected yield") || !strings.Contains(e.Refusal, "ask for the difference")) {
			t.Errorf("from %s: %v, %q", from, e.Full, e.Refusal)
		}
		if !refused && (e.Full == nil || e.Refusal != "") {
			t.Errorf("from %s: %q", from, e.Refusal)
		}
	}
}

// The level of the question is that of every interval.
func TestLevelOfIntervals(t *testing.T) {
	t.Parallel()
	for _, level := range []float64{0.5, 0.95} {
		req := sketched(t, rainAndYield, `"arrows": [{"from": "rain", "to": "yield"}]`,
			`{"exposure": "rain", "outcome": "yield", "from": 0, "to": 1}`, rainRows(100))
		copied := *req.Question
		copied.Level = level
		req.Question = &copied
		r := run(t, req)
		for _, s := range []summary.Summary{r.Effect.Crude.Summary, r.Effect.Adjusted.Summary, r.Effect.Full.Summary, r.Effect.Full.From, r.Arrows[0].Summary, r.Full.Quantities[0].Summary} {
			// Nearly normal, so the half width is a normal quantile of sds.
			want := math.Sqrt2 * math.Erfinv(level)
			if s.Level != level || !(math.Abs((s.High-s.Low)/2/s.Spread-want) < 0.12) {
				t.Errorf("level %g: %+v", level, s)
			}
		}
		if word := fmt.Sprintf("%g %%", 100*level); !strings.Contains(r.Arrows[0].Words, word) {
			t.Errorf("%q does not say %s", r.Arrows[0].Words, word)
		}
	}
}

// Draws too few to judge make no verdict but unusable, and no reason says NaN.
func TestFewDraws(t *testing.T) {
	t.Parallel()
	for _, draws := range []int{1, 3, 7} {
		req := sketched(t, rainAndYield, `"arrows": [{"from": "rain", "to": "yield"}]`,
			`{"exposure": "rain", "outcome": "yield", "from": 0, "to": 1}`, rainRows(50))
		req.Draws = draws
		r := run(t, req)
		for _, q := range r.Full.Quantities {
			if q.Constant || q.Trust.String() != "unusable: too few draws to judge" {
				t.Errorf("%d draws: %s is %v", draws, q.Name, q.Trust)
			}
		}
		if n := r.Effect.Full; n.Trust.Verdict != summary.Unusable || !strings.HasPrefix(n.Trust.Reasons[0], "rain → yield, full model: too few draws") {
			t.Errorf("%d draws: %v", draws, n.Trust)
		}
		if r.Effect.LawsDisagree {
			t.Errorf("%d draws: laws cannot be said to disagree", draws)
		}
	}
}

// What a request leaves out is not computed.
func TestQuantitiesAlone(t *testing.T) {
	t.Parallel()
	req := sketched(t, rainAndYield, `"arrows": [{"from": "rain", "to": "yield"}]`,
		`{"exposure": "rain", "outcome": "yield", "from": 0, "to": 1}`, rainRows(50))
	req.NoEffects, req.NoPaint = true, true
	if r := run(t, req); r.Effect != nil || r.Arrows != nil || r.Nodes != nil || len(r.Full.Quantities) != 3 {
		t.Errorf("%+v", r)
	}
}

// A run that is stopped before all numbers are there headlines none of them.
func TestCutIsNoAnswer(t *testing.T) {
	t.Parallel()
	req := sketched(t, rainAndYield, `"arrows": [{"from": "rain", "to": "yield"}]`,
		`{"exposure": "rain", "outcome": "yield", "from": 0, "to": 1}`, rainRows(50))
	req.Draws = 1_000_000
	ctx, cancel := context.WithCancel(context.Background())
	defer cancel()
	r, err := Run(ctx, req, func(p infer.Progress) {
		if !p.Warming && p.Done > 4000 {
			cancel()
		}
	})
	if err != nil {
		t.Fatal(err)
	}
	e := r.Effect
	if !r.Cut || !e.Cut || e.Headline() != nil || e.Crude != nil || e.CrudeRefusal != stopped {
		t.Errorf("%+v", e)
	}
}

// A crude law that is the full model is not sampled again.
func TestSameModelIsFittedOnce(t *testing.T) {
	t.Parallel()
	req := sketched(t, rainAndYield, `"arrows": [{"from": "rain", "to": "yield"}]`,
		`{"exposure": "rain", "outcome": "yield", "from": 0, "to": 1}`, rainRows(50))
	e := run(t, req).Effect
	if e.Crude.Centre != e.Full.Centre || e.Crude.Association {
		t.Errorf("crude %v, full %v", e.Crude.Centre, e.Full.Centre)
	}
}
