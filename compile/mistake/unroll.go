package mistake

import (
	"fmt"
	"slices"

	"arrowroot/compile/study"
)

// Unroll is the way out of an arrow that would close a cycle: one edit that
// draws an earlier copy of every variable on the cycle and lets the arrow start
// from the earlier one. Among the copies stand the arrows that are drawn among
// the variables, each copy acts on its variable, and what acts on a variable
// from outside the cycle acts on its copy too. Copies count as unmeasured until
// they are bound to columns. The error is that of a study in which the arrow
// closes no cycle.
func Unroll(s *study.Study, rival, from, to string) (study.Edit, error) {
	r := s.Rival(rival)
	if r == nil {
		return nil, fmt.Errorf("there is no rival “%s”", rival)
	}
	g, err := s.Graph(rival)
	if err != nil {
		return nil, err
	}
	a, b := g.Index(from), g.Index(to)
	if a < 0 || b < 0 || a == b || !g.Descendants(b)[a] {
		return nil, fmt.Errorf("an arrow %s → %s would close no cycle", from, to)
	}
	after, before := g.Descendants(b), g.Ancestors(a)
	around := func(id string) bool { v := g.Index(id); return after[v] && before[v] }
	early := map[string]string{}
	var edits []study.Edit
	next := s
	add := func(e study.Edit) error {
		applied, err := e.Apply(next)
		if err == nil {
			next = applied
			edits = append(edits, e)
		}
		return err
	}
	for _, id := range g.Names {
		if !around(id) {
			continue
		}
		v := *s.Variable(id)
		v.ID = next.FreeID(id + "_before")
		v.Label = "earlier " + s.Variable(id).Name()
		v.Unmeasured, v.Data, v.Column, v.Divide, v.Missing, v.Nudge = true, "", "", 0, nil, 0
		v.Tier, v.Computed, v.Records, v.Answers, v.Cost, v.Note = 0, "", "", "", 0, ""
		early[id] = v.ID
		if err := add(study.AddVariable{Variable: v}); err != nil {
			return nil, err
		}
		if err := add(study.AddNode{Rival: rival, Variable: v.ID}); err != nil {
			return nil, err
		}
	}
	draw := func(arrow study.Arrow) error { return add(study.AddArrow{Rival: rival, Arrow: arrow}) }
	for _, x := range r.Diagram.Arrows {
		child, inside := early[x.To]
		if !inside {
			continue
		}
		parent := x.From
		if e, too := early[x.From]; too {
			parent = e
		}
		if err := draw(study.Arrow{From: parent, To: child, Form: x.Form, VariesBy: slices.Clone(x.VariesBy), Why: x.Why}); err != nil {
			return nil, err
		}
	}
	for _, id := range g.Names {
		if e, ok := early[id]; ok {
			if err := draw(study.Arrow{From: e, To: id}); err != nil {
				return nil, err
			}
		}
	}
	if r.Diagram.Arrow(from, to) == nil {
		if err := draw(study.Arrow{From: early[from], To: to}); err != nil {
			return nil, err
		}
	}
	return study.Several{Name: fmt.Sprintf("Draw %s → %s over time", from, to), Edits: edits}, nil
}
