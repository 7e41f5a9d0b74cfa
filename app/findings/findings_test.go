package findings

import (
	"context"
	"errors"
	"fmt"
	"math"
	"math/rand/v2"
	"slices"
	"strings"
	"testing"

	"arrowroot/compile/study"
)

// random draws n variables and m arrows, one in hide of them unmeasured (0 =
// none), exposure and outcome excepted.
func random(n, m, hide int) (s *study.Study, ask Ask) {
	r := rand.New(rand.NewPCG(uint64(n), uint64(m)))
	rival := &study.Rival{Name: "drawn", Layout: &study.Layout{}, Diagram: &study.Diagram{}}
	s = &study.Study{Rivals: []*study.Rival{rival}}
	x, y := n/2, n-2
	for v := range n {
		id := fmt.Sprintf("v%d", v)
		hidden := hide > 0 && r.IntN(max(hide, 1)) == 0 && v != x && v != y
		s.Variables = append(s.Variables, &study.Variable{ID: id, Unmeasured: hidden})
		rival.Diagram.Nodes = append(rival.Diagram.Nodes, &study.Node{Variable: id})
	}
	seen := map[[2]int]bool{}
	for len(seen) < m {
		if a, b := r.IntN(n), r.IntN(n); a < b && !seen[[2]int{a, b}] {
			seen[[2]int{a, b}] = true
			rival.Diagram.Arrows = append(rival.Diagram.Arrows, &study.Arrow{From: s.Variables[a].ID, To: s.Variables[b].ID})
		}
	}
	return s, Ask{Exposures: []string{s.Variables[x].ID}, Outcomes: []string{s.Variables[y].ID}}
}

// Sections come one after another, paths and verdict first; what was handed
// over never changes; the last is what Read gives.
func TestStream(t *testing.T) {
	s, ask := random(12, 29, 6)
	var stages []*Findings
	var said []string
	whole := func(f *Findings) string {
		var b strings.Builder
		for _, section := range f.Sections() {
			fmt.Fprintln(&b, section.Name, section.Summary, len(section.Findings))
		}
		return b.String()
	}
	last, err := Stream(context.Background(), s, "drawn", ask, Limits{}, func(f *Findings) {
		stages, said = append(stages, f), append(said, whole(f))
	})
	if err != nil {
		t.Fatal(err)
	}
	first := stages[0]
	if first.Paths == nil || first.Reading == nil || first.Verdict.Sentence == "" || first.Adjustment != nil || first.Done {
		t.Errorf("first: %+v", first)
	}
	for i, f := range stages {
		if whole(f) != said[i] {
			t.Errorf("stage %d changed after it was handed over", i)
		}
		if f.Done != (i == len(stages)-1) {
			t.Errorf("stage %d of %d: done %v", i, len(stages), f.Done)
		}
	}
	if last != stages[len(stages)-1] || len(last.Sections()) != 9 {
		t.Errorf("%d sections", len(last.Sections()))
	}
	again, err := Read(context.Background(), s, "drawn", ask, Limits{})
	if err != nil || whole(again) != whole(last) {
		t.Errorf("read again: %v\n%s\n%s", err, whole(again), whole(last))
	}
}

// A reading that is stopped gives what there was, and says that it is not all.
func TestStopped(t *testing.T) {
	s, ask := random(12, 29, 6)
	ctx, stop := context.WithCancel(context.Background())
	f, err := Stream(ctx, s, "drawn", ask, Limits{}, func(f *Findings) {
		if f.Adjustment != nil {
			stop()
		}
	})
	if !errors.Is(err, context.Canceled) || f.Paths == nil || f.Adjustment == nil || f.Controls != nil || f.Done {
		t.Errorf("%v, %+v", err, f)
	}
}

// What the sheet does not show is never lit.
func TestNothingBehindTheSheetIsLit(t *testing.T) {
	s, ask := random(12, 29, 0)
	low := 0.0
	s.Data = []*study.Data{{Name: "d", Keep: []study.Condition{{Variable: "v11", Low: &low}, {Variable: "gone", Low: &low}}}}
	s.Variables[11].Column = "c"
	f, err := Read(context.Background(), s, "drawn", ask, Limits{})
	if err != nil {
		t.Fatal(err)
	}
	if f.Sheet != 12 || f.Graph.Len() != 13 || !slices.Equal(f.Selected, []int{12}) {
		t.Fatalf("%d on the sheet, %d in the graph, rows by %v", f.Sheet, f.Graph.Len(), f.Selected)
	}
	for _, section := range f.Sections() {
		for _, one := range section.Findings {
			for _, v := range one.Nodes {
				if v >= f.Sheet {
					t.Errorf("%s lights node %d", one.Key, v)
				}
			}
			for _, e := range one.Edges {
				if e.From >= f.Sheet || e.To >= f.Sheet {
					t.Errorf("%s lights an edge of %d, %d", one.Key, e.From, e.To)
				}
			}
		}
	}
	if !slices.ContainsFunc(f.Rows.Findings, func(one Finding) bool { return one.Key == "filter gone" }) {
		t.Error("a filter by what is not on the sheet is not named")
	}
}

// The direct effect is a question of its own: what it fixes is an exposure too.
// The answers follow from the criterion by hand.
func TestDirectQuestion(t *testing.T) {
	s := &study.Study{Rivals: []*study.Rival{{Name: "r", Layout: &study.Layout{}, Diagram: &study.Diagram{}}}}
	d := s.Rivals[0].Diagram
	for _, id := range []string{"x", "m", "y", "c"} {
		s.Variables = append(s.Variables, &study.Variable{ID: id})
		d.Nodes = append(d.Nodes, &study.Node{Variable: id})
	}
	for _, a := range [][2]string{{"x", "m"}, {"m", "y"}, {"x", "y"}, {"c", "m"}, {"c", "y"}} {
		d.Arrows = append(d.Arrows, &study.Arrow{From: a[0], To: a[1]})
	}
	ask := AskOf(&study.Question{Exposure: "x", Outcome: "y", Effect: study.DirectEffect, Fixed: []study.Fix{{Variable: "m"}}})
	f, err := Read(context.Background(), s, "r", ask, Limits{})
	if err != nil {
		t.Fatal(err)
	}
	if f.Verdict.Sentence != "The direct effect of x on y with m kept as set can be read: hold c." || !slices.Equal(f.Verdict.Propose, []int{3}) {
		t.Errorf("%+v", f.Verdict)
	}
	ask.Held = []string{"c"}
	if f, _ = Read(context.Background(), s, "r", ask, Limits{}); !strings.Contains(f.Verdict.Sentence, "can be read from these data, holding c,") {
		t.Errorf("%+v", f.Verdict)
	}
	ask.Effect, ask.Fixed, ask.Held = "", nil, nil
	if f, _ = Read(context.Background(), s, "r", ask, Limits{}); !strings.Contains(f.Verdict.Sentence, "holding nothing") {
		t.Errorf("total: %+v", f.Verdict)
	}
}

// BenchmarkRead reads everything of a large and a very large diagram beside a
// yardstick of the same run: all but the long lists of 28 variables should take
// less than 50 ms, where a million square roots take a few.
func BenchmarkRead(b *testing.B) {
	for _, size := range [][3]int{{28, 99, 9}, {28, 99, 0}, {100, 300, 10}} {
		s, ask := random(size[0], size[1], size[2])
		name := fmt.Sprintf("%d variables, %d arrows", size[0], size[1])
		if size[2] > 0 {
			name += ", some unmeasured"
		}
		b.Run(name, func(b *testing.B) {
			for b.Loop() {
				if _, err := Read(context.Background(), s, "drawn", ask, Limits{}); err != nil {
					b.Fatal(err)
				}
			}
		})
		b.Run(name+", without long lists", func(b *testing.B) {
			for b.Loop() {
				ctx, stop := context.WithCancel(context.Background())
				if _, err := Stream(ctx, s, "drawn", ask, Limits{}, func(f *Findings) {
					if f.Contradictions != nil {
						stop()
					}
				}); !errors.Is(err, context.Canceled) {
					b.Fatal(err)
				}
			}
		})
	}
	b.Run("yardstick: a million square roots", func(b *testing.B) {
		sum := 0.0
		for b.Loop() {
			for i := range 1_000_000 {
				sum += math.Sqrt(float64(i))
			}
		}
		if sum == 0 {
			b.Fatal("nothing was added")
		}
	})
}

// A table with gaps that the sheet does not speak of is not called whole.
func TestGapsThatTheSheetDoesNotSpeakOf(t *testing.T) {
	s, ask := random(6, 8, 0)
	for _, c := range []struct {
		incomplete []string
		want       string
	}{
		{nil, "nothing is said to be missing"},
		{[]string{"v0"}, "v0 has entries missing"},
		{[]string{"elsewhere"}, "nothing is said to be missing"},
	} {
		ask.Incomplete = c.incomplete
		f, err := Read(context.Background(), s, "drawn", ask, Limits{})
		if err != nil {
			t.Fatal(err)
		}
		all := f.Rows.Summary
		for _, one := range f.Rows.Findings {
			all += " " + one.Sentence
		}
		if !strings.Contains(all, c.want) {
			t.Errorf("with %v missing: %s", c.incomplete, all)
		}
	}
}
