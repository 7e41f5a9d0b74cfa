package model

import (
	"fmt"
	"math"

	"arrowroot/compile/catalog"
	"arrowroot/compile/formula"
)

// finite looks at the parts of typed formulas that are made of data alone: a
// log of 0 or a division by 0 would leave a log density that is nowhere
// finite, and is better shown at its place in the text.
func (b *builder) finite(d *draft) {
	if d.formula != nil {
		b.finitePart(d, d.formula, Problem{Place: "formula", Text: d.user.Formula})
	}
	for _, a := range d.user.Arguments {
		i := d.family.Argument(a.Name)
		if i < 0 || d.given[i] == nil {
			continue
		}
		at := Problem{Place: "argument", Text: a.Text}
		if !b.finitePart(d, d.given[i], at) || d.family.Arguments[i].Support != catalog.Positives || !b.ofData(d.given[i]) {
			continue
		}
		for j, x := range b.evaluateAt(d.given[i], d.law.Plate, b.units(d)) {
			if x <= 0 {
				at.Code, at.Variable, at.Stops = "argument-range", d.variable.ID, true
				at.Span = d.given[i].Where()
				at.Message = fmt.Sprintf("the %s of %s is %s in row %d, but it must be positive", a.Name, d.variable.ID, short(x), b.rowOf(b.model.Variables[d.law.Variable], j)+1)
				b.report(at)
				break
			}
		}
	}
}

// units is the number of values that a law explains.
func (b *builder) units(d *draft) int { return len(b.model.Variables[d.law.Variable].Values) }

// finitePart reports the smallest part of e, made of data alone, that is no
// number in some row. It is true where there is none.
func (b *builder) finitePart(d *draft, e formula.Expr, at Problem) bool {
	fine := true
	formula.Walk(e, func(part formula.Expr) bool {
		if !fine || !b.ofData(part) {
			return fine
		}
		values := b.evaluateAt(part, d.law.Plate, b.units(d))
		for j, x := range values {
			if !math.IsNaN(x) && !math.IsInf(x, 0) {
				continue
			}
			for _, inner := range operandsOf(part) {
				if !b.finitePart(d, inner, at) {
					fine = false
					return false
				}
			}
			fine = false
			at.Code, at.Variable, at.Span, at.Stops = "not-finite", d.variable.ID, part.Where(), true
			at.Message = fmt.Sprintf("*%s* is no number in row %d%s", at.Text[at.Span.Start:at.Span.End], b.rowOf(b.model.Variables[d.law.Variable], j)+1, b.whereValues(d, part, j))
			b.report(at)
			return false
		}
		return false
	})
	return fine
}

// whereValues is ", where pesticide is 0".
func (b *builder) whereValues(d *draft, e formula.Expr, unit int) string {
	var parts []string
	for _, n := range formula.Names(e) {
		x := b.evaluateAt(named(n), d.law.Plate, unit+1)[unit]
		parts = append(parts, n+" is "+short(x))
	}
	if len(parts) == 0 {
		return ""
	}
	return ", where " + list(parts)
}

// ofData reports whether an expression reads variables and nothing else.
func (b *builder) ofData(e formula.Expr) bool {
	only := true
	formula.Walk(e, func(e formula.Expr) bool {
		switch e := e.(type) {
		case *formula.Name:
			_, variable := b.at[e.ID]
			only = only && variable
		case *formula.By, *formula.Of, *formula.Element:
			only = false
		}
		return only
	})
	return only
}

func operandsOf(e formula.Expr) []formula.Expr {
	switch e := e.(type) {
	case *formula.Unary:
		return []formula.Expr{e.X}
	case *formula.Binary:
		return []formula.Expr{e.X, e.Y}
	case *formula.Call:
		return e.Args
	}
	return nil
}
