package ui

import (
	"errors"
	"fmt"
	"slices"
	"strings"

	"fyne.io/fyne/v2"

	"arrowroot/app/session"
	"arrowroot/app/words"
	"arrowroot/canvas"
	"arrowroot/canvas/draw"
	"arrowroot/compile/catalog"
	"arrowroot/compile/formula"
	"arrowroot/compile/model"
	"arrowroot/compile/study"
	"arrowroot/compile/table"
)

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

// priors is the tab of the parameters of a variable's law.
func (x *details) priors(s *sheaf, v *study.Variable) {
	m := x.d.view.Model
	if m == nil {
		s.text("The priors show as soon as the laws are complete.", tokenMuted)
		return
	}
	at, _ := m.Name(v.ID)
	n := 0
	for _, p := range m.Parameters {
		if p.Of == at && at >= 0 {
			if n > 0 {
				s.add(hairline())
			}
			x.parameter(s, v.ID, p)
			n++
		}
	}
	if n == 0 {
		s.text(v.ID+" is given: it has no law, and so no priors.", tokenMuted)
	}
}

// parameter shows one parameter: prior and posterior as a picture first, then
// the number, where the prior comes from, and the prior as text to change.
func (x *details) parameter(s *sheaf, of string, p *model.Parameter) {
	d := x.d
	s.add(newProse(sizeBody, span{text: p.Symbol, bold: true}, span{text: "  " + p.Unit, token: tokenMuted}))
	if label := d.coefficient(p); label != "" {
		s.add(newProse(sizeSmall, span{text: "may be read as: " + label, token: tokenMuted}))
	}
	if p.Shape == model.Scalar {
		draws := d.posterior(p.Name)
		low, high, level := d.interval(p.Name)
		s.add(stack(bordered(tokenCard, tokenHairline, 5), d.priorPicture(p, draws, low, high, level)))
		if said, trust := d.posteriorWords(p.Name); said != "" {
			spans := []span{{text: "prior ┄  ", token: tokenMuted}, {text: "posterior  ", token: tokenConfound}, {text: said, bold: true}}
			if trust != "sound" {
				spans = append(spans, span{text: " · " + trust, token: tokenConfound})
			}
			if d.view.Stale {
				spans = append(spans, span{text: " · of an earlier version", token: tokenMuted})
			}
			s.add(newProse(sizeSmall, spans...))
		}
	} else {
		s.add(newProse(sizeSmall, span{text: shapeWords(p), token: tokenMuted}))
		x.vector(s, d.view.Model, p)
	}
	if p.Shape == model.ByPlate || p.Shape == model.Unrecorded {
		return // its prior is the law of the levels, or of the variable: that stands by itself
	}
	text, own := d.priorText(of, p.Name)
	f := d.field(text, priorPhrase(p), func(text string) { d.setPrior(of, p.Name, text) })
	s.keys["prior "+p.Name] = f
	wrong := newProse(sizeSmall)
	f.typing = func(text string) {
		wrong.set(caretPhrase(text)...)
		x.pane.arrange()
	}
	if own {
		wrong.set(caretPhrase(text)...)
	}
	s.add(f, wrong)
	if p.Why != "" && !own {
		why := p.Why
		if p.Prior.FromData {
			why += " Some of these ranges were seen in the data, not given."
		}
		s.add(newProse(sizeSmall, span{text: why, token: tokenMuted}))
	}
}

func caretPhrase(text string) []span {
	if strings.TrimSpace(text) == "" {
		return nil
	}
	_, err := formula.ParsePhrase(text)
	var e *formula.Error
	if !errors.As(err, &e) {
		return nil
	}
	return caretOf(text, e.Span, e.Message)
}

// interval is that of one quantity of the result; zeros without one.
func (d *desk) interval(name string) (low, high, level float64) {
	if d.view.Result == nil || d.view.Result.Full == nil {
		return 0, 0, 0
	}
	for _, q := range d.view.Result.Full.Quantities {
		if q.Name == name {
			return q.Low, q.High, q.Level
		}
	}
	return 0, 0, 0
}

func shapeWords(p *model.Parameter) string {
	switch p.Shape {
	case model.ByPlate:
		return "one for each level, around " + or(p.Mean, "0") + " with spread " + p.SD
	case model.ZeroSum:
		return times(p.Size, "entry", "entries") + " that sum to zero: " + words.List(p.Entries)
	case model.Simplex:
		return times(p.Size, "share", "shares") + " that sum to one"
	case model.Unrecorded:
		return times(p.Size, "missing entry", "missing entries") + ", drawn with the rest"
	case model.Cuts:
		return times(p.Size, "cut point", "cut points") + " in rising order"
	}
	return times(p.Size, "entry", "entries") + ": " + words.List(p.Entries)
}

// priorPhrase is a prior as one could type it.
func priorPhrase(p *model.Parameter) string {
	if p.Prior.Family == nil {
		return ""
	}
	var parts []string
	for i, a := range p.Prior.Arguments {
		if i < len(p.Prior.Family.Arguments) && a != nil {
			text := formula.Format(a)
			if x, ok := constants(p.Prior.Arguments[i : i+1]); ok {
				text = words.Number(x[0])
			}
			parts = append(parts, p.Prior.Family.Arguments[i].Name+" "+text)
		}
	}
	phrase := p.Prior.Family.Name
	if len(parts) > 0 {
		phrase += " with " + strings.Join(parts, ", ")
	}
	switch p.Prior.On {
	case model.InverseRoot:
		phrase = "1/√" + p.Symbol + " ~ " + phrase
	case model.InverseRootPlus:
		phrase = "1/√(1+" + p.Symbol + ") ~ " + phrase
	}
	return phrase
}

// priorText is the prior that the user gave a parameter, with its arrow or its
// law; own is false where it is the default.
func (d *desk) priorText(of, name string) (text string, own bool) {
	if n := d.view.Rival.Diagram.Node(of); n != nil && n.Law != nil {
		for _, p := range n.Law.Priors {
			if p.Parameter == name {
				return p.Text, true
			}
		}
	}
	if a := d.arrowOf(of, name); a != nil && a.Prior != "" {
		return a.Prior, true
	}
	return "", false
}

// arrowOf is the arrow whose coefficient a parameter is; nil if it is none.
func (d *desk) arrowOf(to, parameter string) *study.Arrow {
	for _, a := range d.view.Rival.Diagram.Arrows {
		if a.To == to && (parameter == "beta_"+a.From+"_"+to || parameter == "step_"+a.From+"_"+to) {
			return a
		}
	}
	return nil
}

// setPrior gives a parameter another prior; an empty text is the default.
func (d *desk) setPrior(of, name, text string) {
	inLaw := false
	if n := d.view.Rival.Diagram.Node(of); n != nil && n.Law != nil {
		inLaw = slices.ContainsFunc(n.Law.Priors, func(p study.Prior) bool { return p.Parameter == name })
	}
	if a := d.arrowOf(of, name); a != nil && !inLaw {
		d.changeArrow(a.From, a.To, func(a *study.Arrow) { a.Prior = text })
		return
	}
	d.changeLaw(of, func(l *study.Law) {
		l.Priors = slices.DeleteFunc(slices.Clone(l.Priors), func(p study.Prior) bool { return p.Parameter == name })
		if text != "" {
			l.Priors = append(l.Priors, study.Prior{Parameter: name, Text: text})
		}
	})
}

const notBound = "not bound"

// data is the tab of what was measured.
func (x *details) data(s *sheaf, v *study.Variable) {
	d := x.d
	t := d.view.Table
	s.toggles("measured", "Was it", []string{"measured", "unmeasured"}, func(w string) bool { return (w == "unmeasured") == v.Unmeasured }, func(w string, on bool) {
		d.changeVariable(v.ID, func(v *study.Variable) { v.Unmeasured = w == "unmeasured" })
	})
	if !v.Unmeasured {
		x.column(s, v, t)
	}
	scales := make([]string, 0, len(study.Scales))
	for _, sc := range study.Scales {
		scales = append(scales, string(sc))
	}
	s.choice("scale", "Scale", scales, string(v.Scale), func(word string) {
		d.changeVariable(v.ID, func(v *study.Variable) { v.Scale = study.Scale(word) })
	})
	switch v.Scale {
	case study.Category, study.Ordered, study.Binary:
		s.field("levels", "Levels", strings.Join(v.Levels, ", "), "low, middle, high", func(text string) {
			d.changeVariable(v.ID, func(v *study.Variable) { v.Levels = splitList(text) })
		})
	default:
		s.field("unit", "Unit", v.Unit, "", func(text string) { d.changeVariable(v.ID, func(v *study.Variable) { v.Unit = text }) })
		x.plausible(s, v, t)
	}
	var plates []string
	for _, p := range d.view.Study.Plates {
		plates = append(plates, p.Name)
	}
	if len(plates) > 0 {
		s.toggles("level", "One value per", plates, func(w string) bool { return slices.Contains(v.Plates, w) }, func(w string, on bool) {
			d.changeVariable(v.ID, func(v *study.Variable) { v.Plates = with(v.Plates, w, on) })
		})
		s.add(newProse(sizeSmall, span{text: "Choose a plate if it has one value for each of its levels; none = one for each row.", token: tokenMuted}))
	}
	s.field("computed", "Computed", v.Computed, "a formula, if it is one", func(text string) {
		d.changeVariable(v.ID, func(v *study.Variable) {
			v.Computed = text
			if text != "" {
				v.Column = ""
			}
		})
	})
	x.recording(s, v)
}

func (x *details) column(s *sheaf, v *study.Variable, t *table.Table) {
	d := x.d
	if t == nil {
		if v.Column != "" {
			s.text("Bound to column "+v.Column+"; the data are not open.", tokenMuted)
		}
		b := d.plain("Open data …", func() { d.commands.find("data").run() })
		s.keys["open data"] = b
		s.add(row(0, b))
		return
	}
	options := []string{notBound}
	for _, c := range t.Columns {
		options = append(options, c.Name)
	}
	chosen := notBound
	if v.Column != "" {
		chosen = v.Column
	}
	s.choice("column", "Column", options, chosen, func(word string) { d.bind(v.ID, word) })
	c := t.Column(v.Column)
	switch {
	case v.Column == "":
		return
	case c == nil:
		s.text("The data have no column "+v.Column+".", tokenFault)
		return
	}
	p := table.Propose(c)
	spans := []span{{text: times(t.Rows-c.Missing, "value", "values"), token: tokenMuted}}
	if c.Missing > 0 {
		spans = append(spans, span{text: ", " + count(c.Missing) + " missing (" + percent(float64(c.Missing)/float64(t.Rows)) + ")"})
	}
	if p.Words != "" {
		spans = append(spans, span{text: "; " + p.Words, token: tokenMuted})
	}
	s.add(newProse(sizeSmall, spans...))
	for i, odd := range c.Strange {
		if i == 3 {
			s.text(fmt.Sprintf("and %d more.", len(c.Strange)-i), tokenFault)
			break
		}
		s.text(fmt.Sprintf("Row %d: “%s” is not a number; it counts as missing.", odd.Row+1, odd.Text), tokenFault)
	}
	if c.Kind == table.Numeric {
		values := divided(c.Numbers, v.Divide)
		s.add(canvas.NewPicture(120, 44, func(w, h float64) *draw.List {
			return draw.DotStrip(w, h, table.Quantiles(values, 40), d.style())
		}))
	}
	switch {
	case v.Divide != 0 && v.Divide != 1:
		b := d.quiet("Undo", func() { d.changeVariable(v.ID, func(v *study.Variable) { v.Divide = 0 }) })
		s.keys["undivide"] = b
		s.add(newProse(sizeSmall, span{text: "The column is divided by " + words.Given(v.Divide) + ". ", token: tokenMuted}, span{object: b}))
	case p.Percent:
		b := d.quiet("Divide by 100", func() {
			d.changeVariable(v.ID, func(v *study.Variable) { v.Divide, v.Scale = 100, study.Proportion })
		})
		s.keys["divide"] = b
		s.add(newProse(sizeSmall, span{text: "It looks like percent. ", token: tokenConfound}, span{object: b}))
	}
}

// divided gives a column's values on the variable's own scale.
func divided(values []float64, by float64) []float64 {
	if by == 0 || by == 1 {
		return values
	}
	out := make([]float64, len(values))
	for i, x := range values {
		out[i] = x / by
	}
	return out
}

// plausible is the range that the user holds plausible.
func (x *details) plausible(s *sheaf, v *study.Variable, t *table.Table) {
	d := x.d
	low, high := "", ""
	if v.Range != nil {
		low, high = words.Given(v.Range.Low), words.Given(v.Range.High)
	}
	hintLow, hintHigh := "low", "high"
	if c := t.Column(v.Column); c != nil && v.Column != "" && c.Kind == table.Numeric {
		p := table.Propose(c)
		by := v.Divide
		if by == 0 {
			by = 1
		}
		hintLow, hintHigh = words.Number(p.Low/by)+" seen", words.Number(p.High/by)+" seen"
	}
	var a, b *field
	set := func(string) {
		if strings.TrimSpace(a.Text) == "" && strings.TrimSpace(b.Text) == "" {
			d.changeVariable(v.ID, func(v *study.Variable) { v.Range = nil })
			return
		}
		from, okA := number(a.Text)
		to, okB := number(b.Text)
		switch {
		case strings.TrimSpace(a.Text) == "" || strings.TrimSpace(b.Text) == "":
			return // the other end is still to come
		case !okA || !okB:
			d.complain("The plausible range of " + v.ID + " needs two numbers.")
		case from >= to:
			d.complain("The plausible range of " + v.ID + " runs from low to high: " + a.Text + " is not below " + b.Text + ".")
		default:
			d.changeVariable(v.ID, func(v *study.Variable) { v.Range = &study.Range{Low: from, High: to} })
		}
	}
	a, b = d.field(low, hintLow, set), d.field(high, hintHigh, set)
	s.keys["low"], s.keys["high"] = a, b
	s.add(labelled("Plausible", row(6, stretch(a), muted("to"), stretch(b))))
	if v.Range == nil {
		s.add(newProse(sizeSmall, span{text: "What values does the field hold plausible? Default priors are made from it; without it, the range seen in the data is used.", token: tokenMuted}))
	}
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

// bind ties a variable to a column of the study's table, or unties it.
func (d *desk) bind(id, column string) bool {
	v, t := d.view.Study.Variable(id), d.view.Table
	if v == nil {
		d.complain("There is no variable " + id + ".")
		return false
	}
	if column == notBound || column == "" {
		return d.do(study.Bind{Variable: id})
	}
	c := t.Column(column)
	if c == nil {
		d.complain("The data have no column " + column + ".")
		return false
	}
	return d.do(study.ChangeVariable{ID: id, To: session.Bound(*v, c)})
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
