package ui

import (
	"fmt"
	"slices"
	"strings"

	"arrowroot/app/findings"
	"arrowroot/canvas/scene"
	"arrowroot/compile/causal"
)

const firstSubject = findings.PathSection

// subjectNames are the sections in the order in which they are listed.
var subjectNames = [...]string{
	findings.PathSection, findings.AdjustmentSection, findings.ControlSection, findings.DirectSection, findings.BeyondSection,
	findings.LawSection, findings.RowSection, findings.ContradictionSection, findings.EquivalenceSection,
}

// A subject is a section of the findings as the Reading page lists it.
type subject struct {
	name    string
	section *findings.Section // nil = not read yet, or the question cannot have it
	count   int
	alarm   string   // stands in place of the count; "" = none
	says    []string // above the rows
	left    []string // below them
	hidden  int      // rows that a filter keeps away
	waiting bool     // more is to come
}

// subjects are all sections; those that are not there yet wait.
func subjects(d *desk) []*subject {
	var all []*subject
	for _, name := range subjectNames {
		all = append(all, subjectOf(d, name))
	}
	return all
}

// subjectOf is one section with what the data say of it.
func subjectOf(d *desk, name string) *subject {
	f := d.view.Findings
	s := &subject{name: name}
	if f == nil {
		s.waiting = d.view.GraphError == nil
		return s
	}
	for _, section := range f.Sections() {
		if section.Name == name {
			s.section = section
		}
	}
	if s.section == nil {
		s.waiting = !f.Done
		if f.Done && f.Lacks != "" {
			s.says = append(s.says, f.Lacks)
		}
		return s
	}
	s.count = len(s.section.Findings)
	if text := s.summary(); text != "" {
		s.says = append(s.says, text)
	}
	if s.section.LeftOut != "" {
		s.left = append(s.left, s.section.LeftOut)
	}
	switch name {
	case findings.PathSection:
		open := 0
		for i := range f.Paths.List {
			if p := &f.Paths.List[i]; p.Open && p.Kind != causal.Causal {
				open++
			}
		}
		if open > 0 {
			s.alarm = fmt.Sprintf("%d open", open)
		}
	case findings.ContradictionSection:
		s.tested(d)
	}
	return s
}

// summary is the section's, without a sentence that stands in the first row.
func (s *subject) summary() string {
	text := s.section.Summary
	if len(s.section.Findings) > 0 {
		text = strings.TrimPrefix(text, s.section.Findings[0].Sentence)
	}
	return strings.TrimSpace(text)
}

// tested puts what the data say beside what they could contradict.
func (s *subject) tested(d *desk) {
	e := d.view.Evidence
	if e == nil {
		if d.view.Table != nil && d.view.Considered == "" {
			s.left = append(s.left, "Testing against the data …")
		}
		return
	}
	s.says = nil
	for _, text := range []string{e.Summary} {
		if text != "" {
			s.says = append(s.says, text)
		}
	}
	for _, text := range []string{e.Method, e.LeftOut} {
		if text != "" {
			s.left = append(s.left, text)
		}
	}
	s.count = len(e.Findings)
	if e.Contradicted > 0 {
		s.alarm = fmt.Sprintf("%d fail", e.Contradicted)
	}
}

// lines are the rows of a subject.
func (s *subject) lines(p *readingPage) []readingLine {
	if s.name == findings.ContradictionSection && p.d.view.Evidence != nil {
		return evidenceLines(p.d)
	}
	if s.section == nil {
		return nil
	}
	f := p.d.view.Findings
	var out []readingLine
	for i := range s.section.Findings {
		if s.name == findings.PathSection && !p.lists(f, &f.Paths.List[i]) {
			s.hidden++
			continue
		}
		out = append(out, p.d.line(f, s, i))
	}
	return out
}

// line is a finding as a row.
func (d *desk) line(f *findings.Findings, s *subject, i int) readingLine {
	x := &s.section.Findings[i]
	l := readingLine{
		key: x.Key, kind: x.Kind, text: x.Sentence, why: x.Why, aside: x.Dismissed,
		marks: func() *scene.Mark { return markOf(f, s.name, i, x) },
	}
	switch s.name {
	case findings.PathSection:
		switch p := &f.Paths.List[i]; {
		case p.Open && p.Kind != causal.Causal:
			l.tone = badTone
		case !p.Open:
			l.tone = quietTone
		}
	case findings.AdjustmentSection:
		d.adjustmentLine(f, x, &l)
	case findings.ControlSection:
		d.controlLine(f, &f.Controls.List[i], &l)
	}
	return l
}

// adjustmentLine offers to hold a set, or to leave free what is wrongly held.
func (d *desk) adjustmentLine(f *findings.Findings, x *findings.Finding, l *readingLine) {
	ids := f.Graph.NamesOf(x.Nodes)
	q := d.view.Question
	switch {
	case isSet(x):
		l.tone = goodTone
		l.set = &heldSet{ids: ids, now: q != nil && q.Held != nil && sameSet(ids, q.Held)}
	case x.Kind == "forbidden":
		l.tone = quietTone
		if id := ids[len(ids)-1]; d.held(id) {
			l.tone = badTone
			l.does, l.act = "Leave it free", func() { d.hold(id, false) }
		}
	default:
		l.tone = quietTone
	}
}

// controlLine offers to hold a good control, and to leave a bad one free.
func (d *desk) controlLine(f *findings.Findings, c *causal.Control, l *readingLine) {
	id := f.Graph.Names[c.Node]
	switch {
	case c.Kind == causal.BadControl:
		l.tone = badTone
	case c.Kind == causal.GoodControl || c.Kind == causal.PartOfControl:
		l.tone = goodTone
	case c.Kind == causal.NeutralControl:
		l.tone = quietTone
	}
	switch {
	case d.held(id):
		l.does, l.act = "Leave it free", func() { d.hold(id, false) }
	case c.Kind != causal.BadControl:
		l.does, l.act = "Hold", func() { d.hold(id, true) }
	}
}

// isSet reports whether a finding on adjustment is a set to hold.
func isSet(x *findings.Finding) bool {
	return x.Kind == "set" || x.Kind == "cheapest" || strings.HasPrefix(x.Kind, "most precise")
}

// lists reports whether the filters leave a path in the list.
func (p *readingPage) lists(f *findings.Findings, path *causal.Path) bool {
	if p.open && !path.Open {
		return false
	}
	id := p.d.picked()
	return !p.through || id == "" || slices.ContainsFunc(path.Nodes, func(v int) bool { return f.Graph.Names[v] == id })
}

func sameSet(a, b []string) bool {
	if len(a) != len(b) {
		return false
	}
	for _, x := range a {
		if !slices.Contains(b, x) {
			return false
		}
	}
	return true
}
