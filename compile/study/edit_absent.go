package study

import (
	"fmt"
	"slices"
)

// AddAbsent argues why an arrow is not drawn. A note that is there is replaced.
type AddAbsent struct {
	Rival  string
	Absent Absent
}

// Apply refuses the pair of an arrow that is drawn.
func (e AddAbsent) Apply(s *Study) (*Study, error) {
	return onSheet(s, e.Rival, func(r *Rival) error {
		if r.Diagram.Arrow(e.Absent.From, e.Absent.To) != nil {
			return fmt.Errorf("the arrow %s → %s is drawn; delete it before you argue its absence", e.Absent.From, e.Absent.To)
		}
		a := e.Absent
		a.References = list(a.References)
		i := slices.IndexFunc(r.Diagram.Absent, byAbsentEnds(a.From, a.To))
		if i >= 0 {
			r.Diagram.Absent = with(r.Diagram.Absent, i, &a)
		} else {
			r.Diagram.Absent = and(r.Diagram.Absent, &a)
		}
		return nil
	})
}

// Label names the edit.
func (e AddAbsent) Label() string {
	return "Note why " + e.Absent.From + " → " + e.Absent.To + " is absent"
}

// RemoveAbsent removes the note on an absent arrow.
type RemoveAbsent struct {
	Rival, From, To string
}

// Apply refuses a pair without a note.
func (e RemoveAbsent) Apply(s *Study) (*Study, error) {
	return onSheet(s, e.Rival, func(r *Rival) error {
		if r.Diagram.AbsentArrow(e.From, e.To) == nil {
			return fmt.Errorf("there is no note on an absent arrow %s → %s", e.From, e.To)
		}
		r.Diagram.Absent = without(r.Diagram.Absent, byAbsentEnds(e.From, e.To))
		return nil
	})
}

// Label names the edit.
func (e RemoveAbsent) Label() string { return "Remove the note on " + e.From + " → " + e.To }
