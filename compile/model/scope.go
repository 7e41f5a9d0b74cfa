package model

import (
	"fmt"
	"maps"
	"slices"

	"arrowroot/compile/catalog"
	"arrowroot/compile/formula"
	"arrowroot/compile/study"
)

// checkNames looks up every name, function and vector of typed text, and
// reports the first that means nothing or that the arrows do not allow. It
// reports whether all is well.
func (b *builder) checkNames(d *draft, e formula.Expr, at Problem, fix func(string) study.Edit) bool {
	fine := true
	fault := func(span formula.Span, code, message string, repairs ...Repair) {
		if !fine {
			return
		}
		fine = false
		if len(repairs) == 0 && at.Place == "formula" {
			repairs = []Repair{b.fromArrows(d.variable.ID)}
		}
		at.Code, at.Span, at.Message, at.Repairs = code, span, message, repairs
		b.stop(at)
	}
	replace := func(span formula.Span, with string) Repair {
		return Repair{Label: "Replace", Edit: fix(at.Text[:span.Start] + with + at.Text[span.End:])}
	}
	formula.Walk(e, func(e formula.Expr) bool {
		switch e := e.(type) {
		case *formula.Call:
			f := catalog.FunctionByName(e.Function)
			if f == nil {
				var names []string
				for _, g := range catalog.Functions() {
					names = append(names, g.Name)
				}
				message := fmt.Sprintf("there is no function *%s*", e.Function)
				if near := nearest(e.Function, names); near != "" {
					word := formula.Span{Start: e.Span.Start, End: min(e.Span.Start+len(e.Function), len(at.Text))}
					repairs := []Repair{replace(word, near)}
					if at.Place == "formula" {
						repairs = append(repairs, b.fromArrows(d.variable.ID))
					}
					fault(e.Span, "unknown-function", message+fmt.Sprintf("; did you mean *%s*?", near), repairs...)
				} else {
					fault(e.Span, "unknown-function", message)
				}
			} else if f.Args >= 0 && f.Args != len(e.Args) {
				fault(e.Span, "function-arguments", fmt.Sprintf("*%s* takes %s, not %d", f.Name, count(f.Args, "argument"), len(e.Args)))
			}
		case *formula.By:
			b.checkBy(d, e, fault)
			return false
		case *formula.Of:
			b.checkOf(d, e, fault, replace)
			return false
		case *formula.Name:
			b.checkName(d, e, at.Place, fault, replace)
		}
		return fine
	})
	return fine
}

type faultFunc func(span formula.Span, code, message string, repairs ...Repair)

// checkName looks up a bare name: a parent, a parameter, or for arguments any
// measured variable or column.
func (b *builder) checkName(d *draft, n *formula.Name, place string, fault faultFunc, replace func(formula.Span, string) Repair) {
	child := d.variable.ID
	v := b.variable(n.ID)
	m, parameter := b.scope[n.ID]
	switch {
	case v != nil && n.ID == child:
		var repairs []Repair
		if place == "formula" {
			repairs = append(repairs, b.fromArrows(child))
		}
		fault(n.Span, "itself", fmt.Sprintf("%s cannot act on itself", child), repairs...)
	case v != nil && v.Unmeasured:
		fault(n.Span, "unmeasured", fmt.Sprintf("*%s* was not measured and is left out of the fit, so no formula can use it", n.ID))
	case v != nil && place == "formula" && !hasArrow(d.arrows, n.ID) && !carries(d, n.ID) && !b.readsMean(d, n.ID):
		message := fmt.Sprintf("the formula of %s uses *%s*, but no arrow %s → %s is drawn", child, n.ID, n.ID, child)
		var repairs []Repair
		if !b.descends(n.ID, child) {
			repairs = append(repairs, Repair{Label: "Draw the arrow", Edit: b.onto(n.ID, child)})
		} else {
			message = fmt.Sprintf("the formula of %s uses *%s*, which %s acts on: an arrow %s → %s would close a cycle", child, n.ID, child, n.ID, child)
		}
		fault(n.Span, "no-arrow", message, repairs...)
	case v != nil && (v.Scale == study.Category || v.Scale == study.Ordered && place == "formula"):
		want := b.vectorFor(d, n.ID)
		fault(n.Span, "category", fmt.Sprintf("%s is %s, not a number: write *%s of %s*", n.ID, a(v.Scale), want, n.ID), replace(n.Span, want+" of "+n.ID))
	case v != nil:
	case b.declared[n.ID] != nil:
	case parameter && (m.role == steps || m.role == stepsProduct || m.role == shares):
		fault(n.Span, "vector", fmt.Sprintf("*%s* has an entry for each level of %s: write *%s of %s*", n.ID, m.parent, n.ID, m.parent), replace(n.Span, n.ID+" of "+m.parent))
	case parameter && (m.role == baselineBy || m.role == slopeBy || m.role == cutPoints):
		fault(n.Span, "vector", fmt.Sprintf("*%s* has several entries; write *%s by %s*", n.ID, b.stem(m), m.plate))
	case parameter:
	case place == "argument" && (b.table == nil || b.table.Column(n.ID) != nil):
		column := &study.Variable{ID: n.ID, Scale: study.Real, Column: n.ID}
		b.bare = append(b.bare, column)
		b.ledger[n.ID] = column
	default:
		b.unknownName(d, n, fault, replace)
	}
}

// stem is the name around which a by-plate parameter varies.
func (b *builder) stem(m meaning) string {
	m.plate = ""
	switch m.role {
	case baselineBy:
		m.role = baseline
	case slopeBy:
		m.role = slope
	}
	return b.names[m]
}

// vectorFor is the name of what has an entry for each level of a parent: steps,
// or the shares of a rise.
func (b *builder) vectorFor(d *draft, parent string) string {
	r := steps
	if d.formTo(parent) == study.OneWay {
		r = shares
	}
	return b.names[meaning{role: r, child: d.variable.ID, parent: parent}]
}

func carries(d *draft, id string) bool {
	return slices.ContainsFunc(d.carried, func(c carrier) bool { return c.id == id })
}

// descends reports whether of's arrows lead to id.
func (b *builder) descends(id, of string) bool {
	i, j := b.graph.Index(id), b.graph.Index(of)
	return i >= 0 && j >= 0 && b.graph.Descendants(j)[i]
}

// unknownName reports a name that means nothing, with what it may have meant.
func (b *builder) unknownName(d *draft, n *formula.Name, fault faultFunc, replace func(formula.Span, string) Repair) {
	v := d.variable.ID
	var variables []string
	for _, name := range b.graph.Names {
		if name != v {
			variables = append(variables, name)
		}
	}
	parameters := []string{b.names[meaning{role: baseline, child: v}]}
	for _, a := range d.arrows {
		parameters = append(parameters, b.names[meaning{role: slope, child: v, parent: a.From}])
	}
	parameters = append(parameters, slices.Sorted(maps.Keys(b.declared))...)
	declare := Repair{Label: "Make it a parameter", Edit: b.changeLaw(v, func(l *study.Law) {
		l.Priors = append(l.Priors, study.Prior{Parameter: n.ID, Text: "normal with mean 0, sd 1"})
	})}
	if near := nearest(n.ID, variables); near != "" {
		fault(n.Span, "unknown-name", fmt.Sprintf("there is no variable *%s*; did you mean *%s*?", n.ID, near), replace(n.Span, near), declare)
		return
	}
	if near := nearest(n.ID, parameters); near != "" {
		fault(n.Span, "unknown-name", fmt.Sprintf("there is no parameter *%s*; did you mean *%s*?", n.ID, near), replace(n.Span, near), declare)
		return
	}
	fault(n.Span, "unknown-name", fmt.Sprintf("*%s* is no variable of this sheet and no parameter with a prior", n.ID), declare)
}

// checkBy looks up a name at the level of plates.
func (b *builder) checkBy(d *draft, e *formula.By, fault faultFunc) {
	id := e.Name.ID
	m, canonical := b.scope[id]
	for _, p := range e.Plates {
		if b.studyPlate(p) == nil {
			return // readPlates says so, with repairs
		}
	}
	switch {
	case canonical && (m.role == baseline || m.role == slope):
	case canonical && (m.role == baselineBy || m.role == slopeBy) && len(e.Plates) == 1 && m.plate == e.Plates[0]:
	case b.declared[id] != nil && len(e.Plates) == 1:
	case len(e.Plates) == 1 && b.declared[id+" by "+e.Plates[0]] != nil:
	case b.variable(id) != nil:
		fault(e.Span, "by-variable", fmt.Sprintf("%s is a variable; only a parameter can be taken by a plate", id))
	case canonical || b.declared[id] != nil:
		fault(e.Span, "by-parameter", fmt.Sprintf("*%s* cannot vary by %s", id, list(e.Plates)))
	default:
		fault(e.Name.Span, "unknown-name", fmt.Sprintf("there is no parameter *%s*; a baseline that varies is *%s by %s*", id, b.names[meaning{role: baseline, child: d.variable.ID}], e.Plates[0]))
	}
}

// checkOf looks up "vector of variable".
func (b *builder) checkOf(d *draft, e *formula.Of, fault faultFunc, replace func(formula.Span, string) Repair) {
	v := b.variable(e.Variable.ID)
	m, canonical := b.scope[e.Vector.ID]
	switch {
	case v == nil:
		b.unknownName(d, e.Variable, fault, replace)
	case len(v.Levels) == 0 && v.Scale != study.Category && v.Scale != study.Ordered && v.Scale != study.Binary:
		fault(e.Span, "not-levels", fmt.Sprintf("%s is %s and has no levels", v.ID, a(scaleOf(v))))
	case !hasArrow(d.arrows, v.ID) && !carries(d, v.ID):
		fault(e.Variable.Span, "no-arrow", fmt.Sprintf("the formula of %s uses *%s*, but no arrow %s → %s is drawn", d.variable.ID, v.ID, v.ID, d.variable.ID),
			Repair{Label: "Draw the arrow", Edit: b.onto(v.ID, d.variable.ID)})
	case canonical && (m.role == steps || m.role == stepsProduct || m.role == shares) && m.parent == v.ID:
	case b.declared[e.Vector.ID] != nil && !canonical:
	default:
		want := b.vectorFor(d, v.ID)
		fault(e.Vector.Span, "unknown-name", fmt.Sprintf("*%s* has no entries for the levels of %s; did you mean *%s*?", e.Vector.ID, v.ID, want), replace(e.Vector.Span, want))
	}
}

// spanOf finds where a name stands in an expression.
func spanOf(e formula.Expr, id string) (span formula.Span) {
	formula.Walk(e, func(e formula.Expr) bool {
		if n, ok := e.(*formula.Name); ok && n.ID == id && span == (formula.Span{}) {
			span = n.Span
		}
		return true
	})
	return span
}

func count(n int, what string) string {
	if n == 1 {
		return "1 " + what
	}
	return fmt.Sprintf("%d %ss", n, what)
}
