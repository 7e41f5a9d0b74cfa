package mistake

import (
	"fmt"
	"slices"

	"arrowroot/compile/causal"
	"arrowroot/compile/graph"
	"arrowroot/compile/study"
)

// A limit is one thing that decides which rows are in the data: a node that is
// marked so, or a row filter.
type limit struct {
	id     string // the variable
	filter bool
	node   int // the variable's node; -1 = it is not on the sheet
	held   int // the node that the rows themselves hold: the variable's own, or one that it acts on
}

// chosenRows finds rows that were chosen by an effect of the exposure or of the
// outcome, or so that a path is open among them that is closed in all rows (M3;
// Hernán, Hernández-Díaz & Robins 2004).
func chosenRows(l *look) []Mistake {
	if !l.asked() {
		return nil
	}
	limits, g := l.limits()
	if len(limits) == 0 {
		return nil
	}
	var all []Mistake
	for _, m := range limits {
		if m.node < 0 {
			all = append(all, l.offSheet(m))
			continue
		}
		if found, ok := l.chosenBy(m, g); ok {
			all = append(all, found)
		}
	}
	return all
}

// limits lists what limits the rows, and gives the sheet with a node for each
// row filter. A filter on a variable is an effect of it alone.
func (l *look) limits() ([]limit, *graph.Graph) {
	var limits []limit
	for v, n := range l.rival.Diagram.Nodes {
		if n.Limits {
			limits = append(limits, limit{id: n.Variable, node: v, held: v})
		}
	}
	spec := graph.Spec{Names: slices.Clone(l.g.Names), Arrows: slices.Clone(l.g.Arrows), Arcs: l.g.Arcs}
	if d := l.study.DataOf(l.rival.Name); d != nil {
		for _, c := range d.Keep {
			m := limit{id: c.Variable, filter: true, node: l.g.Index(c.Variable), held: -1}
			if m.node >= 0 {
				m.held = len(spec.Names)
				spec.Names = append(spec.Names, "rows kept by "+c.Variable)
				spec.Arrows = append(spec.Arrows, [2]int{m.node, m.held})
			}
			limits = append(limits, m)
		}
	}
	for v := range l.g.Len() {
		if !l.g.Measured[v] {
			spec.Unmeasured = append(spec.Unmeasured, v)
		}
		if l.g.Computed[v] {
			spec.Computed = append(spec.Computed, v)
		}
	}
	g, err := graph.New(spec)
	if err != nil {
		panic(err) // a leaf closes no cycle
	}
	return limits, g
}

// rows says which rows are in the data, and what the variable is.
func (m limit) rows(what string) string {
	if what != "" {
		what = ", " + what
	}
	if m.filter {
		return fmt.Sprintf("Rows are kept by %s%s", m.id, what)
	}
	if what != "" {
		what += ","
	}
	return fmt.Sprintf("Only rows with one value of %s%s are in the data", m.id, what)
}

// chosenBy judges one limit beside what is held.
func (l *look) chosenBy(m limit, g *graph.Graph) (Mistake, bool) {
	if m.node == l.x {
		return Mistake{}, false // rows of some values of the exposure still compare those
	}
	x, y := l.g.Names[l.x], l.g.Names[l.y]
	found := Mistake{Code: ChosenRows, Key: key(ChosenRows, x, y, m.id), Nodes: []string{m.id}, Repairs: l.allRows(m)}
	fromX, fromY := l.g.Descendants(l.x)[m.node], l.g.Descendants(l.y)[m.node]
	before, _ := causal.Minimal(g, l.x, l.y, nil, 1)
	after, _ := causal.Minimal(g, l.x, l.y, []int{m.held}, 1)
	found.Path = l.ids(walk(l.g, l.x, m.node))
	switch {
	case m.node == l.y:
		found.Path = nil
		found.Sentence = fmt.Sprintf("%s: what they show is not the effect of %s in all rows.", m.rows("the outcome itself"), x)
		found.Why = fmt.Sprintf("What raises %s anyway and what %s does make up for each other in the rows that were kept.", y, x)
	case fromY:
		way := walk(l.g, l.y, m.node)
		found.Path = l.ids(way)
		found.Sentence = fmt.Sprintf("%s: what they show is not the effect of %s in all rows.", m.rows(fmt.Sprintf("an effect of %s by %s", y, l.arrows(way))), x)
		found.Why = fmt.Sprintf("Among rows chosen so, whatever else moves %s goes together with %s.", y, x)
	case fromX && l.g.Ancestors(l.y)[m.node]:
		way := append(walk(l.g, l.x, m.node), walk(l.g, m.node, l.y)[1:]...)
		found.Path = l.ids(way)
		found.Sentence = fmt.Sprintf("%s: among them part of the effect cannot be seen.", m.rows("which lies on "+l.arrows(way)))
		found.Why = fmt.Sprintf("Rows chosen by %s differ less by what %s does through it.", m.id, x)
	case len(after) == 0 && len(before) > 0:
		found = l.opened(found, m, g)
	case len(after) > 0 && l.read.HeldValid && !causal.ValidAdjustment(g, l.x, l.y, plus(l.held, m.held)):
		found = l.opened(found, m, g)
		var set []int
		if sets, _ := causal.Minimal(g, l.x, l.y, plus(l.held, m.held), 1); len(sets) > 0 {
			set = minus(sets[0], m.held)
		}
		found.Repairs = append(l.holdToo(set), found.Repairs...)
	case fromX:
		found.Severity = Warn
		found.Sentence = fmt.Sprintf("%s: by these arrows that does no harm, if nothing else joins it to %s.", m.rows(fmt.Sprintf("an effect of %s by %s", x, l.arrows(walk(l.g, l.x, m.node)))), y)
		found.Why = fmt.Sprintf("A cause of both %s and %s, drawn or not, would tie %s to %s in the rows that were kept.", m.id, y, x, y)
	default:
		return Mistake{}, false
	}
	return found, true
}

// opened says which path is open among the rows that were kept.
func (l *look) opened(found Mistake, m limit, g *graph.Graph) Mistake {
	rows := m.rows("")
	x, y := l.g.Names[l.x], l.g.Names[l.y]
	found.Sentence = fmt.Sprintf("%s, and among them a path between %s and %s is open that is closed in all rows.", rows, x, y)
	found.Why = fmt.Sprintf("What acts on %s goes together in rows chosen by it.", m.id)
	r := causal.Read(g, causal.Query{Exposure: l.x, Outcome: l.y, Held: plus(l.held, m.held), MaxSets: 1})
	for i := range r.Paths {
		p := &r.Paths[i]
		if p.Open && slices.ContainsFunc(p.OpenedAt, func(o causal.Opening) bool { return o.By == m.held }) {
			found.Path = l.ids(p.Nodes)
			found.Sentence = fmt.Sprintf("%s, and among them %s is open, which is closed in all rows.", rows, p.Text(g))
			break
		}
	}
	return found
}

// offSheet is a filter by a variable of which the sheet says nothing.
func (l *look) offSheet(m limit) Mistake {
	return Mistake{
		Code: ChosenRows, Severity: Warn, Key: key(ChosenRows, m.id), Nodes: []string{m.id},
		Sentence: fmt.Sprintf("Rows are kept by %s, which is not on the sheet: draw what acts on it.", m.id),
		Why:      fmt.Sprintf("If %s or %s acts on %s, the rows that were kept show something else than the effect.", l.g.Names[l.x], l.g.Names[l.y], m.id),
		Repairs: append([]Repair{{"Put " + m.id + " on the sheet", study.AddNode{Rival: l.rival.Name, Variable: m.id}}},
			l.allRows(m)...),
	}
}

// allRows is the repair that does without a limit.
func (l *look) allRows(m limit) []Repair {
	if !m.filter {
		return []Repair{{m.id + " limits no rows", study.LimitRows{Rival: l.rival.Name, Variable: m.id}}}
	}
	d := l.study.DataOf(l.rival.Name)
	to := *d
	to.Keep = slices.DeleteFunc(slices.Clone(d.Keep), func(c study.Condition) bool { return c.Variable == m.id })
	return []Repair{{"Use all rows", study.ChangeData{Name: d.Name, To: to}}}
}
