package main

import (
	"context"
	"encoding/json"
	"fmt"
	"os"
	"path/filepath"
	"slices"
	"strings"
	"testing"

	"arrowroot/compile/study"
)

// A reference is one case of testdata/causal, whose SOURCE.md says where its
// answers come from.
type reference struct {
	ID          string
	Nodes       []string
	Edges       [][2]string
	Bidirected  [][2]string
	Latent      []string
	Exposure    []string
	Outcome     []string
	Conditioned []string
	Question    struct {
		Type  string
		Z     string
		Sets  [][]string
		Given []string
		S     string
		Other struct {
			Nodes []string
			Edges [][2]string
		}
	}
	Answer  json.RawMessage
	Answers struct {
		Forbidden  []string
		Adjustment struct{ Minimal [][]string }
		Paths      struct{ Total, Open, Causal, Backdoor int } `json:"paths_given_conditioned"`
		FrontDoor  [][]string                                  `json:"frontdoor_minimal"`
		OSet       *[]string                                   `json:"o_set"`

		Identifiable bool
	}
}

func references(t *testing.T, name string) []reference {
	t.Helper()
	text, err := os.ReadFile("../../testdata/causal/" + name)
	if err != nil {
		t.Fatal(err)
	}
	var all []reference
	if err := json.Unmarshal(text, &all); err != nil || len(all) == 0 {
		t.Fatalf("%d cases, %v", len(all), err)
	}
	return all
}

// sheetOf draws nodes and arrows as the one rival of a study.
func sheetOf(nodes []string, edges, arcs [][2]string, hidden []string) *study.Study {
	r := &study.Rival{Name: "drawn", Layout: &study.Layout{}, Diagram: &study.Diagram{}}
	s := &study.Study{Rivals: []*study.Rival{r}}
	for _, id := range nodes {
		s.Variables = append(s.Variables, &study.Variable{ID: id, Scale: study.Real, Unmeasured: slices.Contains(hidden, id)})
		r.Diagram.Nodes = append(r.Diagram.Nodes, &study.Node{Variable: id})
	}
	for _, e := range edges {
		r.Diagram.Arrows = append(r.Diagram.Arrows, &study.Arrow{From: e[0], To: e[1]})
	}
	for _, e := range arcs {
		r.Diagram.Arcs = append(r.Diagram.Arcs, &study.Arc{A: e[0], B: e[1]})
	}
	return s
}

// reading is what the batch program prints of a study.
func reading(t *testing.T, s *study.Study, args ...string) (out readingOut, status int, messages string) {
	t.Helper()
	file := filepath.Join(t.TempDir(), "case.arrowroot")
	if err := study.Save(file, s); err != nil {
		t.Fatal(err)
	}
	status, answer, messages := batch(context.Background(), t, append([]string{"read", file}, args...)...)
	text, err := json.Marshal(answer)
	if err != nil {
		t.Fatal(err)
	}
	if err := json.Unmarshal(text, &out); err != nil {
		t.Fatal(err)
	}
	return out, status, messages
}

func (c *reference) read(t *testing.T, args ...string) readingOut {
	t.Helper()
	s := sheetOf(c.Nodes, c.Edges, c.Bidirected, c.Latent)
	if len(c.Question.Other.Nodes) > 0 {
		other := sheetOf(c.Question.Other.Nodes, c.Question.Other.Edges, nil, nil).Rivals[0]
		other.Name = "other"
		s.Rivals = append(s.Rivals, other)
	}
	if len(c.Exposure) > 0 {
		args = append(args, "-exposure", strings.Join(c.Exposure, ","), "-outcome", strings.Join(c.Outcome, ","))
	}
	out, status, messages := reading(t, s, args...)
	if status != done && len(c.Exposure) > 0 {
		t.Fatalf("%s: status %d: %s", c.ID, status, messages)
	}
	return out
}

// same compares sets of sets, whatever their order.
func same(got, want [][]string) bool {
	spell := func(sets [][]string) []string {
		all := []string{}
		for _, z := range sets {
			z = slices.Clone(z)
			slices.Sort(z)
			all = append(all, strings.Join(z, " "))
		}
		slices.Sort(all)
		return all
	}
	return slices.Equal(spell(got), spell(want))
}

func comma(flag string, ids []string) []string {
	if len(ids) == 0 {
		return nil
	}
	return []string{flag, strings.Join(ids, ",")}
}

// The batch program gives the answers of the worked cases.
func TestReadWorkedCases(t *testing.T) {
	checked := 0
	for _, c := range append(references(t, "cases.json"), references(t, "beyond.json")...) {
		var want struct {
			Exists       bool
			Minimal      [][]string
			Forbidden    []string
			Results      []bool
			Identifiable bool
			Without      bool      `json:"valid_without"`
			With         bool      `json:"valid_with"`
			OSet         *[]string `json:"o_set"`
			OSetValid    bool      `json:"o_set_valid"`
			Size         int
			Undirected   [][2]string
			Equivalent   bool
			Pairwise     [][3]json.RawMessage
			Paths        []struct {
				Path string
				Open bool
			}
			Total [][2]json.RawMessage
		}
		if err := json.Unmarshal(c.Answer, &want); err != nil && slices.Contains([]string{"adjust", "valid", "identify", "control", "oset", "paths", "frontdoor", "cpdag", "equivalent"}, c.Question.Type) {
			t.Fatalf("%s: %v", c.ID, err)
		}
		checked++
		switch c.Question.Type {
		case "adjust":
			out := c.read(t, comma("-with", c.Conditioned)...)
			if !same(out.Hold, want.Minimal) || !same([][]string{out.Forbidden}, [][]string{want.Forbidden}) {
				t.Errorf("%s: hold %v, forbidden %v, want %v and %v", c.ID, out.Hold, out.Forbidden, want.Minimal, want.Forbidden)
			}
		case "valid":
			c.Latent = nil // the file tries unmeasured nodes too: with them measured
			for i, z := range c.Question.Sets {
				if out := c.read(t, comma("-held", z)...); out.ByHolding != want.Results[i] {
					t.Errorf("%s: %v is enough: %v", c.ID, z, out.ByHolding)
				}
			}
		case "control":
			if slices.Contains(c.Latent, c.Question.Z) {
				checked--
				continue // has no verdict, not being measured
			}
			for _, with := range []bool{false, true} {
				held, enough := slices.Clone(c.Conditioned), want.Without
				if with {
					held, enough = append(held, c.Question.Z), want.With
				}
				if out := c.read(t, comma("-held", held)...); out.ByHolding != enough {
					t.Errorf("%s: holding %v is enough: %v", c.ID, held, out.ByHolding)
				}
			}
		case "identify":
			out := c.read(t, comma("-given", c.Question.Given)...)
			if out.Estimand.Identified != want.Identifiable || out.Estimand.Identified != (out.Estimand.Symbols != "") {
				t.Errorf("%s: estimand %+v", c.ID, out.Estimand)
			}
		case "oset":
			out := c.read(t)
			if want.OSetValid && !same([][]string{out.MostPreciseOfAll}, [][]string{*want.OSet}) || !want.OSetValid && out.MostPreciseOfAll != nil {
				t.Errorf("%s: most precise %v", c.ID, out.MostPreciseOfAll)
			}
		case "paths":
			out := c.read(t, comma("-held", c.Conditioned)...)
			got, listed := []string{}, []string{}
			for _, p := range out.Paths {
				got = append(got, fmt.Sprint(p.Path, p.Open))
			}
			for _, p := range want.Paths {
				arrows := strings.NewReplacer("<->", "↔", "->", "→", "<-", "←")
				listed = append(listed, fmt.Sprint(arrows.Replace(p.Path), p.Open))
			}
			slices.Sort(got)
			slices.Sort(listed)
			if !slices.Equal(got, listed) {
				t.Errorf("%s: paths %v, want %v", c.ID, got, listed)
			}
		case "frontdoor":
			out := c.read(t)
			var plain [][]string
			for _, d := range out.FrontDoors {
				if len(d.Given) == 0 {
					plain = append(plain, d.Through)
				}
			}
			if !same(plain, want.Minimal) {
				t.Errorf("%s: front doors %v, want %v", c.ID, out.FrontDoors, want.Minimal)
			}
		case "instruments":
			out := c.read(t)
			if len(out.Instruments) != len(want.Total) {
				t.Errorf("%s: instruments %v", c.ID, out.Instruments)
			}
		case "cpdag":
			out := c.read(t)
			turn := [][]string{}
			for _, a := range out.Class.Reversible {
				turn = append(turn, a[:])
			}
			lines := [][]string{}
			for _, a := range want.Undirected {
				lines = append(lines, a[:])
			}
			if out.Class.Size == nil || out.Class.Size.Int64() != int64(want.Size) || !same(turn, lines) {
				t.Errorf("%s: class %+v", c.ID, out.Class)
			}
		case "equivalent":
			if out := c.read(t); len(out.Rivals) != 1 || out.Rivals[0].Same != want.Equivalent {
				t.Errorf("%s: rivals %+v", c.ID, out.Rivals)
			}
		default:
			checked--
		}
	}
	if checked < 90 {
		t.Errorf("only %d cases were checked", checked)
	}
}

// … and of the random graphs.
func TestReadRandomGraphs(t *testing.T) {
	for i, c := range references(t, "random.json") {
		if i%5 != 0 && os.Getenv("ARROWROOT_LONG") == "" {
			continue
		}
		out := c.read(t, append(comma("-held", c.Conditioned), "-paths", "100000", "-sets", "10000")...)
		a := c.Answers
		if !same(out.Hold, a.Adjustment.Minimal) || !same([][]string{out.Forbidden}, [][]string{a.Forbidden}) {
			t.Errorf("%s: hold %v, forbidden %v, want %v and %v", c.ID, out.Hold, out.Forbidden, a.Adjustment.Minimal, a.Forbidden)
		}
		if out.Estimand.Identified != a.Identifiable {
			t.Errorf("%s: identified %v", c.ID, out.Estimand.Identified)
		}
		if len(c.Exposure)+len(c.Outcome) > 2 {
			continue
		}
		open, causes, backDoor := 0, 0, 0
		for _, p := range out.Paths {
			if p.Open {
				open++
			}
			switch p.Kind {
			case "causal":
				causes++
			case "back-door":
				backDoor++
			}
		}
		if p := a.Paths; len(out.Paths) != p.Total || out.PathCount != p.Total || open != p.Open || causes != p.Causal || backDoor != p.Backdoor {
			t.Errorf("%s: %d paths, %d open, %d causal, %d back-door, want %+v", c.ID, len(out.Paths), open, causes, backDoor, p)
		}
		for _, door := range a.FrontDoor {
			if !slices.ContainsFunc(out.FrontDoors, func(d frontDoorOut) bool { return len(d.Given) == 0 && same([][]string{d.Through}, [][]string{door}) }) {
				t.Errorf("%s: no front door through %v", c.ID, door)
			}
		}
	}
}
