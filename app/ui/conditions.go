package ui

import (
	"slices"
	"strings"

	"arrowroot/app/words"
	"arrowroot/compile/study"
	"arrowroot/compile/table"
)

// A picker of rows edits a draft of conditions: words of a category, bounds of
// a number. It stands in a popover that is filled anew when its shape changes.
type rowPicker struct {
	d     *desk
	list  []study.Condition
	among []string // the variables that it offers
	again func()   // fills the place it stands in anew
	done  func()   // on Return; nil = nothing

	bounds map[string][2]*field // by variable
}

func (d *desk) pickRows(list []study.Condition, again func()) *rowPicker {
	return &rowPicker{d: d, list: slices.Clone(list), again: again}
}

// add puts the picker into a sheaf.
func (p *rowPicker) add(s *sheaf, key string) {
	p.bounds = make(map[string][2]*field)
	for _, c := range p.list {
		away := p.d.iconButton(newIcon(iconClose, tokenMuted, 14), "Drop this condition", func() { p.drop(c.Variable) })
		s.keys[key+" drop "+c.Variable] = away
		line := row(6, stretch(bold(c.Variable).shrinkTo(40)), away)
		levels := p.levels(c.Variable)
		if len(levels) > 0 {
			var spans []span
			for _, w := range levels {
				t := p.d.toggle(w, slices.Contains(c.Words, w), func(on bool) { p.flip(c.Variable, w, on) })
				s.keys[key+" "+c.Variable+" "+w] = t
				spans = append(spans, span{object: t}, span{text: " "})
			}
			s.add(column(2, line, newProse(sizeBody, spans...)))
			continue
		}
		low, high := p.d.field(boundText(c.Low), "no least", nil), p.d.field(boundText(c.High), "no most", nil)
		for _, f := range []*field{low, high} {
			f.OnSubmitted = func(string) {
				if p.done != nil {
					p.done()
				}
			}
		}
		p.bounds[c.Variable] = [2]*field{low, high}
		s.keys[key+" "+c.Variable+" low"], s.keys[key+" "+c.Variable+" high"] = low, high
		unit := ""
		if v := p.d.view.Study.Variable(c.Variable); v != nil {
			unit = v.Unit
		}
		s.add(row(6, fixed(110, 0, bold(c.Variable).shrinkTo(40)), stretch(low), muted("to"), stretch(high), muted(unit), away))
	}
	var free []string
	for _, id := range p.among {
		if !slices.ContainsFunc(p.list, func(c study.Condition) bool { return c.Variable == id }) {
			free = append(free, id)
		}
	}
	if len(free) > 0 {
		c := p.d.choice(free, "", p.put)
		c.PlaceHolder = "only rows where …"
		s.keys[key+" add"] = c
		s.add(c)
	}
}

// levels are the words that a variable can be; nil for a number.
func (p *rowPicker) levels(id string) []string {
	v := p.d.view.Study.Variable(id)
	switch {
	case v == nil:
		return nil
	case len(v.Levels) > 0:
		return v.Levels
	}
	if c := p.d.view.Table.Column(v.Column); v.Column != "" && c != nil && c.Kind != table.Numeric {
		return table.Propose(c).Levels
	}
	return nil
}

// put adds a condition that keeps every row so far: the first word, or the
// range that was seen.
func (p *rowPicker) put(id string) {
	p.read()
	c := study.Condition{Variable: id}
	if levels := p.levels(id); len(levels) > 0 {
		c.Words = levels[:1:1]
	} else if v := p.d.view.Study.Variable(id); v != nil {
		if v.Range != nil {
			c.Low, c.High = &v.Range.Low, &v.Range.High
		} else if col := p.d.view.Table.Column(v.Column); v.Column != "" && col != nil && col.Kind == table.Numeric {
			by := v.Divide
			if by == 0 {
				by = 1
			}
			low, high := table.Propose(col).Low/by, table.Propose(col).High/by
			c.Low, c.High = &low, &high
		}
	}
	p.list = append(p.list, c)
	p.again()
}

func (p *rowPicker) drop(id string) {
	p.read()
	p.list = slices.DeleteFunc(p.list, func(c study.Condition) bool { return c.Variable == id })
	p.again()
}

func (p *rowPicker) flip(id, word string, on bool) {
	p.read()
	for i, c := range p.list {
		if c.Variable == id {
			p.list[i].Words = with(c.Words, word, on)
		}
	}
	p.again()
}

// read takes over the bounds that were typed; wrong says what is no number.
func (p *rowPicker) read() (wrong string) {
	for i := range p.list {
		c := &p.list[i]
		f, ok := p.bounds[c.Variable]
		if !ok {
			continue
		}
		for j, bound := range []**float64{&c.Low, &c.High} {
			text := strings.TrimSpace(f[j].Text)
			if text == "" {
				*bound = nil
				continue
			}
			x, ok := number(text)
			if !ok {
				wrong = c.Variable + " needs numbers as bounds: “" + text + "” is none."
				continue
			}
			*bound = &x
		}
		if c.Low != nil && c.High != nil && *c.Low > *c.High {
			wrong = "The bounds of " + c.Variable + " run from low to high."
		}
	}
	return wrong
}

// conditions are what the draft asks for; one that asks for nothing is left
// out.
func (p *rowPicker) conditions() (list []study.Condition, wrong string) {
	wrong = p.read()
	for _, c := range p.list {
		if len(c.Words) > 0 || c.Low != nil || c.High != nil {
			list = append(list, c)
		}
	}
	return list, wrong
}

func boundText(x *float64) string {
	if x == nil {
		return ""
	}
	return words.Given(*x)
}
