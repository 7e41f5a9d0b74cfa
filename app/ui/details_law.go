package ui

import (
	"errors"
	"slices"
	"strings"

	"fyne.io/fyne/v2"

	"arrowroot/compile/catalog"
	"arrowroot/compile/formula"
	"arrowroot/compile/model"
	"arrowroot/compile/study"
)

// law is the tab that says how a variable gets its value in this rival.
func (x *details) law(s *sheaf, v *study.Variable) {
	d := x.d
	n := d.view.Rival.Diagram.Node(v.ID)
	if n == nil {
		s.text(v.ID+" is not on the sheet of this rival.", tokenMuted)
		b := d.plain("Put it on the sheet", func() { d.do(study.AddNode{Rival: d.rival(), Variable: v.ID}) })
		s.keys["place"] = b
		s.add(row(0, b))
		return
	}
	var law study.Law
	if n.Law != nil {
		law = *n.Law
	}
	if m := d.view.Model; m != nil && slices.Contains(m.Given, v.ID) && law.Treat == "" {
		s.text(v.ID+" is given, not modelled: nothing points at it and no value is missing.", tokenMuted)
	}
	usual := catalog.Default(string(v.Scale))
	standard := "by its scale"
	if usual != nil {
		standard = "by its scale: " + usual.Name
	}
	options, chosen := []string{standard}, standard
	scale := v.Scale
	if scale == "" {
		scale = study.Real
	}
	for _, f := range catalog.Families() {
		if f.Predicted < 0 || !model.Suits(f, scale) {
			continue
		}
		options = append(options, f.Name)
		// Bounds are offered for the law at hand: a list of all would be long.
		if bounded := catalog.Bounded(f); f.Name == law.Family || law.Family == "" && f == usual ||
			slices.ContainsFunc(bounded, func(b *catalog.Family) bool { return b.Name == law.Family }) {
			for _, b := range bounded {
				options = append(options, b.Name)
			}
		}
	}
	if law.Family != "" {
		chosen = law.Family
		if !slices.Contains(options, chosen) {
			options = append(options, chosen)
		}
	}
	s.choice("family", "Family", options, chosen, func(word string) {
		if word == standard {
			word = ""
		}
		d.changeLaw(v.ID, func(l *study.Law) { l.Family = word })
	})
	family := catalog.FamilyByName(law.Family)
	if family == nil {
		family = usual
	}
	if family != nil {
		s.add(newProse(sizeSmall, span{text: family.Doc, token: tokenMuted}))
		for i, a := range family.Arguments {
			if i == family.Predicted {
				continue
			}
			text := ""
			for _, have := range law.Arguments {
				if have.Name == a.Name {
					text = have.Text
				}
			}
			hint := "estimated"
			if a.Given {
				hint = "a number or a column"
			} else if a.Greek != "" {
				hint = formula.Symbol(a.Greek + "_" + v.ID)
			}
			s.field("argument "+a.Name, a.Name, text, hint, func(text string) {
				d.changeLaw(v.ID, func(l *study.Law) {
					l.Arguments = slices.DeleteFunc(slices.Clone(l.Arguments), func(have study.Argument) bool { return have.Name == a.Name })
					if text != "" {
						l.Arguments = append(l.Arguments, study.Argument{Name: a.Name, Text: text})
					}
				})
			})
		}
	}

	s.section("Predictor")
	x.predictor(s, v, &law)

	var plates []string
	for _, p := range d.view.Study.Plates {
		plates = append(plates, p.Name)
	}
	if len(plates) > 0 {
		s.toggles("varies", "Varies by", plates, func(w string) bool { return slices.Contains(law.VariesBy, w) }, func(w string, on bool) {
			d.changeLaw(v.ID, func(l *study.Law) { l.VariesBy = with(l.VariesBy, w, on) })
		})
	}
	treat := map[string]string{"": "by the rules", "given": "given", "modelled": "modelled", "imputed": "imputed"}
	s.choice("treat", "Treated as", []string{"by the rules", "given", "modelled", "imputed"}, treat[law.Treat], func(word string) {
		if word == "by the rules" {
			word = ""
		}
		d.changeLaw(v.ID, func(l *study.Law) { l.Treat = word })
	})
}

// predictor is the formula with the place of a mistake under it.
func (x *details) predictor(s *sheaf, v *study.Variable, law *study.Law) {
	d := x.d
	usual := d.typedPredictor(v.ID)
	f := d.note(law.Formula, "from the arrows", func(text string) {
		d.changeLaw(v.ID, func(l *study.Law) { l.Formula = text })
	})
	f.SetMinRowsVisible(3)
	f.TextStyle = fyne.TextStyle{Monospace: true}
	s.keys["formula"] = f
	wrong := newProse(sizeSmall)
	check := func(text string) {
		wrong.set(caret(text)...)
	}
	f.typing = func(text string) {
		check(text)
		x.pane.arrange()
	}
	if law.Formula != "" {
		check(law.Formula)
		if len(wrong.spans) == 0 {
			for _, p := range d.view.Problems {
				if p.Variable == v.ID && p.Place == "formula" {
					wrong.set(caretOf(or(p.Text, law.Formula), p.Span, p.Message)...)
					break
				}
			}
		}
	}
	s.add(f, wrong)
	switch {
	case law.Formula != "":
		b := d.quiet("Back to the arrows", func() { d.changeLaw(v.ID, func(l *study.Law) { l.Formula = "" }) })
		s.keys["untype"] = b
		s.add(row(0, b))
	case usual != "":
		s.add(newProse(sizeSmall, span{text: usual, mono: true, token: tokenMuted}))
		b := d.quiet("Type it myself", func() {
			f.SetText(usual)
			f.done()
		})
		s.keys["type"] = b
		s.add(row(0, b))
	default:
		s.text("Its predictor follows from the arrows that point at it.", tokenMuted)
	}
}

// typedPredictor is the predictor of a variable's law as one could type it.
func (d *desk) typedPredictor(id string) string {
	m := d.view.Model
	if m == nil {
		return ""
	}
	for _, law := range m.Laws {
		if m.Variables[law.Variable].ID != id || len(law.Predictors) != 1 {
			continue
		}
		p := formula.Predictor{Link: string(law.Family.Link), Right: law.Predictors[0]}
		if law.Family.Predicted >= 0 {
			p.Subject = law.Family.Arguments[law.Family.Predicted].Name
		}
		return p.String()
	}
	return ""
}

// caret shows where a formula cannot be read; nothing where it can.
func caret(text string) []span {
	if strings.TrimSpace(text) == "" {
		return nil
	}
	_, err := formula.Parse(text)
	var e *formula.Error
	if !errors.As(err, &e) {
		return nil
	}
	return caretOf(text, e.Span, e.Message)
}

// caretOf shows the place in the text: what stands there is quoted, since the
// text may wrap, and the reason follows.
func caretOf(text string, at formula.Span, message string) []span {
	start, end := min(max(at.Start, 0), len(text)), min(max(at.End, at.Start), len(text))
	from := max(0, start-18)
	for from > 0 && text[from]&0xC0 == 0x80 {
		from--
	}
	lead := ""
	if from > 0 {
		lead = "…"
	}
	spot := text[start:end]
	if spot == "" {
		spot = "▲"
	}
	return []span{
		{text: lead + text[from:start], mono: true, token: tokenMuted},
		{text: spot, mono: true, bold: true, token: tokenFault},
		{text: "\n" + message, token: tokenFault},
	}
}

// with is a set of words with one put in or taken out.
func with(set []string, word string, on bool) []string {
	out := slices.DeleteFunc(slices.Clone(set), func(w string) bool { return w == word })
	if on {
		out = append(out, word)
	}
	return out
}
