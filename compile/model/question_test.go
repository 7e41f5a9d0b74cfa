package model

import (
	"strings"
	"testing"

	"arrowroot/compile/study"
	"arrowroot/compile/table"
)

func at(x float64) *study.Setting { return &study.Setting{Number: x} }

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
			if refused := find(QuestionProblems(all), c.code) != nil; refused != strings.HasPrefix(c.code, "question-") {
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
		if p := QuestionProblems(Problems(hedgerows(), "R", q, traps())); len(p) > 0 {
			t.Error(messages(p))
		}
	}
}
