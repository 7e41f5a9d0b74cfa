package causal

import (
	"encoding/json"
	"math"
	"math/rand/v2"
	"slices"
	"testing"

	"arrowroot/compile/graph"
)

// Source of the files read here: testdata/causal/SOURCE.md.

// instrumentList reads [["Z", [["W"]]], …].
func instrumentList(t *testing.T, raw []json.RawMessage) map[string][]string {
	t.Helper()
	all := map[string][]string{}
	for _, r := range raw {
		var pair []json.RawMessage
		var node string
		var sets [][]string
		if json.Unmarshal(r, &pair) != nil || len(pair) != 2 || json.Unmarshal(pair[0], &node) != nil || json.Unmarshal(pair[1], &sets) != nil {
			t.Fatalf("instrument %s", r)
		}
		all[node] = spelledNames(sets)
	}
	return all
}

func compareInstruments(t *testing.T, c *reference, what string, got []InstrumentSets, want map[string][]string) {
	t.Helper()
	g := c.graph(t)
	if len(got) != len(want) {
		t.Errorf("%s: %s: got %v, want %v", c.ID, what, got, want)
		return
	}
	for _, z := range got {
		if !slices.Equal(spelled(g, z.Given), want[g.Names[z.Node]]) || z.More {
			t.Errorf("%s: %s %s: got %v, want %v", c.ID, what, g.Names[z.Node], spelled(g, z.Given), want[g.Names[z.Node]])
		}
	}
}

type instrumentAnswer struct{ Edge, Total []json.RawMessage }

func TestInstrumentsOfReference(t *testing.T) {
	for _, c := range readReference(t, "beyond.json") {
		if c.Question.Type != "instruments" {
			continue
		}
		var want instrumentAnswer
		c.answer(t, &want)
		g := c.graph(t)
		x, y := g.Index(c.Exposure[0]), g.Index(c.Outcome[0])
		compareInstruments(t, &c, "arrow", ArrowInstruments(g, x, y), instrumentList(t, want.Edge))
		compareInstruments(t, &c, "total", TotalInstruments(g, x, y), instrumentList(t, want.Total))
	}
	for _, c := range readReference(t, "random.json") {
		if c.Answers.Instruments.Edge == nil || len(c.Exposure)+len(c.Outcome) > 2 {
			continue
		}
		g := c.graph(t)
		x, y := g.Index(c.Exposure[0]), g.Index(c.Outcome[0])
		var total []json.RawMessage
		for _, pair := range c.Answers.Instruments.Total {
			text, _ := json.Marshal(pair)
			total = append(total, text)
		}
		compareInstruments(t, &c, "arrow", ArrowInstruments(g, x, y), instrumentList(t, c.Answers.Instruments.Edge))
		compareInstruments(t, &c, "total", TotalInstruments(g, x, y), instrumentList(t, total))
	}
}

// In linear models the ratio of the two slopes on the instrument is the effect
// (common practice; Bowden & Turkington 1984 for the conditional form, from
// memory).
func TestInstrumentRatios(t *testing.T) {
	r := rand.New(rand.NewPCG(51, 2026))
	ratios := 0
	for range rounds(3000, 30000) {
		s := sketch{nodes: 4 + r.IntN(4), arrows: 0.3 + 0.2*r.Float64(), unmeasured: 0.15, arcs: 0.2}
		g := s.draw(t, r)
		m := drawLinear(g, r)
		for _, z := range TotalInstruments(g, 0, 1) {
			for _, given := range z.Given {
				on := append([]int{z.Node}, given...)
				a, b := m.regress(1, on)[0], m.regress(0, on)[0]
				if ratios++; !near(a, b*m.total[1][0]) {
					t.Errorf("%s: %s given %v: %g / %g, effect %g", describe(g), g.Names[z.Node], given, a, b, m.total[1][0])
				}
			}
		}
	}
	if ratios < 100 {
		t.Errorf("only %d ratios", ratios)
	}
}

func TestFrontDoorsOfReference(t *testing.T) {
	for _, c := range slices.Concat(readReference(t, "beyond.json"), readReference(t, "random.json")) {
		var want struct{ Minimal [][]string }
		switch {
		case c.Question.Type == "frontdoor":
			c.answer(t, &want)
		case c.Answers.Paths != nil && len(c.Exposure)+len(c.Outcome) == 2:
			want.Minimal = c.Answers.FrontDoor
		default:
			continue
		}
		g := c.graph(t)
		doors, more := FrontDoors(g, g.Index(c.Exposure[0]), g.Index(c.Outcome[0]), 1000)
		var plain [][]int
		for _, d := range doors {
			if len(d.Given) == 0 {
				plain = append(plain, d.Through)
			}
		}
		compareSets(t, c.ID, "front doors", g, plain, want.Minimal)
		if more {
			t.Errorf("%s: stopped early", c.ID)
		}
		if c.ID == "fd-cond-sets" && (len(doors) != 1 || doors[0].Sentence(g, 0, 2) != "M, given Z, carries all that X does to Y, and no open back door leads to or from there: the effect can be had in two steps.") {
			t.Errorf("%s: %v", c.ID, doors)
		}
	}
}

// The front-door formula, given w: Σ_w P(w) Σ_m P(m | x, w) Σ_x′ P(x′ | w) P(y | m, x′, w)
// (Pearl 1995), against the truncated factorisation.
func TestFrontDoorFormula(t *testing.T) {
	r := rand.New(rand.NewPCG(52, 2026))
	plain, given := 0, 0
	for range rounds(6000, 60000) {
		s := sketch{nodes: 4 + r.IntN(3), arrows: 0.3 + 0.2*r.Float64(), unmeasured: 0.15, arcs: 0.2}
		g := s.draw(t, r)
		if !newComparison(g, []int{0}, []int{1}).effect() || g.Len()+len(g.Arcs) > 11 {
			continue
		}
		doors, _ := FrontDoors(g, 0, 1, 0)
		if len(doors) == 0 {
			if door := anyFrontDoor(g); door != nil {
				t.Errorf("%s: missed the front door %v", describe(g), door)
			}
			continue
		}
		m := newBinaryModel(g, r)
		truth := m.doing([]int{0})
		for _, d := range doors {
			outer := Estimand(Product{[]Estimand{
				Probability{d.Through, union(d.Given, []int{0})},
				Sum{[]int{0}, Product{[]Estimand{Probability{[]int{0}, d.Given}, Probability{[]int{1}, union(d.Through, d.Given, []int{0})}}}},
			}})
			if len(d.Given) > 0 {
				given++
				outer = Product{[]Estimand{Probability{d.Given, []int{}}, outer}}
			} else {
				plain++
			}
			e := Sum{union(d.Through, d.Given), outer}
			for state := range 4 {
				got, want := m.seen.value(e, state, m.cache), truth.given([]int{1}, []int{0}, state)
				if math.Abs(got-want) > 1e-9 {
					t.Errorf("%s: through %v given %v: %g, truth %g", describe(g), d.Through, d.Given, got, want)
				}
			}
		}
	}
	if plain < 20 || given < 20 {
		t.Errorf("only %d plain and %d given", plain, given)
	}
}

// anyFrontDoor tries all sets with all sets given.
func anyFrontDoor(g *graph.Graph) *FrontDoor {
	c, below := newComparison(g, []int{0}, []int{1}), g.Descendants(0)
	var through, given []int
	for v := 2; v < g.Len(); v++ {
		switch {
		case g.Measured[v] && below[v]:
			through = append(through, v)
		case g.Measured[v]:
			given = append(given, v)
		}
	}
	for m := range 1 << len(through) {
		for w := range 1 << len(given) {
			if c.isFrontDoor(subset(through, m), subset(given, w)) {
				return &FrontDoor{subset(through, m), subset(given, w)}
			}
		}
	}
	return nil
}

func TestWaysOfLargeDiagrams(t *testing.T) {
	g := large(t)
	for _, q := range [][2]int{{12, 26}, {5, 20}, {0, 27}} {
		FrontDoors(g, q[0], q[1], 0)
		TotalInstruments(g, q[0], q[1])
		ArrowInstruments(g, q[0], q[1])
	}
}

// The reading of a diagram with ten million paths comes at once, and says that
// it is not all (case paths-k12).
func TestPathsAreStreamed(t *testing.T) {
	for _, c := range readReference(t, "beyond.json") {
		if c.Question.Type != "count" {
			continue
		}
		var want struct{ Paths, Causal int }
		c.answer(t, &want)
		g := c.graph(t)
		x, y := g.Index(c.Exposure[0]), g.Index(c.Outcome[0])
		if r := Read(g, Query{Exposure: x, Outcome: y}); len(r.Paths) != 500 || !r.MorePaths {
			t.Errorf("%s: %d paths, more %v", c.ID, len(r.Paths), r.MorePaths)
		}
		onward := g.Keep(func(from, _ int) bool { return from != y }, nil)
		var causal func(v int) int
		causal = func(v int) int {
			if v == y {
				return 1
			}
			n := 0
			for _, w := range onward.Children[v] {
				n += causal(w)
			}
			return n
		}
		if n := causal(x); n != want.Causal {
			t.Errorf("%s: %d causal paths", c.ID, n)
		}
	}
}
