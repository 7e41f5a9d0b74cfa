package main

import (
	"context"
	"encoding/csv"
	"io"

	"arrowroot/app/findings"
	"arrowroot/compile/mistake"
	"arrowroot/compile/study"
	"arrowroot/compile/table"
)

type mistakesOut struct {
	Mistakes []mistakeOut `json:"mistakes"`
	SetAside []asideOut   `json:"setAside"`
}

type mistakeOut struct {
	Code     string   `json:"code"`
	Severity string   `json:"severity"`
	Key      string   `json:"key"`
	Sentence string   `json:"sentence"`
	Why      string   `json:"why"`
	Path     []string `json:"path"`
	Repairs  []string `json:"repairs"`
}

type asideOut struct {
	mistakeOut
	Because string `json:"because"`
}

// noMistakes is printed where no study could be opened.
func noMistakes() mistakesOut { return mistakesOut{[]mistakeOut{}, []asideOut{}} }

// mistakes prints the mistakes of the rival under a question; nil = none asked.
func (j *job) mistakes(q *study.Question, t *table.Table) mistakesOut {
	out := noMistakes()
	for _, m := range mistake.Find(j.study, j.rival, q, nil, t) {
		out.Mistakes = append(out.Mistakes, printMistake(m))
	}
	for _, m := range mistake.SetAside(j.study, j.rival, q, nil, t) {
		out.SetAside = append(out.SetAside, asideOut{printMistake(m), m.Aside})
	}
	return out
}

// mistakesOf prints the mistakes of what read was asked: the study's question,
// or another one that the flags ask. That one compares no values, which is no
// mistake of the study; one of several exposures or outcomes is not judged.
func (j *job) mistakesOf(ask findings.Ask) mistakesOut {
	t, _ := j.table() // without data the arrows still speak
	q := j.question
	if j.exposure != "" || j.outcome != "" || j.hold != "" {
		q = nil
		if len(ask.Exposures) == 1 && len(ask.Outcomes) == 1 && ask.Exposures[0] != ask.Outcomes[0] {
			q = &study.Question{Exposure: ask.Exposures[0], Outcome: ask.Outcomes[0], Held: ask.Held, Shift: 1}
		}
	}
	return j.mistakes(q, t)
}

func printMistake(m mistake.Mistake) mistakeOut {
	out := mistakeOut{Code: string(m.Code), Severity: m.Severity.String(), Key: m.Key, Sentence: m.Sentence, Why: m.Why, Path: m.Path, Repairs: []string{}}
	if out.Path == nil {
		out.Path = []string{}
	}
	for _, r := range m.Repairs {
		out.Repairs = append(out.Repairs, r.Words)
	}
	return out
}

type arrowOut struct {
	From       string `json:"from"`
	To         string `json:"to"`
	Kind       string `json:"kind"`
	Form       string `json:"form"`
	VariesBy   string `json:"variesBy"`
	Why        string `json:"why"`
	References string `json:"references"`
	TierFrom   string `json:"tierFrom"`
	TierTo     string `json:"tierTo"`
}

// arrows prints what the rival supposes, arrow by arrow; -out writes the same
// as CSV.
func arrows(_ context.Context, j *job) (any, error) {
	rows := j.study.ArrowTable(j.rival)
	out := struct {
		Rival  string     `json:"rival"`
		Arrows []arrowOut `json:"arrows"`
		File   string     `json:"file"`
	}{j.rival, []arrowOut{}, j.out}
	for _, r := range rows[1:] {
		out.Arrows = append(out.Arrows, arrowOut{r[0], r[1], r[2], r[3], r[4], r[5], r[6], r[7], r[8]})
	}
	if j.out == "" {
		return out, nil
	}
	return out, writeFile(j.out, func(w io.Writer) error { return csv.NewWriter(w).WriteAll(rows) })
}
