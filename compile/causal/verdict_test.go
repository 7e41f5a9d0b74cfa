package causal

import (
	"fmt"
	"math/rand/v2"
	"slices"
	"strings"
	"testing"

	"arrowroot/compile/graph"
)

// sheet makes a graph from typed arrows, "a -> b" and "a <-> b"; a name in
// brackets is unmeasured, one with "=" before it is computed.
func sheet(t testing.TB, text string) *graph.Graph {
	t.Helper()
	spec := graph.Spec{}
	at := map[string]int{}
	node := func(word string) int {
		name := strings.Trim(word, "()=")
		v, known := at[name]
		if !known {
			v = len(spec.Names)
			at[name] = v
			spec.Names = append(spec.Names, name)
		}
		if strings.HasPrefix(word, "(") {
			spec.Unmeasured = append(spec.Unmeasured, v)
		}
		if strings.HasPrefix(word, "=") {
			spec.Computed = append(spec.Computed, v)
		}
		return v
	}
	for part := range strings.SplitSeq(text, ",") {
		words := strings.Fields(part)
		last := node(words[0])
		for i := 2; i < len(words); i += 2 {
			next := node(words[i])
			if words[i-1] == "<->" {
				spec.Arcs = append(spec.Arcs, [2]int{last, next})
			} else {
				spec.Arrows = append(spec.Arrows, [2]int{last, next})
			}
			last = next
		}
	}
	g, err := graph.New(spec)
	if err != nil {
		t.Fatal(err)
	}
	return g
}

const farms = "hedge -> flowers -> bees, hedge -> bees, soil -> hedge, soil -> flowers, soil -> pesticide -> hedge, pesticide -> bees"

func TestVerdicts(t *testing.T) {
	for _, c := range []struct {
		sheet, ask, held string
		kind             VerdictKind
		sentence         string
		propose          string // "-" = no proposal
		way              string
	}{
		{farms, "hedge bees", "", Confounded,
			"hedge → bees is confounded along 4 open back-door paths. Hold soil and pesticide.", "soil pesticide", ""},
		{farms, "hedge bees", "soil", Confounded,
			"Holding soil is not enough: hedge → bees is confounded along 1 open back-door path. Hold pesticide as well.", "soil pesticide", ""},
		{farms, "hedge bees", "soil pesticide", Readable,
			"hedge → bees can be read from these data, holding soil and pesticide, if the arrows drawn and not drawn are right.", "-", ""},
		{farms, "hedge bees", "soil pesticide flowers", OverHeld,
			"Holding flowers would hide part of the effect: it lies on hedge → flowers → bees.", "soil pesticide",
			"Ask for the direct effect instead, or leave it free."},
		{"hedge -> bees, hedge -> yield, bees -> yield", "hedge bees", "yield", OverHeld,
			"Holding yield would distort the effect: it is an effect of bees, by hedge → bees → yield.", "", "Leave yield free."},
		{"a -> hedge, a -> season, b -> season, b -> bees, hedge -> bees", "hedge bees", "season", OverHeld,
			"Holding season makes the comparison misleading: it opens hedge ← a → season ← b → bees.", "", "Leave season free."},
		{"(a) -> hedge, a -> season, b -> season, b -> bees, hedge -> bees", "hedge bees", "a", OverHeld,
			"a cannot be held: a was not measured.", "", "Leave a free."},
		{"rain -> hedge -> bees", "hedge bees", "rain", Readable,
			"hedge → bees can be read from these data, holding rain, if the arrows drawn and not drawn are right.", "-",
			"Holding rain costs precision: it needs no holding, and leaving it free narrows the answer."},
		{"hedge -> bees", "hedge bees", "", Readable,
			"hedge → bees can be read from these data, holding nothing, if the arrows drawn and not drawn are right.", "-", ""},
		{"(skill) -> cover -> yield, skill -> yield", "cover yield", "", NoSet,
			"No set of measured variables closes every back-door path from cover to yield: skill is unmeasured and affects both.", "-",
			"The effect is not identified: what the data show is an association. Measuring skill would do."},
		{"(skill) -> cover -> nitrogen -> yield, skill -> yield", "cover yield", "", NoSet,
			"No set of measured variables closes every back-door path from cover to yield: skill is unmeasured and affects both.", "-",
			"The effect is identified all the same: the full model can be simulated under the intervention. One way remains: through nitrogen (front-door). Measuring skill would also do."},
		{"(skill) -> cover -> nitrogen -> yield, cover -> water -> yield, skill -> yield, rain -> cover, rain -> nitrogen, rain -> yield, subsidy -> cover", "cover yield", "", NoSet,
			"No set of measured variables closes every back-door path from cover to yield: skill is unmeasured and affects both.", "-",
			"The effect is identified all the same: the full model can be simulated under the intervention. Two ways remain: through nitrogen and water (front-door, given rain) or subsidy as an instrument (needs linear laws). Measuring skill would also do."},
		{"w -> z -> cover -> yield, w <-> cover, w <-> yield", "cover yield", "", NoSet,
			"No set of measured variables closes every back-door path from cover to yield: w and cover share an unmeasured cause and w and yield share an unmeasured cause.", "-",
			"The effect is identified all the same; not computed by this version. One way remains: z as an instrument (needs linear laws, given w). Measuring the common cause of w and cover or the common cause of w and yield would also do."},
		{"soil -> hedge, soil -> bees", "hedge bees", "", NoEffect,
			"No arrows lead from hedge to bees: this diagram says that it has no effect.", "soil",
			"Any relation in the data runs along 1 open back-door path. Hold soil to see whether the data agree."},
		{"bees -> hedge", "hedge bees", "", NoEffect,
			"No arrows lead from hedge to bees, but some lead the other way: this diagram says that it has no effect.", "-",
			"To ask what bees does to hedge, make bees the exposure."},
		{"(attitude) -> hedge -> bees", "attitude bees", "", NoSet,
			"attitude → bees cannot be read: attitude was not measured.", "-",
			"Give it a data column, or ask about something that it acts on."},
		{"soil -> =wet -> hedge -> bees, wet -> bees", "hedge bees", "soil", Readable,
			"hedge → bees can be read from these data, holding soil, if the arrows drawn and not drawn are right.", "-",
			""},
		{"soil -> =wet -> bees, soil -> bees", "wet bees", "", NoSet,
			"No set of measured variables closes every back-door path from wet to bees: wet is computed from soil, so the data never show it apart.", "-",
			"The effect is not identified: what the data show is an association."},
		{"soil -> =wet -> bees", "wet bees", "soil", OverHeld,
			"soil cannot be held: wet is computed from what is held, so nothing is left to compare.", "", "Leave soil free."},
	} {
		g := sheet(t, c.sheet)
		ask := numbers(g, strings.Fields(c.ask))
		r := Read(g, Query{Exposure: ask[0], Outcome: ask[1], Held: numbers(g, strings.Fields(c.held))})
		v := r.Verdict
		propose := "-"
		if v.HasProposal {
			words := []string{}
			for _, u := range v.Propose {
				words = append(words, g.Names[u])
			}
			propose = strings.Join(words, " ")
		}
		if v.Kind != c.kind || v.Sentence != c.sentence || propose != c.propose || v.Way != c.way {
			t.Errorf("%s | %s | %s:\n got %d %q %q %q\nwant %d %q %q %q", c.sheet, c.ask, c.held,
				v.Kind, v.Sentence, propose, v.Way, c.kind, c.sentence, c.propose, c.way)
		}
	}
}

func TestIncomplete(t *testing.T) {
	g := sheet(t, farms)
	for _, q := range []Query{{Exposure: -1, Outcome: -1}, {Exposure: 0, Outcome: -1}, {Exposure: -1, Outcome: 0}, {Exposure: 1, Outcome: 1}} {
		r := Read(g, q)
		if r.Verdict.Kind != Incomplete || r.Verdict.Sentence == "" || r.Precise != -1 {
			t.Errorf("%v: %+v", q, r.Verdict)
		}
	}
}

// What the reading says must agree with itself, whatever is held.
func TestReadingsAreConsistent(t *testing.T) {
	r := rand.New(rand.NewPCG(12, 2026))
	var kinds [6]int
	for range rounds(4000, 40000) {
		s := sketch{nodes: 3 + r.IntN(6), arrows: 0.2 + 0.4*r.Float64(), unmeasured: 0.25 * r.Float64(), arcs: 0.1 * r.Float64()}
		if r.IntN(4) == 0 {
			s.computed = 0.3
		}
		g := s.draw(t, r)
		const x, y = 0, 1
		held := minus(subset(list(everything(g)), r.IntN(1<<g.Len())&r.IntN(1<<g.Len())), []int{x, y})
		read := Read(g, Query{Exposure: x, Outcome: y, Held: held})
		again := Read(g, Query{Exposure: x, Outcome: y, Held: held})
		if fmt.Sprint(read.Verdict, read.Sets, read.HeldFaults) != fmt.Sprint(again.Verdict, again.Sets, again.HeldFaults) {
			t.Fatalf("%s: two readings differ", describe(g))
		}
		known := fixed(g, mark(g.Len(), held))
		open := slices.ContainsFunc(read.Paths, func(p Path) bool { return p.Open })
		if !read.MorePaths && !known[x] && !known[y] && open == Separated(g, []int{x}, []int{y}, held) {
			t.Fatalf("%s: given %v, an open path is listed: %v", describe(g), held, open)
		}
		v := read.Verdict
		kinds[v.Kind]++
		fail := func(what string) {
			t.Helper()
			t.Fatalf("%s | held %v: %s: %+v, faults %v, sets %v", describe(g), held, what, v, read.HeldFaults, read.Sets)
		}
		if v.Sentence == "" || strings.Contains(v.Sentence+v.Way, "nothing as well") {
			fail("no sentence")
		}
		if v.HasProposal && !ValidAdjustment(g, x, y, v.Propose) {
			fail("the proposal is not valid")
		}
		if v.HasProposal && slices.Equal(v.Propose, held) {
			fail("the proposal is what is held")
		}
		if read.HeldValid && len(read.HeldFaults) > 0 {
			fail("valid, with faults")
		}
		if v.Kind == Confounded && strings.Contains(v.Sentence, "longer than") {
			fail("confounded without an open path")
		}
		if read.Sets != nil && len(read.HeldFaults) > 0 {
			var wrong []int
			for _, f := range read.HeldFaults {
				wrong = append(wrong, f.Node)
			}
			pair := newComparison(g, []int{x}, []int{y})
			if !pair.exists(minus(held, tidy(wrong))) {
				fail("leaving the faults free does not help")
			}
		}
		for _, f := range read.Forbidden {
			if f.Reason == "" || f.Path[0] != x || !slices.Contains(f.Path, f.Node) {
				fail(fmt.Sprintf("forbidden %+v", f))
			}
			for i := 1; i < len(f.Path); i++ {
				if !g.HasArrow(f.Path[i-1], f.Path[i]) {
					fail(fmt.Sprintf("forbidden by a path that is not there: %+v", f))
				}
			}
		}
	}
	t.Logf("verdicts by kind: %v", kinds)
}

// Diagrams with more paths or sets than can be listed must not make it hang.
func TestNothingHangs(t *testing.T) {
	const pairs = 20 // 2^20 minimal sets
	ladder := graph.Spec{Names: []string{"x", "y"}, Arrows: [][2]int{{0, 1}}}
	for i := range pairs {
		a := len(ladder.Names)
		ladder.Names = append(ladder.Names, fmt.Sprint("a", i), fmt.Sprint("b", i))
		ladder.Arrows = append(ladder.Arrows, [2]int{a, 0}, [2]int{a, a + 1}, [2]int{a + 1, 1})
	}
	dense := graph.Spec{}
	for i := range 40 {
		dense.Names = append(dense.Names, fmt.Sprint("v", i))
		for j := range i {
			dense.Arrows = append(dense.Arrows, [2]int{j, i})
		}
	}
	computed := ladder
	computed.Computed = []int{3}
	for _, c := range []struct {
		spec graph.Spec
		q    Query
	}{
		{ladder, Query{Exposure: 0, Outcome: 1}},
		{computed, Query{Exposure: 0, Outcome: 1}},
		{dense, Query{Exposure: 20, Outcome: 39}},
	} {
		g, err := graph.New(c.spec)
		if err != nil {
			t.Fatal(err)
		}
		r := Read(g, c.q) // an endless search would hang here
		for _, z := range r.Sets {
			if !ValidAdjustment(g, c.q.Exposure, c.q.Outcome, z) {
				t.Fatalf("set %v is not valid", z)
			}
		}
	}
}

// Neither must a diagram of a thousand nodes, whatever is asked of it.
func TestThousandNodes(t *testing.T) {
	g := scattered(t, 1000, 3000, 7, []int{4, 40, 400, 444, 777})
	const x, y = 334, 997
	r := Read(g, Query{Exposure: x, Outcome: y})
	if len(r.Sets) == 0 || len(r.Paths) == 0 || r.Verdict.Sentence == "" {
		t.Errorf("%d sets, %d paths: %s", len(r.Sets), len(r.Paths), r.Verdict.Sentence)
	}
	if _, more := FrontDoors(g, x, y, 0); !more {
		t.Error("front doors: nothing said of what was left out")
	}
	if _, more := Tetrads(g, 0); !more {
		t.Error("tetrads: nothing said of what was left out")
	}
	if _, more := Basis(g); !more {
		t.Error("basis: nothing said of what was left out")
	}
	for s := range EachSeparation(g, 1) { // as many as one has patience for
		if len(s.Given) > 1 {
			t.Errorf("%+v", s)
		}
		break
	}
	if rounds(0, 1) == 0 {
		return
	}
	Functionals(g)
	ClassOf(g)
	Controls(g, x, y, nil)
	Identify(g, []int{x}, []int{y}, nil)
	ReadDirect(g, x, y, nil)
}

func TestCompare(t *testing.T) {
	a := sheet(t, "hedge -> flowers -> bees, hedge -> bees, soil <-> bees, rain -> bees")
	b := sheet(t, "bees -> flowers, hedge -> flowers, hedge -> bees, bees <-> soil, soil <-> hedge, wind -> bees")
	d := Compare(a, b)
	got := fmt.Sprint(d.NodesOnlyA, d.NodesOnlyB, d.OnlyA, d.OnlyB, d.Reversed, d.ArcsOnlyA, d.ArcsOnlyB, d.Same())
	want := "[rain] [wind] [[flowers bees] [rain bees]] [[bees flowers] [wind bees]] [[flowers bees]] [] [[soil hedge]] false"
	if got != want {
		t.Errorf("got  %s\nwant %s", got, want)
	}
	if d := Compare(a, a); !d.Same() {
		t.Errorf("a differs from itself: %+v", d)
	}
}

// SEMANTICS A1 and story S3: an unmeasured cause of a measured non-parent.
func TestCarriersSayWhy(t *testing.T) {
	g := sheet(t, "(attitude) -> hedge, attitude -> bees, hedge -> flowers -> bees, soil -> hedge, (moisture) -> soil, flowers -> moisture2, (hidden) -> bees, flowers -> hidden")
	var lines []string
	for _, f := range Carriers(g, g.Index("hedge")) {
		line := g.Names[f.Node] + " |"
		for _, p := range f.Parents {
			line += " " + g.Names[p]
		}
		for _, c := range f.Carried {
			line += " +" + g.Names[c.Node]
			for _, u := range c.For {
				line += " for " + g.Names[u]
			}
		}
		lines = append(lines, line)
	}
	want := []string{
		"soil |",
		"hedge | soil",
		"flowers | hedge",
		"bees | flowers +hedge for attitude +soil for attitude",
		"moisture2 | flowers",
	}
	if !slices.Equal(lines, want) {
		t.Errorf("got\n%s\nwant\n%s", strings.Join(lines, "\n"), strings.Join(want, "\n"))
	}
	var districts []string
	for _, d := range Districts(g) {
		districts = append(districts, names(g, d))
	}
	if got := strings.Join(districts, "; "); got != "hedge and bees; flowers; soil; moisture2" {
		t.Errorf("districts: %s", got)
	}
}

// What is listed changes no verdict.
func TestVerdictWithShortLists(t *testing.T) {
	g := sheet(t, "L -> H, L -> P, P -> B, S -> H, S -> F, (U) -> H, U -> P, H -> F -> B, H -> B")
	q := Query{Exposure: g.Index("H"), Outcome: g.Index("B")}
	long := Read(g, q)
	q.MaxPaths, q.MaxSets = 2, 1
	short := Read(g, q)
	if len(short.Paths) != 2 || !short.MorePaths || short.Verdict.Sentence != long.Verdict.Sentence {
		t.Errorf("%d paths, more %v: %q, not %q", len(short.Paths), short.MorePaths, short.Verdict.Sentence, long.Verdict.Sentence)
	}
}
