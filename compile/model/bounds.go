package model

import (
	"fmt"
	"math"

	"arrowroot/compile/formula"
)

// bounds checks what a law was given as bounds of its values against the
// values: the first row that cannot be is reported.
func (b *builder) bounds(d *draft) {
	v := b.model.Variables[d.law.Variable]
	for i, a := range d.family.Arguments {
		e := d.given[i]
		if !a.Given || a.Name == "trials" || e == nil || !b.ofData(e) {
			continue
		}
		limits := b.evaluateAt(e, d.law.Plate, len(v.Values))
		for row, y := range v.Values {
			fault := misplaced(a.Name, d.family.Name, y, limits[row])
			if fault == "" {
				continue
			}
			b.report(Problem{Code: "bounds", Variable: v.ID, Place: "argument", Stops: true,
				Message: fmt.Sprintf("%s ~ %s: in row %d the *%s* (%s) is %s, %s.", v.ID, d.family.Name, b.rowOf(v, row)+1, a.Name, formula.Format(e), short(limits[row]), fault),
				Repairs: []Repair{b.dropArgument(d, a.Name), b.defaultFamily(d.variable, scaleOf(d.variable))}})
			return
		}
	}
}

// misplaced says why a bound cannot be where the value is y; "" where it can.
func misplaced(argument, family string, y, limit float64) string {
	switch {
	case math.IsNaN(limit):
		return "which is no number"
	case argument == "seen" && limit != 0 && limit != 1:
		return "but it must be 1 (seen) or 0 (not seen)"
	case argument == "upper" && limit < y:
		return "which is below the value " + short(y) + " that it bounds"
	case family == "truncated normal" && argument == "low" && y < limit, family == "truncated normal" && argument == "high" && y > limit:
		return "but the value is " + short(y)
	}
	return ""
}
