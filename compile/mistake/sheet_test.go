package mistake

import (
	"encoding/json"
	"fmt"
	"os"
	"slices"
	"strings"
	"testing"

	"arrowroot/compile/study"
)

// The four stories are invented; their answers are in compile/causal's tests.
const (
	hedges      = "land -> hedge, land -> spray -> bees, soil -> hedge, soil -> flowers, ? -> hedge, spray; hedge -> flowers -> bees, hedge -> bees -> count, wind -> count, hours -> count"
	births      = "smoke -> weight -> trouble, smoke -> trouble, (cause) -> weight, cause -> trouble, class -> smoke, class -> trouble, age -> smoke, age -> trouble, parity -> weight, class -> noted"
	scholarship = "(gift) -> entry -> award, gift -> mark, income -> award, income -> mark, award -> study -> mark, award -> mark -> answered, award -> answered, income -> answered"
	crops       = "cover -> nitrogen -> yield, cover -> water -> yield, rain -> water, rain -> yield, slope -> cover, slope -> water, (skill) -> cover, skill -> yield, subsidy -> cover"
)

// sheet makes a study of one rival, "r", from arrows as text, comma or
// semicolon between chains; names in brackets are not measured. The question is
// of the first of ask on the second, holding the others, from 0 to 1.
func sheet(t testing.TB, text, ask string) *study.Study {
	t.Helper()
	s, err := study.AddRival{Rival: study.Rival{Name: "r", Layout: &study.Layout{}, Diagram: &study.Diagram{}}}.Apply(&study.Study{})
	if err != nil {
		t.Fatal(err)
	}
	var hidden []string
	for _, word := range strings.Fields(text) {
		if name, ok := strings.CutPrefix(word, "("); ok {
			hidden = append(hidden, strings.TrimRight(name, "),;"))
		}
	}
	var lines []string
	for _, block := range strings.Split(strings.NewReplacer("(", "", ")", "").Replace(text), ";") {
		if strings.Contains(block, "?") {
			lines = append(lines, strings.TrimSpace(block[strings.Index(block, "?"):]))
			block = strings.TrimRight(block[:strings.Index(block, "?")], ", ")
		}
		for _, chain := range strings.Split(block, ",") {
			if chain = strings.TrimSpace(chain); chain != "" {
				lines = append(lines, chain)
			}
		}
	}
	s = apply(t, s, study.TypeArrows{Rival: "r", Text: strings.Join(lines, "\n")})
	for _, id := range hidden {
		v := *s.Variable(id)
		v.Unmeasured = true
		s = apply(t, s, study.ChangeVariable{ID: id, To: v})
	}
	words := strings.Fields(ask)
	q := study.Question{Exposure: words[0], Outcome: words[1], Held: words[2:], From: &study.Setting{}, To: &study.Setting{Number: 1}}
	return apply(t, s, study.AddQuestion{Question: q})
}

func apply(t testing.TB, s *study.Study, edits ...study.Edit) *study.Study {
	t.Helper()
	for _, e := range edits {
		next, err := e.Apply(s)
		if err != nil {
			t.Fatalf("%s: %v", e.Label(), err)
		}
		s = next
	}
	return s
}

// change edits a variable.
func change(t testing.TB, s *study.Study, id string, f func(*study.Variable)) *study.Study {
	t.Helper()
	v := *s.Variable(id)
	f(&v)
	return apply(t, s, study.ChangeVariable{ID: id, To: v})
}

func find(s *study.Study) []Mistake {
	var q *study.Question
	if len(s.Questions) > 0 {
		q = s.Questions[0]
	}
	return Find(s, "r", q, nil, nil)
}

// alarms are all but the note that nothing unmeasured is drawn, which textbook
// diagrams rightly get: it asks, and accuses nobody.
func alarms(all []Mistake) []Mistake {
	return slices.DeleteFunc(slices.Clone(all), func(m Mistake) bool { return m.Code == NothingHidden })
}

func keys(all []Mistake) []string {
	var words []string
	for _, m := range all {
		words = append(words, m.Key)
	}
	return words
}

func spell(all []Mistake) string {
	var b strings.Builder
	for _, m := range all {
		fmt.Fprintf(&b, "\n  %s: %s %s", m.Key, m.Sentence, m.Why)
	}
	return b.String()
}

// A textbook case is a graph with a question from testdata/causal, whose
// SOURCE.md tells where each comes from.
type textbook struct {
	ID, Source        string
	Nodes             []string
	Edges, Bidirected [][2]string
	Latent            []string
	Exposure, Outcome []string
}

// textbooks are the worked cases with one exposure and one outcome, each graph
// once.
func textbooks(t testing.TB) []textbook {
	t.Helper()
	var all []textbook
	seen := map[string]bool{}
	for _, name := range []string{"cases.json", "beyond.json"} {
		text, err := os.ReadFile("../../testdata/causal/" + name)
		if err != nil {
			t.Fatal(err)
		}
		var cases []textbook
		if err := json.Unmarshal(text, &cases); err != nil {
			t.Fatal(err)
		}
		for _, c := range cases {
			id := fmt.Sprint(c.Nodes, c.Edges, c.Bidirected, c.Latent, c.Exposure, c.Outcome)
			if len(c.Exposure) == 1 && len(c.Outcome) == 1 && !seen[id] {
				seen[id] = true
				all = append(all, c)
			}
		}
	}
	return all
}

func (c *textbook) study(t testing.TB) *study.Study {
	t.Helper()
	s := &study.Study{Rivals: []*study.Rival{{Name: "r", Layout: &study.Layout{}, Diagram: &study.Diagram{}}}}
	d := s.Rivals[0].Diagram
	id := map[string]string{}
	for _, n := range c.Nodes {
		id[n] = s.FreeID(n)
		s.Variables = append(s.Variables, &study.Variable{ID: id[n], Unmeasured: slices.Contains(c.Latent, n)})
		d.Nodes = append(d.Nodes, &study.Node{Variable: id[n]})
	}
	for _, e := range c.Edges {
		d.Arrows = append(d.Arrows, &study.Arrow{From: id[e[0]], To: id[e[1]]})
	}
	for _, e := range c.Bidirected {
		d.Arcs = append(d.Arcs, &study.Arc{A: id[e[0]], B: id[e[1]]})
	}
	s.Questions = []*study.Question{{Exposure: id[c.Exposure[0]], Outcome: id[c.Outcome[0]], From: &study.Setting{}, To: &study.Setting{Number: 1}}}
	if err := study.Check(s); err != nil {
		t.Fatalf("%s: %v", c.ID, err)
	}
	return s
}
