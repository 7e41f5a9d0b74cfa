package model

import (
	"fmt"
	"math"
	"slices"
	"strings"

	"arrowroot/compile/formula"
	"arrowroot/compile/study"
)

// A Subset is the used rows that a question asks about (SEMANTICS B4).
type Subset struct {
	Rows    []int  // places among the used rows, ascending
	Lacking []Loss // used rows outside it because an entry of a condition's variable is missing
	Words   string // "soil is clay or sand and temp is from 10 to 30 °C"
}

// words says what conditions ask of a row: "temp is at least 10 °C".
func (b *builder) words(conditions ...study.Condition) string {
	out := make([]string, len(conditions))
	for i, c := range conditions {
		unit := ""
		if v := b.variable(c.Variable); v != nil && v.Unit != "" {
			unit = " " + v.Unit
		}
		text := "anything"
		switch {
		case len(c.Words) > 0:
			text = strings.Join(c.Words, " or ")
		case c.Low != nil && c.High != nil && *c.Low == *c.High:
			text = short(*c.Low) + unit
		case c.Low != nil && c.High != nil:
			text = fmt.Sprintf("from %s to %s%s", short(*c.Low), short(*c.High), unit)
		case c.Low != nil:
			text = "at least " + short(*c.Low) + unit
		case c.High != nil:
			text = "at most " + short(*c.High) + unit
		}
		out[i] = c.Variable + " is " + text
	}
	return list(out)
}

// A test is a condition read against its variable's column.
type test struct {
	column    *column
	codes     []bool // by level; nil = bounds
	low, high float64
}

// meets reports whether a row meets the condition. A missing entry meets none.
func (t *test) meets(row int) bool {
	x := t.column.values[row]
	if t.codes != nil {
		return x >= 0 && int(x) < len(t.codes) && t.codes[int(x)]
	}
	return x >= t.low && x <= t.high
}

func (t *test) missing(row int) bool { x := t.column.values[row]; return x-x != 0 }

// tests reads conditions against the data; fail is told why one cannot be.
func (b *builder) tests(conditions []study.Condition, fail func(c study.Condition, message string)) []*test {
	var out []*test
	for _, c := range conditions {
		col, message := b.lookUp(c.Variable)
		var t *test
		if message == "" {
			t, message = readCondition(c, col)
		}
		if message != "" {
			fail(c, message)
			return nil
		}
		out = append(out, t)
	}
	return out
}

func readCondition(c study.Condition, col *column) (*test, string) {
	v := col.variable
	t := &test{column: col, low: math.Inf(-1), high: math.Inf(1)}
	numbers := len(col.levels) == 0 || v.Scale == study.Binary && zeroOne(col.levels)
	switch {
	case len(c.Words) > 0 && len(col.levels) == 0:
		return nil, fmt.Sprintf("“%s” is no value of %s, which is %s: give bounds.", c.Words[0], v.ID, a(scaleOf(v)))
	case len(c.Words) > 0:
		t.codes = make([]bool, len(col.levels))
		for _, word := range c.Words {
			at := slices.Index(col.levels, word)
			if at < 0 {
				return nil, fmt.Sprintf("%s has no level “%s”; it has %s.", v.ID, word, list(quoted(col.levels)))
			}
			t.codes[at] = true
		}
	case !numbers:
		return nil, fmt.Sprintf("%s has levels and no bounds: say which of %s are meant.", v.ID, list(quoted(col.levels)))
	}
	if c.Low != nil {
		t.low = *c.Low
	}
	if c.High != nil {
		t.high = *c.High
	}
	return t, ""
}

// lookUp gives a variable's column, which need not be part of the fit: a
// condition makes nothing a part of it and loses no rows. The message says why
// there is none.
func (b *builder) lookUp(id string) (*column, string) {
	problems, broken := b.problems, b.broken
	b.problems, b.broken = nil, false
	var added []string
	defer func() {
		b.problems, b.broken = problems, broken
		for _, id := range added {
			delete(b.columns, id)
		}
	}()
	var visit func(id string)
	visit = func(id string) {
		v := b.variable(id)
		if v == nil || b.columns[id] != nil {
			return
		}
		c := &column{variable: v, plate: -1}
		b.columns[id], added = c, append(added, id)
		if v.Computed == "" {
			b.read(c)
			c.plate = b.plateAt(crossed(v.Plates))
			if !b.broken {
				b.fillLevels(c)
			}
		} else if c.computed = b.computedBy(v); c.computed != nil {
			for _, n := range formula.Names(c.computed) {
				visit(n)
			}
		}
	}
	visit(id)
	c := b.columns[id]
	if c != nil && !b.broken {
		b.compute(c)
	}
	for _, p := range b.problems {
		if p.Stops {
			return nil, p.Message
		}
	}
	if c == nil || c.values == nil {
		return nil, fmt.Sprintf("%s has no data.", id)
	}
	return c, ""
}

// filter finds the rows that the row filter of the table leaves out, and takes
// their entries away before anything else is read from them.
func (b *builder) filter(order []string) {
	data := b.study.DataOf(b.rival.Name)
	if b.table == nil || data == nil || len(data.Keep) == 0 {
		return
	}
	drop := func(c study.Condition) Repair {
		to := *data
		to.Keep = slices.DeleteFunc(slices.Clone(data.Keep), func(k study.Condition) bool { return k.Variable == c.Variable })
		return Repair{Label: "Drop the condition on " + c.Variable, Edit: study.ChangeData{Name: data.Name, To: to}}
	}
	tests := b.tests(data.Keep, func(c study.Condition, message string) {
		b.stop(Problem{Code: "row-filter", Variable: c.Variable, Place: "row filter", Message: fmt.Sprintf("The row filter of %s cannot be read: %s", data.Name, message), Repairs: []Repair{drop(c)}})
	})
	if b.broken {
		return
	}
	b.outside = make([]bool, b.table.Rows)
	left := b.table.Rows
	for i := range b.outside {
		if !slices.ContainsFunc(tests, func(t *test) bool { return !t.meets(i) }) {
			continue
		}
		b.outside[i] = true
		left--
	}
	if left == 0 {
		p := Problem{Code: "row-filter", Variable: data.Keep[0].Variable, Place: "row filter", Message: fmt.Sprintf("The row filter leaves none of the %d rows of %s: in no row %s.", b.table.Rows, data.Name, b.words(data.Keep...))}
		for _, c := range data.Keep {
			p.Repairs = append(p.Repairs, drop(c))
		}
		b.stop(p)
		return
	}
	for _, id := range order {
		c := b.columns[id]
		if c.values == nil || c.computed != nil {
			continue
		}
		c.values = slices.Clone(c.values)
		for i, out := range b.outside {
			if out {
				c.values[i] = math.NaN()
			}
		}
	}
	for _, c := range data.Keep {
		if b.kind == Full && b.onSheet(c.Variable) {
			b.report(Problem{Code: "row-filter", Variable: c.Variable, Place: "row filter", Message: b.filterSays(c), Repairs: []Repair{drop(c)}})
		}
	}
}

// filterSays warns of a row filter on a variable of the sheet (SEMANTICS A7).
func (b *builder) filterSays(c study.Condition) string {
	text := fmt.Sprintf("Only rows where %s are used, and %s is on the sheet: every number is of such rows", b.words(c), c.Variable)
	at, q := b.graph.Index(c.Variable), b.question
	for _, end := range []string{q.Outcome, q.Exposure} {
		if i := b.graph.Index(end); i >= 0 && b.graph.Descendants(i)[at] {
			if c.Variable == end {
				return fmt.Sprintf("%s, and choosing rows by %s itself can bend what is fitted to them.", text, end)
			}
			return fmt.Sprintf("%s, and since %s comes after %s, choosing rows by it can make variables go together that have nothing to do with each other.", text, c.Variable, end)
		}
	}
	return text + "."
}

// subset finds the used rows that the question asks about. What it cannot read
// is a mistake of the question.
func (b *builder) subset() {
	q := b.question
	if len(q.Where) == 0 || b.table == nil {
		return
	}
	failed := false
	tests := b.tests(q.Where, func(c study.Condition, message string) {
		failed = true
		if b.kind == Full {
			b.asks("subset", c.Variable, fmt.Sprintf("The rows asked about cannot be told: %s", message), b.unasked(c)...)
		}
	})
	if failed {
		return
	}
	out := &Subset{Words: b.words(q.Where...)}
	lacking := make([]int, len(tests))
	for i, row := range b.model.Rows.Index {
		in := true
		for k, t := range tests {
			if t.missing(row) {
				lacking[k]++
			}
			in = in && t.meets(row)
		}
		if in {
			out.Rows = append(out.Rows, i)
		}
	}
	for k, n := range lacking {
		if n > 0 {
			out.Lacking = append(out.Lacking, Loss{Variable: q.Where[k].Variable, Rows: n})
		}
	}
	if len(out.Rows) == 0 {
		var repairs []Repair
		for _, c := range q.Where {
			repairs = append(repairs, b.unasked(c)...)
		}
		if b.kind == Full {
			b.asks("subset", q.Where[0].Variable, fmt.Sprintf("In none of the %d used rows %s: there is nothing to average over.", b.model.Rows.Used, out.Words), repairs...)
		}
		return
	}
	b.model.Asked = out
}

// unasked is the repair that drops a condition from the question.
func (b *builder) unasked(c study.Condition) []Repair {
	return b.reask("Drop the condition on "+c.Variable, func(q *study.Question) {
		q.Where = slices.DeleteFunc(slices.Clone(q.Where), func(k study.Condition) bool { return k.Variable == c.Variable })
	})
}
