package ui

import (
	"strings"

	"fyne.io/fyne/v2"

	"arrowroot/compile/model"
	"arrowroot/compile/study"
)

// variable is the panel of a variable, tab by tab.
func (x *details) variable(s *sheaf, v *study.Variable) {
	d := x.d
	kind := "Variable"
	if q := d.view.Question; q != nil {
		switch v.ID {
		case q.Exposure:
			kind = "Exposure"
		case q.Outcome:
			kind = "Outcome"
		}
		if d.held(v.ID) {
			kind = "Held"
		}
	}
	x.head(s, kind, v.ID, v.Unmeasured)
	for _, p := range d.view.Problems {
		if p.Variable == v.ID {
			if d.early(&p) {
				s.text(p.Message, tokenMuted)
			} else {
				s.text(p.Message, problemToken(p))
			}
			break
		}
	}
	switch x.tabs(s, "variable", "Law", "Prior", "Data", "Why") {
	case "Law":
		x.law(s, v)
	case "Prior":
		x.priors(s, v)
	case "Data":
		x.data(s, v)
	default:
		x.about(s, v)
	}
}

func problemToken(p model.Problem) fyne.ThemeColorName {
	if p.Stops {
		return tokenFault
	}
	return tokenConfound
}

// about is the tab of names and reasons.
func (x *details) about(s *sheaf, v *study.Variable) {
	d := x.d
	s.field("id", "Name", v.ID, "", func(text string) { d.rename(v.ID, text) })
	s.field("label", "Label", v.Label, "as in a figure", func(text string) {
		d.changeVariable(v.ID, func(v *study.Variable) { v.Label = text })
	})
	note := d.kit.note(v.Note, "How was it measured, and what should a reader know?", func(text string) {
		d.changeVariable(v.ID, func(v *study.Variable) { v.Note = text })
	})
	s.keys["note"] = note
	s.add(note)
	x.plan(s, v)
	if n := d.view.Rival.Diagram.Node(v.ID); n != nil {
		text := ""
		if n.Law != nil {
			text = n.Law.Note
		}
		why := d.kit.note(text, "Why this law?", func(text string) {
			d.changeLaw(v.ID, func(l *study.Law) { l.Note = text })
		})
		s.keys["why"] = why
		s.section("Why this law")
		s.add(why)
	}
	off := d.plain("Take off the sheet", func() { d.do(study.RemoveNodes{Rival: d.rival(), Variables: []string{v.ID}}) })
	off.setDisabled(!d.onSheet(v.ID))
	drop := d.quiet("Remove from the study", func() { d.do(study.RemoveVariable{ID: v.ID}) })
	s.keys["off"], s.keys["drop"] = off, drop
	s.add(row(8, off, drop))
}

// rename gives a variable another identifier; selection follows.
func (d *desk) rename(id, to string) {
	v := d.view.Study.Variable(id)
	if v == nil || to == "" {
		return
	}
	next := *v
	next.ID = to
	if err := d.session.Do(study.ChangeVariable{ID: id, To: next}); err != nil {
		d.complain(err.Error())
		return
	}
	for i, n := range d.pick.Nodes {
		if n == id {
			d.pick.Nodes[i] = to
		}
	}
	d.choose(d.pick)
}

// splitList reads words parted by commas.
func splitList(text string) []string {
	var out []string
	for _, w := range strings.Split(text, ",") {
		if w = strings.TrimSpace(w); w != "" {
			out = append(out, w)
		}
	}
	return out
}
