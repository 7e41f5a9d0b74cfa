package study

import (
	"fmt"
	"maps"
	"slices"
	"strings"
)

// AddNode puts a variable of the ledger on a sheet, at a place or, with At
// nil, where the automatic layout puts it.
type AddNode struct {
	Rival, Variable string
	At              *Point
}

// Apply refuses a variable that is not in the ledger or already on the sheet.
func (e AddNode) Apply(s *Study) (*Study, error) {
	return onSheet(s, e.Rival, func(r *Rival) error {
		switch {
		case s.Variable(e.Variable) == nil:
			return noVariable(e.Variable)
		case r.Diagram.Node(e.Variable) != nil:
			return fmt.Errorf("%s is on the sheet of “%s” already", e.Variable, e.Rival)
		}
		r.Diagram.Nodes = and(r.Diagram.Nodes, &Node{Variable: e.Variable})
		if e.At != nil {
			r.Layout = r.Layout.moved(map[string]Point{e.Variable: *e.At})
		}
		return nil
	})
}

// Label names the edit.
func (e AddNode) Label() string { return "Add " + e.Variable + " to the sheet" }

// RemoveNodes takes variables off a sheet, with their laws, arrows, arcs and
// notes on absent arrows. The variables stay in the ledger.
type RemoveNodes struct {
	Rival     string
	Variables []string
}

// Apply refuses a variable that is not on the sheet.
func (e RemoveNodes) Apply(s *Study) (*Study, error) {
	i := slices.IndexFunc(s.Rivals, byRivalName(e.Rival))
	if i < 0 {
		return nil, noRival(e.Rival)
	}
	for _, id := range e.Variables {
		if s.Rivals[i].Diagram.Node(id) == nil {
			return nil, notOnSheet(id, e.Rival)
		}
	}
	return changed(s, func(s *Study) { s.Rivals = with(s.Rivals, i, offSheet(s.Rivals[i], e.Variables)) })
}

// Label names the edit.
func (e RemoveNodes) Label() string {
	return "Take " + some(e.Variables) + " off the sheet"
}

// some names up to two variables, or says how many there are.
func some(variables []string) string {
	if len(variables) > 2 {
		return fmt.Sprintf("%d variables", len(variables))
	}
	return strings.Join(variables, " and ")
}

func notOnSheet(id, rival string) error {
	return fmt.Errorf("%s is not on the sheet of “%s”", id, rival)
}

// offSheet gives the rival without some variables, the same if it has none.
func offSheet(r *Rival, variables []string) *Rival {
	gone := func(id string) bool { return slices.Contains(variables, id) }
	if !slices.ContainsFunc(r.Diagram.Nodes, func(n *Node) bool { return gone(n.Variable) }) {
		return r
	}
	next, d := *r, *r.Diagram
	d.Nodes = without(d.Nodes, func(n *Node) bool { return gone(n.Variable) })
	d.Arrows = without(d.Arrows, func(a *Arrow) bool { return gone(a.From) || gone(a.To) })
	d.Arrows = mapped(d.Arrows, func(a *Arrow) *Arrow { return a.alone(gone) })
	d.Arcs = without(d.Arcs, func(a *Arc) bool { return gone(a.A) || gone(a.B) })
	d.Absent = without(d.Absent, func(a *Absent) bool { return gone(a.From) || gone(a.To) })
	next.Diagram = &d
	if slices.ContainsFunc(variables, func(id string) bool { _, placed := r.Layout.At[id]; return placed }) {
		at := maps.Clone(r.Layout.At)
		maps.DeleteFunc(at, func(id string, _ Point) bool { return gone(id) })
		next.Layout = &Layout{At: at, Notes: r.Layout.Notes}
	}
	return &next
}

// alone gives the arrow without products with the variables that are gone.
func (a *Arrow) alone(gone func(string) bool) *Arrow {
	if !slices.ContainsFunc(a.With, gone) {
		return a
	}
	next := *a
	next.With = without(a.With, gone)
	return &next
}

// MoveNodes puts nodes at other places. It changes the layout alone.
type MoveNodes struct {
	Rival string
	To    map[string]Point
}

// Apply rounds places to hundredths of a sheet unit, so that files stay short.
// It runs at every step of a drag, so it looks at the places alone and not at
// the whole study again.
func (e MoveNodes) Apply(s *Study) (*Study, error) {
	i := slices.IndexFunc(s.Rivals, byRivalName(e.Rival))
	if i < 0 {
		return nil, noRival(e.Rival)
	}
	r := *s.Rivals[i]
	for id, p := range e.To {
		if r.Diagram.Node(id) == nil {
			return nil, notOnSheet(id, e.Rival)
		}
		if !finite(p.X, p.Y) {
			return nil, fmt.Errorf("%s cannot stand at (%g, %g)", id, p.X, p.Y)
		}
	}
	layout := r.Layout.moved(e.To)
	if maps.Equal(layout.At, r.Layout.At) {
		return s, nil
	}
	r.Layout = layout
	next := *s
	next.Rivals = with(s.Rivals, i, &r)
	return &next, nil
}

func (l *Layout) moved(to map[string]Point) *Layout {
	at := maps.Clone(l.At)
	if at == nil {
		at = make(map[string]Point, len(to))
	}
	for id, p := range to {
		at[id] = p.rounded()
	}
	return &Layout{At: at, Notes: l.Notes}
}

// Label names the edit.
func (e MoveNodes) Label() string { return "Move " + some(slices.Sorted(maps.Keys(e.To))) }

// Merge makes one step of two moves of the same nodes.
func (e MoveNodes) Merge(next Edit) (Edit, bool) {
	n, ok := next.(MoveNodes)
	if !ok || n.Rival != e.Rival || len(n.To) != len(e.To) {
		return nil, false
	}
	for id := range n.To {
		if _, same := e.To[id]; !same {
			return nil, false
		}
	}
	return n, true
}
