package ui

import (
	"fmt"
	"slices"
	"strings"

	"arrowroot/app/session"
	"arrowroot/app/words"
	"arrowroot/canvas"
	"arrowroot/canvas/draw"
	"arrowroot/compile/study"
	"arrowroot/compile/table"
)

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
