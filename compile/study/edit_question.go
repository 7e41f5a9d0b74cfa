package study

import (
	"fmt"
	"slices"
)

// AddQuestion asks one more question.
type AddQuestion struct{ Question Question }

// Apply refuses what Check refuses.
func (e AddQuestion) Apply(s *Study) (*Study, error) {
	q := copyQuestion(e.Question)
	return changed(s, func(s *Study) { s.Questions = and(s.Questions, &q) })
}

// Label names the edit.
func (e AddQuestion) Label() string { return "Ask about " + e.Question.ends() }

func (q *Question) ends() string {
	name := func(id string) string {
		if id == "" {
			return "?"
		}
		return id
	}
	return name(q.Exposure) + " → " + name(q.Outcome)
}

// copyQuestion keeps an empty Held apart from nil: the one says "none".
func copyQuestion(q Question) Question {
	q.Held, q.OutcomeLevels = slices.Clone(q.Held), list(q.OutcomeLevels)
	q.Fixed, q.Where = list(q.Fixed), copyConditions(q.Where)
	for _, set := range [2]**Setting{&q.From, &q.To} {
		if *set != nil {
			value := **set
			*set = &value
		}
	}
	return q
}

// ChangeQuestion replaces the question at a place.
type ChangeQuestion struct {
	At int
	To Question
}

// Apply refuses what Check refuses.
func (e ChangeQuestion) Apply(s *Study) (*Study, error) {
	if e.At < 0 || e.At >= len(s.Questions) {
		return nil, noQuestion(e.At)
	}
	q := copyQuestion(e.To)
	return changed(s, func(s *Study) { s.Questions = with(s.Questions, e.At, &q) })
}

func noQuestion(at int) error { return fmt.Errorf("there is no question %d", at+1) }

// Label names the edit.
func (e ChangeQuestion) Label() string { return "Ask about " + e.To.ends() }

// RemoveQuestion removes the question at a place.
type RemoveQuestion struct{ At int }

// Apply refuses a place without a question.
func (e RemoveQuestion) Apply(s *Study) (*Study, error) {
	if e.At < 0 || e.At >= len(s.Questions) {
		return nil, noQuestion(e.At)
	}
	return changed(s, func(s *Study) {
		s.Questions = list(slices.Delete(slices.Clone(s.Questions), e.At, e.At+1))
	})
}

// Label names the edit.
func (e RemoveQuestion) Label() string { return fmt.Sprintf("Delete question %d", e.At+1) }

// Hold holds a variable in a question, or lets it free.
type Hold struct {
	At       int
	Variable string
	On       bool
}

// Apply refuses the exposure and the outcome.
func (e Hold) Apply(s *Study) (*Study, error) {
	if e.At < 0 || e.At >= len(s.Questions) {
		return nil, noQuestion(e.At)
	}
	q := copyQuestion(*s.Questions[e.At])
	switch held := slices.Contains(q.Held, e.Variable); {
	case held == e.On:
		return s, nil
	case e.On && (e.Variable == q.Exposure || e.Variable == q.Outcome):
		return nil, fmt.Errorf("%s cannot be held: it is what the question is about", e.Variable)
	case e.On:
		q.Held = append(q.Held, e.Variable)
	default:
		q.Held = append([]string{}, without(q.Held, func(id string) bool { return id == e.Variable })...)
	}
	return ChangeQuestion{At: e.At, To: q}.Apply(s)
}

// Label names the edit.
func (e Hold) Label() string {
	if e.On {
		return "Hold " + e.Variable
	}
	return "Let " + e.Variable + " free"
}
