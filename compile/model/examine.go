package model

import (
	"fmt"
	"math"
	"slices"

	"arrowroot/compile/catalog"
	"arrowroot/compile/formula"
	"arrowroot/compile/study"
)

// examine holds the data against the laws (SEMANTICS C7): what a family cannot
// be, an exposure that never moves, trials that do not fit.
func (b *builder) examine(string) {
	if b.table == nil {
		return
	}
	b.constants()
	b.scales()
	b.marks()
	for _, d := range b.drafts {
		b.finite(d)
		if d.law.Trials != nil {
			b.trials(d)
		}
		if !b.broken {
			b.bounds(d)
		}
	}
}

// constants finds an exposure, or a parent whose range was to be read from the
// data, that is the same in every used row.
func (b *builder) constants() {
	m := b.model
	read := make(map[int]bool)
	for _, l := range m.Laws {
		for _, i := range append(append([]int(nil), l.Drawn...), carriedVariables(l)...) {
			read[i] = true
		}
	}
	for i, v := range m.Variables {
		low, high := extent(v.Values)
		if !(low == high) {
			continue
		}
		value := short(low)
		if len(v.Levels) > 0 && int(low) < len(v.Levels) {
			value = v.Levels[int(low)]
		}
		switch {
		case v.ID == m.Exposure:
			b.report(Problem{Code: "constant-exposure", Variable: v.ID, Place: "data", Stops: true,
				Message: fmt.Sprintf("%s is %s in every used row: with an exposure that never moves, these data say nothing about its effect.", v.ID, value),
				Repairs: b.askInstead(v)})
		case v.ID == m.Outcome && b.draftOf(v.ID) != nil:
			// Counts and yes or no can be the same by chance, and say how rare
			// the other is; a measurement that never moves has no spread.
			b.report(Problem{Code: "constant-outcome", Variable: v.ID, Place: "data", Stops: !b.draftOf(v.ID).family.Discrete,
				Message: fmt.Sprintf("%s is %s in every used row: an outcome that never moves says nothing about what acts on it.", v.ID, value),
				Repairs: b.elsewhere(v)})
		case read[i]:
			b.report(Problem{Code: "constant", Variable: v.ID, Place: "data", Stops: v.Low == v.High,
				Message: fmt.Sprintf("%s is %s in every used row: these data say nothing about what it does.", v.ID, value),
				Repairs: []Repair{b.offSheet(v.ID)}})
		}
	}
}

// askInstead offers to ask for the effect of another parent of the outcome:
// the first that moves.
func (b *builder) askInstead(exposure *Variable) []Repair {
	for _, l := range b.model.Laws {
		if b.model.Variables[l.Variable].ID != b.question.Outcome {
			continue
		}
		for _, i := range l.Drawn {
			v := b.model.Variables[i]
			if low, high := extent(v.Values); v == exposure || !(low < high) {
				continue
			}
			return b.reask("Ask for the effect of "+v.ID, func(q *study.Question) {
				q.Exposure, q.From, q.To, q.Shift, q.Held = v.ID, nil, nil, 0, nil
			})
		}
	}
	return nil
}

// elsewhere offers to ask about another outcome: the first modelled variable
// that moves and is not the exposure.
func (b *builder) elsewhere(outcome *Variable) []Repair {
	for _, l := range slices.Backward(b.model.Laws) {
		v := b.model.Variables[l.Variable]
		if low, high := extent(v.Values); v == outcome || v.ID == b.question.Exposure || !(low < high) {
			continue
		}
		return b.reask("Ask about "+v.ID+" as the outcome", func(q *study.Question) {
			q.Outcome, q.OutcomeLevels, q.Held = v.ID, nil, nil
		})
	}
	return nil
}

// scales looks at what no law explains: proportions beyond 0 and 1, and values
// so far from the plausible range that the unit must be another.
func (b *builder) scales() {
	for _, v := range b.model.Variables {
		c := b.columns[v.ID]
		if c == nil || c.values == nil || c.computed != nil {
			continue
		}
		low, high := extent(v.Values)
		if v.Scale == study.Proportion && b.draftOf(v.ID) == nil && (low < 0 || high > 1) {
			b.beyondUnit(c, "")
			continue
		}
		width := v.High - v.Low
		if !v.RangeGiven || len(v.Levels) > 0 || low >= v.Low-width && high <= v.High+width {
			continue
		}
		far := high
		if low < v.Low-width {
			far = low
		}
		b.report(Problem{Code: "far", Variable: v.ID, Place: "range",
			Message: fmt.Sprintf("%s is %s in row %d, far from its plausible range %s: is the unit right?", v.ID, short(far), b.rowOf(v, slices.Index(v.Values, far))+1, span(v.Low, v.High)),
			Repairs: []Repair{b.rangeSeen(c.variable)}})
	}
}

// beyondUnit reports a proportion beyond 0 and 1; a percent column is offered
// ÷100.
func (b *builder) beyondUnit(c *column, law string) {
	v := c.variable
	row := slices.IndexFunc(c.values, func(x float64) bool { return x < 0 || x > 1 })
	var repairs []Repair
	if low, high := extent(c.values); low >= 0 && high <= 100 && v.Divide <= 1 {
		to := *v
		to.Divide = 100
		repairs = append(repairs, Repair{Label: "Divide by 100", Edit: changeVariable(to)})
	}
	to := *v
	to.Scale = study.Real
	repairs = append(repairs, Repair{Label: "Take " + v.ID + " as a real number", Edit: changeVariable(to)})
	b.report(Problem{Code: "beyond-unit", Variable: v.ID, Place: "data", Stops: true, Repairs: repairs,
		Message: fmt.Sprintf("%s%s: row %d is %s, but a proportion lies between 0 and 1.", v.ID, law, row+1, short(c.values[row]))})
}

// support looks for values that the law's family cannot take.
func (b *builder) support(d *draft) {
	v, f := b.model.Variables[d.law.Variable], d.family
	source := b.columns[v.ID]
	if source == nil || source.values == nil {
		return
	}
	values := source.values
	first := func(bad func(float64) bool) (row, n int) {
		row = -1
		for i, x := range values {
			if !math.IsNaN(x) && bad(x) {
				if row < 0 {
					row = i
				}
				n++
			}
		}
		return row, n
	}
	report := func(code, message string, repairs ...Repair) {
		b.report(Problem{Code: code, Variable: v.ID, Place: "data", Stops: true,
			Message: fmt.Sprintf("%s ~ %s: %s", v.ID, f.Name, message), Repairs: repairs})
	}
	whole := func(x float64) bool { return x == math.Trunc(x) }
	law := func(family string) Repair {
		return Repair{Label: "Use " + family, Edit: b.changeLaw(v.ID, func(l *study.Law) { l.Family = family })}
	}
	rescale := func(s study.Scale) Repair {
		to := *b.variable(v.ID)
		to.Scale = s
		return Repair{Label: fmt.Sprintf("Take %s as %s", v.ID, a(s)), Edit: changeVariable(to)}
	}
	switch f.Support {
	case catalog.Counts, catalog.UpTo:
		if row, _ := first(func(x float64) bool { return x < 0 }); row >= 0 {
			report("negative", fmt.Sprintf("row %d is %s, but a %s count cannot be below 0.", row+1, short(values[row]), f.Name), rescale(study.Real))
		} else if row, _ := first(func(x float64) bool { return !whole(x) }); row >= 0 {
			report("not-whole", fmt.Sprintf("row %d is %s, but a %s count is whole.", row+1, short(values[row]), f.Name), rescale(study.Positive))
		}
	case catalog.ZeroOne:
		if row, _ := first(func(x float64) bool { return x != 0 && x != 1 }); row >= 0 {
			report("not-binary", fmt.Sprintf("row %d is %s, but the law knows 0 and 1 only.", row+1, short(values[row])), rescale(study.Real))
		}
	case catalog.Positives:
		if row, n := first(func(x float64) bool { return x < 0 }); row >= 0 {
			report("negative", fmt.Sprintf("%s below 0 (first in row %d: %s), which %s cannot be.", rows(n), row+1, short(values[row]), article(f.Name)), rescale(study.Real))
		} else if row, n := first(func(x float64) bool { return x == 0 }); row >= 0 {
			repairs := []Repair{b.nudgeTo(d.variable, values)}
			if apart := catalog.FamilyByName("hurdle " + f.Name); apart != nil {
				repairs = append(repairs, law(apart.Name))
			}
			report("zero", fmt.Sprintf("%s exactly 0 (first in row %d), which %s cannot be.", rows(n), row+1, article(f.Name)), append(repairs, law("normal"))...)
		}
	case catalog.NonNegatives:
		if row, n := first(func(x float64) bool { return x < 0 }); row >= 0 {
			report("negative", fmt.Sprintf("%s below 0 (first in row %d: %s), which %s cannot be.", rows(n), row+1, short(values[row]), article(f.Name)), rescale(study.Real))
		}
	case catalog.Turn:
		if row, _ := first(func(x float64) bool { return math.Abs(x) > 2*math.Pi }); row >= 0 {
			to := *b.variable(v.ID)
			to.Divide = 180 / math.Pi
			report("degrees", fmt.Sprintf("row %d is %s, but %s takes angles in radians, from 0 to 6.28.", row+1, short(values[row]), article(f.Name)),
				Repair{Label: fmt.Sprintf("Read %s in degrees", v.ID), Edit: changeVariable(to)}, law("normal"))
		}
	case catalog.Unit:
		b.unitMisfits(d, values, first, report, law)
	}
}

// unitMisfits is support for proportions.
func (b *builder) unitMisfits(d *draft, values []float64, first func(func(float64) bool) (int, int),
	report func(string, string, ...Repair), law func(string) Repair) {
	v := d.variable
	if row, _ := first(func(x float64) bool { return x < 0 || x > 1 }); row >= 0 {
		b.beyondUnit(b.columns[v.ID], " ~ "+d.family.Name)
		return
	}
	zeros, nZeros := first(func(x float64) bool { return x == 0 })
	ones, nOnes := first(func(x float64) bool { return x == 1 })
	if zeros < 0 && ones < 0 {
		return
	}
	row, end, n := zeros, "0", nZeros
	switch {
	case zeros < 0:
		row, end, n = ones, "1", nOnes
	case ones >= 0:
		row, end, n = min(zeros, ones), "0 or 1", nZeros+nOnes
	}
	report("exact-end", fmt.Sprintf("%s exactly %s (first in row %d), which %s cannot be.", rows(n), end, row+1, article(d.family.Name)), b.nudgeTo(v, values), law("normal"))
}

// nudgeTo offers to move exact ends inwards: by 0.001, or for a positive
// variable to half of its smallest value.
func (b *builder) nudgeTo(v *study.Variable, values []float64) Repair {
	to := *v
	to.Nudge = 0.001
	if scaleOf(v) != study.Proportion {
		to.Scale = study.Positive
		least := math.Inf(1)
		for _, x := range values {
			if x > 0 && x < least {
				least = x
			}
		}
		if !math.IsInf(least, 0) {
			to.Nudge = round(least / 2)
		}
	}
	return Repair{Label: "Nudge to " + short(to.Nudge), Edit: changeVariable(to)}
}

func rows(n int) string {
	if n == 1 {
		return "1 row is"
	}
	return fmt.Sprintf("%d rows are", n)
}

// trials checks a binomial's trials against its counts.
func (b *builder) trials(d *draft) {
	v := b.model.Variables[d.law.Variable]
	n := b.evaluateAt(d.law.Trials, d.law.Plate, len(v.Values))
	for i, k := range v.Values {
		where := fmt.Sprintf("row %d", b.rowOf(v, i)+1)
		p := Problem{Code: "trials", Variable: v.ID, Place: "data", Stops: true, Repairs: []Repair{}}
		switch {
		case math.IsNaN(n[i]) || n[i] < 0 || n[i] != math.Trunc(n[i]):
			p.Message = fmt.Sprintf("%s ~ %s: in %s the number of trials (%s) is %s, which is no whole number.", v.ID, d.family.Name, where, formula.Format(d.law.Trials), short(n[i]))
		case k > n[i]:
			p.Message = fmt.Sprintf("%s ~ %s: in %s there are %s out of %s trials (%s).", v.ID, d.family.Name, where, short(k), short(n[i]), formula.Format(d.law.Trials))
		default:
			continue
		}
		p.Repairs = b.trialRepairs(d.variable)
		b.report(p)
		return
	}
}

// rowOf is the table's row of a variable's i-th value, the first of its level.
func (b *builder) rowOf(v *Variable, i int) int {
	if v.Plate < 0 {
		return b.model.Rows.Index[i]
	}
	for j, l := range b.model.Plates[v.Plate].Of {
		if int(l) == i {
			return b.model.Rows.Index[j]
		}
	}
	return -1
}
