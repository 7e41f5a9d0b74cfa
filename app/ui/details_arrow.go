package ui

import (
	"slices"
	"strings"

	"arrowroot/app/paint"
	"arrowroot/canvas/scene"
	"arrowroot/compile/model"
	"arrowroot/compile/study"
)

func (x *details) arrow(s *sheaf, a *study.Arrow) {
	d := x.d
	x.head(s, "Arrow", a.From+" → "+a.To, false)
	if text := d.arrowWords(a.From, a.To); text != "" {
		s.add(newProse(sizeSmall, span{text: text, token: tokenMuted}))
	}
	switch x.tabs(s, "arrow", "Form", "Prior", "Why") {
	case "Form":
		x.form(s, a)
	case "Prior":
		x.slope(s, a)
	default:
		x.reason(s, a)
	}
}

func (x *details) form(s *sheaf, a *study.Arrow) {
	d := x.d
	x.formTiles(s, a)
	x.formBand(s, a)
	var plates []string
	for _, p := range d.view.Study.Plates {
		plates = append(plates, p.Name)
	}
	if len(plates) > 0 {
		s.toggles("varies", "Varies by", plates, func(w string) bool { return slices.Contains(a.VariesBy, w) }, func(w string, on bool) {
			d.changeArrow(a.From, a.To, func(a *study.Arrow) { a.VariesBy = with(a.VariesBy, w, on) })
		})
	}
	var others []string
	for _, p := range d.view.Rival.Diagram.Parents(a.To) {
		if p != a.From {
			others = append(others, p)
		}
	}
	if len(others) > 0 {
		s.toggles("with", "Product with", others, func(w string) bool { return slices.Contains(a.With, w) }, func(w string, on bool) {
			d.changeArrow(a.From, a.To, func(a *study.Arrow) { a.With = with(a.With, w, on) })
		})
	}
	turn := d.plain("Turn round", func() {
		next := *a
		next.From, next.To = a.To, a.From
		if d.do(study.ChangeArrow{Rival: d.rival(), From: a.From, To: a.To, Arrow: next}) {
			d.chooseArrow(next.From, next.To)
		}
	})
	drop := d.quiet("Remove", func() { d.commands.find("delete").run() })
	s.keys["turn"], s.keys["drop"] = turn, drop
	s.add(gapOf(1, 2), row(8, turn, drop))
}

// slope is the tab of the coefficients that an arrow makes.
func (x *details) slope(s *sheaf, a *study.Arrow) {
	m := x.d.view.Model
	if m == nil {
		s.text("The prior shows as soon as the laws are complete.", tokenMuted)
		return
	}
	n := 0
	for _, i := range arrowParameters(m, a) {
		if n > 0 {
			s.add(hairline())
		}
		x.parameter(s, a.To, m.Parameters[i])
		n++
	}
	if n == 0 {
		s.text("This arrow has no coefficient.", tokenMuted)
	}
}

// arrowParameters are the parameters of the terms that an arrow makes.
func arrowParameters(m *model.Model, a *study.Arrow) []int {
	child, _ := m.Name(a.To)
	parent, _ := m.Name(a.From)
	var out []int
	for _, law := range m.Laws {
		if law.Variable != child || child < 0 || parent < 0 {
			continue
		}
		for _, t := range law.Terms {
			if t.Variable == parent || t.With == parent {
				for _, p := range t.Parameters {
					if !slices.Contains(out, p) {
						out = append(out, p)
					}
				}
			}
		}
	}
	return out
}

// reason is the tab of why the arrow is believed.
func (x *details) reason(s *sheaf, a *study.Arrow) {
	d := x.d
	why := d.note(a.Why, "Why should "+a.From+" act on "+a.To+"?", func(text string) {
		d.changeArrow(a.From, a.To, func(a *study.Arrow) { a.Why = text })
	})
	s.keys["why"] = why
	s.add(why)
	x.references(s, a.References, func(refs []string) {
		d.changeArrow(a.From, a.To, func(a *study.Arrow) { a.References = refs })
	})
}

// references are where a reason is written, one to a line.
func (x *details) references(s *sheaf, have []string, commit func([]string)) {
	s.section("References")
	refs := x.d.note(strings.Join(have, "\n"), "one to a line", func(text string) {
		var list []string
		for _, l := range strings.Split(text, "\n") {
			if l = strings.TrimSpace(l); l != "" {
				list = append(list, l)
			}
		}
		commit(list)
	})
	refs.SetMinRowsVisible(3)
	s.keys["references"] = refs
	s.add(refs)
}

// arrowWords is what the fit says of an arrow; "" without one.
func (d *desk) arrowWords(from, to string) string {
	if d.view.Result == nil {
		return ""
	}
	return paint.Of(d.view.Result, scene.EffectPaint, d.view.Stale).Arrows[[2]string{from, to}].Words
}
