package causal

import (
	"fmt"
	"math"
	"math/rand/v2"
	"slices"
	"strings"
	"testing"

	"arrowroot/compile/graph"
)

// A binaryModel is a random law for every node of a graph, the causes behind
// its arcs among them; all probabilities lie between 0.1 and 0.9.
type binaryModel struct {
	g, named *graph.Graph
	chance   []map[int]float64 // of 1, by the bits of the parents
	seen     joint             // by the bits of the measured nodes of g
	cache    map[string]float64
}

func newBinaryModel(g *graph.Graph, r *rand.Rand) *binaryModel {
	named, _ := nameArcs(g)
	m := &binaryModel{g: g, named: named, chance: make([]map[int]float64, named.Len()), cache: map[string]float64{}}
	for v := range m.chance {
		m.chance[v] = map[int]float64{}
	}
	for state := range 1 << named.Len() {
		for v := range m.chance {
			if at := state & bitsOf(named.Parents[v]); m.chance[v][at] == 0 {
				m.chance[v][at] = 0.1 + 0.8*r.Float64()
				if named.Computed[v] {
					m.chance[v][at] = math.Round(r.Float64()) + 1e-300 // zero is for what is not drawn yet
				}
			}
		}
	}
	m.seen = m.doing(nil)
	return m
}

func bitsOf(nodes []int) int {
	set := 0
	for _, v := range nodes {
		set |= 1 << v
	}
	return set
}

// doing is the truncated factorisation (Pearl 2009, eq. 1.37): the law of the
// measured nodes by value, for every value that is set.
func (m *binaryModel) doing(set []int) joint {
	p := make(joint, 1<<m.g.Len())
	keep := 0
	for v, measured := range m.g.Measured {
		if measured || slices.Contains(set, v) {
			keep |= 1 << v
		}
	}
	for state := range 1 << m.named.Len() {
		w := 1.0
		for v := range m.named.Len() {
			if slices.Contains(set, v) {
				continue
			}
			one := m.chance[v][state&bitsOf(m.named.Parents[v])]
			if state>>v&1 == 0 {
				one = 1 - one
			}
			w *= one
		}
		p[state&keep] += w
	}
	return p
}

// given is the chance that the nodes of have the values in state among states
// that agree with it on the given nodes.
func (p joint) given(of, given []int, state int) float64 {
	above, below := 0.0, 0.0
	o, z := bitsOf(of), bitsOf(given)
	for s, w := range p {
		if (s^state)&z == 0 {
			below += w
			if (s^state)&o == 0 {
				above += w
			}
		}
	}
	return above / below
}

// value evaluates an estimand on a joint distribution, for the values in state.
func (p joint) value(e Estimand, state int, cache map[string]float64) float64 {
	switch e := e.(type) {
	case Probability:
		k := fmt.Sprint(e.Of, e.Given, state&bitsOf(Free(e)))
		if _, known := cache[k]; !known {
			cache[k] = p.given(e.Of, e.Given, state)
		}
		return cache[k]
	case Product:
		all := 1.0
		for _, f := range e.Factors {
			all *= p.value(f, state, cache)
		}
		return all
	case Quotient:
		return p.value(e.Above, state, cache) / p.value(e.Below, state, cache)
	case Sum:
		all := 0.0
		for at := range 1 << len(e.Over) {
			next := state
			for i, v := range e.Over {
				next = next&^(1<<v) | at>>i&1<<v
			}
			all += p.value(e.Body, next, cache)
		}
		return all
	}
	panic("estimand")
}

// checkFormula compares an estimand with the truth at a few values of all that
// is free in either.
func checkFormula(t *testing.T, id string, g *graph.Graph, f *Identification, r *rand.Rand) {
	t.Helper()
	if g.Len()+len(g.Arcs) > 14 {
		return // the exact model would not fit in the time
	}
	m := newBinaryModel(g, r)
	truth := m.doing(f.Exposures)
	for range 6 {
		state := r.IntN(1 << g.Len())
		want := truth.given(f.Outcomes, union(f.Given, f.Exposures), state)
		if got := m.seen.value(f.Estimand, state, m.cache); !math.IsNaN(want) && !(math.Abs(got-want) <= 1e-9) {
			t.Errorf("%s: %s = %s: got %.12f, truth %.12f", id, f.Query(), f.Symbols(), got, want)
			return
		}
	}
}

// checkWitness verifies what a failing pair claims.
func checkWitness(t *testing.T, id string, g *graph.Graph, f *Identification) {
	t.Helper()
	p := Project(g)
	whole, part := mark(p.Graph.Len(), p.at(f.Whole)), mark(p.Graph.Len(), p.at(f.Part))
	switch {
	case len(f.Part) == 0 || !within(f.Part, f.Whole) || len(f.Part) == len(f.Whole):
		t.Errorf("%s: witness %v, %v", id, f.Whole, f.Part)
	case !slices.Equal(district(p.Graph, p.At[f.Part[0]], whole), whole):
		t.Errorf("%s: %v does not hang together", id, f.Whole)
	case !slices.Equal(district(p.Graph, p.At[f.Part[0]], part), part):
		t.Errorf("%s: %v does not hang together", id, f.Part)
	case !slices.Equal(ancestorsWithin(p.Graph, p.at(f.Part), whole), whole):
		t.Errorf("%s: not all of %v acts on %v", id, f.Whole, f.Part)
	}
}

// Source: testdata/causal/SOURCE.md.
func TestFormulasOfReference(t *testing.T) {
	r := rand.New(rand.NewPCG(31, 2026))
	for _, c := range slices.Concat(readReference(t, "cases.json"), readReference(t, "random.json")) {
		random := strings.HasPrefix(c.ID, "rnd")
		if !random && c.Question.Type != "identify" {
			continue
		}
		var want struct {
			Identifiable bool
			Hedge        map[string][]string
		}
		want.Identifiable = c.Answers.Identifiable
		if !random {
			c.answer(t, &want)
		}
		g := c.graph(t)
		x, y := numbers(g, c.Exposure), numbers(g, c.Outcome)
		f := Identify(g, x, y, numbers(g, c.Question.Given))
		if f.Identified != want.Identifiable || f.Sentence == "" {
			t.Errorf("%s: identified %v; %s", c.ID, f.Identified, f.Sentence)
			continue
		}
		if f.Identified {
			checkFormula(t, c.ID, g, f, r)
		} else {
			checkWitness(t, c.ID, g, f)
		}
		if h := want.Hedge; h != nil && !f.Identified {
			compareSets(t, c.ID, "failing pair", g, [][]int{f.Whole, f.Part}, [][]string{h["F"], h["F'"]})
		}
		if random && c.Answers.IdentifiableGiven != nil {
			f := Identify(g, x, y, numbers(g, c.Conditioned))
			if f.Identified != *c.Answers.IdentifiableGiven {
				t.Errorf("%s: given %v: identified %v", c.ID, c.Conditioned, f.Identified)
			} else if f.Identified {
				checkFormula(t, c.ID, g, f, r)
			} else {
				checkWitness(t, c.ID, g, f)
			}
		}
	}
}

// Formulas by value on random graphs, several exposures, outcomes and given
// variables among them.
func TestFormulasInBinaryModels(t *testing.T) {
	rounds := rounds(400, 4000)
	r := rand.New(rand.NewPCG(32, 2026))
	identified := 0
	for i := range rounds {
		s := sketch{nodes: 3 + r.IntN(4), arrows: 0.2 + 0.5*r.Float64(), unmeasured: 0.25, arcs: 0.3 * r.Float64()}
		g := s.draw(t, r)
		var given []int
		x, y := []int{0}, []int{1}
		for v := 2; v < g.Len(); v++ {
			switch where := r.IntN(8); {
			case !g.Measured[v]:
			case where == 0:
				x = append(x, v)
			case where == 1:
				y = append(y, v)
			case where < 4:
				given = append(given, v)
			}
		}
		f := Identify(g, x, y, given)
		if f.Identified != identifiableGiven(g, x, y, given) {
			t.Errorf("%s: %s: identified %v", describe(g), f.Query(), f.Identified)
		}
		if f.Identified {
			identified++
			checkFormula(t, fmt.Sprint(i, describe(g)), g, f, r)
		} else {
			checkWitness(t, describe(g), g, f)
		}
	}
	if identified < rounds/4 {
		t.Errorf("only %d identified", identified)
	}
}

// Computed variables are functions of their parents; nothing may be asked of
// the data that they never show.
func TestFormulasWithComputedVariables(t *testing.T) {
	r := rand.New(rand.NewPCG(33, 2026))
	identified := 0
	for range rounds(600, 6000) {
		s := sketch{nodes: 3 + r.IntN(4), arrows: 0.2 + 0.5*r.Float64(), unmeasured: 0.15, arcs: 0.3 * r.Float64(), computed: 0.4}
		g := s.draw(t, r)
		if f := Identify(g, []int{0}, []int{1}, nil); f.Identified {
			identified++
			checkFormula(t, describe(g), g, f, r)
		}
	}
	if identified < 150 {
		t.Errorf("only %d identified", identified)
	}
	g := sheet(t, "hedge -> =log -> bees, hedge <-> bees")
	f := Identify(g, []int{0}, []int{2}, nil)
	if f.Identified {
		t.Errorf("a front door through what is computed from the exposure alone: %s", f.Symbols())
	}
	if want := " That takes log for any function of what acts there; whether the one that was typed shows more was not looked at."; !strings.HasSuffix(f.Sentence, want) {
		t.Errorf("got %s", f.Sentence)
	}
}

// The formulas stand in the sources named by testdata/causal/cases.json; how
// they are written is ours.
func TestFormulaText(t *testing.T) {
	smoke := graph.Spec{Names: []string{"smoking", "tar", "cancer", "gene"}, Arrows: [][2]int{{0, 1}, {1, 2}, {3, 0}, {3, 2}}, Unmeasured: []int{3}}
	farm := graph.Spec{Names: []string{"soil", "hedge", "bees"}, Arrows: [][2]int{{0, 1}, {0, 2}, {1, 2}}}
	napkin := graph.Spec{Names: []string{"W", "Z", "X", "Y"}, Arrows: [][2]int{{0, 1}, {1, 2}, {2, 3}}, Arcs: [][2]int{{0, 2}, {0, 3}}}
	broken := graph.Spec{Names: []string{"hedge", "bees", "attitude"}, Arrows: [][2]int{{0, 1}, {2, 0}, {2, 1}}, Unmeasured: []int{2}}
	for _, check := range []struct {
		spec graph.Spec
		x, y int
		want string
	}{
		{farm, 1, 2, "P(bees | do(hedge)) is identified: it is the sum over soil of (the chance of soil, times the chance of bees given soil and hedge). ∑{soil} [P(soil) P(bees | soil, hedge)]"},
		{smoke, 0, 2, "P(cancer | do(smoking)) is identified: it is the sum over tar of (the chance of tar given smoking, times the sum over smoking′ of (the chance of smoking′, times the chance of cancer given smoking′ and tar)). ∑{tar} [P(tar | smoking) ∑{smoking′} [P(smoking′) P(cancer | smoking′, tar)]]"},
		{napkin, 2, 3, "P(Y | do(X)) is identified: it is (the sum over W of (the chance of W, times the chance of X given W and Z, times the chance of Y given W, Z and X)), divided by (the sum over W of (the chance of W, times the chance of X given W and Z)), with Z at any one value. (∑{W} [P(W) P(X | W, Z) P(Y | W, Z, X)] / ∑{W} [P(W) P(X | W, Z)])"},
		{broken, 0, 1, "P(bees | do(hedge)) is not identified: attitude, unmeasured, ties hedge and bees together, and no data show how bees would behave if hedge were set rather than seen. "},
		{broken, 2, 1, "P(bees | do(attitude)) cannot be had from these data: attitude was not measured. "},
	} {
		g, err := graph.New(check.spec)
		if err != nil {
			t.Fatal(err)
		}
		f := Identify(g, []int{check.x}, []int{check.y}, nil)
		if got := f.Sentence + " " + f.Symbols(); got != check.want {
			t.Errorf("got  %s\nwant %s", got, check.want)
		}
	}
}

// Large diagrams get an answer, and a formula of a size that can be shown.
func TestFormulasOfLargeDiagrams(t *testing.T) {
	g := large(t)
	for x := range g.Len() {
		for y := range g.Len() {
			if x == y || (x+2*y)%7 != 0 {
				continue
			}
			f := Identify(g, []int{x}, []int{y}, nil)
			if f.Identified != Identifiable(g, x, y) || f.Sentence == "" {
				t.Errorf("%s: identified %v", f.Query(), f.Identified)
			}
			if n := len(f.Symbols()); n > 20000 {
				t.Errorf("%s: a formula of %d bytes", f.Query(), n)
			}
		}
	}
}
