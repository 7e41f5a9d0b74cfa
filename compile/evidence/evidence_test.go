package evidence

import (
	"context"
	"fmt"
	"math"
	"math/rand/v2"
	"os"
	"reflect"
	"slices"
	"strings"
	"testing"

	"arrowroot/compile/causal"
	"arrowroot/compile/study"
	"arrowroot/compile/table"
)

func tested(t testing.TB, req Request) *Evidence {
	t.Helper()
	e, err := Test(context.Background(), req, nil)
	if err != nil {
		t.Fatal(err)
	}
	return e
}

// Under a true independence p is under 0.05 in 5 % of data sets and the
// interval of 90 % leaves 0 out in 10 %, whatever both sides are measured in,
// with a common cause that bends. The count lies within three binomial sds and a
// slack of 1.5 % for small samples.
func TestNominalRateOfEveryPair(t *testing.T) {
	scales := study.Scales
	reps := 200
	if os.Getenv("ARROWROOT_LONG") != "" {
		reps = 2000
	}
	for i, a := range scales {
		for j, b := range scales[:i+1] {
			rng := rand.New(rand.NewPCG(uint64(i), uint64(j)))
			n := 150
			flagged, outside := 0, 0
			for range reps {
				w := newWorld("z -> a\nz -> b")
				var x, y, z []float64
				for range n {
					v := rng.NormFloat64()
					bent := 0.7*v + 0.3*(v*v-1)
					x, y, z = append(x, draw(rng, a, bent)), append(y, draw(rng, b, bent)), append(z, v)
				}
				w.numbers("z", study.Real, z)
				w.add("a", a, x)
				w.add("b", b, y)
				f := tested(t, w.request(t)).Findings[0]
				if f.P < 0.05 {
					flagged++
				}
				if f.Low > 0 || f.High < 0 {
					outside++
				}
			}
			sds := func(p float64) float64 { return 3 * math.Sqrt(p*(1-p)/float64(reps)) }
			if rate := float64(flagged) / float64(reps); rate > 0.05+sds(0.05)+0.015 {
				t.Errorf("%s and %s: flagged in %.3f", a, b, rate)
			}
			if rate := float64(outside) / float64(reps); rate > 0.10+sds(0.1)+0.015 || a != study.Category && b != study.Category && rate < 0.10-sds(0.1) {
				t.Errorf("%s and %s: 0 outside in %.3f", a, b, rate)
			}
		}
	}
}

// Rows of a farm share a baseline, and one side has a single value for each
// farm: taken row by row far too many would be flagged.
func TestNominalRateInGroups(t *testing.T) {
	rng := rand.New(rand.NewPCG(3, 5))
	reps, flagged, byRow := 400, 0, 0
	for range reps {
		w := newWorld("z -> a\nz -> b")
		w.plate = "farm"
		var x, y, z []float64
		for farm := range 40 {
			cause, baseline := rng.NormFloat64(), 1.2*rng.NormFloat64()
			hedge := cause + rng.NormFloat64()
			for range 4 {
				x, y, z = append(x, hedge), append(y, draw(rng, study.Count, 0.5*cause+baseline)), append(z, cause)
				w.columns["farm"] = append(w.columns["farm"], fmt.Sprint("F", farm))
			}
		}
		w.numbers("z", study.Real, z)
		w.numbers("a", study.Real, x)
		w.numbers("b", study.Count, y)
		req := w.request(t)
		f := tested(t, req).Findings[0]
		if f.P < 0.05 {
			flagged++
		}
		if f.Groups != 40 || f.Plate != "farm" {
			t.Fatalf("%d groups of %s", f.Groups, f.Plate)
		}
		req.Study, _ = study.RemovePlate{Name: "farm"}.Apply(req.Study)
		if tested(t, req).Findings[0].P < 0.05 {
			byRow++
		}
	}
	if rate := float64(flagged) / float64(reps); rate > 0.05+0.033+0.015 { // 3 sds and a slack
		t.Errorf("flagged in %.3f", rate)
	}
	if byRow < 2*flagged {
		t.Errorf("row by row %d would be flagged, by farm %d: the groups make no difference", byRow, flagged)
	}
}

// linear draws n rows of a linear model along typed arrows, all coefficients
// 0.6 with the signs of a fixed generator.
func linear(rng *rand.Rand, order []string, parents map[string][]string, n int) map[string][]float64 {
	out := map[string][]float64{}
	for _, id := range order {
		x := make([]float64, n)
		for i := range x {
			x[i] = rng.NormFloat64()
			for _, p := range parents[id] {
				x[i] += 0.6 * out[p][i]
			}
		}
		out[id] = x
	}
	return out
}

// Data from a diagram's own arrows flag it in at most 5 % of data sets; with an
// arrow dropped the independence of its two ends tops the list, and the arrow is
// the one proposed.
func TestOwnDiagramAndDroppedArrow(t *testing.T) {
	order := []string{"a", "b", "c", "d", "e", "f"}
	parents := map[string][]string{"b": {"a"}, "c": {"a"}, "d": {"b", "c"}, "e": {"d"}, "f": {"c", "e"}}
	arrows := func(without string) string {
		var lines []string
		for _, child := range order {
			lines = append(lines, child)
			for _, p := range parents[child] {
				if line := p + " -> " + child; line != without {
					lines = append(lines, line)
				}
			}
		}
		return strings.Join(lines, "\n")
	}
	rng := rand.New(rand.NewPCG(8, 1))
	alarms, reps := 0, 200
	for range reps {
		w := newWorld(arrows(""))
		for id, x := range linear(rng, order, parents, 200) {
			w.numbers(id, study.Real, x)
		}
		if tested(t, w.request(t)).Contradicted > 0 {
			alarms++
		}
	}
	if rate := float64(alarms) / float64(reps); rate > falseAlarm+0.046 { // 3 sds
		t.Errorf("the right diagram is contradicted in %.3f", rate)
	}
	data := linear(rng, order, parents, 1000)
	for child, of := range parents {
		for _, p := range of {
			w := newWorld(arrows(p + " -> " + child))
			for id, x := range data {
				w.numbers(id, study.Real, x)
			}
			e := tested(t, w.request(t))
			top := e.Findings[0]
			ends := []string{e.Graph.Names[top.A[0]], e.Graph.Names[top.B[0]]}
			slices.Sort(ends)
			want := []string{p, child}
			slices.Sort(want)
			if top.Verdict != Contradicted || !reflect.DeepEqual(ends, want) {
				t.Errorf("without %s → %s the first is %s", p, child, top.Sentence)
			}
			if r := top.Repair; r == nil || r.From != p && r.From != child || !strings.Contains(top.Sentence, "would account for it") {
				t.Errorf("without %s → %s: %+v", p, child, r)
			} else if _, err := r.Edit.Apply(w.request(t).Study); err != nil {
				t.Error(err)
			}
		}
	}
}

// A repair keeps to the tiers and closes no cycle; where neither arrow will do
// an unmeasured common cause is proposed.
func TestRepairKeepsToTiers(t *testing.T) {
	rng := rand.New(rand.NewPCG(4, 4))
	w := newWorld("a\nb")
	data := linear(rng, []string{"a", "b"}, map[string][]string{"b": {"a"}}, 300)
	w.numbers("a", study.Real, data["a"])
	w.numbers("b", study.Real, data["b"])
	req := w.request(t)
	for _, c := range []struct {
		a, b     int
		from, to string
	}{{0, 0, "a", "b"}, {1, 2, "a", "b"}, {2, 1, "b", "a"}} {
		s := req.Study
		for id, tier := range map[string]int{"a": c.a, "b": c.b} {
			to := *s.Variable(id)
			to.Tier = tier
			s, _ = study.ChangeVariable{ID: id, To: to}.Apply(s)
		}
		with := req
		with.Study = s
		if r := tested(t, with).Findings[0].Repair; r == nil || r.From != c.from || r.To != c.to {
			t.Errorf("tiers %d and %d: %+v", c.a, c.b, r)
		}
	}
	w = newWorld("a -> m\nm -> b")
	data = linear(rng, []string{"a", "m", "b"}, map[string][]string{"m": {"a"}, "b": {"m", "a"}}, 400)
	for id, x := range data {
		w.numbers(id, study.Real, x)
	}
	req = w.request(t)
	req.Question = &study.Question{Exposure: "m", Outcome: "a"} // an arrow into a would be likelier, but closes a cycle
	if r := tested(t, req).Findings[0].Repair; r == nil || r.From != "a" || r.To != "b" {
		t.Errorf("%+v", r)
	}
	for id, tier := range map[string]int{"a": 2, "b": 1} { // against the drawn arrows: only an arc is left
		to := *req.Study.Variable(id)
		to.Tier = tier
		req.Study, _ = study.ChangeVariable{ID: id, To: to}.Apply(req.Study)
	}
	if r := tested(t, req).Findings[0].Repair; r == nil || !r.Arc {
		t.Errorf("%+v", r)
	} else if _, err := r.Edit.Apply(req.Study); err != nil {
		t.Error(err)
	}
}

// The implications of stories S1 and S4: what is implied is among the findings
// or tested on request, what an unmeasured variable makes false is not, and
// promises about unmeasured variables are listed as never tested.
func TestStories(t *testing.T) {
	statement := func(req Request, a, b string, given ...string) causal.Independence {
		g, err := req.Study.Graph(req.Rival)
		if err != nil {
			t.Fatal(err)
		}
		s := causal.Independence{A: []int{g.Index(a)}, B: []int{g.Index(b)}}
		for _, id := range given {
			s.Given = append(s.Given, g.Index(id))
		}
		slices.Sort(s.Given)
		return s
	}
	rng := rand.New(rand.NewPCG(11, 4))
	fill := func(w *world, order []string, parents map[string][]string, n int, hidden ...string) {
		w.unmeasured = hidden
		for id, x := range linear(rng, order, parents, n) {
			if !slices.Contains(hidden, id) {
				w.numbers(id, study.Real, x)
			}
		}
	}
	// S1, rival R1 has no arrow H → B; the data come from the diagram with it.
	order := []string{"L", "S", "U", "W", "E", "H", "P", "F", "B", "O"}
	parents := map[string][]string{"H": {"L", "S", "U"}, "P": {"L", "U"}, "F": {"S", "H"}, "B": {"P", "F", "H"}, "O": {"B", "W", "E"}}
	w := newWorld("L, S, U -> H\nL, U -> P\nS, H -> F\nP, F -> B\nB, W, E -> O")
	fill(w, order, parents, 800, "U")
	e := tested(t, w.request(t))
	name := func(nodes []int) string { return e.Graph.Names[nodes[0]] }
	if top := e.Findings[0]; top.Verdict != Contradicted || name(top.A)+name(top.B) != "BH" && name(top.A)+name(top.B) != "HB" || top.Repair.From != "H" || top.Repair.To != "B" {
		t.Errorf("S1: %s", e.Findings[0].Sentence)
	}
	if len(e.Untested) == 0 || !strings.Contains(e.Untested[0].Sentence, "U was not measured") {
		t.Errorf("S1: %+v", e.Untested)
	}
	for _, f := range e.Findings {
		if name(f.A)+name(f.B) == "PH" || name(f.A)+name(f.B) == "HP" {
			t.Errorf("S1: %s is listed, though U makes it false", f.Claim)
		}
	}
	// S4: the data come from RN (no W → Y), so that RW (no N → Y) fails.
	order = []string{"Z", "G", "U", "R", "K", "N", "W", "Y"}
	parents = map[string][]string{"K": {"Z", "G", "U"}, "N": {"K"}, "W": {"K", "R", "G"}, "Y": {"N", "R", "U"}}
	common := "Z, G, U -> K\nK -> N\nK, R, G -> W\nU, R -> Y\n"
	for rival, c := range map[string]struct {
		arrow   string
		promise string
		verdict Verdict
	}{"RN": {"N -> Y", "W", Holds}, "RW": {"W -> Y", "N", Contradicted}} {
		w := newWorld(common + c.arrow)
		fill(w, order, parents, 2000, "U")
		req := w.request(t)
		// Given K, G and R the mediator of the other way is unrelated to Y in
		// one rival; the wrong rival says so of the wrong one.
		given := []string{"K", "G", "R"}
		s := statement(req, c.promise, "Y", given...)
		g, _ := req.Study.Graph("drawn")
		if !causal.Separated(g, s.A, s.B, s.Given) {
			t.Fatalf("%s does not imply it", rival)
		}
		req.Statements = []causal.Independence{s}
		if f := tested(t, req).Findings[0]; f.Verdict != c.verdict {
			t.Errorf("S4, %s: %s", rival, f.Sentence)
		}
	}
}

// Rows with a missing entry are left out of the statements that need it, and
// counted; a statement with a variable that has no column is never tested.
func TestMissingRows(t *testing.T) {
	rng := rand.New(rand.NewPCG(2, 2))
	w := newWorld("z -> a\nz -> b\nz -> c\nz -> gone")
	data := linear(rng, []string{"z", "a", "b", "c"}, map[string][]string{"a": {"z"}, "b": {"z"}, "c": {"z"}}, 100)
	for i := range 10 {
		data["a"][3*i] = nan
	}
	for id, x := range data {
		w.numbers(id, study.Real, x)
	}
	e := tested(t, w.request(t))
	if len(e.Findings) != 3 {
		t.Fatalf("%d findings", len(e.Findings))
	}
	for _, f := range e.Findings {
		if with := strings.Contains(f.Key, "a"); with && (f.Rows != 90 || len(f.Lost) != 1 || f.Lost[0] != Loss{"a", 10}) || !with && f.Rows != 100 {
			t.Errorf("%s: %d rows, %v", f.Key, f.Rows, f.Lost)
		}
	}
	if len(e.Untested) != 3 || !strings.Contains(e.Untested[0].Sentence, "gone is not bound to a column") {
		t.Errorf("%+v", e.Untested)
	}
}

// Odd data are no fault: constants, copies, one row, no row.
func TestOddData(t *testing.T) {
	for n, copies := range map[int]bool{1: false, 8: true, 40: true} {
		w := newWorld("z -> a\nz -> b\nk")
		var x, k []float64
		for i := range n {
			x, k = append(x, float64(i%7)), append(k, 1)
		}
		for _, id := range []string{"z", "a", "b"} {
			w.numbers(id, study.Real, x)
		}
		w.numbers("k", study.Real, k)
		e := tested(t, w.request(t))
		if !slices.ContainsFunc(e.Untested, func(u Untested) bool { return u.Reason == "k is the same in all rows that are used" }) {
			t.Errorf("%d rows: nothing is said of the constant: %+v", n, e.Untested)
		}
		for _, f := range e.Findings {
			if f.Verdict != TooFew {
				t.Errorf("%d rows, copies %v: %s", n, copies, f.Sentence)
			}
			if strings.Contains(f.Sentence, "NaN") {
				t.Error(f.Sentence)
			}
		}
	}
	req := example(t)
	req.Table = nil
	if _, err := Test(context.Background(), req, nil); err == nil {
		t.Error("no data, no error")
	}
}

// The rows that a study keeps are those tested, and being chosen counts as
// known: what the choice ties together is not tested.
func TestChosenRows(t *testing.T) {
	rng := rand.New(rand.NewPCG(6, 6))
	w := newWorld("a -> s\nb -> s")
	data := linear(rng, []string{"a", "b", "s"}, map[string][]string{"s": {"a", "b"}}, 400)
	for id, x := range data {
		w.numbers(id, study.Real, x)
	}
	req := w.request(t)
	if f := tested(t, req).Findings[0]; f.Verdict == Contradicted {
		t.Fatal(f.Sentence)
	}
	low := 0.0
	s, err := study.AddData{Data: study.Data{Name: "world", File: "world.csv", Keep: []study.Condition{{Variable: "s", Low: &low}}}}.Apply(req.Study)
	if err != nil {
		t.Fatal(err)
	}
	req.Study = s
	e := tested(t, req)
	if e.Rows >= 300 || e.Rows < 100 || len(e.Findings) != 0 || len(e.Untested) != 1 || e.Untested[0].Reason != "the rows were chosen by the filter on s, which ties the two together" {
		t.Errorf("%d rows, %d findings, %+v", e.Rows, len(e.Findings), e.Untested)
	}
}

// A negative control shows the confounding that is not held, and none once
// enough is.
func TestNegativeControls(t *testing.T) {
	rng := rand.New(rand.NewPCG(5, 9))
	arrows := "c -> x\nc -> y\nx -> y\nc -> other\nc -> early"
	parents := map[string][]string{"x": {"c"}, "y": {"c", "x"}, "other": {"c", "u"}, "early": {"c"}}
	order := []string{"c", "u", "x", "y", "other", "early"}
	kinds := func(e *Evidence) (words []string) {
		for _, c := range e.Controls {
			words = append(words, fmt.Sprint(e.Graph.Names[c.Node], c.Kind))
		}
		return words
	}
	for _, hidden := range []bool{false, true} {
		if hidden { // a cause of exposure and control outcome that nobody drew
			parents["x"] = []string{"c", "u"}
		}
		w := newWorld(arrows)
		for id, x := range linear(rng, order, parents, 600) {
			if id != "u" {
				w.numbers(id, study.Real, x)
			}
		}
		req := w.request(t)
		req.Question = &study.Question{Exposure: "x", Outcome: "y", Held: []string{"c"}}
		e := tested(t, req)
		if got := kinds(e); !slices.Equal(got, []string{"other0", "early0", "other1", "early1"}) {
			t.Fatalf("controls %v", got)
		}
		if got := e.Controls[0].Verdict == Contradicted; got != hidden {
			t.Errorf("hidden cause %v: %s", hidden, e.Controls[0].Sentence)
		}
		req.Held = []string{}
		if got := tested(t, req).Controls; len(got) != 0 {
			t.Errorf("with nothing held no control promises anything, yet %d are offered", len(got))
		}
	}
}

// The same request gives the same evidence, whatever the order of work; a
// cancelled one stops.
func TestSameAndCancelled(t *testing.T) {
	req := example(t)
	first := tested(t, req)
	for range 3 {
		if again := tested(t, req); !reflect.DeepEqual(first, again) {
			t.Fatal("another answer to the same request")
		}
	}
	ctx, cancel := context.WithCancel(context.Background())
	cancel()
	if _, err := Test(ctx, req, nil); err == nil {
		t.Error("a cancelled test has no error")
	}
}

func example(t testing.TB) Request {
	t.Helper()
	s, err := study.Load("../../assets/examples/hedgerows.arrowroot")
	if err != nil {
		t.Fatal(err)
	}
	data, err := table.ReadFile("../../assets/examples/hedgerows.csv")
	if err != nil {
		t.Fatal(err)
	}
	return Request{Study: s, Rival: "Feed only", Table: data, Question: s.Questions[0], Held: []string{"pesticide", "soil"}}
}

// BenchmarkManyRows tests about a hundred independences on 100,000 rows.
func BenchmarkManyRows(b *testing.B) {
	rng := rand.New(rand.NewPCG(1, 1))
	w := newWorld("")
	var lines []string
	for v := range 16 {
		var x []float64
		for range 100000 {
			x = append(x, rng.NormFloat64())
		}
		id := fmt.Sprint("v", v)
		lines = append(lines, id)
		for p := max(0, v-3); p < v; p++ {
			lines = append(lines, fmt.Sprintf("v%d -> %s", p, id))
		}
		w.numbers(id, study.Real, x)
	}
	w.arrows = strings.Join(lines, "\n")
	req := w.request(b)
	for b.Loop() {
		tested(b, req)
	}
}

// An association that rises and falls again has no correlation and is seen all
// the same.
func TestBentAssociationIsSeen(t *testing.T) {
	rng := rand.New(rand.NewPCG(3, 1))
	w := newWorld("z -> a\nz -> b")
	var a, b, z []float64
	for range 300 {
		v, x := rng.NormFloat64(), rng.NormFloat64()
		z, a = append(z, v), append(a, x)
		b = append(b, 0.5*v+0.6*x*x+rng.NormFloat64())
	}
	w.numbers("a", study.Real, a)
	w.numbers("b", study.Real, b)
	w.numbers("z", study.Real, z)
	f := tested(t, w.request(t)).Findings[0]
	if f.Verdict != Contradicted || !f.Bent || f.Signed || !strings.Contains(f.Sentence, "bends back") {
		t.Errorf("%s", f.Sentence)
	}
}
