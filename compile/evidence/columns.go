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
	levels int // of words; 0 for numbers
	gaps   int // missing entries
}

// columns reads what each node of a graph is bound to.
type columns struct {
	study *study.Study
	table *table.Table
	rows  []int // kept ones
	of    []*column
	lacks []string // why a node has none
}

func readColumns(s *study.Study, t *table.Table, g *graph.Graph) *columns {
	c := &columns{study: s, table: t, of: make([]*column, g.Len()), lacks: make([]string, g.Len())}
	c.rows = keptRows(s, t)
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
	if v.Divide < 0 { // any other division keeps the order, which is all that counts here
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
	return d == nil || len(c.study.Data) < 2 || d.Name == c.table.Name || d.File == c.table.Name
}

// words reads the entries of a column as places in the variable's levels.
func words(v *study.Variable, source *table.Column) *column {
	out := &column{scale: v.Scale}
	if v.Scale == study.Binary && source.Kind == table.Numeric && zeroOne(source.Numbers) {
		out.values, out.levels = source.Numbers, 2
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
	out.levels = len(levels)
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

// keptRows are the rows of the table that the study uses at all.
func keptRows(s *study.Study, t *table.Table) []int {
	rows := make([]int, t.Rows)
	for i := range rows {
		rows[i] = i
	}
	return rows
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
