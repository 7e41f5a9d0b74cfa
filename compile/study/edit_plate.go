package study

import (
	"fmt"
	"slices"
)

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
	next.Questions = mapped(s.Questions, func(q *Question) *Question {
		if !s.HoldsPlate(e.Name) || !slices.Contains(q.Held, e.Name) {
			return q
		}
		to := *q
		to.Held = q.heldWithout(e.Name)
		return &to
	})
	return checked(&next)
}

// Label names the edit.
func (e RemovePlate) Label() string { return "Delete the plate " + e.Name }
