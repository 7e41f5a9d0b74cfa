package model

import (
	"fmt"
	"math"
	"slices"

	"arrowroot/compile/catalog"
	"arrowroot/compile/formula"
	"arrowroot/compile/study"
)

// finite looks at the parts of typed formulas that are made of data alone: a
// log of 0 or a division by 0 would leave a log density that is nowhere
// finite, and is better shown at its place in the text.
func (b *builder) finite(d *draft) {
	if d.formula != nil {
		b.finitePart(d, d.formula, Problem{Variable: d.variable.ID, Place: "formula", Text: d.user.Formula})
	}
	for _, a := range d.user.Arguments {
		i := d.family.Argument(a.Name)
		if i < 0 || d.given[i] == nil {
			continue
		}
		at := Problem{Variable: d.variable.ID, Place: "argument", part: a.Name, Text: a.Text}
		if !b.finitePart(d, d.given[i], at) || d.family.Arguments[i].Support != catalog.Positives || !b.ofData(d.given[i]) {
			continue
		}
		for j, x := range b.evaluateAt(d.given[i], d.law.Plate, b.units(d)) {
			if x <= 0 {
				at.Code, at.Stops = "argument-range", true
				at.Repairs = []Repair{b.dropArgument(d, a.Name)}
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
		if !fine {
			return false
		}
		if !b.ofData(part) {
			fine = b.finiteDivisor(d, part, at)
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
			at.Code, at.Span, at.Stops = "not-finite", part.Where(), true
			at.Message = fmt.Sprintf("*%s* is no number in row %d%s", at.Text[at.Span.Start:at.Span.End], b.rowOf(b.model.Variables[d.law.Variable], j)+1, b.whereValues(d, part, j))
			if len(formula.Names(part)) == 0 {
				at.Message = fmt.Sprintf("*%s* is no number", at.Text[at.Span.Start:at.Span.End])
			}
			at.Repairs = b.notFiniteRepairs(d, part, at)
			b.report(at)
			return false
		}
		return false
	})
	return fine
}

// finiteDivisor reports a division by data, or by a constant, that is 0
// somewhere, where what is divided has parameters in it.
func (b *builder) finiteDivisor(d *draft, e formula.Expr, at Problem) bool {
	q, ok := e.(*formula.Binary)
	if !ok || q.Op != '/' || !b.ofData(q.Y) {
		return true
	}
	for j, x := range b.evaluateAt(q.Y, d.law.Plate, b.units(d)) {
		if x != 0 {
			continue
		}
		at.Code, at.Span, at.Stops = "not-finite", q.Y.Where(), true
		at.Message = "nothing can be divided by 0"
		if len(formula.Names(q.Y)) > 0 {
			at.Message = fmt.Sprintf("*%s* is 0 in row %d, and nothing can be divided by 0", at.Text[at.Span.Start:at.Span.End], b.rowOf(b.model.Variables[d.law.Variable], j)+1)
		}
		at.Repairs = b.notFiniteRepairs(d, q.Y, at)
		b.report(at)
		return false
	}
	return true
}

// notFiniteRepairs are the ways out of a formula or an argument that is no
// number somewhere.
func (b *builder) notFiniteRepairs(d *draft, part formula.Expr, at Problem) []Repair {
	if at.Place == "argument" {
		return []Repair{b.dropArgument(d, at.part)}
	}
	repairs := b.shiftedLog(part, at, func(text string) study.Edit {
		return b.changeLaw(d.variable.ID, func(l *study.Law) { l.Formula = text })
	})
	return append(repairs, b.fromArrows(d.variable.ID))
}

func (b *builder) dropArgument(d *draft, name string) Repair {
	return Repair{Label: "Drop it", Edit: b.changeLaw(d.variable.ID, func(l *study.Law) {
		l.Arguments = slices.DeleteFunc(l.Arguments, func(a study.Argument) bool { return a.Name == name })
	})}
}

// finiteComputed stops at a computed variable that is no number in a row in
// which everything it is computed from is there. Leaving such rows out in
// silence would select by the value of a parent.
func (b *builder) finiteComputed(c *column, keep []bool) {
	for row, x := range c.values {
		if !keep[row] || isNumber(x) {
			continue
		}
		v := c.variable
		at := Problem{Code: "not-finite", Variable: v.ID, Place: "computed", Text: v.Computed, Stops: true}
		value := func(e formula.Expr) float64 {
			if n, ok := e.(*formula.Name); ok && b.columns[n.ID] != nil {
				return b.columns[n.ID].values[row]
			}
			return math.NaN()
		}
		part := smallest(c.computed, value)
		if n, ok := part.(*formula.Name); ok && b.columns[n.ID] != nil && b.columns[n.ID].computed != nil {
			return // that one is reported itself
		}
		at.Span = part.Where()
		var where []string
		for _, n := range formula.Names(part) {
			where = append(where, n+" is "+b.columns[n].show(row))
		}
		at.Message = fmt.Sprintf("*%s* is no number in row %d", at.Text[at.Span.Start:at.Span.End], row+1)
		if len(where) > 0 {
			at.Message += ", where " + list(where)
		}
		if n := b.notNumbers(c, keep) - 1; n > 0 {
			at.Message += fmt.Sprintf(", nor is it one in %s", count(n, "more row"))
		}
		to := *v
		to.Computed = ""
		at.Repairs = append(b.shiftedLog(part, at, func(text string) study.Edit {
			to := *v
			to.Computed = text
			return changeVariable(to)
		}), Repair{Label: "Do not compute " + v.ID, Edit: changeVariable(to)})
		b.stop(at)
		return
	}
}

func (b *builder) notNumbers(c *column, keep []bool) int {
	n := 0
	for row, x := range c.values {
		if keep[row] && !isNumber(x) {
			n++
		}
	}
	return n
}

func isNumber(x float64) bool { return x-x == 0 } // NaN for NaN and ±Inf

// smallest is the innermost part of e that is no number.
func smallest(e formula.Expr, value func(formula.Expr) float64) formula.Expr {
	for _, inner := range operandsOf(e) {
		if !isNumber(Evaluate(inner, value)) {
			return smallest(inner, value)
		}
	}
	return e
}

// shiftedLog offers log(x + 1) for a log of what is never below 0.
func (b *builder) shiftedLog(part formula.Expr, at Problem, fix func(string) study.Edit) []Repair {
	c, ok := part.(*formula.Call)
	if !ok || c.Function != "log" || len(c.Args) != 1 {
		return nil
	}
	name, ok := c.Args[0].(*formula.Name)
	if !ok || b.columns[name.ID] == nil {
		return nil
	}
	if low, _ := extent(b.columns[name.ID].values); low < 0 {
		return nil
	}
	text := fmt.Sprintf("log(%s + 1)", name.ID)
	return []Repair{{Label: "Use " + text, Edit: fix(at.Text[:at.Span.Start] + text + at.Text[at.Span.End:])}}
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
