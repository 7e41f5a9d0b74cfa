package model

import (
	"fmt"
	"math"
	"slices"

	"arrowroot/compile/formula"
	"arrowroot/compile/study"
)

// gather reads the columns that the laws use, finds the levels of plates,
// keeps the rows in which nothing is missing, and takes one value per level
// for what lives at a plate's level (SEMANTICS A5, A8).
func (b *builder) gather(string) {
	order := b.used()
	b.oneTable(order)
	for _, id := range order {
		b.read(b.columns[id])
	}
	b.readPlates()
	if b.broken {
		return
	}
	b.filter(order)
	if b.broken {
		return
	}
	for _, id := range order {
		b.compute(b.columns[id])
	}
	for _, id := range order {
		b.fillLevels(b.columns[id])
	}
	if b.broken {
		return
	}
	x, y := b.question.Exposure, b.question.Outcome
	b.model = &Model{Kind: b.kind, Rival: b.rival.Name, Exposure: x, Outcome: y}
	b.selectRows(order)
	if b.broken {
		return
	}
	b.keepPlates()
	for _, id := range order {
		b.keepVariable(b.columns[id])
	}
}

// used lists every variable that the fit reads, in the ledger's order, and
// makes an empty column for each.
func (b *builder) used() []string {
	var visit func(id string)
	visit = func(id string) {
		if g, is := b.means[id]; is {
			id = g.of
		}
		v := b.variable(id)
		if b.columns[id] != nil || v == nil {
			return
		}
		c := &column{variable: v, plate: -1}
		b.columns[id] = c
		if v.Computed != "" {
			c.computed = b.computedBy(v)
			if c.computed != nil {
				for _, n := range formula.Names(c.computed) {
					visit(n)
				}
			}
		}
	}
	for _, d := range b.drafts {
		visit(d.variable.ID)
		for _, a := range d.arrows {
			visit(a.From)
		}
		for _, c := range d.carried {
			visit(c.id)
		}
		for _, w := range d.within {
			for _, id := range w.ids {
				visit(id)
			}
		}
		for _, e := range d.expressions() {
			for _, n := range formula.Names(e) {
				visit(n)
			}
		}
	}
	for _, id := range []string{b.question.Exposure, b.question.Outcome} {
		if v := b.variable(id); v != nil && v.Computed != "" && b.onSheet(id) && len(b.drafts) > 0 {
			visit(id)
		}
	}
	var order []string
	for _, v := range b.variables() {
		if b.columns[v.ID] != nil {
			order = append(order, v.ID)
		}
	}
	return order
}

// oneTable refuses laws that read two tables at once.
func (b *builder) oneTable(order []string) {
	first := ""
	for _, id := range order {
		v := b.variable(id)
		if v.Column == "" || slices.Contains(b.bare, v) || len(b.study.Data) == 0 {
			continue
		}
		switch {
		case first == "":
			first = id
		case b.dataOf(id) != b.dataOf(first):
			b.stop(Problem{Code: "two-tables", Variable: id, Place: "data",
				Message: fmt.Sprintf("%s is in %s, but %s is in %s: this version fits one table at a time. Join the two by row before opening them.", first, b.dataOf(first), id, b.dataOf(id))})
			return
		}
	}
}

func (b *builder) dataOf(id string) string {
	if v := b.variable(id); v.Data != "" {
		return v.Data
	}
	return b.study.Data[0].Name
}

// expressions lists what the user typed in a law.
func (d *draft) expressions() []formula.Expr {
	var all []formula.Expr
	if d.formula != nil {
		all = append(all, d.formula)
	}
	for _, e := range d.given {
		if e != nil {
			all = append(all, e)
		}
	}
	return all
}

// computedBy parses a computed variable's formula and checks its names.
func (b *builder) computedBy(v *study.Variable) formula.Expr {
	at := Problem{Variable: v.ID, Place: "computed", Text: v.Computed}
	if v.Column != "" {
		at.Code = "computed-bound"
		at.Message = fmt.Sprintf("%s is computed from %s and cannot also have a column.", v.ID, v.Computed)
		to := *v
		to.Column = ""
		at.Repairs = []Repair{{Label: "Drop the column", Edit: changeVariable(to)}}
		b.stop(at)
		return nil
	}
	rewritten := func(text string) study.Edit {
		to := *v
		to.Computed = text
		return changeVariable(to)
	}
	plain := Repair{Label: "Do not compute " + v.ID, Edit: rewritten("")}
	p, err := formula.Parse(v.Computed)
	if err != nil {
		at = b.parseProblem(at, err, rewritten)
		at.Repairs = append(at.Repairs, plain)
		b.stop(at)
		return nil
	}
	for _, n := range formula.Names(p.Right) {
		u := b.variable(n)
		switch {
		case u != nil && u.Unmeasured:
			at.Code, at.Span = "unmeasured", spanOf(p.Right, n)
			at.Message = fmt.Sprintf("*%s* was not measured, so that %s cannot be computed from it", n, v.ID)
			at.Repairs = []Repair{plain}
			b.stop(at)
			return nil
		case u == nil || n == v.ID:
			at.Code, at.Span = "unknown-name", spanOf(p.Right, n)
			at.Message = fmt.Sprintf("%s cannot be computed from *%s*: there is no other variable of this name", v.ID, n)
			if near := nearest(n, b.graph.Names); near != "" && near != v.ID {
				at.Message += fmt.Sprintf("; did you mean *%s*?", near)
				at.Repairs = []Repair{{Label: "Replace", Edit: rewritten(v.Computed[:at.Span.Start] + near + v.Computed[at.Span.End:])}}
			}
			at.Repairs = append(at.Repairs, plain)
			b.stop(at)
			return nil
		case b.onSheet(v.ID) && b.onSheet(n) && !b.graph.HasArrow(b.graph.Index(n), b.graph.Index(v.ID)):
			at.Code, at.Span = "no-arrow", spanOf(p.Right, n)
			at.Message = fmt.Sprintf("%s is computed from %s, but no arrow %s → %s is drawn", v.ID, n, n, v.ID)
			at.Repairs = []Repair{{Label: "Draw the arrow", Edit: addArrow(b.rival.Name, n, v.ID)}}
			b.stop(at)
			return nil
		}
	}
	return p.Right
}

// compute fills a computed variable's column from its parents'.
func (b *builder) compute(c *column) {
	if c.computed == nil || c.done {
		return
	}
	c.done = true
	for _, n := range formula.Names(c.computed) {
		b.compute(b.columns[n])
	}
	if b.table == nil {
		return
	}
	c.values = make([]float64, b.table.Rows)
	for i := range c.values {
		c.values[i] = Evaluate(c.computed, func(e formula.Expr) float64 {
			if n, ok := e.(*formula.Name); ok && b.columns[n.ID] != nil && b.columns[n.ID].values != nil {
				return b.columns[n.ID].values[i]
			}
			return math.NaN()
		})
	}
}

// selectRows keeps the rows in which no used variable and no used plate is
// missing, and counts what each cost. The models of the outcome alone keep to
// the rows of the full model, so that the three numbers of SEMANTICS B8 are
// about the same rows.
func (b *builder) selectRows(order []string) {
	m := b.model
	if b.table == nil {
		b.report(Problem{Code: "no-data", Place: "data", Stops: true, Message: "There are no data to fit yet: open a table and bind its columns to the variables."})
		return
	}
	m.Rows.Read = b.table.Rows
	keep := make([]bool, b.table.Rows)
	for i := range keep {
		keep[i] = b.outside == nil || !b.outside[i]
		if !keep[i] {
			m.Rows.Filtered++
		}
	}
	lost := func(name string, rows int) {
		if rows > 0 {
			m.Rows.Lost = append(m.Rows.Lost, Loss{Variable: name, Rows: rows})
		}
	}
	for _, id := range order {
		c := b.columns[id]
		if c.computed == nil {
			if c.imputed = b.imputes(c); !c.imputed {
				lost(id, drop(keep, c.values, b.outside))
			}
		}
	}
	for _, p := range b.plates {
		if !p.used {
			continue
		}
		n := 0
		for i, l := range p.of {
			if l < 0 {
				keep[i] = false
				if b.outside == nil || !b.outside[i] {
					n++
				}
			}
		}
		lost(p.name, n)
	}
	for _, id := range order { // in rows that nothing else has dropped
		if c := b.columns[id]; c.computed != nil {
			b.finiteComputed(c, keep)
		}
	}
	if b.kind != Full {
		b.keepToFull(keep)
	}
	m.Rows.Index = make([]int, 0, len(keep))
	for i, k := range keep {
		if k {
			m.Rows.Index = append(m.Rows.Index, i)
		}
	}
	m.Rows.Used = len(m.Rows.Index)
	if m.Rows.Used == 0 {
		b.noRows()
	}
}

// drop takes the rows out in which a value is missing or not finite, and
// counts those that no row filter has left out.
func drop(keep []bool, values []float64, outside []bool) int {
	n := 0
	for i, x := range values {
		if x-x == 0 { // NaN for NaN and ±Inf
			continue
		}
		keep[i] = false
		if outside == nil || !outside[i] {
			n++
		}
	}
	return n
}

// keepToFull drops the rows that the full model drops, if there is one.
func (b *builder) keepToFull(keep []bool) {
	full, _ := Build(b.study, b.rival.Name, b.question, b.table, Full)
	if full == nil || full.Rows.Used == 0 {
		return
	}
	used := make([]bool, len(keep))
	for _, i := range full.Rows.Index {
		used[i] = true
	}
	for i := range keep {
		keep[i] = keep[i] && used[i]
	}
	for _, l := range full.Rows.Lost {
		known := false
		for _, own := range b.model.Rows.Lost {
			known = known || own.Variable == l.Variable
		}
		if !known {
			b.model.Rows.Lost = append(b.model.Rows.Lost, l)
		}
	}
}

func (b *builder) noRows() {
	p := Problem{Code: "no-rows", Place: "data"}
	worst, left := Loss{}, b.model.Rows.Read-b.model.Rows.Filtered
	for _, l := range b.model.Rows.Lost {
		if l.Rows > worst.Rows {
			worst = l
		}
	}
	switch {
	case b.model.Rows.Read == 0:
		p.Message = fmt.Sprintf("%s has no rows.", b.table.Name)
	case worst.Rows == left:
		p.Variable = worst.Variable
		p.Message = fmt.Sprintf("No rows are left: %s is missing in all %d.", worst.Variable, worst.Rows)
	default:
		p.Variable = worst.Variable
		p.Message = fmt.Sprintf("No rows are left: in each of the %d rows some variable is missing, most often %s (%d rows).", left, worst.Variable, worst.Rows)
	}
	if v := b.variable(worst.Variable); v != nil {
		to := *v
		to.Unmeasured, to.Column = true, ""
		p.Repairs = []Repair{{Label: "Leave " + v.ID + " out as unmeasured", Edit: changeVariable(to)}}
	}
	b.stop(p)
}

// keepVariable adds a variable to the model with its values in used rows, or
// one per level.
func (b *builder) keepVariable(c *column) {
	m, v := b.model, c.variable
	out := &Variable{
		ID: v.ID, Label: v.Name(), Unit: v.Unit, Scale: scaleOf(v), Levels: c.levels,
		Plate: -1, Computed: c.computed,
	}
	if c.plate >= 0 {
		out.Plate = b.plates[c.plate].index
	}
	if c.values != nil {
		switch {
		case out.Plate < 0 && m.Rows.Used == m.Rows.Read:
			out.Values = c.values // never written to: columns are shared
		case out.Plate < 0:
			out.Values = make([]float64, m.Rows.Used)
			for i, row := range m.Rows.Index {
				out.Values[i] = c.values[row]
			}
		default:
			p := m.Plates[out.Plate]
			out.Values = make([]float64, len(p.Levels))
			for i, row := range m.Rows.Index {
				out.Values[p.Of[i]] = c.values[row]
			}
		}
	}
	if c.imputed {
		out.standIn()
	}
	if c.nudged != nil {
		out.Nudge = v.Nudge
		for _, row := range m.Rows.Index {
			if c.nudged[row] {
				out.Nudged++
			}
		}
	}
	b.plausible(out, v)
	b.at[v.ID] = len(m.Variables)
	m.Variables = append(m.Variables, out)
}

// plausible fills the range: what the user said, what the scale itself says,
// or what the used rows show.
func (b *builder) plausible(out *Variable, v *study.Variable) {
	switch {
	case out.Scale == study.Binary:
		out.Low, out.High, out.RangeGiven = 0, 1, true
	case out.Scale == study.Category || out.Scale == study.Ordered:
		out.Low, out.High, out.RangeGiven = 0, float64(max(len(out.Levels)-1, 1)), true
	case v.Range != nil && v.Range.Low < v.Range.High:
		out.Low, out.High, out.RangeGiven = v.Range.Low, v.Range.High, true
	case out.Values != nil:
		out.Low, out.High = extent(out.Values)
	case slices.Contains(b.bare, v): // no prior is made from it
	default:
		b.stop(Problem{Code: "no-range", Variable: v.ID, Place: "range",
			Message: fmt.Sprintf("%s has no plausible range and no data: say between which values it can lie, and every prior can be made from that.", v.ID)})
	}
}

func scaleOf(v *study.Variable) study.Scale {
	if v.Scale == "" {
		return study.Real
	}
	return v.Scale
}
