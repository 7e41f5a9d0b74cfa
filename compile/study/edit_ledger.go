package study

import (
	"fmt"
	"reflect"
	"slices"
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
// its arrows, and out of every question.
type RemoveVariable struct{ ID string }

// Apply leaves texts of formulas as they are.
func (e RemoveVariable) Apply(s *Study) (*Study, error) {
	if s.Variable(e.ID) == nil {
		return nil, noVariable(e.ID)
	}
	next := *s
	next.Variables = without(s.Variables, byID(e.ID))
	next.Rivals = mapped(s.Rivals, func(r *Rival) *Rival { return offSheet(r, []string{e.ID}) })
	next.Questions = mapped(s.Questions, func(q *Question) *Question {
		is := q.Exposure == e.ID || q.Outcome == e.ID
		held := slices.Contains(q.Held, e.ID)
		if !is && !held {
			return q
		}
		to := *q
		if held {
			to.Held = append([]string{}, without(q.Held, func(id string) bool { return id == e.ID })...)
		}
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

// AddPlate adds a plate.
type AddPlate struct{ Plate Plate }

// Apply refuses a name that is taken or cannot be a name.
func (e AddPlate) Apply(s *Study) (*Study, error) {
	if s.Plate(e.Plate.Name) != nil {
		return nil, taken("plate", e.Plate.Name)
	}
	p := e.Plate
	return changed(s, func(s *Study) { s.Plates = and(s.Plates, &p) })
}

// Label names the edit.
func (e AddPlate) Label() string { return "Add the plate " + e.Plate.Name }

// ChangePlate replaces a plate. A new name goes everywhere.
type ChangePlate struct {
	Name string
	To   Plate
}

// Apply refuses a name that is taken or cannot be a name, and a nesting that
// goes in a circle.
func (e ChangePlate) Apply(s *Study) (*Study, error) {
	i := slices.IndexFunc(s.Plates, byPlateName(e.Name))
	if i < 0 {
		return nil, noPlate(e.Name)
	}
	if *s.Plates[i] == e.To {
		return s, nil
	}
	next, to := *s, e.To
	next.Plates = with(s.Plates, i, &to)
	if e.Name != to.Name {
		if s.Plate(to.Name) != nil {
			return nil, taken("plate", to.Name)
		}
		renamePlate(&next, e.Name, to.Name)
	}
	return checked(&next)
}

// Label names the edit.
func (e ChangePlate) Label() string {
	if e.Name != e.To.Name {
		return "Rename the plate " + e.Name + " to " + e.To.Name
	}
	return "Change the plate " + e.Name
}

func noPlate(name string) error { return fmt.Errorf("there is no plate %s", name) }

// RemovePlate removes a plate and every mention of it outside formulas. What
// was nested in it is then nested in what held it.
type RemovePlate struct{ Name string }

// Apply refuses an unknown plate.
func (e RemovePlate) Apply(s *Study) (*Study, error) {
	gone := s.Plate(e.Name)
	if gone == nil {
		return nil, noPlate(e.Name)
	}
	next := *s
	next.Plates = mapped(without(s.Plates, byPlateName(e.Name)), func(p *Plate) *Plate {
		if p.Within != e.Name {
			return p
		}
		to := *p
		to.Within = gone.Within
		return &to
	})
	eachPlateList(&next, func(plates []string) []string {
		if !slices.Contains(plates, e.Name) {
			return plates
		}
		return without(plates, func(p string) bool { return p == e.Name })
	})
	return checked(&next)
}

// Label names the edit.
func (e RemovePlate) Label() string { return "Delete the plate " + e.Name }

// AddData adds a table to the study.
type AddData struct{ Data Data }

// Apply refuses a name that is taken.
func (e AddData) Apply(s *Study) (*Study, error) {
	if find(s.Data, byDataName(e.Data.Name)) != nil {
		return nil, taken("data table", e.Data.Name)
	}
	d := e.Data
	return changed(s, func(s *Study) { s.Data = and(s.Data, &d) })
}

// Label names the edit.
func (e AddData) Label() string { return "Open " + e.Data.Name }

// ChangeData replaces a table. A new name goes to the variables bound to it.
type ChangeData struct {
	Name string
	To   Data
}

// Apply refuses a name that is taken.
func (e ChangeData) Apply(s *Study) (*Study, error) {
	i := slices.IndexFunc(s.Data, byDataName(e.Name))
	if i < 0 {
		return nil, noData(e.Name)
	}
	if *s.Data[i] == e.To {
		return s, nil
	}
	next, to := *s, e.To
	next.Data = with(s.Data, i, &to)
	if e.Name != to.Name {
		if find(s.Data, byDataName(to.Name)) != nil {
			return nil, taken("data table", to.Name)
		}
		next.Variables = mapped(s.Variables, func(v *Variable) *Variable {
			if v.Data != e.Name {
				return v
			}
			w := *v
			w.Data = to.Name
			return &w
		})
	}
	return checked(&next)
}

// Label names the edit.
func (e ChangeData) Label() string { return "Change " + e.Name }

func noData(name string) error { return fmt.Errorf("there are no data “%s” in the study", name) }

// RemoveData removes a table and unbinds the variables that were bound to it.
type RemoveData struct{ Name string }

// Apply refuses an unknown table.
func (e RemoveData) Apply(s *Study) (*Study, error) {
	gone := find(s.Data, byDataName(e.Name))
	if gone == nil {
		return nil, noData(e.Name)
	}
	next := *s
	next.Data = without(s.Data, byDataName(e.Name))
	next.Variables = mapped(s.Variables, func(v *Variable) *Variable {
		table := s.Table(v.Data)
		to := *v
		switch {
		case table == gone:
			to.Data, to.Column, to.Divide = "", "", 0
		case table != nil && v.Data == "":
			to.Data = table.Name
		}
		if reflect.DeepEqual(&to, v) {
			return v
		}
		return &to
	})
	return checked(&next)
}

// Label names the edit.
func (e RemoveData) Label() string { return "Remove " + e.Name }
