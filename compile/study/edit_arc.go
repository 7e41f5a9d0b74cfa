package study

import (
	"fmt"
	"slices"
)

// AddArc draws an unnamed common cause of two variables.
type AddArc struct {
	Rival string
	Arc   Arc
}

// Apply refuses an arc that is there already or joins what is not on the sheet.
func (e AddArc) Apply(s *Study) (*Study, error) {
	return onSheet(s, e.Rival, func(r *Rival) error {
		if r.Diagram.Arc(e.Arc.A, e.Arc.B) != nil {
			return fmt.Errorf("the arc %s ↔ %s is drawn already", e.Arc.A, e.Arc.B)
		}
		a := e.Arc
		a.Plates, a.References = list(a.Plates), list(a.References)
		r.Diagram.Arcs = and(r.Diagram.Arcs, &a)
		return nil
	})
}

// Label names the edit.
func (e AddArc) Label() string { return "Draw " + e.Arc.A + " ↔ " + e.Arc.B }

// RemoveArc deletes an arc; its ends can be given in either order.
type RemoveArc struct {
	Rival, A, B string
}

// Apply refuses an arc that is not drawn.
func (e RemoveArc) Apply(s *Study) (*Study, error) {
	return onSheet(s, e.Rival, func(r *Rival) error {
		if r.Diagram.Arc(e.A, e.B) == nil {
			return fmt.Errorf("there is no arc %s ↔ %s", e.A, e.B)
		}
		r.Diagram.Arcs = without(r.Diagram.Arcs, byPair(e.A, e.B))
		return nil
	})
}

// Label names the edit.
func (e RemoveArc) Label() string { return "Delete " + e.A + " ↔ " + e.B }

// ChangeArc replaces an arc; its ends can be given in either order.
type ChangeArc struct {
	Rival, A, B string
	Arc         Arc
}

// Apply refuses an arc that is not drawn, and what AddArc refuses.
func (e ChangeArc) Apply(s *Study) (*Study, error) {
	return onSheet(s, e.Rival, func(r *Rival) error {
		i := slices.IndexFunc(r.Diagram.Arcs, byPair(e.A, e.B))
		if i < 0 {
			return fmt.Errorf("there is no arc %s ↔ %s", e.A, e.B)
		}
		a := e.Arc
		a.Plates, a.References = list(a.Plates), list(a.References)
		r.Diagram.Arcs = with(r.Diagram.Arcs, i, &a)
		return nil
	})
}

// Label names the edit.
func (e ChangeArc) Label() string { return "Change " + e.A + " ↔ " + e.B }
