package fit

import (
	"fmt"
	"math"
	"strings"
	"testing"

	"arrowroot/compile/graph"
	"arrowroot/compile/study"
	"arrowroot/compile/table"
)

// frontDoor is Pearl's table of smoking, tar and cancer (Causality, 2nd ed.
// 2009, Table 3.1, from memory, arithmetic rechecked: testdata/numeric/causal)
// written out as 8,000 people, an unnamed cause behind smoking and cancer.
func frontDoor(t *testing.T) Request {
	t.Helper()
	var rows strings.Builder
	fmt.Fprintln(&rows, "smoking,tar,cancer")
	for _, cell := range []struct {
		smoking, tar string
		people, ill  int
	}{{"no", "no", 3800, 380}, {"yes", "no", 200, 180}, {"no", "yes", 200, 10}, {"yes", "yes", 3800, 3230}} {
		for i := range cell.people {
			cancer := "no"
			if i < cell.ill {
				cancer = "yes"
			}
			fmt.Fprintf(&rows, "%s,%s,%s\n", cell.smoking, cell.tar, cancer)
		}
	}
	s, err := study.Read("smoking.arrowroot", []byte(`{
 "arrowroot": 1,
 "data": [{"name": "people", "file": "people.csv"}],
 "variables": [
  {"id": "smoking", "scale": "binary", "levels": ["no", "yes"], "column": "smoking"},
  {"id": "tar", "scale": "binary", "levels": ["no", "yes"], "column": "tar"},
  {"id": "cancer", "scale": "binary", "levels": ["no", "yes"], "column": "cancer"}
 ],
 "rivals": [{"name": "Through tar alone", "arrows": [{"from": "smoking", "to": "tar"}, {"from": "tar", "to": "cancer"}],
  "arcs": [{"between": ["smoking", "cancer"]}]}],
 "questions": [{"exposure": "smoking", "outcome": "cancer", "from": "no", "to": "yes"}]
}`))
	if err != nil {
		t.Fatal(err)
	}
	data, err := table.Read("people.csv", strings.NewReader(rows.String()), table.Options{})
	if err != nil {
		t.Fatal(err)
	}
	return Request{Study: s, Rival: s.Rivals[0].Name, Question: s.Questions[0], Table: data, Seed: 1, Draws: 1000}
}

// SEMANTICS B2, rule (b): no set closes the back door, and simulating the
// fitted laws with the exposure pinned for the tar alone gives Pearl's answers.
func TestFrontDoor(t *testing.T) {
	long(t)
	t.Parallel()
	req := frontDoor(t)
	// Smoking, a carried term, acts differently with and without tar.
	law := &study.Law{
		Formula: "logit p = alpha_cancer + beta_tar_cancer * tar + beta_smoking_cancer * smoking + c * tar * smoking",
		Priors:  []study.Prior{{Parameter: "c", Text: "normal with mean 0, sd 3"}},
	}
	var err error
	if req.Study, err = (study.ChangeLaw{Rival: req.Rival, Variable: "cancer", Law: law}).Apply(req.Study); err != nil {
		t.Fatal(err)
	}
	e := run(t, req).Effect
	if !e.Identified || e.Full == nil || e.HeldValid {
		t.Fatalf("identified %v, held valid %v, refusal %q", e.Identified, e.HeldValid, e.Refusal)
	}
	within(t, "crude", e.Crude.Centre, 0.8525-0.0975, e.Crude.Spread/4)
	within(t, "smokers", e.Full.To.Centre, 0.4525, e.Full.To.Spread/2)
	within(t, "others", e.Full.From.Centre, 0.4975, e.Full.From.Spread/2)
	within(t, "full", e.Full.Centre, 0.4525-0.4975, e.Full.Spread/2)
	if e.Headline() != e.Full || !e.Crude.Association || !e.Adjusted.Association {
		t.Errorf("the full model should be the headline, the others associations")
	}
}

// SEMANTICS B3: with an arrow from smoking to cancer as well, nothing is
// shown as an effect.
func TestNotIdentified(t *testing.T) {
	t.Parallel()
	req := frontDoor(t)
	req.Draws = 100
	s, err := (study.AddArrow{Rival: req.Rival, Arrow: study.Arrow{From: "smoking", To: "cancer"}}).Apply(req.Study)
	if err != nil {
		t.Fatal(err)
	}
	req.Study = s
	r := run(t, req)
	e := r.Effect
	if e.Identified || e.Full != nil || e.Headline() != nil || !e.Crude.Association || !e.Adjusted.Association {
		t.Errorf("shown as an effect: %+v", e)
	}
	if !strings.HasPrefix(e.Refusal, "not identified") {
		t.Errorf("refusal: %q", e.Refusal)
	}
	for _, a := range r.Arrows {
		if a.From == "smoking" && a.To == "cancer" && !a.Association {
			t.Error("the arrow smoking → cancer is painted as causal")
		}
	}
	for _, n := range r.Nodes {
		if n.Variable == "cancer" && !(n.Refused && math.IsNaN(n.Centre) || n.Refused && n.Centre == 0) {
			t.Errorf("cancer is painted with a change: %+v", n)
		}
	}
}

// An arrow is an association where an unmeasured cause reaches both its ends,
// also through unmeasured variables (SEMANTICS G).
func TestAssociationsAreNamed(t *testing.T) {
	g, err := graph.New(graph.Spec{
		Names:      []string{"u", "v", "x", "y", "z"},
		Arrows:     [][2]int{{0, 1}, {0, 3}, {1, 2}, {2, 3}, {2, 4}},
		Unmeasured: []int{0, 1},
	})
	if err != nil {
		t.Fatal(err)
	}
	found := confounded(g)
	if len(found) != 1 || !found[[2]string{"x", "y"}] {
		t.Errorf("associations: %v", found)
	}
}
