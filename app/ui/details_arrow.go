package ui

import (
	"fmt"
	"slices"
	"strings"

	"arrowroot/app/paint"
	"arrowroot/canvas"
	"arrowroot/canvas/draw"
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

// forms are the forms an arrow can take, with their pictures.
var forms = []struct {
	name string
	line [][2]float64 // in a box of 1 × 1, y up
	says string
}{
	{"slope", [][2]float64{{0.08, 0.12}, {0.92, 0.88}}, "Each step of %[1]s moves the predictor of %[2]s by the same amount."},
	{"steps", [][2]float64{{0.08, 0.15}, {0.36, 0.15}, {0.36, 0.5}, {0.64, 0.5}, {0.64, 0.85}, {0.92, 0.85}}, "Each level of %[1]s has an effect of its own on %[2]s."},
	{"offset", [][2]float64{{0.08, 0.3}, {0.92, 0.3}, {0.92, 0.7}, {0.08, 0.7}, {0.08, 0.3}}, "%[1]s enters %[2]s as it is, on the log scale, with no coefficient: twice the %[1]s, twice the expected %[2]s."},
}

func (x *details) form(s *sheaf, a *study.Arrow) {
	d := x.d
	form := a.Form
	if form == "" {
		form = "slope"
		if v := d.view.Study.Variable(a.From); v != nil && (v.Scale == study.Category || v.Scale == study.Ordered) {
			form = "steps"
		}
	}
	tiles := row(8)
	for _, f := range forms {
		pic := canvas.NewPicture(64, 36, func(w, h float64) *draw.List { return formPicture(w, h, f.line, nrgba(tokenInk)) })
		t := d.tile(pic, f.name, f.name == form, func() {
			d.changeArrow(a.From, a.To, func(a *study.Arrow) { a.Form = f.name })
		})
		s.keys["form "+f.name] = t
		tiles.Add(t)
	}
	s.add(tiles)
	for _, f := range forms {
		if f.name == form {
			s.add(newProse(sizeSmall, span{text: fmt.Sprintf(f.says, a.From, a.To), token: tokenMuted}))
		}
	}
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

func formPicture(w, h float64, line [][2]float64, ink draw.Color) *draw.List {
	l := &draw.List{Width: w, Height: h}
	var points []draw.Point
	for _, p := range line {
		points = append(points, draw.Point{X: p[0] * w, Y: (1 - p[1]) * h})
	}
	l.Add(&draw.Shape{Path: draw.Polyline(points...), Stroke: ink, Width: 1.6})
	return l
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
