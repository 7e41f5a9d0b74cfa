package fit

import (
	"context"
	"errors"
	"strings"
	"testing"

	"arrowroot/compile/study"
	"arrowroot/compile/table"
	"arrowroot/infer"
)

// traps is a small study in which everything is right.
const traps = `{
 "arrowroot": 1,
 "data": [{"name": "traps", "file": "traps.csv"}],
 "variables": [
  {"id": "hedge", "scale": "real", "column": "hedge"},
  {"id": "hours", "scale": "positive", "column": "hours"},
  {"id": "bees", "scale": "count", "column": "bees"}
 ],
 "rivals": [{"name": "A", "nodes": [{"variable": "hedge"}, {"variable": "hours"}, {"variable": "bees"}],
  "arrows": [{"from": "hedge", "to": "bees"}, {"from": "hours", "to": "bees"}]}],
 "questions": [{"exposure": "hedge", "outcome": "bees", "from": 40, "to": 90}]
}`

const trapRows = "hedge,hours,bees\n40,5,7\n55,6,9\n70,5,8\n85,7,14\n90,6,12\n62,4,6\n"

func fitTraps(t *testing.T, rows string, edit func(*study.Study)) error {
	t.Helper()
	s, err := study.Read("traps.arrowroot", []byte(traps))
	if err != nil {
		t.Fatal(err)
	}
	if edit != nil {
		edit(s)
	}
	data, err := table.Read("traps.csv", strings.NewReader(rows), table.Options{})
	if err != nil {
		t.Fatal(err)
	}
	r, err := Run(context.Background(), Request{Study: s, Rival: "A", Question: s.Questions[0], Table: data, Seed: 1, Draws: 50}, nil)
	if (r == nil) == (err == nil) {
		t.Fatalf("result %v with error %v", r, err)
	}
	return err
}

// Bad data give one message that names the variable and says why, and the fit
// does not begin (issue text, "Bad input").
func TestBadInput(t *testing.T) {
	law := func(s *study.Study) *study.Law {
		n := s.Rivals[0].Diagram.Node("bees")
		n.Law = &study.Law{}
		return n.Law
	}
	for _, c := range []struct {
		name     string
		rows     string
		edit     func(*study.Study)
		variable string
		says     []string
	}{
		{name: "constant exposure", rows: "hedge,hours,bees\n40,5,7\n40,6,9\n40,5,8\n", variable: "hedge", says: []string{"hedge", "40"}},
		{name: "count below zero", rows: "hedge,hours,bees\n40,5,7\n55,6,-1\n70,5,8\n", variable: "bees", says: []string{"bees", "row 2", "−1"}},
		{name: "text among numbers", rows: trapRows + "66,six,7\n", variable: "hours", says: []string{"hours", "row 7", "“six”"}},
		{name: "words throughout", rows: "hedge,hours,bees\nlow,5,7\nhigh,6,9\nhigh,5,8\n", variable: "hedge", says: []string{"hedge", "words"}},
		{name: "column that vanished", rows: "hedge,hour,bees\n40,5,7\n55,6,9\n", variable: "hours", says: []string{"hours"}},
		{name: "no rows left", rows: "hedge,hours,bees\n40,,7\n55,,9\n,5,8\n", variable: "hours", says: []string{"No rows", "hours"}},
		{name: "no rows at all", rows: "hedge,hours,bees\n", says: []string{"no rows"}},
		{name: "formula that does not parse", rows: trapRows, variable: "bees", says: []string{"bracket"},
			edit: func(s *study.Study) { law(s).Formula = "log rate = (alpha_bees + beta_hedge_bees * hedge" }},
		{name: "unknown name", rows: trapRows, variable: "bees", says: []string{"hedges", "hedge"},
			edit: func(s *study.Study) { law(s).Formula = "log rate = alpha_bees + beta_hedge_bees * hedges" }},
		{name: "cycle", rows: trapRows, says: []string{"cycle", "bees", "hedge"},
			edit: func(s *study.Study) {
				d := s.Rivals[0].Diagram
				d.Arrows = append(d.Arrows, &study.Arrow{From: "bees", To: "hedge"})
			}},
	} {
		t.Run(c.name, func(t *testing.T) {
			err := fitTraps(t, c.rows, c.edit)
			var blocked *Blocked
			if !errors.As(err, &blocked) {
				t.Fatalf("%v, want a *Blocked", err)
			}
			for _, word := range c.says {
				if !strings.Contains(err.Error(), word) {
					t.Errorf("“%s” does not say %q", err, word)
				}
			}
			stops := 0
			for _, p := range blocked.Problems {
				if p.Stops {
					stops++
					if c.variable != "" && p.Variable != c.variable {
						t.Errorf("“%s” is about %q, not %s", p.Message, p.Variable, c.variable)
					}
				}
			}
			if stops != 1 {
				t.Errorf("%d problems stop the fit; one message is enough: %v", stops, blocked.Problems)
			}
		})
	}
	if err := fitTraps(t, trapRows, nil); err != nil {
		t.Errorf("the sound study: %v", err)
	}
}

// A density that is nowhere finite is found before sampling and named: where
// the data alone decide it, when the law is written down; where it takes the
// parameters, by the starts that were tried.
func TestNowhereFinite(t *testing.T) {
	formula := func(text string, priors ...study.Prior) func(*study.Study) {
		return func(s *study.Study) {
			s.Rivals[0].Diagram.Node("bees").Law = &study.Law{Formula: text, Priors: priors}
		}
	}
	says := func(err error, words ...string) {
		t.Helper()
		for _, word := range words {
			if err == nil || !strings.Contains(err.Error(), word) {
				t.Errorf("“%v” does not say %q", err, word)
			}
		}
	}
	err := fitTraps(t, trapRows, formula("log rate = alpha_bees + beta_hedge_bees * log (hedge - 60) + beta_hours_bees * hours"))
	says(err, "log (hedge - 60)", "row 1", "hedge is 40")
	if blocked := new(Blocked); !errors.As(err, &blocked) || blocked.Problems[0].Variable != "bees" {
		t.Errorf("%v, want a *Blocked about bees", err)
	}

	err = fitTraps(t, trapRows, formula("log rate = sqrt(a - 1000) + beta_hedge_bees * hedge + beta_hours_bees * hours",
		study.Prior{Parameter: "a", Text: "normal with mean 0, sd 1"}))
	var start *infer.StartError
	if !errors.As(err, &start) {
		t.Fatalf("%v, want a *infer.StartError", err)
	}
	says(err, "bees", "row 1", "nowhere finite")
}
