package causal

import (
	"encoding/json"
	"fmt"
	"math/rand/v2"
	"slices"
	"strings"
	"testing"

	"arrowroot/compile/graph"
)

// Source of the files read here: testdata/causal/SOURCE.md.

// pairList reads [["A", "C", [["B"]]], …].
func pairList(t *testing.T, raw [][]json.RawMessage) map[string][]string {
	t.Helper()
	all := map[string][]string{}
	for _, r := range raw {
		var a, b string
		var sets [][]string
		if len(r) != 3 || json.Unmarshal(r[0], &a) != nil || json.Unmarshal(r[1], &b) != nil || json.Unmarshal(r[2], &sets) != nil {
			t.Fatalf("pair %s", r)
		}
		all[min(a, b)+" "+max(a, b)] = spelledNames(sets)
	}
	return all
}

func compareSeparations(t *testing.T, id string, g *graph.Graph, want map[string][]string) {
	t.Helper()
	for _, s := range Separations(g, 1e4) {
		a, b := g.Names[s.A], g.Names[s.B]
		k := min(a, b) + " " + max(a, b)
		if got := spelled(g, s.Given); !slices.Equal(got, want[k]) && len(got)+len(want[k]) > 0 {
			t.Errorf("%s: %s: got %v, want %v", id, k, got, want[k])
		}
		delete(want, k)
	}
	if len(want) > 0 {
		t.Errorf("%s: not listed: %v", id, want)
	}
}

func TestSeparationsOfReference(t *testing.T) {
	for _, c := range readReference(t, "beyond.json") {
		if c.Question.Type != "pairs" {
			continue
		}
		var want struct {
			Pairs [][]json.RawMessage `json:"pairs_with_minimal_separators"`
		}
		c.answer(t, &want)
		compareSeparations(t, c.ID, c.graph(t), pairList(t, want.Pairs))
	}
	for _, c := range readReference(t, "random.json") {
		if c.Answers.Implied != nil {
			compareSeparations(t, c.ID, c.graph(t), pairList(t, c.Answers.Implied))
		}
	}
}

// one writes an independence as the reference files do.
func one(g *graph.Graph, s Independence) string {
	texts := make([]string, 3)
	for i, z := range [][]int{s.A, s.B, s.Given} {
		texts[i] = spelled(g, [][]int{z})[0]
	}
	slices.Sort(texts[:2])
	return strings.Join(texts, " ")
}

func TestBasisOfReference(t *testing.T) {
	for _, c := range readReference(t, "beyond.json") {
		if c.Question.Type != "basis" {
			continue
		}
		var want struct {
			Local    [][]json.RawMessage `json:"local_markov"`
			Pairwise [][]json.RawMessage
		}
		c.answer(t, &want)
		g := c.graph(t)
		var pairs []string
		for _, raw := range want.Pairwise {
			var a, b string
			var given []string
			if json.Unmarshal(raw[0], &a) != nil || json.Unmarshal(raw[1], &b) != nil || json.Unmarshal(raw[2], &given) != nil {
				t.Fatal(c.ID)
			}
			pairs = append(pairs, one(g, Independence{numbers(g, []string{b}), numbers(g, []string{a}), numbers(g, given)}))
		}
		basis, more := Basis(g)
		var got []string
		for _, s := range Pairwise(basis) {
			got = append(got, one(g, s))
		}
		slices.Sort(got)
		slices.Sort(pairs)
		if more || !slices.Equal(got, pairs) {
			t.Errorf("%s: got %q, want %q", c.ID, got, pairs)
		}
		for _, raw := range want.Local {
			var v string
			var others, parents []string
			if json.Unmarshal(raw[0], &v) != nil || json.Unmarshal(raw[1], &others) != nil || json.Unmarshal(raw[2], &parents) != nil {
				t.Fatal(c.ID)
			}
			if !Separated(g, numbers(g, []string{v}), numbers(g, others), numbers(g, parents)) {
				t.Errorf("%s: %s is not separated", c.ID, v)
			}
		}
	}
}

// closure derives what follows from independences by the rules of a
// semigraphoid (Pearl 1988, from memory), over nodes as bits: symmetry,
// decomposition, weak union and contraction, and composition with intersection
// besides, which hold for separation in graphs.
func closure(basis []Independence, nodes int) map[[3]int]bool {
	known := map[[3]int]bool{}
	var queue [][3]int
	add := func(a, b, c int) {
		if a == 0 || b == 0 {
			return
		}
		if a > b {
			a, b = b, a
		}
		if s := [3]int{a, b, c}; !known[s] {
			known[s] = true
			queue = append(queue, s)
		}
	}
	for _, s := range basis {
		add(bitsOf(s.A), bitsOf(s.B), bitsOf(s.Given))
	}
	for len(queue) > 0 {
		s := queue[0]
		queue = queue[1:]
		for _, side := range [][2]int{{s[0], s[1]}, {s[1], s[0]}} {
			a, b, c := side[0], side[1], s[2]
			for v := range nodes {
				if one := 1 << v; b&one != 0 {
					add(a, b&^one, c)     // decomposition
					add(a, b&^one, c|one) // weak union
				}
			}
			for t := range known {
				for _, other := range [][2]int{{t[0], t[1]}, {t[1], t[0]}} {
					if other[0] != a {
						continue
					}
					if d := other[1]; t[2] == c|b && d&b == 0 { // contraction: a ⫫ b | c and a ⫫ d | b, c
						add(a, b|d, c)
					} else if c == t[2]|d && d&b == 0 {
						add(a, b|d, t[2])
					}
					if d := other[1]; t[2] == c && d&b == 0 { // composition
						add(a, b|d, c)
					}
				}
			}
		}
	}
	return known
}

// Every listed independence is one, and all others follow from the basis.
func TestBasisImpliesAll(t *testing.T) {
	r := rand.New(rand.NewPCG(61, 2026))
	statements := 0
	for range rounds(150, 1500) {
		s := sketch{nodes: 5, arrows: 0.2 + 0.4*r.Float64(), arcs: 0.3 * r.Float64()}
		if r.IntN(2) == 0 {
			s.nodes, s.unmeasured = 6, 0.3
		}
		g := s.draw(t, r)
		basis, more := Basis(g)
		for _, i := range basis {
			statements++
			if !Separated(g, i.A, i.B, i.Given) {
				t.Errorf("%s: %s", describe(g), i.Sentence(g))
			}
		}
		nodes := list(available(g))
		if more || len(nodes) > 5 {
			continue
		}
		known := closure(basis, g.Len())
		for i, a := range nodes {
			for _, b := range nodes[i+1:] {
				rest := minus(nodes, tidy([]int{a, b}))
				for at := range 1 << len(rest) {
					given := subset(rest, at)
					want := oracleSeparated(g, a, b, given)
					if got := known[[3]int{1 << a, 1 << b, bitsOf(given)}]; got != want {
						t.Fatalf("%s: %d and %d given %v: follows %v, separated %v; basis %v", describe(g), a, b, given, got, want, basis)
					}
				}
			}
		}
	}
	if statements < 100 {
		t.Errorf("only %d statements", statements)
	}
}

func TestImplicationSentences(t *testing.T) {
	g, err := graph.New(graph.Spec{
		Names:  []string{"soil", "hedge", "flowers", "bees", "rain"},
		Arrows: [][2]int{{0, 1}, {1, 2}, {2, 3}},
		Arcs:   [][2]int{{1, 3}},
	})
	if err != nil {
		t.Fatal(err)
	}
	basis, _ := Basis(g)
	var got []string
	for _, s := range basis {
		got = append(got, s.Sentence(g))
	}
	want := []string{
		"Your arrows say that flowers and soil are unrelated once hedge is known.",
		"Your arrows say that rain is unrelated to soil, hedge, flowers and bees.",
	}
	if fmt.Sprintf("%q", got) != fmt.Sprintf("%q", want) {
		t.Errorf("got %q", got)
	}
}

// One set of each pair is among all of them, and more says whether there are.
func TestNearestSeparators(t *testing.T) {
	r := rand.New(rand.NewPCG(62, 2026))
	several := 0
	for range rounds(500, 5000) {
		s := sketch{nodes: 4 + r.IntN(6), arrows: 0.2 + 0.3*r.Float64(), unmeasured: 0.2, arcs: 0.1}
		g := s.draw(t, r)
		ones, all := Separations(g, 1), Separations(g, 1e4)
		for i, o := range ones {
			a := all[i]
			if o.A != a.A || o.B != a.B || len(o.Given) != min(1, len(a.Given)) || o.More != (len(a.Given) > 1) ||
				len(o.Given) == 1 && !slices.Contains(spelled(g, a.Given), spelled(g, o.Given)[0]) {
				t.Fatalf("%s: %+v of %+v", describe(g), o, a)
			}
			if o.More {
				several++
			}
		}
	}
	if several < 100 {
		t.Errorf("only %d pairs with several sets", several)
	}
}
