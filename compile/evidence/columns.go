package evidence

import (
	"fmt"
	"math"
	"slices"
	"strconv"

	"arrowroot/compile/formula"
	"arrowroot/compile/graph"
	"arrowroot/compile/model"
	"arrowroot/compile/study"
	"arrowroot/compile/table"
)

// A column is a variable over the rows of the table: numbers, or places in a
// list of levels. Missing entries are NaN.
type column struct {
	scale  study.Scale
	values []float64
	levels []string // of words; nil for numbers
	gaps   int      // missing entries
}

// columns reads what each node of a graph is bound to.
type columns struct {
	study *study.Study
	data  *study.Data // what the rival is fitted to
	table *table.Table
	rows  []int // kept ones
	of    []*column
	lacks []string // why a node has none
}

func readColumns(s *study.Study, rival string, t *table.Table, g *graph.Graph) *columns {
	c := &columns{study: s, data: s.DataOf(rival), table: t, of: make([]*column, g.Len()), lacks: make([]string, g.Len())}
	c.rows = c.kept()
	for _, v := range g.Order { // parents first: computed variables read theirs
		c.of[v], c.lacks[v] = c.read(g, v)
		if c.of[v] != nil {
			for _, i := range c.rows {
				if math.IsNaN(c.of[v].values[i]) {
					c.of[v].gaps++
				}
			}
		}
	}
	return c
}

// constant reports whether a node has one value in all rows that have any.
func (c *columns) constant(node int) bool {
	first := math.NaN()
	for _, i := range c.rows {
		switch x := c.of[node].values[i]; {
		case math.IsNaN(x):
		case math.IsNaN(first):
			first = x
		case x != first:
			return false
		}
	}
	return !math.IsNaN(first)
}

func (c *columns) read(g *graph.Graph, node int) (*column, string) {
	id := g.Names[node]
	v := c.study.Variable(id)
	switch {
	case v == nil:
		return nil, id + " is no variable of the study"
	case v.Unmeasured || !g.Measured[node]:
		return nil, id + " was not measured"
	case v.Computed != "":
		return c.compute(g, v)
	}
	return c.bound(v)
}

// bound reads the column that a variable is bound to.
func (c *columns) bound(v *study.Variable) (*column, string) {
	id := v.ID
	switch {
	case v.Column == "":
		return nil, id + " is not bound to a column"
	case !c.here(v):
		return nil, id + " is in another table"
	}
	source := c.table.Column(v.Column)
	if source == nil {
		return nil, fmt.Sprintf("%s is bound to the column %s, which %s does not have", id, v.Column, c.table.Name)
	}
	switch v.Scale {
	case study.Binary, study.Category, study.Ordered:
		return words(v, source), ""
	}
	if source.Kind == table.Words {
		return nil, fmt.Sprintf("the column of %s holds words", id)
	}
	out := &column{scale: v.Scale, values: source.Numbers}
	if v.Divide != 0 && v.Divide != 1 {
		out.values = make([]float64, len(source.Numbers))
		for i, x := range source.Numbers {
			out.values[i] = x / v.Divide
		}
	}
	return out, ""
}

// here reports whether a variable is in the table that is tested.
func (c *columns) here(v *study.Variable) bool {
	d := c.study.Table(v.Data)
	return d == nil || d == c.data
}

// words reads the entries of a column as places in the variable's levels.
func words(v *study.Variable, source *table.Column) *column {
	out := &column{scale: v.Scale}
	if v.Scale == study.Binary && source.Kind == table.Numeric && zeroOne(source.Numbers) {
		out.values, out.levels = source.Numbers, []string{"0", "1"}
		if len(v.Levels) == 2 {
			out.levels = v.Levels
		}
		return out
	}
	levels := v.Levels
	as := source.AsWords()
	if len(levels) == 0 {
		if guess := table.Propose(source); len(guess.Levels) > 0 {
			levels = guess.Levels
		} else {
			levels = sortedLevels(as.Levels)
		}
	}
	place := make([]float64, len(as.Levels))
	for i, w := range as.Levels {
		place[i] = math.NaN()
		for j, l := range levels {
			if sameWord(l, w) {
				place[i] = float64(j)
			}
		}
	}
	out.levels = levels
	out.values = make([]float64, len(as.Codes))
	for i, code := range as.Codes {
		out.values[i] = math.NaN()
		if code >= 0 {
			out.values[i] = place[code]
		}
	}
	return out
}

// compute evaluates a computed variable, so that it can be among the given.
func (c *columns) compute(g *graph.Graph, v *study.Variable) (*column, string) {
	p, err := formula.Parse(v.Computed)
	if err != nil {
		return nil, fmt.Sprintf("%s cannot be computed from %s", v.ID, v.Computed)
	}
	for _, name := range formula.Names(p.Right) {
		at := g.Index(name)
		if at < 0 || c.of[at] == nil {
			return nil, fmt.Sprintf("%s is computed from %s, which cannot be had", v.ID, name)
		}
	}
	out := &column{scale: v.Scale, values: make([]float64, c.table.Rows)}
	for i := range out.values {
		out.values[i] = model.Evaluate(p.Right, func(e formula.Expr) float64 {
			if n, ok := e.(*formula.Name); ok {
				return c.of[g.Index(n.ID)].values[i]
			}
			return math.NaN()
		})
	}
	return out, ""
}

// kept are the rows of the table that meet the conditions of the study's data.
func (c *columns) kept() []int {
	var tests []func(row int) bool
	var conditions []study.Condition
	if c.data != nil {
		conditions = c.data.Keep
	}
	for _, k := range conditions {
		v := c.study.Variable(k.Variable)
		if v == nil {
			continue
		}
		if col, _ := c.bound(v); col != nil {
			tests = append(tests, func(row int) bool { return meets(k, col, row) })
		}
	}
	rows := make([]int, 0, c.table.Rows)
	for i := range c.table.Rows {
		if !slices.ContainsFunc(tests, func(ok func(int) bool) bool { return !ok(i) }) {
			rows = append(rows, i)
		}
	}
	return rows
}

func meets(k study.Condition, c *column, row int) bool {
	x := c.values[row]
	switch {
	case math.IsNaN(x):
		return false
	case len(k.Words) > 0:
		return int(x) < len(c.levels) && slices.ContainsFunc(k.Words, func(w string) bool { return sameWord(w, c.levels[int(x)]) })
	}
	return (k.Low == nil || x >= *k.Low) && (k.High == nil || x <= *k.High)
}

// A grouping is an outermost plate over the rows of the table: rows of one
// group may depend on each other.
type grouping struct {
	name   string
	of     []int // group of each row; a row whose entry is missing is a group of its own
	groups int
}

// groupings reads the outermost plates of a study that put several rows into
// one group.
func groupings(s *study.Study, t *table.Table) []grouping {
	var all []grouping
	for _, p := range s.Plates {
		if p.Within != "" {
			continue
		}
		name := p.Column
		if name == "" {
			name = p.Name
		}
		source := t.Column(name)
		if source == nil {
			continue
		}
		as := source.AsWords()
		g := grouping{name: p.Name, of: make([]int, t.Rows), groups: len(as.Levels)}
		for i, code := range as.Codes {
			if g.of[i] = int(code); code < 0 {
				g.of[i] = g.groups
				g.groups++
			}
		}
		if g.groups < t.Rows {
			all = append(all, g)
		}
	}
	return all
}

func zeroOne(values []float64) bool {
	for _, x := range values {
		if x != 0 && x != 1 && !math.IsNaN(x) {
			return false
		}
	}
	return true
}

// sameWord lets 1 and 1.0 be the same level.
func sameWord(a, b string) bool {
	if a == b {
		return true
	}
	x, errX := strconv.ParseFloat(a, 64)
	y, errY := strconv.ParseFloat(b, 64)
	return errX == nil && errY == nil && x == y
}

// sortedLevels puts numbers in their order and words in the alphabet's.
func sortedLevels(levels []string) []string {
	out := slices.Clone(levels)
	slices.SortFunc(out, func(a, b string) int {
		x, errX := strconv.ParseFloat(a, 64)
		y, errY := strconv.ParseFloat(b, 64)
		switch {
		case errX == nil && errY == nil && x != y:
			return int(math.Copysign(1, x-y))
		case a < b:
			return -1
		case a > b:
			return 1
		}
		return 0
	})
	return out
}
