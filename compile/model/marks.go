package model

import (
	"fmt"
	"math"

	"arrowroot/compile/study"
)

// marks holds against the data what is said of how the rows and entries came
// about: one value of what limits the rows, entries where an indicator says so.
// Nothing here stops a fit.
func (b *builder) marks() {
	for _, n := range b.rival.Diagram.Nodes {
		v := b.study.Variable(n.Variable)
		if v == nil {
			continue
		}
		if n.Limits {
			b.limits(v)
		}
		if of := b.study.Variable(v.Answers); of != nil {
			b.answers(v, of)
		}
		if of := b.study.Variable(v.Records); of != nil && !of.Unmeasured && of.Column != "" {
			to := *of
			to.Unmeasured, to.Column, to.Data = true, "", ""
			b.report(Problem{Code: "records", Variable: v.ID, Place: "data",
				Message: fmt.Sprintf("%s is said to record %s with error, but %s has a column of its own: its laws read that.", v.ID, of.ID, of.ID),
				Repairs: []Repair{{Label: "Leave " + of.ID + " out as unmeasured", Edit: changeVariable(to)}}})
		}
	}
}

func (b *builder) limits(v *study.Variable) {
	at, ok := b.at[v.ID]
	if !ok {
		return
	}
	if low, high := extent(b.model.Variables[at].Values); low < high {
		b.report(Problem{Code: "limits", Variable: v.ID, Place: "data",
			Message: fmt.Sprintf("Only rows with one value of %s are said to be in the data, but it has several in them.", v.ID),
			Repairs: []Repair{{Label: v.ID + " limits no rows", Edit: study.LimitRows{Rival: b.rival.Name, Variable: v.ID}}}})
	}
}

// answers compares an indicator with the entries of what it speaks of, row by
// row of the table.
func (b *builder) answers(v, of *study.Variable) {
	says, entries := b.columns[v.ID], b.columns[of.ID]
	if v.Scale != study.Binary || says == nil || entries == nil || len(says.values) != len(entries.values) {
		return
	}
	wrong, first := 0, -1
	for row, x := range says.values {
		if math.IsNaN(x) || (x == 1) == !math.IsNaN(entries.values[row]) || b.outside != nil && b.outside[row] {
			continue
		}
		if wrong++; first < 0 {
			first = row
		}
	}
	if wrong == 0 {
		return
	}
	wrongIn := "1 row"
	if wrong > 1 {
		wrongIn = fmt.Sprintf("%d rows", wrong)
	}
	entry := "one"
	if math.IsNaN(entries.values[first]) {
		entry = "none"
	}
	to := *v
	to.Answers = ""
	b.report(Problem{Code: "answers", Variable: v.ID, Place: "data",
		Message: fmt.Sprintf("%s is said to tell where %s is recorded, but is wrong in %s: in row %d it is %s, and %s has %s.",
			v.ID, of.ID, wrongIn, first+1, says.show(first), of.ID, entry),
		Repairs: []Repair{{Label: v.ID + " tells nothing of " + of.ID, Edit: changeVariable(to)}}})
}
