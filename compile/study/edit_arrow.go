package study

import (
	"fmt"
	"reflect"
	"slices"
	"strings"
)

// AddArrow draws an arrow.
type AddArrow struct {
	Rival string
	Arrow Arrow
}

// A CycleError says that an arrow was refused because it would close a cycle.
type CycleError struct {
	From, To string
	Cycle    []string // first name repeated last
}

func (e *CycleError) Error() string {
	return fmt.Sprintf("An arrow %s → %s would close a cycle: %s. If %s acts on %s only later, draw the later %s as a variable of its own; else remove one of these arrows first.",
		e.From, e.To, strings.Join(e.Cycle, " → "), e.From, e.To, e.To)
}

// Apply refuses an arrow that is there already, that joins what is not on the
// sheet, or that would close a cycle (a *CycleError). A note that argued its
// absence goes.
func (e AddArrow) Apply(s *Study) (*Study, error) {
	return onSheet(s, e.Rival, func(r *Rival) error { return r.draw(e.Arrow) })
}

func (r *Rival) draw(arrow Arrow) error {
	a := copyArrow(arrow)
	if r.Diagram.Arrow(a.From, a.To) != nil {
		return fmt.Errorf("the arrow %s → %s is drawn already", a.From, a.To)
	}
	for _, end := range [2]string{a.From, a.To} {
		if r.Diagram.Node(end) == nil {
			return notOnSheet(end, r.Name)
		}
	}
	if a.From != a.To {
		if way := walk(r.Diagram.Arrows, a.To, a.From); way != nil {
			return &CycleError{From: a.From, To: a.To, Cycle: append(way, a.To)}
		}
	}
	r.Diagram.Arrows = and(r.Diagram.Arrows, &a)
	r.Diagram.Absent = without(r.Diagram.Absent, byAbsentEnds(a.From, a.To))
	return nil
}

func copyArrow(a Arrow) Arrow {
	a.With, a.VariesBy, a.References = list(a.With), list(a.VariesBy), list(a.References)
	return a
}

// Label names the edit.
func (e AddArrow) Label() string { return "Draw " + e.Arrow.From + " → " + e.Arrow.To }

// RemoveArrow deletes an arrow, and products of other arrows with it.
type RemoveArrow struct {
	Rival, From, To string
}

// Apply refuses an arrow that is not drawn.
func (e RemoveArrow) Apply(s *Study) (*Study, error) {
	return onSheet(s, e.Rival, func(r *Rival) error { return r.erase(e.From, e.To) })
}

func (r *Rival) erase(from, to string) error {
	if r.Diagram.Arrow(from, to) == nil {
		return noArrow(from, to)
	}
	r.Diagram.Arrows = mapped(without(r.Diagram.Arrows, byEnds(from, to)), func(a *Arrow) *Arrow {
		if a.To != to {
			return a
		}
		return a.alone(func(id string) bool { return id == from })
	})
	return nil
}

func noArrow(from, to string) error { return fmt.Errorf("there is no arrow %s → %s", from, to) }

// Label names the edit.
func (e RemoveArrow) Label() string { return "Delete " + e.From + " → " + e.To }

// ChangeArrow replaces an arrow, which may then have other ends.
type ChangeArrow struct {
	Rival, From, To string
	Arrow           Arrow
}

// Apply refuses what AddArrow refuses. The arrow keeps its place in the order.
func (e ChangeArrow) Apply(s *Study) (*Study, error) {
	return onSheet(s, e.Rival, func(r *Rival) error {
		i := slices.IndexFunc(r.Diagram.Arrows, byEnds(e.From, e.To))
		if i < 0 {
			return noArrow(e.From, e.To)
		}
		if e.Arrow.From == e.From && e.Arrow.To == e.To {
			a := copyArrow(e.Arrow)
			if !reflect.DeepEqual(&a, r.Diagram.Arrows[i]) {
				r.Diagram.Arrows = with(r.Diagram.Arrows, i, &a)
			}
			return nil
		}
		if err := r.erase(e.From, e.To); err != nil {
			return err
		}
		if err := r.draw(e.Arrow); err != nil {
			return err
		}
		last := len(r.Diagram.Arrows) - 1
		moved := slices.Clone(r.Diagram.Arrows[:last])
		r.Diagram.Arrows = slices.Insert(moved, i, r.Diagram.Arrows[last])
		return nil
	})
}

// Label names the edit.
func (e ChangeArrow) Label() string { return "Change " + e.From + " → " + e.To }
