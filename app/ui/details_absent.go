package ui

import (
	"strings"

	"arrowroot/compile/study"
)

// absent is the part of the rail that argues why no arrow joins two variables
// that are picked: an arrow that is not drawn is an assumption like one that
// is. Where an arrow is drawn, the other way needs no reason: it would close a
// cycle.
func (x *details) absent(s *sheaf, a, b string) {
	d := x.d
	diagram := d.view.Rival.Diagram
	if diagram.Node(a) == nil || diagram.Node(b) == nil || diagram.Arrow(a, b) != nil || diagram.Arrow(b, a) != nil {
		return
	}
	x.absentArrow(s, a, b)
	x.absentArrow(s, b, a)
}

// absentArrow is one direction of a pair.
func (x *details) absentArrow(s *sheaf, from, to string) {
	d := x.d
	now := study.Absent{From: from, To: to}
	if a := d.view.Rival.Diagram.AbsentArrow(from, to); a != nil {
		now = *a
	}
	keep := func(next study.Absent) {
		if next.Why == "" && len(next.References) == 0 {
			if d.view.Rival.Diagram.AbsentArrow(from, to) != nil {
				d.do(study.RemoveAbsent{Rival: d.rival(), From: from, To: to})
			}
			return
		}
		d.do(study.AddAbsent{Rival: d.rival(), Absent: next})
	}
	s.section("No arrow " + from + " → " + to + ", because")
	why := d.note(now.Why, "Why does "+from+" not act on "+to+"?", func(text string) {
		next := now
		next.Why = text
		keep(next)
	})
	why.SetMinRowsVisible(2)
	s.keys["absent "+from+" "+to] = why
	s.add(why)
	refs := d.note(strings.Join(now.References, "\n"), "references, one to a line", func(text string) {
		next := now
		next.References = nil
		for _, l := range strings.Split(text, "\n") {
			if l = strings.TrimSpace(l); l != "" {
				next.References = append(next.References, l)
			}
		}
		keep(next)
	})
	refs.SetMinRowsVisible(2)
	s.keys["references "+from+" "+to] = refs
	s.add(refs)
}
