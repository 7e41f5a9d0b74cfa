package main

import (
	"context"
	"fmt"
	"maps"
	"path/filepath"
	"slices"
	"strings"
	"testing"

	"arrowroot/compile/study"
)

// drawn reads "A -> B -> C, (U) -> A": a variable in brackets was not measured.
func drawn(text string) *study.Study {
	var nodes, hidden []string
	var edges [][2]string
	for _, chain := range strings.Split(text, ", ") {
		before := ""
		for _, id := range strings.Split(chain, " -> ") {
			if bare := strings.Trim(id, "()"); bare != id {
				id = bare
				hidden = append(hidden, id)
			}
			if !slices.Contains(nodes, id) {
				nodes = append(nodes, id)
			}
			if before != "" {
				edges = append(edges, [2]string{before, id})
			}
			before = id
		}
	}
	return sheetOf(nodes, edges, nil, hidden)
}

// Four invented studies, end to end. What they must say was found before the
// program was written, by brute-force d-separation over all sets; in brackets
// the effects of a simulation of 60,000 rows.
const (
	hedgerows   = "L -> H, L -> P, P -> B, S -> H, S -> F, (U) -> H, U -> P, H -> F -> B, H -> B -> O, W -> O, E -> O"
	birthWeight = "X -> M -> Y, X -> Y, (U) -> M, U -> Y, C -> X, C -> Y, A -> X, A -> Y, P -> M, C -> RM"
	scholarship = "(U) -> Z -> T, U -> Y, I -> T, I -> Y, T -> M -> Y, T -> Y -> R, T -> R, I -> R"
	coverCrop   = "K -> N -> Y, K -> W -> Y, R -> W, R -> Y, G -> K, G -> W, (U) -> K, U -> Y, Z -> K"
)

func TestReadHedgerows(t *testing.T) {
	s := drawn(hedgerows)
	feed := drawn(strings.Replace(hedgerows, "H -> B -> O", "B -> O", 1)).Rivals[0]
	feed.Name = "feed only"
	s.Rivals = append(s.Rivals, feed)
	ask := []string{"-exposure", "H", "-outcome", "B"}
	out, _, _ := reading(t, s, ask...)
	if !same(out.Hold, [][]string{{"P", "S"}}) || out.ByHolding {
		t.Errorf("hold %v", out.Hold)
	}
	for _, id := range []string{"F", "O"} {
		if !slices.Contains(out.Forbidden, id) || out.Controls[id].Verdict != "bad" {
			t.Errorf("%s: forbidden %v, control %v", id, out.Forbidden, out.Controls[id])
		}
	}
	for held, enough := range map[string]bool{"L,S": false, "P,S": true, "P,S,F": false} {
		if out, _, _ := reading(t, s, append(ask, "-held", held)...); out.ByHolding != enough {
			t.Errorf("holding %s is enough: %v", held, out.ByHolding)
		}
	}
	// Only the rival without the arrow promises H and B to be unrelated given F and P.
	promised := func(out readingOut) bool {
		return slices.ContainsFunc(out.Pairs, func(p pairOut) bool {
			return same([][]string{p.Between}, [][]string{{"H", "B"}}) && slices.ContainsFunc(p.Given, func(z []string) bool { return same([][]string{z}, [][]string{{"F", "P"}}) })
		})
	}
	feedOut, _, _ := reading(t, s, append(ask, "-rival", "feed only")...)
	if promised(out) || !promised(feedOut) || out.Rivals[0].Same || !strings.Contains(out.Rivals[0].Sentence, "Data can tell") {
		t.Errorf("promised %v and %v; %v", promised(out), promised(feedOut), out.Rivals)
	}
}

func TestReadBirthWeight(t *testing.T) { // [crude .51, {A, C} .35, with M −.04]
	s := drawn(birthWeight)
	s.Variable("RM").Answers = "M"
	ask := []string{"-exposure", "X", "-outcome", "Y"}
	out, _, _ := reading(t, s, ask...)
	if !same(out.Hold, [][]string{{"A", "C"}}) {
		t.Errorf("hold %v", out.Hold)
	}
	over, _, _ := reading(t, s, append(ask, "-held", "A,C,M")...)
	if over.ByHolding || !strings.Contains(over.Verdict, "Holding M would hide part of the effect: it lies on X → M → Y") || !strings.Contains(over.Way, "direct effect") {
		t.Errorf("%s %s", over.Verdict, over.Way)
	}
	// No law of the answer reads weight, so rows that lack it need not be left out.
	rows := sectionOf(t, out, "rows and records")
	if !hasKind(rows, "missing, MAR") || hasKind(rows, "complete rows, not valid") {
		t.Errorf("%+v", rows.Findings)
	}
}

// Complete rows will do if what they were kept by says nothing more of the
// outcome (Y missing by X, by itself), and nobody knows where the sheet does not
// say what entries are missing by.
func TestReadCompleteRows(t *testing.T) {
	for _, c := range []struct{ sheet, kind string }{
		{"X -> Y, X -> R", "complete rows, valid"}, {"X -> Y, Y -> R", "complete rows, not valid"}, {"X -> Y", "complete rows, undecided"},
	} {
		s := drawn(c.sheet)
		s.Data = []*study.Data{{Name: "d", Text: "x,y\n1,2\n2,\n3,4\n"}}
		s.Variable("X").Column, s.Variable("Y").Column = "x", "y"
		if r := s.Variable("R"); r != nil {
			r.Answers = "Y"
		}
		out, _, _ := reading(t, s, "-exposure", "X", "-outcome", "Y")
		if rows := sectionOf(t, out, "rows and records"); !hasKind(rows, c.kind) {
			t.Errorf("%s: %+v", c.sheet, rows.Findings)
		}
	}
}

// An error-prone record stands in for what was not measured, and says so.
func TestReadRecords(t *testing.T) {
	s := drawn("(C) -> X -> Y, C -> Y, C -> W")
	s.Variable("W").Records = "C"
	out, _, _ := reading(t, s, "-exposure", "X", "-outcome", "Y", "-held", "W")
	rows := sectionOf(t, out, "rows and records")
	if out.ByHolding || !hasKind(rows, "record") || !strings.Contains(rows.Summary, "W is a record of C with error: holding it closes only part of what runs through C") {
		t.Errorf("%+v", rows)
	}
}

func TestReadScholarship(t *testing.T) { // [true .50, crude .73, {I, Z} .49, with M .29, responders only .16]
	s := drawn(scholarship)
	ask := []string{"-exposure", "T", "-outcome", "Y"}
	out, _, _ := reading(t, s, ask...)
	if !same(out.Hold, [][]string{{"I", "Z"}}) || !slices.Contains(out.Forbidden, "M") || !slices.Contains(out.Forbidden, "R") {
		t.Errorf("hold %v, forbidden %v", out.Hold, out.Forbidden)
	}
	limited := *s
	s.Rivals[0].Diagram.Node("R").Limits = true
	among, _, _ := reading(t, &limited, ask...)
	if len(among.Hold) > 0 || among.ByHolding || !strings.Contains(among.Verdict, "R") || !hasKind(sectionOf(t, among, "rows and records"), "selection, not valid") {
		t.Errorf("among responders: hold %v, %s", among.Hold, among.Verdict)
	}
	if rows := sectionOf(t, among, "fitted laws"); among.Identified || !hasKind(rows, "law of kept rows") || !strings.Contains(among.Direct.Sentence, "cannot be read by holding anything") || among.Direct.Identified {
		t.Errorf("among responders: identified %v, direct effect %+v, laws %s", among.Identified, among.Direct, rows.Summary)
	}
	if !slices.Equal(among.Asked.RowsBy, []string{"R"}) {
		t.Errorf("rows chosen by %v", among.Asked.RowsBy)
	}
}

func TestReadCoverCrop(t *testing.T) {
	s := drawn(coverCrop)
	ask := []string{"-exposure", "K", "-outcome", "Y"}
	out, _, _ := reading(t, s, ask...)
	if len(out.Hold) > 0 || !slices.Equal(out.WouldHelp, []string{"U"}) || !out.Identified || !strings.HasPrefix(out.Verdict, "No set of measured variables") {
		t.Errorf("hold %v, would help %v, identified %v: %s", out.Hold, out.WouldHelp, out.Identified, out.Verdict)
	}
	door := func(given ...string) bool {
		return slices.ContainsFunc(out.FrontDoors, func(d frontDoorOut) bool {
			return same([][]string{d.Through, d.Given}, [][]string{{"N", "W"}, given})
		})
	}
	if !door("G", "R") || door("R") || door() {
		t.Errorf("front doors %v", out.FrontDoors)
	}
	if len(out.Instruments) != 1 || out.Instruments[0].Variable != "Z" {
		t.Errorf("instruments %v", out.Instruments)
	}
	if out.Controls["Z"].Verdict != "bad" {
		t.Errorf("Z as a control: %v", out.Controls["Z"])
	}
	// Each rival without one of the two ways promises what the other does not.
	for _, c := range []struct{ cut, keeps, promises, not string }{
		{"W -> Y", "K -> W", "W", "N"}, {"N -> Y", "K -> N", "N", "W"},
	} {
		one := drawn(strings.Replace(coverCrop, c.keeps+" -> Y", c.keeps, 1))
		out, _, _ := reading(t, one, ask...)
		apart := func(id string) bool {
			return slices.ContainsFunc(out.Pairs, func(p pairOut) bool {
				return same([][]string{p.Between}, [][]string{{id, "Y"}}) && len(p.Given) > 0
			})
		}
		if !apart(c.promises) || apart(c.not) {
			t.Errorf("without %s: pairs %v", c.cut, out.Pairs)
		}
	}
}

func sectionOf(t *testing.T, out readingOut, name string) sectionOut {
	t.Helper()
	i := slices.IndexFunc(out.Sections, func(s sectionOut) bool { return s.Name == name })
	if i < 0 {
		t.Fatalf("there is no section %q", name)
	}
	return out.Sections[i]
}

func hasKind(s sectionOut, kind string) bool {
	return slices.ContainsFunc(s.Findings, func(f readFinding) bool { return f.Kind == kind })
}

// A row filter is an effect of what it goes by: filtering on an effect of
// exposure and outcome opens a path, filtering on a cause does not.
func TestReadRowFilter(t *testing.T) {
	low := 1.0
	for by, hold := range map[string][][]string{"C": {}, "Z": {{}}} {
		s := drawn("X -> Y, X -> C, Y -> C, Z -> X")
		s.Data = []*study.Data{{Name: "d", Text: "X,Y,C,Z\n1,1,1,1\n", Keep: []study.Condition{{Variable: by, Low: &low}}}}
		for _, id := range []string{"X", "Y", "C", "Z"} {
			s.Variable(id).Column = id
		}
		out, status, messages := reading(t, s, "-exposure", "X", "-outcome", "Y")
		if status != done || !same(out.Hold, hold) || !slices.Equal(out.Asked.RowsBy, []string{"the filter on " + by}) {
			t.Errorf("filter on %s: hold %v, rows by %v, %s %s", by, out.Hold, out.Asked.RowsBy, out.Verdict, messages)
		}
	}
}

// A question that cannot be asked is answered with a sentence, and what needs
// no question is read all the same.
func TestReadWhatCannotBeAsked(t *testing.T) {
	two := drawn("A -> B, C -> B")
	other := drawn("A -> C").Rivals[0]
	other.Name = "other"
	two.Rivals = append(two.Rivals, other)
	hidden := drawn("(A) -> (B), A -> (C), C -> B")
	for _, c := range []struct {
		study  *study.Study
		args   string
		says   string
		status int
	}{
		{two, "", "Nothing is asked yet", problems},
		{two, "-exposure A", "The effect of A on what?", problems},
		{two, "-exposure A -outcome A", "A cannot be exposure and outcome at once", problems},
		{two, "-exposure A -outcome B -given A", "A is in the question twice", problems},
		{two, "-exposure A -outcome B -rival other", "B is to be the outcome, but it is not on the sheet of “other”", problems},
		{two, "-exposure A -outcome C -held B -rival other", "holding nothing", done},
		{hidden, "-exposure A -outcome B", "A → B cannot be read: A was not measured", done},
	} {
		out, status, messages := reading(t, c.study, strings.Fields(c.args)...)
		if status != c.status || !strings.Contains(out.Verdict, c.says) || status == problems && !strings.Contains(messages, c.says[1:]) {
			t.Errorf("%s: status %d, %q, %q", c.args, status, out.Verdict, messages)
		}
		if !out.Done || len(out.Sections) < 4 {
			t.Errorf("%s: %d sections, done %v", c.args, len(out.Sections), out.Done)
		}
	}
	if _, status, messages := reading(t, two, "-exposure", "D"); status != wrongUse || !strings.Contains(messages, `no variable "D"; it has A, B, C`) {
		t.Errorf("status %d, %q", status, messages)
	}
}

// Ten million paths and a thousand variables are read within budgets that say
// what they left out. The time is only there to catch a hang.
func TestReadLargeSheets(t *testing.T) {
	full := func(n, back int) *study.Study {
		var nodes []string
		var edges [][2]string
		for v := range n {
			nodes = append(nodes, fmt.Sprintf("v%d", v))
			for u := max(0, v-back); u < v; u++ {
				edges = append(edges, [2]string{nodes[u], nodes[v]})
			}
		}
		return sheetOf(nodes, edges, nil, []string{"v1"})
	}
	for name, s := range map[string]*study.Study{"all joined": full(13, 13), "long": full(1000, 3)} {
		nodes := s.Rivals[0].Diagram.Nodes
		out, status, messages := reading(t, s, "-exposure", "v0", "-outcome", nodes[len(nodes)-1].Variable, "-paths", "20", "-sets", "5")
		if status != done || !out.Done || len(out.Paths) != 20 || out.PathsExact || out.PathCount < 21 || !out.MorePaths {
			t.Errorf("%s: status %d %s, %d paths of %d", name, status, messages, len(out.Paths), out.PathCount)
		}
		if left := sectionOf(t, out, "paths").LeftOut; !strings.Contains(left, "The first 20 of at least") {
			t.Errorf("%s: paths left out: %q", name, left)
		}
	}
}

// A run that is stopped says what it had by then.
func TestReadStopped(t *testing.T) {
	file := filepath.Join(folder(t), "plots.arrowroot")
	ctx, stop := context.WithCancel(context.Background())
	stop()
	status, answer, messages := batch(ctx, t, "read", file)
	if status != problems || answer["done"] != false || messages == "" {
		t.Errorf("status %d, done %v, %q", status, answer["done"], messages)
	}
}

// Keys of findings are their own within a rival, so that setting one aside
// never hits another.
func TestReadKeysAreTheirOwn(t *testing.T) {
	for _, text := range []string{hedgerows, birthWeight, scholarship, coverCrop} {
		s := drawn(text)
		ends := map[string][2]string{hedgerows: {"H", "B"}, birthWeight: {"X", "Y"}, scholarship: {"T", "Y"}, coverCrop: {"K", "Y"}}[text]
		out, _, _ := reading(t, s, "-exposure", ends[0], "-outcome", ends[1])
		seen := map[string]string{}
		for _, section := range out.Sections {
			for _, f := range section.Findings {
				if other, twice := seen[f.Key]; twice {
					t.Errorf("%q is %q and %q", f.Key, other, f.Sentence)
				}
				seen[f.Key] = f.Sentence
				if f.Sentence == "" || !strings.HasSuffix(f.Sentence, ".") {
					t.Errorf("%q: %q", f.Key, f.Sentence)
				}
			}
		}
		if len(seen) < 20 {
			t.Errorf("only %d findings: %v", len(seen), slices.Collect(maps.Keys(seen)))
		}
	}
}
