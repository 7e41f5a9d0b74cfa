package main

import (
	"context"
	"errors"
	"fmt"
	"slices"

	"arrowroot/compile/evidence"
	"arrowroot/compile/graph"
)

type findingOut struct {
	Between  []string       `json:"between"`
	Given    []string       `json:"given"`
	Verdict  string         `json:"verdict"`
	Sentence string         `json:"sentence"`
	Size     *float64       `json:"size"`
	Low      *float64       `json:"low"`
	High     *float64       `json:"high"`
	Signed   bool           `json:"signed"`
	P        *float64       `json:"p"`
	Adjusted *float64       `json:"adjustedP"`
	Rows     int            `json:"rows"`
	Lost     map[string]int `json:"lost"`
	Groups   int            `json:"groups"`
	Plate    string         `json:"plate"`
	Repair   *repairOut     `json:"repair"`
}

type repairOut struct {
	From  string `json:"from"`
	To    string `json:"to"`
	Arc   bool   `json:"arc"`
	Mends int    `json:"mends"`
}

type constraintOut struct {
	Variables []string `json:"variables"`
	Verdict   string   `json:"verdict"`
	Sentence  string   `json:"sentence"`
	Size      *float64 `json:"size"`
	Low       *float64 `json:"low"`
	High      *float64 `json:"high"`
	P         *float64 `json:"p"`
	Adjusted  *float64 `json:"adjustedP"`
	Rows      int      `json:"rows"`
	Weighted  bool     `json:"weighted"` // a functional constraint that is tested as an independence among weighted rows
	CountAs   int      `json:"countAs"`  // equal rows that these are worth
}

type controlOut struct {
	Variable string `json:"variable"`
	For      string `json:"standsInFor"` // "outcome" or "exposure"
	Offer    string `json:"offer"`
	Expected string `json:"expected"`
	findingOut
}

type untestedOut struct {
	Sentence string `json:"sentence"`
	Reason   string `json:"reason"`
}

type checkOut struct {
	Rival         string          `json:"rival"`
	Summary       string          `json:"summary"`
	Method        string          `json:"method"`
	Level         float64         `json:"level"`
	Rows          int             `json:"rows"`
	Contradicted  int             `json:"contradicted"`
	Independences []findingOut    `json:"independences"`
	Functionals   []constraintOut `json:"functionalConstraints"`
	Tetrads       []constraintOut `json:"tetrads"`
	Controls      []controlOut    `json:"negativeControls"`
	Untested      []untestedOut   `json:"neverTested"`
	LeftOut       string          `json:"leftOut"`
}

// check holds what the arrows promise against the data.
func check(ctx context.Context, j *job) (any, error) {
	t, err := j.table()
	if err != nil {
		return nil, err
	}
	if t == nil {
		return nil, errors.New("the study has no data to hold its arrows against: open a table and bind its columns to the variables")
	}
	req := evidence.Request{Study: j.study, Rival: j.rival, Table: t, Question: j.question}
	if q := j.question; q != nil {
		req.Level = q.Level
	}
	last := -1
	e, err := evidence.Test(ctx, req, func(done, total int) {
		if tenth := 10 * done / total; tenth != last {
			last = tenth
			fmt.Fprintf(j.stderr, "%d %% done\n", 10*tenth)
		}
	})
	if err != nil {
		return nil, err
	}
	return printCheck(e), nil
}

func printCheck(e *evidence.Evidence) *checkOut {
	out := &checkOut{
		Rival: e.Rival, Summary: e.Summary, Method: e.Method, Level: e.Level, Rows: e.Rows, Contradicted: e.Contradicted, LeftOut: e.LeftOut,
		Independences: []findingOut{}, Functionals: []constraintOut{}, Tetrads: []constraintOut{}, Controls: []controlOut{}, Untested: []untestedOut{},
	}
	for i := range e.Findings {
		out.Independences = append(out.Independences, printFinding(e.Graph, &e.Findings[i]))
	}
	for _, f := range e.Functionals {
		to := printConstraint(e.Graph.NamesOf([]int{f.FreeOf, f.Node}), f.Verdict, f.Sentence, f.Effect, f.P, f.Adjusted, f.Rows)
		if to.CountAs = f.Rows; f.Weighted {
			to.Weighted, to.CountAs = true, f.Effective
		}
		out.Functionals = append(out.Functionals, to)
	}
	for _, t := range e.Tetrads {
		out.Tetrads = append(out.Tetrads, printConstraint(e.Graph.NamesOf([]int{t.A, t.B, t.C, t.D}), t.Verdict, t.Sentence, t.Effect, t.P, t.Adjusted, t.Rows))
	}
	for i := range e.Controls {
		c := &e.Controls[i]
		to := controlOut{Variable: e.Graph.Names[c.Node], For: "outcome", Offer: c.Offer, Expected: c.Expected, findingOut: printFinding(e.Graph, &c.Finding)}
		if c.Kind == evidence.ControlExposure {
			to.For = "exposure"
		}
		out.Controls = append(out.Controls, to)
	}
	for _, u := range e.Untested {
		out.Untested = append(out.Untested, untestedOut{u.Sentence, u.Reason})
	}
	return out
}

func printFinding(g *graph.Graph, f *evidence.Finding) findingOut {
	out := findingOut{
		Between: g.NamesOf(slices.Concat(f.A, f.B)), Given: g.NamesOf(f.Given), Verdict: f.Verdict.String(), Sentence: f.Sentence,
		Size: finite(f.Value), Low: finite(f.Low), High: finite(f.High), Signed: f.Signed, P: finite(f.P), Adjusted: finite(f.Adjusted),
		Rows: f.Rows, Lost: map[string]int{}, Groups: f.Groups, Plate: f.Plate,
	}
	for _, l := range f.Lost {
		out.Lost[l.Variable] = l.Rows
	}
	if r := f.Repair; r != nil {
		out.Repair = &repairOut{r.From, r.To, r.Arc, r.Mends}
	}
	return out
}

func printConstraint(variables []string, v evidence.Verdict, sentence string, e evidence.Effect, p, adjusted float64, rows int) constraintOut {
	return constraintOut{variables, v.String(), sentence, finite(e.Value), finite(e.Low), finite(e.High), finite(p), finite(adjusted), rows, false, rows}
}
