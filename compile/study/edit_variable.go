package study

import (
	"reflect"
	"slices"
	"strings"
)

// AddVariable adds a line to the ledger.
type AddVariable struct{ Variable Variable }

// Apply refuses a name that is taken or cannot be a name.
func (e AddVariable) Apply(s *Study) (*Study, error) {
	if s.Variable(e.Variable.ID) != nil {
		return nil, taken("variable", e.Variable.ID)
	}
	v := copyVariable(e.Variable)
	return changed(s, func(s *Study) { s.Variables = and(s.Variables, &v) })
}

// Label names the edit.
func (e AddVariable) Label() string { return "Add " + e.Variable.ID }

// ChangeVariable replaces a line of the ledger. If To has another ID, the new
// name goes everywhere: into nodes, arrows, arcs, notes, questions, formulas,
// and the typed names of parameters.
type ChangeVariable struct {
	ID string
	To Variable
}

// Apply refuses a name that is taken or cannot be a name.
func (e ChangeVariable) Apply(s *Study) (*Study, error) {
	i := slices.IndexFunc(s.Variables, byID(e.ID))
	if i < 0 {
		return nil, noVariable(e.ID)
	}
	to := copyVariable(e.To)
	if reflect.DeepEqual(&to, s.Variables[i]) {
		return s, nil
	}
	next := *s
	next.Variables = with(s.Variables, i, &to)
	if e.ID != to.ID {
		if s.Variable(to.ID) != nil {
			return nil, taken("variable", to.ID)
		}
		renameVariable(&next, e.ID, to.ID)
	}
	return checked(&next)
}

// Label names the edit.
func (e ChangeVariable) Label() string {
	if e.ID != e.To.ID {
		return "Rename " + e.ID + " to " + e.To.ID
	}
	return "Change " + e.ID
}

func copyVariable(v Variable) Variable {
	v.Levels, v.Plates, v.Missing = list(v.Levels), list(v.Plates), list(v.Missing)
	if v.Range != nil {
		r := *v.Range
		v.Range = &r
	}
	return v
}

// list is a copy that shares nothing; an empty list is nil.
func list[T any](items []T) []T {
	if len(items) == 0 {
		return nil
	}
	return slices.Clone(items)
}

// RemoveVariable takes a variable out of the ledger and off every sheet, with
// its arrows, and out of every question, row filter and dismissed finding.
type RemoveVariable struct{ ID string }

// Apply leaves texts of formulas as they are.
func (e RemoveVariable) Apply(s *Study) (*Study, error) {
	if s.Variable(e.ID) == nil {
		return nil, noVariable(e.ID)
	}
	next := *s
	next.Variables = without(s.Variables, byID(e.ID))
	next.Rivals = mapped(s.Rivals, func(r *Rival) *Rival { return offSheet(r, []string{e.ID}) })
	next.Variables = mapped(next.Variables, func(v *Variable) *Variable {
		if v.Records != e.ID && v.Answers != e.ID {
			return v
		}
		to := *v
		if v.Records == e.ID {
			to.Records = ""
		}
		if v.Answers == e.ID {
			to.Answers = ""
		}
		return &to
	})
	next.Data = mapped(s.Data, func(d *Data) *Data {
		to := *d
		to.Keep = without(d.Keep, func(c Condition) bool { return c.Variable == e.ID })
		return kept(d, to, len(to.Keep) == len(d.Keep))
	})
	next.Dismissed = without(s.Dismissed, func(d *Dismissal) bool { return slices.Contains(strings.Fields(d.Key), e.ID) })
	next.Questions = mapped(s.Questions, func(q *Question) *Question {
		if !q.names(e.ID) {
			return q
		}
		to := *q
		if slices.Contains(q.Held, e.ID) {
			to.Held = q.heldWithout(e.ID)
		}
		to.Fixed = without(q.Fixed, func(f Fix) bool { return f.Variable == e.ID })
		to.Where = without(q.Where, func(c Condition) bool { return c.Variable == e.ID })
		if q.Exposure == e.ID {
			to.Exposure, to.From, to.To, to.Shift = "", nil, nil, 0
		}
		if q.Outcome == e.ID {
			to.Outcome, to.OutcomeLevels = "", nil
		}
		return &to
	})
	return checked(&next)
}

// Label names the edit.
func (e RemoveVariable) Label() string { return "Delete " + e.ID }

// Bind ties a variable to a column of a table; an empty column unties it.
type Bind struct {
	Variable, Data, Column string
}

// Apply changes the variable alone.
func (e Bind) Apply(s *Study) (*Study, error) {
	v := s.Variable(e.Variable)
	if v == nil {
		return nil, noVariable(e.Variable)
	}
	to := *v
	to.Data, to.Column = e.Data, e.Column
	if e.Column == "" {
		to.Data, to.Divide = "", 0
	}
	return ChangeVariable{ID: e.Variable, To: to}.Apply(s)
}

// Label names the edit.
func (e Bind) Label() string {
	if e.Column == "" {
		return "Unbind " + e.Variable
	}
	return "Bind " + e.Variable + " to " + e.Column
}
