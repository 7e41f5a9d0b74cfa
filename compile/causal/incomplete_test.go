package causal

import (
	"math"
	"math/rand/v2"
	"slices"
	"testing"

	"arrowroot/compile/graph"
)

// Source of the files read here: testdata/causal/SOURCE.md.
func TestSelectionOfReference(t *testing.T) {
	for _, c := range readReference(t, "beyond.json") {
		if c.Question.Type != "selection" {
			continue
		}
		var want struct {
			Recoverable bool       `json:"recoverable_P(Y|X)"`
			Sets        [][]string `json:"selection_backdoor_sets"`
		}
		c.answer(t, &want)
		g := c.graph(t)
		s := ReadSelection(g, g.Index("X"), g.Index("Y"), []int{g.Index(c.Question.S)}, numbers(g, c.Question.External))
		if s.Recoverable != want.Recoverable || s.More || s.Sentence == "" {
			t.Errorf("%s: %+v", c.ID, s)
		}
		compareSets(t, c.ID, "selection sets", g, s.Sets, want.Sets)
		if c.ID == "sel-4" && !s.OddsRatio { // the note of the case says so
			t.Errorf("%s: no odds ratio", c.ID)
		}
	}
}

// The selection-adjustment Σ_z P(y | x, z, kept) P(z), and P(y | x, kept) where
// it is said to be recoverable, against exact binary models.
func TestSelectionInBinaryModels(t *testing.T) {
	r := rand.New(rand.NewPCG(91, 2026))
	sets, recoverable := 0, 0
	for range rounds(400, 4000) {
		s := sketch{nodes: 5, arrows: 0.2 + 0.3*r.Float64(), arcs: 0.1}
		g := s.draw(t, r)
		const x, y, kept = 0, 1, 2
		q := ReadSelection(g, x, y, []int{kept}, []int{3, 4})
		m := newBinaryModel(g, r)
		truth := m.doing([]int{x})
		for state := range 4 {
			state |= 1 << kept
			if q.Recoverable {
				recoverable++
				if a, b := m.seen.given([]int{y}, []int{x, kept}, state), m.seen.given([]int{y}, []int{x}, state); math.Abs(a-b) > 1e-9 {
					t.Errorf("%s: kept %g, all %g", describe(g), a, b)
				}
			}
			for _, z := range q.Sets {
				sets++
				e := Estimand(Probability{[]int{y}, union(z, []int{x, kept})})
				if len(z) > 0 {
					e = Sum{z, Product{[]Estimand{e, Probability{z, nil}}}}
				}
				if got, want := m.seen.value(e, state, m.cache), truth.given([]int{y}, []int{x}, state); math.Abs(got-want) > 1e-9 {
					t.Errorf("%s: held %v: %g, truth %g", describe(g), z, got, want)
				}
			}
		}
	}
	if sets < 200 || recoverable < 100 {
		t.Errorf("only %d sets and %d recoverable", sets, recoverable)
	}
}

func TestMissingOfReference(t *testing.T) {
	for _, c := range readReference(t, "beyond.json") {
		if c.Question.Type != "missing" {
			continue
		}
		var want struct {
			Class       string
			Ordered     bool     `json:"joint_recoverable_by_ordered_factorisation"`
			ByIndicator bool     `json:"r_factorisation"`
			Recoverable bool     `json:"joint_recoverable"`
			Masking     []string `json:"self_masking_or_adjacent"`
		}
		c.answer(t, &want)
		g := c.graph(t)
		var indicators []Indicator
		for _, v := range c.Question.Partial {
			indicators = append(indicators, Indicator{g.Index(v), g.Index("R_" + v)})
		}
		m := ReadMissing(g, indicators)
		if m.Kind.String() != want.Class || (m.Order != nil) != want.Ordered || m.ByIndicator != want.ByIndicator || m.Recoverable != want.Recoverable || m.Undecided {
			t.Errorf("%s: %+v, want %+v", c.ID, m, want)
		}
		compareSets(t, c.ID, "masking", g, [][]int{m.Masking}, [][]string{want.Masking})
	}
}

// Where the joint distribution is said to be recoverable, both factorisations
// are worked out on exact binary models; 1 means recorded. Complete rows are
// compared likewise.
func TestMissingInBinaryModels(t *testing.T) {
	r := rand.New(rand.NewPCG(92, 2026))
	ordered, weighed, valid := 0, 0, 0
	for range rounds(400, 4000) {
		spec := graph.Spec{Names: []string{"a", "b", "c", "r_a", "r_b"}}
		for v := range 3 {
			for w := range v {
				if r.IntN(2) == 0 {
					spec.Arrows = append(spec.Arrows, [2]int{w, v})
				}
			}
			for i := 3; i < 5; i++ {
				if r.IntN(4) == 0 {
					spec.Arrows = append(spec.Arrows, [2]int{v, i})
				}
			}
		}
		if r.IntN(4) == 0 {
			spec.Arrows = append(spec.Arrows, [2]int{3, 4})
		}
		if r.IntN(4) == 0 {
			spec.Arcs = append(spec.Arcs, [2]int{r.IntN(3), 3 + r.IntN(2)})
		}
		g, err := graph.New(spec)
		if err != nil {
			t.Fatal(err)
		}
		indicators := []Indicator{{0, 3}, {1, 4}}
		own := map[int]int{0: 3, 1: 4}
		m, q := newBinaryModel(g, r), ReadMissing(g, indicators)
		for state := range 8 {
			state |= 1<<3 | 1<<4
			want := m.seen.given([]int{0, 1, 2}, nil, state)
			if q.Order != nil {
				ordered++
				got := 1.0
				for i, v := range q.Order {
					given := slices.Clone(q.Order[i+1:])
					for _, w := range q.Order[i:] {
						if mark, partial := own[w]; partial {
							given = append(given, mark)
						}
					}
					got *= m.seen.given([]int{v}, given, state)
				}
				if math.Abs(got-want) > 1e-9 {
					t.Errorf("%s: order %v gives %g, truth %g", describe(g), q.Order, got, want)
				}
			}
			if q.ByIndicator {
				weighed++
				got := m.seen.given([]int{0, 1, 2, 3, 4}, nil, state)
				for _, i := range indicators {
					given := slices.Clone(g.Parents[i.Node])
					for _, p := range g.Parents[i.Node] {
						if mark, partial := own[p]; partial {
							given = append(given, mark)
						}
					}
					got /= m.seen.given([]int{i.Node}, given, state)
				}
				if math.Abs(got-want) > 1e-9 {
					t.Errorf("%s: weighed %g, truth %g", describe(g), got, want)
				}
			}
			if c := ReadCompleteCase(g, indicators, 2, []int{0, 1}); c.Valid {
				valid++
				if a, b := m.seen.given([]int{2}, []int{0, 1, 3, 4}, state), m.seen.given([]int{2}, []int{0, 1}, state); math.Abs(a-b) > 1e-9 {
					t.Errorf("%s: complete rows %g, all %g", describe(g), a, b)
				}
			}
		}
	}
	if ordered < 200 || weighed < 200 || valid < 200 {
		t.Errorf("only %d ordered, %d weighed, %d valid", ordered, weighed, valid)
	}
}

func TestIncompleteSentences(t *testing.T) {
	g := sheet(t, "hedge -> bees, hedge -> kept, bees -> counted")
	for _, check := range []struct{ got, want string }{
		{ReadSelection(g, 0, 1, []int{2}, nil).Sentence, "Rows were kept by kept, which tells nothing of bees once hedge is known: how they go together in these rows is how they do in all. The effect of hedge on bees can be read from them."},
		{ReadSelection(g, 0, 1, []int{3}, nil).Sentence, "Rows were kept by counted, which depends on bees: of how hedge and bees go together, these rows keep the odds ratio alone."},
		{ReadMissing(g, []Indicator{{1, 3}}).Sentence, "The joint distribution cannot be had from these data: whether bees is recorded is tied to the value itself."},
		{ReadMissing(g, []Indicator{{1, 2}}).Sentence, "The joint distribution can be had though bees has entries missing: they are missing at random (MAR) once what is complete is known."},
		{ReadCompleteCase(g, []Indicator{{1, 2}}, 1, []int{0}).Sentence, "Complete rows will do: whether a row is complete tells nothing of bees once hedge is known."},
		{ReadCompleteCase(g, []Indicator{{1, 3}}, 1, []int{0}).Sentence, "Complete rows mislead: even once hedge is known, whether a row is complete is tied to bees."},
	} {
		if check.got != check.want {
			t.Errorf("got  %s\nwant %s", check.got, check.want)
		}
	}
}
