package model

import (
	"strings"
	"testing"

	"arrowroot/compile/study"
	"arrowroot/compile/table"
)

func at(x float64) *study.Setting { return &study.Setting{Number: x} }

func bound(x float64) *float64 { return &x }

func word(w string) *study.Setting { return &study.Setting{Word: w} }

// Mistakes of a question are found without a fit, and leave the fit alone.
func TestQuestions(t *testing.T) {
	for _, c := range []struct {
		name    string
		study   func(s *study.Study)
		table   func(t *table.Table)
		asks    func(q *study.Question)
		code    string
		message string
		labels  string // of repairs, joined by |
	}{
		{
			name: "no values", code: "question-values",
			asks:    func(q *study.Question) { q.From, q.To = nil, nil },
			message: "The question names no values of hedge: say two values to compare.",
			labels:  "Compare the quartiles, 34 and 138.5",
		},
		{
			name: "one value", code: "question-values",
			asks:    func(q *study.Question) { q.To = nil },
			message: "The question names from, but not to: say both values of hedge to compare.",
			labels:  "Compare the quartiles, 34 and 138.5",
		},
		{
			name: "the same value twice", code: "question-values",
			asks:    func(q *study.Question) { q.To = at(40) },
			message: "The question compares hedge 40 with itself.",
			labels:  "Compare the quartiles, 34 and 138.5",
		},
		{
			name: "a word for a number", code: "question-value",
			asks:    func(q *study.Question) { q.To = word("thick") },
			message: "“thick” is no value of hedge, which is a real number.",
			labels:  "Compare the quartiles, 34 and 138.5",
		},
		{
			name: "an unknown level", code: "question-value",
			asks:    func(q *study.Question) { q.Exposure, q.From, q.To, q.Held = "soil", word("chalk"), word("loam"), nil },
			message: "soil has no level “loam”; it has “chalk”, “clay” and “sand”.",
			labels:  "Compare “chalk” with “sand”",
		},
		{
			name: "a number for a level", code: "question-value",
			asks:    func(q *study.Question) { q.Exposure, q.From, q.To, q.Held = "soil", at(0), at(1), nil },
			message: "soil has levels: say one of “chalk”, “clay” and “sand”, not 0.",
			labels:  "Compare “chalk” with “sand”",
		},
		{
			name: "a shift of levels", code: "question-shift",
			asks:    func(q *study.Question) { *q = study.Question{Exposure: "soil", Outcome: "bees", Shift: 1} },
			message: "soil has levels and cannot be shifted by 1: say two of “chalk”, “clay” and “sand” to compare.",
			labels:  "Compare “chalk” with “sand”",
		},
		{
			name: "half of a yes", code: "question-value",
			study: func(s *study.Study) {
				s.Variables[4].Scale, s.Variables[4].Levels = study.Binary, []string{"clay", "chalk"}
			},
			table:   twoSoils,
			asks:    func(q *study.Question) { q.Exposure, q.From, q.To, q.Held = "soil", at(0), at(0.5), nil },
			message: "soil cannot be 0.5: it is binary, 0 or 1.",
			labels:  "Compare “clay” with “chalk”",
		},
		{
			name: "below zero", code: "question-value",
			asks:    func(q *study.Question) { q.Exposure, q.From, q.To, q.Held = "hours", at(-1), at(5), nil },
			message: "hours cannot be −1: it is positive.",
			labels:  "Compare the quartiles, 5 and 7",
		},
		{
			name: "a proportion in percent", code: "question-value",
			study:   func(s *study.Study) { s.Variables[2].Divide = 100 },
			table:   func(t *table.Table) { times100(t.Column("flowers").Numbers) },
			asks:    func(q *study.Question) { q.Exposure, q.From, q.To, q.Held = "flowers", at(0.2), at(40), nil },
			message: "flowers cannot be 40: it is a proportion, between 0 and 1 (its column is divided by 100).",
			labels:  "Compare the quartiles, 0.1637 and 0.3262",
		},
		{
			name: "a shift out of the scale", code: "question-shift",
			asks:    func(q *study.Question) { *q = study.Question{Exposure: "arable", Outcome: "bees", Shift: 0.9} },
			message: "A shift by 0.9 takes arable where it cannot be in 53 of 58 rows, in row 1 from 0.4666 to 1.367: it is a proportion, between 0 and 1.",
			labels:  "Compare the quartiles, 0.2282 and 0.5862",
		},
		{
			name: "a shift beyond the data", code: "overlap",
			asks:    func(q *study.Question) { *q = study.Question{Exposure: "hedge", Outcome: "bees", Shift: 200} },
			message: "A shift by 200 takes hedge beyond the 2–176 that was seen in 100 % of the rows: the effect rests on the form of the laws there.",
		},
		{
			name: "a value beyond the data", code: "overlap",
			asks:    func(q *study.Question) { q.To = at(900) },
			message: "hedge 900 lies far beyond the 2–176 that was seen, with 0 % of the rows near it: no overlap, so the effect rests on the form of the laws there.",
			labels:  "Compare the quartiles, 34 and 138.5",
		},
		{
			name: "a level that no row has", code: "overlap",
			table:   twoSoils,
			asks:    func(q *study.Question) { q.Exposure, q.From, q.To, q.Held = "soil", word("chalk"), word("sand"), nil },
			message: "No used row has soil “sand”: what is said of it rests on the priors alone.",
			labels:  "Compare “chalk” with “clay”",
		},
		{
			name: "an exposure off the sheet", code: "question-sheet",
			study: func(s *study.Study) {
				s.Variables = append(s.Variables, &study.Variable{ID: "wind", Scale: study.Real, Column: "temp"})
			},
			asks:    func(q *study.Question) { q.Exposure = "wind" },
			message: "wind is the exposure of the question, but does not stand on the sheet of R.",
			labels:  "Put wind on the sheet",
		},
		{
			name: "an outcome that is no variable", code: "question-unknown",
			asks:    func(q *study.Question) { q.Outcome = "beez" },
			message: "beez is the outcome of the question, but the study has no such variable; did you mean bees?",
		},
		{
			name: "an exposure that was not measured", code: "question-unmeasured",
			asks:    func(q *study.Question) { q.Exposure = "attitude" },
			message: "attitude is the exposure of the question, but was not measured.",
		},
		{
			name: "held, but not measured", code: "question-unmeasured",
			asks:    func(q *study.Question) { q.Held = []string{"soil", "attitude"} },
			message: "attitude is held, but was not measured: only what was measured can be held.",
			labels:  "Do not hold attitude",
		},
		{
			name: "a category outcome without a level", code: "question-levels",
			asks:    func(q *study.Question) { q.Outcome, q.Held = "soil", nil },
			message: "soil is a category: say the probability of which of its levels is asked for, of “chalk”, “clay” and “sand”.",
			labels:  "Ask for “chalk”|Ask for “clay”|Ask for “sand”",
		},
		{
			name: "an unknown level of the outcome", code: "question-levels",
			asks:    func(q *study.Question) { q.Outcome, q.OutcomeLevels, q.Held = "soil", []string{"sand", "loam"}, nil },
			message: "soil has no level “loam”; it has “chalk”, “clay” and “sand”.",
			labels:  "Do not ask for “loam”",
		},
		{
			name: "every level of the outcome", code: "question-levels",
			asks: func(q *study.Question) {
				q.Outcome, q.OutcomeLevels, q.Held = "soil", []string{"sand", "chalk", "clay"}, nil
			},
			message: "The question asks for every level of soil, whose probability is always 1.",
		},
		{
			name: "levels of a number", code: "question-levels",
			asks:    func(q *study.Question) { q.OutcomeLevels = []string{"many"} },
			message: "bees is a count and has no levels to ask for, such as “many”.",
			labels:  "Ask for its expectation",
		},
		{
			name: "a ratio that may cross zero", code: "ratio",
			asks:    func(q *study.Question) { q.Outcome, q.As, q.Held = "pesticide", study.Ratio, nil },
			message: "pesticide is a real number that can be 0 or below: a ratio of its averages depends on where 0 lies, and says nothing near it. Ask for a difference.",
			labels:  "Ask for the difference",
		},
		{
			name: "rows by what comes after the exposure", code: "question-subset",
			asks: func(q *study.Question) {
				q.Where = []study.Condition{{Variable: "flowers", Low: bound(0.1), High: bound(0.3)}}
			},
			message: "flowers comes after hedge, so setting hedge would change in which rows flowers is from 0.1 to 0.3: choose rows by something hedge does not act on, or drop the condition. Among the rows in which that is so once hedge is set, the effect is identified; it is not computed by this version.",
			labels:  "Drop the condition on flowers",
		},
		{
			name: "rows by the outcome", code: "question-subset",
			asks:    func(q *study.Question) { q.Where = []study.Condition{{Variable: "bees", Low: bound(3)}} },
			message: "bees is the outcome: rows cannot be chosen by what the question is about.",
			labels:  "Drop the condition on bees",
		},
		{
			name: "rows by what was not measured", code: "question-subset",
			asks:    func(q *study.Question) { q.Where = []study.Condition{{Variable: "attitude", High: bound(0)}} },
			message: "attitude was not measured, so nobody can tell in which rows attitude is at most 0: choose rows by what was measured.",
			labels:  "Drop the condition on attitude",
		},
		{
			name: "rows by an unknown level", code: "question-subset",
			asks:    func(q *study.Question) { q.Where = []study.Condition{{Variable: "soil", Words: []string{"peat"}}} },
			message: "The rows asked about cannot be told: soil has no level “peat”; it has “chalk”, “clay” and “sand”.",
			labels:  "Drop the condition on soil",
		},
		{
			name: "rows by a word of a number", code: "question-subset",
			asks:    func(q *study.Question) { q.Where = []study.Condition{{Variable: "temp", Words: []string{"warm"}}} },
			message: "The rows asked about cannot be told: “warm” is no value of temp, which is a real number: give bounds.",
			labels:  "Drop the condition on temp",
		},
		{
			name: "rows by bounds of levels", code: "question-subset",
			asks:    func(q *study.Question) { q.Where = []study.Condition{{Variable: "soil", Low: bound(1)}} },
			message: "The rows asked about cannot be told: soil has levels and no bounds: say which of “chalk”, “clay” and “sand” are meant.",
			labels:  "Drop the condition on soil",
		},
		{
			name: "no such rows", code: "question-subset",
			asks:    func(q *study.Question) { q.Where = []study.Condition{{Variable: "temp", Low: bound(40)}} },
			message: "In none of the 58 used rows temp is at least 40 °C: there is nothing to average over.",
			labels:  "Drop the condition on temp",
		},
		{
			name: "a direct effect with nothing fixed", code: "question-fixed",
			asks:    func(q *study.Question) { q.Effect = study.DirectEffect },
			message: "A controlled direct effect of hedge needs at least one variable on the way that is kept at a value: say which, and at which value.",
			labels:  "Keep flowers at 0.2444|Ask for the total effect",
		},
		{
			name: "an impossible value fixed", code: "question-value",
			asks: func(q *study.Question) {
				q.Effect, q.Fixed = study.DirectEffect, []study.Fix{{Variable: "flowers", At: study.Setting{Number: 7}}}
			},
			message: "flowers cannot be 7: it is a proportion, between 0 and 1.",
			labels:  "Keep flowers at 0.2444",
		},
		{
			name: "a fixed variable that was not measured", code: "question-unmeasured",
			asks: func(q *study.Question) {
				q.Effect, q.Fixed = study.DirectEffect, []study.Fix{{Variable: "attitude"}, {Variable: "flowers", At: study.Setting{Number: 0.2}}}
			},
			message: "attitude is fixed, but was not measured.",
			labels:  "Do not fix attitude",
		},
		{
			name: "new groups without a plate", code: "question-groups",
			study:   func(s *study.Study) { s.Plates, s.Rivals[0].Diagram.Node("bees").Law = nil, nil },
			asks:    func(q *study.Question) { q.Groups = study.NewGroups },
			message: "The question asks about new groups, but there is no plate over which groups could be new.",
			labels:  "Ask about these groups",
		},
		{
			name: "new groups of which nothing varies", code: "question-groups",
			study:   func(s *study.Study) { s.Rivals[0].Diagram.Node("bees").Law = nil },
			asks:    func(q *study.Question) { q.Groups = study.NewGroups },
			message: "The question asks about new groups, but nothing in this rival varies by farm: let the baseline of bees vary by it, or ask about these groups.",
			labels:  "Ask about these groups",
		},
		{
			name: "new groups from one", code: "question-groups",
			table: func(t *table.Table) {
				c := t.Column("farm")
				c.Levels, c.Codes = []string{"home"}, make([]int32, t.Rows)
			},
			asks:    func(q *study.Question) { q.Groups = study.NewGroups },
			message: "farm has one level in the used rows, home: how far levels lie apart cannot be learned from one, so nothing can be said of new ones.",
			labels:  "Ask about these groups",
		},
		{
			name: "weights by groups without a plate", code: "question-weigh",
			study:   func(s *study.Study) { s.Plates, s.Rivals[0].Diagram.Node("bees").Law = nil, nil },
			asks:    func(q *study.Question) { q.Weigh = study.ByGroups },
			message: "Groups are to count the same, but there is no plate that would make groups of the rows.",
			labels:  "Weigh by rows",
		},
	} {
		t.Run(c.name, func(t *testing.T) {
			s, tab, q := hedgerows(), traps(), beesQuestion()
			if c.study != nil {
				c.study(s)
			}
			if c.table != nil {
				c.table(tab)
			}
			c.asks(&q)
			s.Questions = []*study.Question{&q}
			all := Problems(s, "R", q, tab)
			found := find(all, c.code)
			if found == nil {
				t.Fatalf("no problem %s; there are %v", c.code, messages(all))
			}
			if found.Message != c.message {
				t.Errorf("says\n%s\nnot\n%s", found.Message, c.message)
			}
			if found.Stops {
				t.Error("stops the fit")
			}
			_, refusing := Apart(all)
			if refused := find(refusing, c.code) != nil; refused != strings.HasPrefix(c.code, "question-") {
				t.Errorf("refuses the effect: %v", refused)
			}
			var labels []string
			for _, r := range found.Repairs {
				labels = append(labels, r.Label)
				after, err := r.Edit.Apply(s)
				if err != nil {
					t.Errorf("repair %q: %v", r.Label, err)
					continue
				}
				if left := find(Problems(after, "R", *after.Questions[0], tab), c.code); left != nil {
					t.Errorf("repair %q leaves the problem: %s", r.Label, left.Message)
				}
			}
			if strings.Join(labels, "|") != c.labels && c.code != "question-unknown" {
				t.Errorf("offers %s, not %s", strings.Join(labels, "|"), c.labels)
			}
		})
	}
}

func times100(values []float64) {
	for i := range values {
		values[i] *= 100
	}
}

// A question that is half asked yet has no mistakes.
func TestHalfAQuestion(t *testing.T) {
	for _, q := range []study.Question{{}, {Exposure: "hedge"}, {Outcome: "bees"}} {
		if _, p := Apart(Problems(hedgerows(), "R", q, traps())); len(p) > 0 {
			t.Error(messages(p))
		}
	}
}
