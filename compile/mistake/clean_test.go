package mistake

import (
	"fmt"
	"math/rand/v2"
	"slices"
	"testing"

	"arrowroot/compile/causal"
	"arrowroot/compile/graph"
	"arrowroot/compile/study"
)

// sound are the sets that may rightly be held for a question: every minimal
// one, and the most precise one; only "nothing" where there is none.
func sound(g *graph.Graph, x, y int) [][]int {
	r := causal.Read(g, causal.Query{Exposure: x, Outcome: y})
	sets := append([][]int{}, r.Sets...)
	if r.Optimal != nil {
		sets = append(sets, r.Optimal)
	}
	if len(sets) == 0 {
		return [][]int{nil}
	}
	return sets
}

func holding(s *study.Study, held []string) *study.Study {
	next, q := *s, *s.Questions[0]
	q.Held = append([]string{}, held...)
	next.Questions = []*study.Question{&q}
	return &next
}

func TestSilentOnTextbooks(t *testing.T) {
	graphs, asked := 0, 0
	for _, c := range textbooks(t) {
		s := c.study(t)
		g, err := s.Graph("r")
		if err != nil {
			t.Fatal(err)
		}
		graphs++
		q := s.Questions[0]
		for _, set := range sound(g, g.Index(q.Exposure), g.Index(q.Outcome)) {
			asked++
			h := holding(s, g.NamesOf(set))
			all := find(h)
			if bad := alarms(all); len(bad) > 0 {
				t.Errorf("%s (%s), holding %v: %s", c.ID, c.Source, h.Questions[0].Held, spell(bad))
			}
			hidden := len(c.Latent)+len(c.Bidirected) > 0
			effect := g.Descendants(g.Index(q.Exposure))[g.Index(q.Outcome)]
			if noted := len(all) == 1; noted != (effect && !hidden) {
				t.Errorf("%s: unmeasured variables %v, effect %v, yet findings: %s", c.ID, c.Latent, effect, spell(all))
			}
		}
	}
	t.Logf("%d graphs, %d questions", graphs, asked)
	if graphs < 50 {
		t.Errorf("only %d textbook graphs", graphs)
	}
}

func TestSilentOnStories(t *testing.T) {
	for _, c := range []struct{ sheet, ask string }{
		{hedges, "hedge bees spray soil"},
		{hedges, "hedge bees"},
		{births, "smoke trouble class age"},
		{births, "smoke trouble class age parity"},
		{scholarship, "award mark income entry"},
		{crops, "cover yield"},
		{crops, "cover yield rain slope"},
	} {
		if bad := find(sheet(t, c.sheet, c.ask)); len(bad) > 0 {
			t.Errorf("%s: %s", c.ask, spell(bad))
		}
	}
}

// random draws a diagram of n nodes in which each arrow is there with
// probability p, along the order of the nodes; each node is unmeasured with
// probability hidden, but for the question's ends.
func random(t testing.TB, r *rand.Rand, n int, p, hidden float64) (*study.Study, *graph.Graph) {
	t.Helper()
	s := &study.Study{Rivals: []*study.Rival{{Name: "r", Layout: &study.Layout{}, Diagram: &study.Diagram{}}}}
	d := s.Rivals[0].Diagram
	x := r.IntN(n - 1)
	y := x + 1 + r.IntN(n-x-1)
	for i := range n {
		id := fmt.Sprintf("v%d", i)
		s.Variables = append(s.Variables, &study.Variable{ID: id, Unmeasured: i != x && i != y && r.Float64() < hidden})
		d.Nodes = append(d.Nodes, &study.Node{Variable: id})
		for j := range i {
			if r.Float64() < p {
				d.Arrows = append(d.Arrows, &study.Arrow{From: fmt.Sprintf("v%d", j), To: id})
			}
		}
	}
	s.Questions = []*study.Question{{Exposure: fmt.Sprintf("v%d", x), Outcome: fmt.Sprintf("v%d", y), Held: []string{}, From: &study.Setting{}, To: &study.Setting{Number: 1}}}
	g, err := s.Graph("r")
	if err != nil {
		t.Fatal(err)
	}
	return s, g
}

func TestSilentOnRandomSoundDiagrams(t *testing.T) {
	r := rand.New(rand.NewPCG(11, 12))
	for i := range 400 {
		s, g := random(t, r, 4+r.IntN(6), 0.2+0.4*r.Float64(), 0.3*r.Float64())
		q := s.Questions[0]
		for _, set := range sound(g, g.Index(q.Exposure), g.Index(q.Outcome)) {
			h := holding(s, g.NamesOf(set))
			if bad := alarms(find(h)); len(bad) > 0 {
				t.Fatalf("diagram %d, %v: %s", i, g.Arrows, spell(bad))
			}
		}
	}
}

// TestHeldAgainstCriterion asks of random diagrams and random held sets whether
// the gravest mistakes are told exactly when the adjustment criterion says that
// what is held is wrong: it is not enough, and no more of it would be. Every
// repair must take its finding away.
func TestHeldAgainstCriterion(t *testing.T) {
	r := rand.New(rand.NewPCG(21, 22))
	wrong, repaired := 0, 0
	for i := range 1500 {
		s, g := random(t, r, 4+r.IntN(5), 0.2+0.4*r.Float64(), 0.3*r.Float64())
		q := s.Questions[0]
		x, y := g.Index(q.Exposure), g.Index(q.Outcome)
		var held []int
		for v := range g.Len() {
			if v != x && v != y && g.Measured[v] && r.Float64() < 0.4 {
				held = append(held, v)
			}
		}
		s = holding(s, g.NamesOf(held))
		all := find(s)
		grave := slices.ContainsFunc(all, func(m Mistake) bool { return m.Severity == StopAndAsk })
		any, _ := causal.Minimal(g, x, y, nil, 1)
		with, _ := causal.Minimal(g, x, y, held, 1)
		valid := causal.ValidAdjustment(g, x, y, held)
		switch {
		case valid && grave:
			t.Fatalf("diagram %d, %v, holding %v rightly: %s", i, g.Arrows, q.Held, spell(all))
		case !valid && any != nil && with == nil && !grave:
			t.Fatalf("diagram %d, %v, %s → %s: holding %v is not told to be wrong", i, g.Arrows, q.Exposure, q.Outcome, s.Questions[0].Held)
		}
		for _, m := range all {
			if m.Severity == StopAndAsk {
				wrong++
			}
			for _, repair := range m.Repairs {
				repaired++
				if after := keys(find(apply(t, s, repair.Edit))); slices.Contains(after, m.Key) {
					t.Fatalf("diagram %d, %v: %q leaves %s", i, g.Arrows, repair.Words, m.Key)
				}
			}
		}
	}
	t.Logf("%d grave mistakes, %d repairs", wrong, repaired)
	if wrong < 300 {
		t.Errorf("only %d grave mistakes were met", wrong)
	}
}

// BenchmarkFind is what comes on top of a reading, on the largest diagram of
// Tennant and others (2021): 28 nodes, 99 arrows.
func BenchmarkFind(b *testing.B) {
	r := rand.New(rand.NewPCG(5, 6))
	s, g := random(b, r, 28, 99.0/(28*27/2), 0)
	q := s.Questions[0]
	for v := range g.Len() {
		if id := g.Names[v]; r.Float64() < 0.3 && id != q.Exposure && id != q.Outcome {
			q.Held = append(q.Held, id)
		}
	}
	reading := causal.Read(g, causal.Query{Exposure: g.Index(q.Exposure), Outcome: g.Index(q.Outcome), Held: sortedIndex(g, q.Held)})
	for b.Loop() {
		Find(s, "r", q, reading, nil)
	}
}

func sortedIndex(g *graph.Graph, ids []string) []int {
	var nodes []int
	for _, id := range ids {
		nodes = append(nodes, g.Index(id))
	}
	slices.Sort(nodes)
	return nodes
}
