package study

import (
	"fmt"
	"reflect"
	"slices"
)

// AddData adds a table to the study.
type AddData struct{ Data Data }

// Apply refuses a name that is taken.
func (e AddData) Apply(s *Study) (*Study, error) {
	if find(s.Data, byDataName(e.Data.Name)) != nil {
		return nil, taken("data table", e.Data.Name)
	}
	d := copyData(e.Data)
	return changed(s, func(s *Study) { s.Data = and(s.Data, &d) })
}

// Label names the edit.
func (e AddData) Label() string { return "Open " + e.Data.Name }

func copyData(d Data) Data {
	d.Keep = copyConditions(d.Keep)
	return d
}

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
	to := copyData(e.To)
	if reflect.DeepEqual(s.Data[i], &to) {
		return s, nil
	}
	next := *s
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
