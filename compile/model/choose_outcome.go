package model

import (
	"fmt"
	"maps"
	"slices"
	"strings"

	"arrowroot/compile/formula"
	"arrowroot/compile/study"
)

// chooseOutcome takes the outcome's law alone, on the exposure and, for Held,
// the held set (SEMANTICS B8). Its offset, its trials and its varying baseline
// stay. A typed formula stays but for the summands that read what is left out;
// else a drawn arrow lends its form. A variable that neither has enters with
// the default form. Stated priors hold with a typed formula, the baseline's if
// the formula stays whole; without one, those of slopes and steps hold unless a
// mediator is left out: then the coefficients are of other effects, and have
// defaults. The statement gives the reason beside each.
func (b *builder) chooseOutcome() {
	q := b.question
	for _, id := range []string{q.Exposure, q.Outcome} {
		switch v := b.variable(id); {
		case id == "" || v == nil || !b.onSheet(id):
			b.stop(Problem{Code: "question", Place: "question", Message: "The question needs an exposure and an outcome that stand on the sheet."})
			return
		case v.Unmeasured:
			b.stop(Problem{Code: "question", Variable: id, Place: "question", Message: fmt.Sprintf("%s was not measured, so that no law can be fitted to it.", v.Name())})
			return
		}
	}
	if q.Exposure == q.Outcome {
		b.stop(Problem{Code: "question", Variable: q.Exposure, Place: "question", Message: "Exposure and outcome are the same variable."})
		return
	}
	want := []string{q.Exposure}
	var plates []string
	if b.kind == Held {
		for _, h := range q.Held {
			if b.study.HoldsPlate(h) {
				plates = append(plates, h)
				continue
			}
			if v := b.variable(h); v == nil || v.Unmeasured || !b.onSheet(h) {
				b.stop(Problem{Code: "held", Variable: h, Place: "question", Message: fmt.Sprintf("%s is held, but it is not a measured variable of this sheet.", h)})
				return
			}
			if h != q.Exposure && h != q.Outcome {
				want = append(want, h)
			}
		}
	}
	d := &draft{variable: b.variable(q.Outcome), user: b.userLaw(q.Outcome)}
	wanted := make(map[string]bool)
	for _, id := range want {
		wanted[id] = true
	}
	offsets, varies := typedParts(d.user.Formula, q.Outcome)
	typed, whole := b.trim(d.user.Formula, q.Outcome, b.stays(d, wanted, offsets))
	b.trimmed = d.user.Formula != "" && !whole
	used := wordsOf(typed)
	below := b.graph.Descendants(b.graph.Index(q.Exposure))
	for _, a := range b.rival.Diagram.Arrows {
		if p := b.variable(a.From); a.To != q.Outcome || p == nil || p.Unmeasured || !b.onSheet(a.From) {
			continue
		}
		drawn := *a
		if slices.Contains(offsets, a.From) {
			drawn.Form = study.Offset
		}
		if keep := drawn.Form == study.Offset && typed == "" || slices.Contains(used, a.From); !keep && !wanted[a.From] {
			if typed == "" && below[b.graph.Index(a.From)] {
				b.without = append(b.without, a.From)
			}
			continue
		}
		drawn.With = nil
		for _, w := range a.With {
			if slices.Contains(want, w) {
				drawn.With = append(drawn.With, w)
			}
		}
		d.arrows = append(d.arrows, &drawn)
	}
	for _, id := range want {
		if !hasArrow(d.arrows, id) {
			d.arrows = append(d.arrows, &study.Arrow{From: id, To: q.Outcome})
		}
	}
	d.user.Formula = typed
	if typed == "" {
		for _, p := range varies {
			if !slices.Contains(d.user.VariesBy, p) {
				d.user.VariesBy = append(append([]string(nil), d.user.VariesBy...), p)
			}
		}
	}
	for _, p := range plates {
		b.hold(d, p)
	}
	b.drafts = []*draft{d}
}

// stays says what a typed formula may go on reading: the exposure, the held
// set, offsets, and what counts the trials.
func (b *builder) stays(d *draft, wanted map[string]bool, offsets []string) map[string]bool {
	out := maps.Clone(wanted)
	for _, a := range b.rival.Diagram.Arrows {
		if a.To == d.variable.ID && (a.Form == study.Offset || slices.Contains(offsets, a.From)) {
			out[a.From] = true
		}
	}
	for _, a := range d.user.Arguments {
		if a.Name == "trials" {
			for _, n := range wordsOf(a.Text) {
				out[n] = true
			}
		}
	}
	return out
}

// wordsOf lists the names in typed text; none if it does not parse.
func wordsOf(text string) []string {
	p, err := formula.Parse(text)
	if text == "" || err != nil {
		return nil
	}
	return formula.Names(p.Right)
}

// trim takes the summands out of a typed formula that read a variable which
// the law leaves out. It gives "" where no formula is left to use: nothing was
// typed, or what stays has no baseline. whole is true where nothing was taken
// out, so that every coefficient means what it means in the full model.
func (b *builder) trim(text, outcome string, kept map[string]bool) (trimmed string, whole bool) {
	p, err := formula.Parse(text)
	if text == "" || err != nil {
		return "", false
	}
	var right formula.Expr
	based := b.variable(outcome).Scale == study.Ordered // cut points are its baseline
	whole = true
	for _, t := range signed(p.Right, false) {
		variables, left := 0, 0
		for _, n := range formula.Names(t.e) {
			if b.variable(n) != nil {
				variables++
				if !kept[n] {
					left++
				}
			}
		}
		if left > 0 {
			whole = false
			continue
		}
		based = based || variables == 0 && len(formula.Names(t.e)) > 0
		switch {
		case right != nil && t.minus:
			right = &formula.Binary{Op: '-', X: right, Y: t.e}
		case right != nil:
			right = &formula.Binary{Op: '+', X: right, Y: t.e}
		case t.minus:
			right = &formula.Unary{Op: '-', X: t.e}
		default:
			right = t.e
		}
	}
	switch {
	case whole:
		return text, true
	case right == nil || !based:
		return "", false
	case p.Subject == "":
		return formula.Format(right), false
	}
	return text[:strings.Index(text, "=")+1] + " " + formula.Format(right), false
}

// A signedTerm is added up, or with minus taken away.
type signedTerm struct {
	e     formula.Expr
	minus bool
}

// signed splits a sum into its summands with their signs.
func signed(e formula.Expr, minus bool) []signedTerm {
	switch x := e.(type) {
	case *formula.Binary:
		switch x.Op {
		case '+':
			return append(signed(x.X, minus), signed(x.Y, minus)...)
		case '-':
			return append(signed(x.X, minus), signed(x.Y, !minus)...)
		}
	case *formula.Unary:
		return signed(x.X, !minus)
	}
	return []signedTerm{{e, minus}}
}

// typedParts finds in a typed formula what a model of the outcome alone keeps:
// the variables that enter as their bare log, and the plates over which the
// baseline varies. A formula that does not parse has none.
func typedParts(text, outcome string) (offsets, varies []string) {
	if text == "" {
		return nil, nil
	}
	p, err := formula.Parse(text)
	if err != nil {
		return nil, nil
	}
	for _, term := range signed(p.Right, false) {
		if term.minus {
			continue
		}
		switch t := term.e.(type) {
		case *formula.Call:
			if n, ok := t.Args[0].(*formula.Name); ok && t.Function == "log" && len(t.Args) == 1 {
				offsets = append(offsets, n.ID)
			}
		case *formula.By:
			if t.Name.ID == "alpha_"+outcome {
				varies = append(varies, t.Plates...)
			} else if len(t.Plates) == 1 && t.Name.ID == "alpha_"+outcome+"_"+clean(t.Plates[0]) {
				varies = append(varies, t.Plates[0])
			}
		}
	}
	return offsets, varies
}
