package fit

import (
	"fmt"
	"slices"
	"strings"

	"arrowroot/compile/catalog"
	"arrowroot/compile/graph"
	"arrowroot/compile/model"
	"arrowroot/compile/study"
)

// apart separates the problems that keep only the question from an answer from
// those of the fit.
func apart(all []model.Problem) (others []model.Problem, lacking *Blocked) {
	for _, p := range all {
		if !strings.HasPrefix(p.Code, "question-") {
			others = append(others, p)
			continue
		}
		if lacking == nil {
			lacking = &Blocked{}
		}
		p.Stops = true // the answer, that is
		lacking.Problems = append(lacking.Problems, p)
	}
	return others, lacking
}

// incomplete says what a question lacks before it can be answered; nil if
// nothing, or if there is no question.
func incomplete(m *model.Model, g *graph.Graph, q *study.Question) *Blocked {
	if q == nil {
		return nil
	}
	lacks := func(code, variable, format string, args ...any) *Blocked {
		return &Blocked{[]model.Problem{{Code: code, Variable: variable, Place: "question", Message: fmt.Sprintf(format, args...), Stops: true}}}
	}
	for _, end := range []struct{ role, id string }{{"exposure", q.Exposure}, {"outcome", q.Outcome}} {
		switch {
		case end.id == "":
			return lacks("question-ends", "", "The question has no %s yet: say which variable it is.", end.role)
		case g.Index(end.id) < 0:
			return lacks("question-ends", end.id, "The %s %s is not on this sheet: put it there, or ask about another variable.", end.role, end.id)
		}
	}
	if q.Exposure == q.Outcome {
		return lacks("question-ends", q.Exposure, "%s cannot be exposure and outcome at once: ask about two variables.", q.Exposure)
	}
	if q.From == nil && q.To == nil && q.Shift == 0 {
		return lacks("question-settings", q.Exposure, "The question does not say which values of %s it compares: give two of them, or a shift.", q.Exposure)
	}
	for _, v := range m.Variables {
		switch {
		case v.ID == q.Exposure && len(v.Levels) > 0:
			if q.From == nil && q.To == nil {
				return lacks("question-settings", v.ID, "%s has levels and cannot be shifted: say which two of %s are compared.", v.ID, strings.Join(v.Levels, ", "))
			}
			for _, s := range []*study.Setting{q.From, q.To} {
				if s != nil && s.Word != "" && !slices.Contains(v.Levels, s.Word) {
					return lacks("question-settings", v.ID, "%s has no level %q: it has %s.", v.ID, s.Word, strings.Join(v.Levels, ", "))
				}
			}
		case v.ID == q.Outcome:
			for _, word := range q.OutcomeLevels {
				if !slices.Contains(v.Levels, word) {
					return lacks("question-levels", v.ID, "%s has no level %q to ask for.", v.ID, word)
				}
			}
		}
	}
	for _, l := range m.Laws {
		if v := m.Variables[l.Variable]; v.ID == q.Outcome && l.Family.Support == catalog.Levels && len(q.OutcomeLevels) == 0 {
			return lacks("question-levels", v.ID, "%s has levels: say the probability of which of %s is asked for.", v.ID, strings.Join(v.Levels, ", "))
		}
	}
	return nil
}
