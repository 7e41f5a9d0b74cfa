package mistake

import (
	"fmt"
	"slices"

	"arrowroot/compile/causal"
	"arrowroot/compile/study"
)

// recordsTakenExact finds error-prone records that stand on the sheet as if
// they were the thing itself, and held records that close a path of the true
// variable only in part (M17; Westfall & Yarkoni 2016).
func recordsTakenExact(l *look) []Mistake {
	var all []Mistake
	for v, id := range l.g.Names {
		truth := l.study.Variable(id).Records
		if truth == "" {
			continue
		}
		u := l.g.Index(truth)
		if u < 0 || !l.g.HasArrow(u, v) {
			if len(l.g.Children[v]) > 0 || slices.Contains(l.held, v) {
				all = append(all, Mistake{
					Code: RecordTakenExact, Severity: Note, Key: key(RecordTakenExact, id, truth), Nodes: []string{id},
					Sentence: fmt.Sprintf("%s is an error-prone record of %s, but it is drawn as if it were exact.", id, truth),
					Why:      fmt.Sprintf("Holding a record closes a path of %s only in part, as far as the record is right.", truth),
					Repairs:  []Repair{{"Draw " + truth + " behind it", l.behind(id, truth)}},
				})
			}
			continue
		}
		if l.read == nil || l.g.Measured[u] || !slices.Contains(l.held, v) {
			continue
		}
		if p := l.left(u); p != nil {
			all = append(all, Mistake{
				Code: RecordTakenExact, Severity: Note, Key: key(RecordTakenExact, id), Path: l.ids(p.Nodes), Nodes: []string{id, truth},
				Sentence: fmt.Sprintf("Holding %s, a record of %s with error, closes %s only in part.", id, truth, p.Text(l.g)),
				Why:      fmt.Sprintf("Rows with the same %s still differ by %s; how much the effect keeps of that is not known until the error is.", id, truth),
				Repairs:  l.leaveFree(v),
			})
		}
	}
	return all
}

// left is an open path through an unmeasured variable that is no part of the
// effect; nil if there is none.
func (l *look) left(u int) *causal.Path {
	for i := range l.read.Paths {
		if p := &l.read.Paths[i]; p.Open && p.Kind != causal.Causal && slices.Contains(p.Nodes, u) {
			return p
		}
	}
	return nil
}

// behind draws the true variable: it takes over the arrows and arcs of its
// record, which becomes an effect of it alone.
func (l *look) behind(id, truth string) study.Edit {
	rival := l.rival.Name
	var edits []study.Edit
	if v := l.study.Variable(truth); v != nil && v.Column == "" && v.Computed == "" && !v.Unmeasured {
		hidden := *v
		hidden.Unmeasured = true
		edits = append(edits, study.ChangeVariable{ID: truth, To: hidden})
	}
	d := l.rival.Diagram
	if d.Node(truth) == nil {
		edits = append(edits, study.AddNode{Rival: rival, Variable: truth})
	}
	instead := func(end string) string {
		if end == id {
			return truth
		}
		return end
	}
	var products []study.Edit // once every arrow they name is drawn
	for _, a := range d.Arrows {
		to := *a
		to.From, to.To = instead(a.From), instead(a.To)
		with := make([]string, len(a.With))
		for i, w := range a.With {
			with[i] = instead(w)
		}
		if to.From == a.From && to.To == a.To && slices.Equal(with, a.With) {
			continue
		}
		edits = append(edits, study.RemoveArrow{Rival: rival, From: a.From, To: a.To})
		if to.From == to.To || d.Arrow(to.From, to.To) != nil && (to.From != a.From || to.To != a.To) {
			continue
		}
		to.With = nil
		edits = append(edits, study.AddArrow{Rival: rival, Arrow: to})
		if len(with) > 0 {
			full := to
			full.With = with
			products = append(products, study.ChangeArrow{Rival: rival, From: to.From, To: to.To, Arrow: full})
		}
	}
	for _, a := range d.Arcs {
		to := *a
		to.A, to.B = instead(a.A), instead(a.B)
		if to.A == a.A && to.B == a.B {
			continue
		}
		edits = append(edits, study.RemoveArc{Rival: rival, A: a.A, B: a.B})
		if to.A != to.B && d.Arc(to.A, to.B) == nil {
			edits = append(edits, study.AddArc{Rival: rival, Arc: to})
		}
	}
	edits = append(edits, products...)
	edits = append(edits, study.AddArrow{Rival: rival, Arrow: study.Arrow{From: truth, To: id}})
	return study.Several{Name: "Draw " + truth + " behind " + id, Edits: edits}
}
