package model

import (
	"fmt"
	"math"
	"slices"

	"arrowroot/compile/catalog"
	"arrowroot/compile/formula"
	"arrowroot/compile/study"
)

// imputes reports whether the missing entries of a column cost no rows
// (SEMANTICS A2): somebody asked for that, the variable has a law in this fit,
// and either that law can say what they may have been or nothing reads them. It
// says where what was asked for cannot be had.
func (b *builder) imputes(c *column) bool {
	d := b.draftOf(c.variable.ID)
	if d == nil || d.user.Treat != study.Imputed || !slices.ContainsFunc(c.values, math.IsNaN) {
		return false
	}
	why := b.notImputed(d)
	if why != "" {
		b.report(Problem{Code: "not-imputed", Variable: c.variable.ID, Place: "law",
			Message: fmt.Sprintf("The missing entries of %s are not imputed, and their rows are lost: %s.", c.variable.ID, why),
			Repairs: []Repair{{Label: "Leave those rows out", Edit: b.changeLaw(c.variable.ID, func(l *study.Law) { l.Treat = study.Modelled })}}})
	}
	return why == ""
}

// notImputed says why the missing entries of a draft's variable cannot stay.
func (b *builder) notImputed(d *draft) string {
	id := d.variable.ID
	for _, w := range b.question.Where {
		if w.Variable == id {
			return "the question chooses its rows by it"
		}
	}
	reader := b.reader(id)
	if reader == "" {
		return ""
	}
	switch d.family.Support {
	case catalog.Reals, catalog.Positives, catalog.NonNegatives, catalog.Unit:
	default:
		return fmt.Sprintf("%s reads them, and %s has a law of separate values, over which this version does not add up", reader, id)
	}
	if slices.ContainsFunc(d.given, func(e formula.Expr) bool { return e != nil }) && d.family.Argument("trials") >= 0 {
		return "its law counts trials"
	}
	for _, c := range b.columns {
		if c.computed != nil && slices.Contains(formula.Names(c.computed), id) {
			return fmt.Sprintf("%s is computed from it", c.variable.ID)
		}
	}
	for _, other := range b.drafts {
		if i := other.family.Argument("trials"); i >= 0 && other.given[i] != nil && slices.Contains(formula.Names(other.given[i]), id) {
			return fmt.Sprintf("the trials of %s are counted by it", other.variable.ID)
		}
		for _, w := range other.within {
			if slices.Contains(w.ids, id) {
				return fmt.Sprintf("the law of %s reads its mean within %s", other.variable.ID, w.plate)
			}
		}
	}
	return ""
}

// reader is a variable whose law or formula reads another; "" if none does.
func (b *builder) reader(id string) string {
	for _, d := range b.drafts {
		if d.variable.ID == id {
			continue
		}
		reads := hasArrow(d.arrows, id) || carries(d, id) ||
			slices.ContainsFunc(d.within, func(w grouped) bool { return slices.Contains(w.ids, id) }) ||
			slices.ContainsFunc(d.expressions(), func(e formula.Expr) bool { return slices.Contains(formula.Names(e), id) })
		if reads {
			return d.variable.ID
		}
	}
	for _, c := range b.columns {
		if c.computed != nil && slices.Contains(formula.Names(c.computed), id) {
			return c.variable.ID
		}
	}
	return ""
}

// standIn notes which entries are missing and puts the median of the others in
// their place, so that ranges and messages are about what was recorded.
func (v *Variable) standIn() {
	at := median(v.Values)
	if len(v.Levels) > 0 || v.Scale == study.Count || v.Scale == study.Binary {
		at = math.Floor(at)
	}
	values := slices.Clone(v.Values)
	for i, x := range v.Values {
		if math.IsNaN(x) {
			v.Missing = append(v.Missing, int32(i))
			values[i] = at
		}
	}
	v.Values = values
}

// unrecorded makes unknowns of the missing entries that laws read.
func (b *builder) unrecorded() {
	m := b.model
	for i, v := range m.Variables {
		if len(v.Missing) == 0 || b.reader(v.ID) == "" {
			continue
		}
		p := &Parameter{Name: b.freeName("missing_" + v.ID), Symbol: v.ID, Unit: v.Unit, Shape: Unrecorded,
			Size: len(v.Missing), Support: b.draftOf(v.ID).family.Support, Of: i}
		for _, at := range v.Missing {
			p.Entries = append(p.Entries, m.unit(v, int(at)))
		}
		m.Parameters = append(m.Parameters, p)
	}
}

// freeName is a name that means nothing yet.
func (b *builder) freeName(want string) string {
	id := want
	for n := 2; ; n++ {
		if _, taken := b.scope[id]; !taken && b.variable(id) == nil && b.declared[id] == nil {
			return id
		}
		id = fmt.Sprintf("%s_%d", want, n)
	}
}

// unit names where an entry stands: a row as the table counts it, or a level.
func (m *Model) unit(v *Variable, at int) string {
	if v.Plate >= 0 {
		return m.Plates[v.Plate].Levels[at]
	}
	return fmt.Sprintf("row %d", m.Rows.Index[at]+1)
}

// Unknowns finds the parameter that a variable's missing entries are; -1 if
// they are none, since nothing reads them or none is missing.
func (m *Model) Unknowns(variable int) int {
	return slices.IndexFunc(m.Parameters, func(p *Parameter) bool { return p.Shape == Unrecorded && p.Of == variable })
}

// missing is what the statement says of n missing entries.
func (m *Model) missing(variable, n int) string {
	id := m.Variables[variable].ID
	are := "are"
	if n == 1 {
		are = "is"
	}
	if m.Unknowns(variable) < 0 {
		return fmt.Sprintf("%s of %s %s left out of its law; no other law reads %s.", entriesOf(n), id, are, map[bool]string{true: "it", false: "them"}[n == 1])
	}
	if n == 1 {
		return fmt.Sprintf("1 missing entry of %s is an unknown of the model, drawn with the rest.", id)
	}
	return fmt.Sprintf("%s of %s are unknowns of the model, drawn with the rest.", entriesOf(n), id)
}

func entriesOf(n int) string {
	if n == 1 {
		return "1 missing entry"
	}
	return fmt.Sprintf("%d missing entries", n)
}

// Imputable lists the variables that lost rows and need not: by their scale
// they can have a law that says what the missing entries may have been, or
// nothing reads them.
func (m *Model) Imputable() []string {
	read := make(map[string]bool)
	for _, l := range m.Laws {
		for _, e := range slices.Concat(l.Predictors, l.Arguments) {
			if e != nil {
				for _, id := range formula.Names(e) {
					read[id] = true
				}
			}
		}
	}
	for _, v := range m.Variables {
		read[v.MeanOf] = true
		if v.Computed != nil {
			for _, id := range formula.Names(v.Computed) {
				read[id] = true
			}
		}
	}
	var out []string
	for _, loss := range m.Rows.Lost {
		i, _ := m.Name(loss.Variable)
		if i < 0 || m.Variables[i].Computed != nil {
			continue
		}
		switch v := m.Variables[i]; {
		case v.Scale == study.Real, v.Scale == study.Positive, v.Scale == study.Proportion, !read[v.ID]:
			out = append(out, v.ID)
		}
	}
	return out
}
