package study

import "slices"

// DrawTruth says that a variable is measured with error: a new unmeasured
// variable takes over its arrows and arcs on one sheet, and the variable is
// left as the new one's record, with one arrow from it.
type DrawTruth struct {
	Rival, Record, Truth string
}

// recordBelow is how far below the true variable its record is put, in sheet
// units.
const recordBelow = 80

// Apply refuses a name that is taken and a variable that is not on the sheet.
// Laws of the record keep their family for the true variable; formulas and
// priors, which name the old arrows, go.
func (e DrawTruth) Apply(s *Study) (*Study, error) {
	record := s.Variable(e.Record)
	switch {
	case record == nil:
		return nil, noVariable(e.Record)
	case s.Variable(e.Truth) != nil:
		return nil, taken("variable", e.Truth)
	}
	truth := Variable{
		ID: e.Truth, Unit: record.Unit, Scale: record.Scale, Levels: record.Levels, Range: record.Range, Plates: record.Plates,
		Unmeasured: true, Tier: record.Tier,
	}
	to := *record
	to.Records = e.Truth
	s, err := Several{Edits: []Edit{AddVariable{truth}, ChangeVariable{e.Record, to}}}.Apply(s)
	if err != nil {
		return nil, err
	}
	return onSheet(s, e.Rival, func(r *Rival) error {
		i := slices.IndexFunc(r.Diagram.Nodes, byVariable(e.Record))
		if i < 0 {
			return notOnSheet(e.Record, e.Rival)
		}
		e.draw(r, i)
		return nil
	})
}

// draw puts the true variable in the place of the node at i.
func (e DrawTruth) draw(r *Rival, i int) {
	d := r.Diagram
	node := &Node{Variable: e.Truth}
	if law := d.Nodes[i].Law; law != nil && law.Family != "" {
		node.Law = &Law{Family: law.Family, VariesBy: law.VariesBy}
	}
	rest := *d.Nodes[i]
	rest.Law = nil
	d.Nodes = and(with(d.Nodes, i, &rest), node)
	instead := func(id string) string {
		if id == e.Record {
			return e.Truth
		}
		return id
	}
	d.Arrows = mapped(d.Arrows, func(a *Arrow) *Arrow {
		if a.From != e.Record && a.To != e.Record && !slices.Contains(a.With, e.Record) {
			return a
		}
		next := *a
		next.From, next.To, next.With = instead(a.From), instead(a.To), nil
		for _, w := range a.With {
			next.With = append(next.With, instead(w))
		}
		return &next
	})
	d.Arrows = and(d.Arrows, &Arrow{From: e.Truth, To: e.Record})
	d.Arcs = mapped(d.Arcs, func(a *Arc) *Arc {
		if a.A != e.Record && a.B != e.Record {
			return a
		}
		next := *a
		next.A, next.B = instead(a.A), instead(a.B)
		return &next
	})
	d.Absent = mapped(d.Absent, func(a *Absent) *Absent {
		if a.From != e.Record && a.To != e.Record {
			return a
		}
		next := *a
		next.From, next.To = instead(a.From), instead(a.To)
		return &next
	})
	if at, placed := r.Layout.At[e.Record]; placed {
		r.Layout = r.Layout.moved(map[string]Point{e.Truth: at, e.Record: {at.X, at.Y + recordBelow}})
	}
}

// Label names the edit.
func (e DrawTruth) Label() string { return "Let " + e.Record + " be measured with error" }
