package model

import (
	"fmt"
	"slices"

	"arrowroot/compile/catalog"
	"arrowroot/compile/formula"
	"arrowroot/compile/study"
)

// A pair of parents that act together.
type pairOf struct{ first, second string }

// products lists the products that arrows ask for, each pair once, in the
// order of the arrows. A category stands first.
func (b *builder) products(d *draft) []pairOf {
	var out []pairOf
	for _, a := range d.arrows {
		for _, w := range a.With {
			if w == a.From || !hasArrow(d.arrows, w) {
				continue
			}
			p := pairOf{a.From, w}
			if b.variable(w).Scale == study.Category {
				p = pairOf{w, a.From}
			}
			if !slices.Contains(out, p) && !slices.Contains(out, pairOf{p.second, p.first}) {
				out = append(out, p)
			}
		}
	}
	return out
}

// predict makes the predictor, K of them for a category child.
func (b *builder) predict(d *draft) {
	f := d.family
	if f.Predicted < 0 || d.given[f.Predicted] != nil {
		if len(d.arrows)+len(d.carried) > 0 {
			b.stop(Problem{Code: "not-predictable", Variable: d.variable.ID, Place: "law",
				Message: fmt.Sprintf("%s ~ %s: nothing can act on %s, since no argument of %s can be predicted.", d.variable.ID, f.Name, d.variable.ID, article(f.Name)),
				Repairs: []Repair{b.defaultFamily(d.variable, scaleOf(d.variable))}})
		}
		return
	}
	if d.formula != nil {
		terms := []formula.Expr{b.resolve(d, d.formula)}
		for _, c := range d.carried {
			if !slices.Contains(formula.Names(d.formula), c.id) {
				terms = append(terms, b.term(d, &study.Arrow{From: c.id, To: d.variable.ID}, true, -1))
			}
		}
		if b.kind != Full { // what the exposure or the held set adds to it
			for _, a := range d.arrows {
				if !slices.Contains(formula.Names(d.formula), a.From) {
					terms = append(terms, b.term(d, a, false, -1))
				}
			}
		}
		terms = append(append(terms, b.around(d)...), b.meanTerms(d)...)
		d.law.Terms = nil
		d.law.Predictors = []formula.Expr{sum(terms)}
		return
	}
	d.varies()
	if f.Link != catalog.Softmax {
		d.law.Predictors = []formula.Expr{b.linear(d, -1)}
		return
	}
	for k := range b.model.Variables[d.law.Variable].Levels {
		terms := d.law.Terms
		d.law.Predictors = append(d.law.Predictors, b.linear(d, k))
		if k > 0 {
			d.law.Terms = terms // one list of terms serves all levels
		}
	}
}

// linear is the default predictor: a baseline and one term for each arrow,
// product, carried variable and offset. level is the level of a category child
// whose predictor it is, −1 otherwise.
func (b *builder) linear(d *draft, level int) formula.Expr {
	var terms []formula.Expr
	if !d.family.Link.Cumulative() || len(d.user.VariesBy) > 0 {
		terms = append(terms, b.baseline(d, level)...)
	}
	var offsets []formula.Expr
	for _, a := range d.arrows {
		if a.Form == "offset" {
			offsets = append(offsets, b.offset(d, a))
			continue
		}
		terms = append(terms, b.term(d, a, false, level))
	}
	for _, p := range b.products(d) {
		terms = append(terms, b.productTerm(d, p, level))
	}
	for _, c := range d.carried {
		if !hasArrow(d.arrows, c.id) {
			terms = append(terms, b.term(d, &study.Arrow{From: c.id, To: d.variable.ID}, true, level))
		}
	}
	terms = append(terms, b.meanTerms(d)...)
	return sum(append(terms, offsets...))
}

// baseline is alpha, around which the entries of the first plate vary; the
// entries of further plates are deviations from it.
func (b *builder) baseline(d *draft, level int) []formula.Expr {
	v := d.variable.ID
	if level >= 0 {
		if len(d.within) > 0 {
			b.stop(Problem{Code: "varying-category", Variable: v, Place: "law",
				Message: fmt.Sprintf("%s is a category: this version does not compare one within the groups of %s.", v, d.within[0].plate)})
			return []formula.Expr{number(0)}
		}
		if len(d.user.VariesBy) > 0 {
			b.stop(Problem{Code: "varying-category", Variable: v, Place: "law",
				Message: fmt.Sprintf("%s is a category: this version fits no baseline that varies for it.", v),
				Repairs: []Repair{{Label: "Keep one baseline", Edit: b.changeLaw(v, func(l *study.Law) { l.VariesBy = nil })}}})
		}
		i := b.parameter(meaning{role: baseline, child: v})
		d.law.Terms = append(d.law.Terms, Term{Kind: Baseline, Variable: -1, With: -1, VariesBy: -1, Parameters: []int{i}})
		return []formula.Expr{&formula.Element{Vector: named(b.model.Parameters[i].Name), At: level}}
	}
	if len(d.user.VariesBy) == 0 {
		i := b.parameter(meaning{role: baseline, child: v})
		d.law.Terms = append(d.law.Terms, Term{Kind: Baseline, Variable: -1, With: -1, VariesBy: -1, Parameters: []int{i}})
		return []formula.Expr{named(b.model.Parameters[i].Name)}
	}
	var terms []formula.Expr
	for _, p := range d.user.VariesBy {
		i := b.parameter(meaning{role: baselineBy, child: v, plate: p})
		d.law.Terms = append(d.law.Terms, Term{Kind: Baseline, Variable: -1, With: -1, VariesBy: b.model.Parameters[i].Plate, Parameters: []int{i}})
		terms = append(terms, by(b.model.Parameters[i].Name, p))
	}
	return terms
}

// term is one arrow's or carried variable's part of the predictor.
func (b *builder) term(d *draft, a *study.Arrow, carried bool, level int) (part formula.Expr) {
	v, p := d.variable.ID, a.From
	parent := b.model.Variables[b.at[p]]
	t := Term{Kind: Slope, Variable: b.at[p], With: -1, VariesBy: -1, Carried: carried}
	defer func() {
		t.Part = part
		d.law.Terms = append(d.law.Terms, t)
	}()
	if b.takesSteps(a) {
		t.Kind = Steps
		if reason, repairs := b.stepsFault(a); reason != "" {
			b.stop(Problem{Code: "form", Variable: v, Place: "arrow", From: p, Message: fmt.Sprintf("%s → %s: %s", p, v, reason), Repairs: repairs})
			return number(0)
		}
		i := b.parameter(meaning{role: steps, child: v, parent: p, at: level + 1})
		t.Parameters = []int{i}
		return of(b.model.Parameters[i].Name, p)
	}
	if reason, repairs := b.formFault(d, a); reason != "" {
		b.stop(Problem{Code: "form", Variable: v, Place: "arrow", From: p, Message: fmt.Sprintf("%s → %s: %s", p, v, reason), Repairs: repairs})
		return number(0)
	}
	t.Kind, t.Center = kindOf(a.Form), b.formCenter(a.Form, parent)
	x, inner := b.bent(d, a.Form, parent)
	defer func() {
		t.Parameters = append(t.Parameters, inner...)
		t.Inner = inner
	}()
	if level >= 0 {
		i := b.parameter(meaning{role: slope, child: v, parent: p})
		t.Parameters = []int{i}
		return times(&formula.Element{Vector: named(b.model.Parameters[i].Name), At: level}, x)
	}
	if len(a.VariesBy) == 0 {
		i := b.parameter(meaning{role: slope, child: v, parent: p})
		t.Parameters = []int{i}
		return times(named(b.model.Parameters[i].Name), x)
	}
	var coefficients []formula.Expr
	for _, plate := range a.VariesBy {
		i := b.parameter(meaning{role: slopeBy, child: v, parent: p, plate: plate})
		t.Parameters = append(t.Parameters, i)
		t.VariesBy = b.model.Parameters[i].Plate
		coefficients = append(coefficients, by(b.model.Parameters[i].Name, plate))
	}
	return times(sum(coefficients), x)
}

// productTerm is the part in which two parents act together.
func (b *builder) productTerm(d *draft, p pairOf, level int) formula.Expr {
	v := d.variable.ID
	first, second := b.model.Variables[b.at[p.first]], b.model.Variables[b.at[p.second]]
	t := Term{Kind: Product, Variable: b.at[p.first], With: b.at[p.second], VariesBy: -1}
	defer func() { d.law.Terms = append(d.law.Terms, t) }()
	if second.Scale == study.Category || level >= 0 && first.Scale == study.Category {
		b.stop(Problem{Code: "form", Variable: v, Place: "arrow",
			Message: fmt.Sprintf("%s and %s act on %s as a product, which this version knows for numbers, and for one category with a number.", p.first, p.second, v)})
		return number(0)
	}
	for _, p := range [2]string{p.first, p.second} {
		if form := d.formTo(p); bends(form) && form != study.Log {
			a := d.arrows[slices.IndexFunc(d.arrows, func(a *study.Arrow) bool { return a.From == p })]
			b.stop(Problem{Code: "form", Variable: v, Place: "arrow", From: p,
				Message: fmt.Sprintf("%s → %s is of the form “%s”, of which this version knows no product.", p, v, form),
				Repairs: []Repair{{Label: "Use a slope", Edit: b.changeArrow(a, func(a *study.Arrow) { a.Form = study.Slope })}}})
			return number(0)
		}
	}
	t.WithCenter = b.formCenter(d.formTo(p.second), second)
	y, _ := b.bent(d, d.formTo(p.second), second)
	if first.Scale == study.Category {
		i := b.parameter(meaning{role: stepsProduct, child: v, parent: p.first, with: p.second})
		t.Parameters = []int{i}
		return times(of(b.model.Parameters[i].Name, p.first), y)
	}
	t.Center = b.formCenter(d.formTo(p.first), first)
	x, _ := b.bent(d, d.formTo(p.first), first)
	i := b.parameter(meaning{role: product, child: v, parent: p.first, with: p.second})
	t.Parameters = []int{i}
	var coefficient formula.Expr = named(b.model.Parameters[i].Name)
	if level >= 0 {
		coefficient = &formula.Element{Vector: named(b.model.Parameters[i].Name), At: level}
	}
	return times(times(coefficient, x), y)
}

// center is the middle of a parent's plausible range (SEMANTICS C1).
func (b *builder) center(v *Variable) float64 {
	return roundTo((v.Low+v.High)/2, v.High-v.Low)
}

// offset is the log of a parent, with no coefficient.
func (b *builder) offset(d *draft, a *study.Arrow) formula.Expr {
	v, parent := d.variable.ID, b.model.Variables[b.at[a.From]]
	use := Repair{Label: "Use a slope", Edit: b.changeArrow(a, func(a *study.Arrow) { a.Form = "slope" })}
	if d.family.Link != catalog.Log {
		b.stop(Problem{Code: "offset-link", Variable: v, Place: "arrow", From: a.From,
			Message: fmt.Sprintf("%s → %s is an offset, which multiplies the mean; that needs a law with a log link, and %s has none.", a.From, v, article(d.family.Name)),
			Repairs: []Repair{use}})
		return number(0)
	}
	low, _ := extent(parent.Values)
	if parent.Scale == study.Category || parent.Scale == study.Ordered || low <= 0 {
		text := fmt.Sprintf("%s → %s is an offset, so %s must be positive", a.From, v, a.From)
		if i := slices.Index(parent.Values, low); i >= 0 && parent.Scale != study.Category && parent.Scale != study.Ordered {
			text += fmt.Sprintf("; its smallest value is %s (row %d)", short(low), b.rowOf(parent, i)+1)
		}
		b.stop(Problem{Code: "offset-positive", Variable: a.From, Place: "data", Message: text + ".", Repairs: []Repair{use}})
		return number(0)
	}
	d.law.Terms = append(d.law.Terms, Term{Kind: Offset, Variable: b.at[a.From], With: -1, VariesBy: -1})
	return call("log", named(a.From))
}
