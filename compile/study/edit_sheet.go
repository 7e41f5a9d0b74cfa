package study

import (
	"fmt"
	"maps"
	"math"
	"reflect"
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
		next.Layout = &Layout{At: at}
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
		at[id] = Point{math.Round(p.X*100) / 100, math.Round(p.Y*100) / 100}
	}
	return &Layout{At: at}
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
		a.Plates = list(a.Plates)
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
		a.Plates = list(a.Plates)
		r.Diagram.Arcs = with(r.Diagram.Arcs, i, &a)
		return nil
	})
}

// Label names the edit.
func (e ChangeArc) Label() string { return "Change " + e.A + " ↔ " + e.B }

// ChangeLaw gives a node another law; nil or an empty law is the default.
type ChangeLaw struct {
	Rival, Variable string
	Law             *Law
}

// Apply refuses a variable that is not on the sheet.
func (e ChangeLaw) Apply(s *Study) (*Study, error) {
	return onSheet(s, e.Rival, func(r *Rival) error {
		i := slices.IndexFunc(r.Diagram.Nodes, byVariable(e.Variable))
		if i < 0 {
			return notOnSheet(e.Variable, e.Rival)
		}
		n := Node{Variable: e.Variable, Law: copyLaw(e.Law)}
		r.Diagram.Nodes = with(r.Diagram.Nodes, i, &n)
		return nil
	})
}

func copyLaw(l *Law) *Law {
	if l == nil {
		return nil
	}
	next := *l
	next.Arguments, next.VariesBy, next.Priors = list(l.Arguments), list(l.VariesBy), list(l.Priors)
	if reflect.DeepEqual(next, Law{}) {
		return nil
	}
	return &next
}

// Label names the edit.
func (e ChangeLaw) Label() string { return "Change the law of " + e.Variable }

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
