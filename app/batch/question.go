package main

import (
	"arrowroot/compile/study"
	"cmp"
)

// A questionOut is a question as the verbs print it; words that were left out
// stand there as what they mean.
type questionOut struct {
	Exposure string         `json:"exposure"`
	Outcome  string         `json:"outcome"`
	Effect   string         `json:"effect"`
	From     any            `json:"from"`
	To       any            `json:"to"`
	Shift    float64        `json:"shift"`
	Fixed    []fixOut       `json:"fixed"`
	Held     []string       `json:"held"`
	Where    []conditionOut `json:"where"`
	Over     string         `json:"over"`
	Groups   string         `json:"groups"`
	Weigh    string         `json:"weigh"`
	As       string         `json:"as"`
	Levels   []string       `json:"outcomeLevels"`
	Level    float64        `json:"level"`
}

type fixOut struct {
	Variable string `json:"variable"`
	At       any    `json:"at"`
}

type conditionOut struct {
	Variable string   `json:"variable"`
	Words    []string `json:"words"`
	Low      *float64 `json:"low"`
	High     *float64 `json:"high"`
}

func printQuestion(q *study.Question) *questionOut {
	if q == nil {
		return nil
	}
	out := &questionOut{
		Exposure: q.Exposure, Outcome: q.Outcome, Effect: cmp.Or(q.Effect, study.TotalEffect), Shift: q.Shift,
		Fixed: []fixOut{}, Held: q.Held, Where: []conditionOut{}, Over: cmp.Or(q.Over, study.TheseRows),
		Groups: cmp.Or(q.Groups, study.TheseGroups), Weigh: cmp.Or(q.Weigh, study.ByRows), As: cmp.Or(q.As, study.Difference), Levels: append([]string{}, q.OutcomeLevels...), Level: q.Level,
		From: setting(q.From), To: setting(q.To),
	}
	for _, f := range q.Fixed {
		out.Fixed = append(out.Fixed, fixOut{f.Variable, setting(&f.At)})
	}
	for _, c := range q.Where {
		out.Where = append(out.Where, conditionOut{c.Variable, append([]string{}, c.Words...), c.Low, c.High})
	}
	if out.Held == nil {
		out.Held = []string{}
	}
	if out.Level == 0 {
		out.Level = 0.9
	}
	return out
}

func setting(s *study.Setting) any {
	switch {
	case s == nil:
		return nil
	case s.Word != "":
		return s.Word
	}
	return s.Number
}
