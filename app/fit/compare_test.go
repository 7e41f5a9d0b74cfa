package fit

import (
	"context"
	"errors"
	"fmt"
	"math"
	"math/rand/v2"
	"os"
	"strings"
	"testing"

	"arrowroot/compile/study"
	"arrowroot/compile/table"
	"arrowroot/infer"
	"arrowroot/infer/summary"
)

// comparing makes a request of a study written out, with its table.
func comparing(t *testing.T, doc, csv string) CompareRequest {
	t.Helper()
	s, err := study.Read("made.arrowroot", []byte(doc))
	if err != nil {
		t.Fatal(err)
	}
	data, err := table.Read("made.csv", strings.NewReader(csv), table.Options{})
	if err != nil {
		t.Fatal(err)
	}
	return CompareRequest{Study: s, Question: s.Questions[0], Table: data, Seed: 1, Draws: 500}
}

func compared(t *testing.T, req CompareRequest) *Comparison {
	t.Helper()
	c, err := Compare(context.Background(), req, nil)
	if err != nil {
		t.Fatal(err)
	}
	return c
}

// A knownScore is one of testdata/studies/scores.json.
type knownScore struct {
	Values []float64 `json:"values"`
	Score  float64   `json:"score"`
	Units  []float64 `json:"units"`
	Wide   float64   `json:"wide"`
}

func knownScores(t *testing.T) map[string]knownScore {
	t.Helper()
	known := make(map[string]knownScore)
	readJSON(t, "scores.json", &known)
	return known
}

// scoresLike holds what a rival was scored against what is known: each unit
// within 0.05 and 2 % of what it costs, and their sum.
func scoresLike(t *testing.T, name string, s *Scored, want knownScore, tolerance float64) {
	t.Helper()
	if s.Withheld != "" {
		t.Errorf("%s: %s", name, s.Withheld)
	}
	if len(s.Unit) != len(want.Units) {
		t.Fatalf("%s: %d units, not %d", name, len(s.Unit), len(want.Units))
	}
	for i, x := range s.Unit {
		within(t, fmt.Sprintf("%s, unit %d", name, i+1), x, want.Units[i], 0.05+0.02*math.Abs(want.Units[i]))
	}
	within(t, name, s.Score, want.Score, tolerance)
	within(t, name+", wide", s.WideScore, want.Wide, tolerance)
}

// sleep is the conjugate normal model, twice: exact scores are known.
func sleep(t *testing.T, values []float64) CompareRequest {
	var csv strings.Builder
	fmt.Fprintln(&csv, "gain,dose")
	for i, v := range values {
		fmt.Fprintf(&csv, "%g,%d\n", v, i%3)
	}
	const law = `{"variable": "gain", "law": {"family": "normal", "arguments": {"sd": "2"}, "priors": {"alpha_gain": "normal with mean 0, sd 10"}}}`
	return comparing(t, `{
 "arrowroot": 1,
 "data": [{"name": "sleep", "file": "sleep.csv"}],
 "variables": [
  {"id": "gain", "scale": "real", "column": "gain", "range": [-5, 10]},
  {"id": "dose", "scale": "real", "column": "dose", "range": [0, 2]}
 ],
 "rivals": [{"name": "First", "nodes": [`+law+`, {"variable": "dose"}]}, {"name": "Second", "nodes": [`+law+`, {"variable": "dose"}]}],
 "questions": [{"exposure": "dose", "outcome": "gain", "from": 0, "to": 2}]
}`, csv.String())
}

// Exact scores of a conjugate model, and a rival against its own copy: no
// difference, no better one, no weights.
func TestScoresOfAConjugateModel(t *testing.T) {
	known := knownScores(t)["sleep_normal"]
	req := sleep(t, known.Values)
	req.Draws = 1000
	c := compared(t, req)
	for _, s := range c.Rivals {
		scoresLike(t, s.Rival, s, known, 0.1)
		if !s.None || s.Trust.Verdict == summary.Unusable || s.Replicates != 0 {
			t.Errorf("%s: no effect %v, %v, %d replicates", s.Rival, s.None, s.Trust, s.Replicates)
		}
	}
	p := c.Pairs[0]
	if p.Difference != 0 || p.Error != 0 || p.Undecided == "" || !p.ByLaws || c.Better != "" || c.Weights != nil || c.NoWeights == "" {
		t.Errorf("a copy: %+v, better %q, weights %v (%s)", p, c.Better, c.Weights, c.NoWeights)
	}
	if len(c.Units) != 10 || c.Units[0] != "row 1" || c.Plate != "" {
		t.Errorf("units %v by %q", c.Units, c.Plate)
	}
}

// Scores of studies whose every row's is known from outside. What the sum is
// off by is Monte Carlo error, and shrinks with the draws.
func TestScoresOfStudies(t *testing.T) {
	long(t)
	known := knownScores(t)
	draws, tolerance := 1000, 0.25
	if os.Getenv("ARROWROOT_LONG") != "" {
		draws, tolerance = 6000, 0.1
	}
	for _, name := range []string{"cars_normal", "mtcars_am_logit", "insectsprays_poisson", "warpbreaks_negbin"} {
		t.Run(name, func(t *testing.T) {
			t.Parallel()
			one := request(t, name)
			outcome := one.Study.Rivals[0].Diagram.Nodes[0].Variable
			two, err := (study.CopyRival{From: one.Rival, Name: "Again"}).Apply(one.Study)
			if err != nil {
				t.Fatal(err)
			}
			c := compared(t, CompareRequest{Study: two, Question: &study.Question{Outcome: outcome}, Table: one.Table, Seed: 1, Draws: draws})
			scoresLike(t, name, c.Rivals[0], known[name], tolerance)
		})
	}
}

// By reweighting one fit, and by fitting again without each unit, the scores
// are the same within the error of either; the units are rows, then groups
// whose effects are integrated.
func TestReweightingAgainstRefits(t *testing.T) {
	long(t)
	for _, made := range []struct {
		name      string
		req       func(*testing.T) CompareRequest
		tolerance float64
	}{
		{"rows", func(t *testing.T) CompareRequest { return sleep(t, knownScores(t)["sleep_normal"].Values) }, 0.06},
		{"batches", func(t *testing.T) CompareRequest {
			r := request(t, "dyestuff_oneway")
			return CompareRequest{Study: r.Study, Rivals: []string{r.Rival}, Question: &study.Question{Outcome: "yield"}, Table: r.Table, Seed: 1}
		}, 0.35},
	} {
		t.Run(made.name, func(t *testing.T) {
			t.Parallel()
			req := made.req(t)
			req.Draws = 1500
			no := &Incomparable{}
			c, err := contend(&req, req.Study.Rivals[0].Name, no)
			if err != nil || c == nil {
				t.Fatal(err, no.Reasons)
			}
			units := leave(&req, []*contender{c}, no)
			s, err := c.score(context.Background(), &req, units, nil, quiet)
			if err != nil {
				t.Fatal(err)
			}
			p := &predicting{contender: c, req: &req, run: &Request{Study: req.Study, Rival: c.rival, Question: req.Question, Table: req.Table, Seed: 7}, units: units}
			for u := range s.Unit {
				exact, err := p.leaveOut(context.Background(), s, u, nil)
				if err != nil {
					t.Fatal(err)
				}
				within(t, units.names[u], s.Unit[u], exact, made.tolerance)
			}
			if made.name == "batches" && (units.plate != "batch" || s.Replicates == 0 || s.Simulation > 0.2 || len(s.Unit) != 6) {
				t.Errorf("by %q, %d replicates with error %.2f, %d units", units.plate, s.Replicates, s.Simulation, len(s.Unit))
			}
		})
	}
}

func quiet(string) func(infer.Progress) { return nil }

const ditches = `{
 "arrowroot": 1,
 "data": [{"name": "ditches", "file": "ditches.csv"}],
 "variables": [
  {"id": "reeds", "scale": "real", "column": "reeds", "range": [-3, 3]},
  {"id": "frogs", "scale": "real", "column": "frogs", "range": [-4, 4]},
  {"id": "herons", "scale": "real", "column": "herons", "range": [-6, 6]},
  {"id": "mud", "scale": "positive", "column": "mud", "range": [0.1, 10]}
 ],
 "rivals": [%s],
 "questions": [{"exposure": "reeds", "outcome": "frogs", "from": 0, "to": 1%s}]
}`

// ditchData is an invented table: herons come for reeds and for frogs, so that
// they are a collider and tell much of frogs.
func ditchData(rows, gap int) string {
	rng := rand.New(rand.NewPCG(8, 9))
	var csv strings.Builder
	fmt.Fprintln(&csv, "reeds,frogs,herons,mud")
	for i := range rows {
		reeds := rng.NormFloat64()
		frogs := 0.3*reeds + rng.NormFloat64()
		herons := reeds + frogs + 0.5*rng.NormFloat64()
		seen := fmt.Sprint(herons)
		if i < gap {
			seen = ""
		}
		fmt.Fprintf(&csv, "%g,%g,%s,%g\n", reeds, frogs, seen, math.Exp(rng.NormFloat64()))
	}
	return csv.String()
}

func incomparable(t *testing.T, req CompareRequest, words ...string) {
	t.Helper()
	_, err := Compare(context.Background(), req, nil)
	var no *Incomparable
	if !errors.As(err, &no) {
		t.Fatalf("not blocked: %v", err)
	}
	for _, w := range words {
		if !strings.Contains(no.Error(), w) {
			t.Errorf("%q does not say %q", no.Error(), w)
		}
	}
}

// What SEMANTICS D1 forbids is blocked before anything is fitted.
func TestIncomparableRivals(t *testing.T) {
	arrows := func(name string, all ...string) string {
		text := `{"name": "` + name + `", "nodes": [{"variable": "reeds"}, {"variable": "frogs"}, {"variable": "herons"}], "arrows": [`
		for i, a := range all {
			from, to, _ := strings.Cut(a, " ")
			if i > 0 {
				text += ","
			}
			text += `{"from": "` + from + `", "to": "` + to + `"}`
		}
		return text + "]}"
	}
	made := func(gap int, rivals ...string) CompareRequest {
		return comparing(t, fmt.Sprintf(ditches, strings.Join(rivals, ","), ""), ditchData(30, gap))
	}
	incomparable(t, made(5, arrows("A", "reeds frogs"), arrows("B", "reeds frogs", "herons frogs")), "30 rows", "25 rows", "different rows", "5 rows lack herons in B")
	// Frogs are a root in B: its law there knows nothing of reeds, though its
	// arrows say that they hang together.
	incomparable(t, made(0, arrows("A", "reeds frogs"),
		`{"name": "B", "nodes": [{"variable": "frogs", "law": {"treat": "modelled"}}, {"variable": "reeds"}], "arrows": [{"from": "frogs", "to": "reeds"}]}`), "different knowledge")
	incomparable(t, made(0, arrows("A", "reeds frogs"), arrows("B", "frogs reeds")), "different knowledge")
	// Herons follow frogs in A, whose law of frogs does not read them.
	incomparable(t, made(0, arrows("A", "reeds frogs", "reeds herons", "frogs herons"), arrows("B", "reeds frogs", "reeds herons", "herons frogs")), "B predicts frogs from herons", "different knowledge")
	incomparable(t, made(0, `{"name": "A", "nodes": [{"variable": "reeds"}, {"variable": "frogs"}], "arrows": [{"from": "reeds", "to": "frogs"}]}`, arrows("B", "herons frogs")), "herons, which is not on the sheet of A")
	incomparable(t, made(0, arrows("A", "reeds frogs")), "only one rival")
	mud := func(name, law string) string {
		return `{"name": "` + name + `", "nodes": [{"variable": "reeds"}, {"variable": "mud", "law": {"family": "` + law + `"}}], "arrows": [{"from": "reeds", "to": "mud"}]}`
	}
	req := made(0, mud("A", "gamma"), mud("B", "hurdle gamma"))
	req.Question = &study.Question{Exposure: "reeds", Outcome: "mud"}
	incomparable(t, req, "different measures", "a probability of zero")
}

// Herons tell of frogs, so that a rival that lets them act on frogs predicts
// better than one by which they have nothing to do with frogs; what it says of
// causes is labelled for what it is (REQUIREMENTS M14).
func TestBetterIsNotCause(t *testing.T) {
	plain := `{"name": "Apart", "nodes": [{"variable": "reeds"}, {"variable": "frogs"}, {"variable": "herons"}], "arrows": [{"from": "reeds", "to": "frogs"}, {"from": "reeds", "to": "herons"}]}`
	collider := `{"name": "Through herons", "nodes": [{"variable": "reeds"}, {"variable": "frogs"}, {"variable": "herons"}], "arrows": [{"from": "reeds", "to": "frogs"}, {"from": "reeds", "to": "herons"}, {"from": "herons", "to": "frogs"}], "arcs": [{"between": ["reeds", "frogs"]}]}`
	req := comparing(t, fmt.Sprintf(ditches, plain+","+collider, `, "held": ["herons"]`), ditchData(150, 0))
	c := compared(t, req)
	apart, through := c.Rivals[0], c.Rivals[1]
	if c.Better != "Through herons" || c.NoBetter != nil || len(c.Weights) != 2 || !(c.Weights[1] > 0.9) {
		t.Errorf("better %q (%v), weights %v", c.Better, c.NoBetter, c.Weights)
	}
	if through.Identified || through.HeldEnough || through.Why == "" {
		t.Errorf("the better predictor reads as an effect: %+v", through)
	}
	if !apart.Identified {
		t.Error("the other is not identified")
	}
	if p := c.Pairs[0]; p.Higher != "Through herons" || p.ByLaws || !(p.Difference > 4 && p.Difference > 2*p.Error) {
		t.Errorf("%+v", p)
	}
	// The same fits again, and with too few rows nobody is named.
	req.Have = map[string]*Result{}
	for _, s := range c.Rivals {
		req.Have[s.Rival] = &Result{Seed: 1, Full: s.Fitted, Fingerprint: s.Fitted.Model.Fingerprint()}
	}
	again := compared(t, req)
	for i, s := range again.Rivals {
		if !s.Reused || s.Score != c.Rivals[i].Score {
			t.Errorf("%s: reused %v, %g and %g", s.Rival, s.Reused, s.Score, c.Rivals[i].Score)
		}
	}
	few := comparing(t, fmt.Sprintf(ditches, plain+","+collider, ""), ditchData(60, 0))
	if c := compared(t, few); c.Better != "" || len(c.NoBetter) != 1 || !strings.Contains(c.Pairs[0].Undecided, "60 units") {
		t.Errorf("with 60 units: better %q, %v", c.Better, c.NoBetter)
	}
}

// A cancelled comparison gives nothing.
func TestCompareCancelled(t *testing.T) {
	ctx, cancel := context.WithCancel(context.Background())
	req := sleep(t, knownScores(t)["sleep_normal"].Values)
	c, err := Compare(ctx, req, func(ComparingProgress) { cancel() })
	if c != nil || !errors.Is(err, context.Canceled) {
		t.Errorf("%v, %v", c, err)
	}
}
