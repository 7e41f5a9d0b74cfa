package model

import (
	"fmt"
	"math"
	"slices"
	"sort"
	"strings"

	"arrowroot/compile/formula"
	"arrowroot/compile/study"
	"arrowroot/compile/table"
)

// A plateColumn is a plate over all rows of the table.
type plateColumn struct {
	name   string
	of     []int32 // −1 = missing
	levels []string
	used   bool // by a law or a variable; others come along if they cost no rows
	index  int  // in Model.Plates once kept
}

// crossed names the plate whose levels are the pairs of several plates' levels.
func crossed(plates []string) string { return strings.Join(plates, " and ") }

// readPlates finds the levels of every plate that a law, an arrow or a
// variable names, and of the study's other plates where nothing is missing.
func (b *builder) readPlates() {
	named := make(map[string]bool)
	name := func(owner string, plates ...string) {
		for _, p := range plates {
			if !named[p] && b.studyPlate(p) == nil {
				b.unknownPlate(owner, p)
			}
			named[p] = true
		}
	}
	for _, d := range b.drafts {
		name(d.variable.ID, d.user.VariesBy...)
		for _, w := range d.within {
			name(d.variable.ID, w.plate)
		}
		for _, a := range d.arrows {
			name(d.variable.ID, a.VariesBy...)
		}
		for _, e := range d.expressions() {
			formula.Walk(e, func(e formula.Expr) bool {
				if by, ok := e.(*formula.By); ok {
					name(d.variable.ID, by.Plates...)
				}
				return true
			})
		}
	}
	for parameter := range b.declared {
		if _, plate, ok := strings.Cut(parameter, " by "); ok {
			name("", plate)
		}
	}
	for _, v := range b.variables() {
		if b.columns[v.ID] != nil {
			name(v.ID, v.Plates...)
		}
	}
	if b.broken {
		return
	}
	for _, p := range b.study.Plates {
		c, problem := b.readPlate(p)
		switch {
		case problem != nil && named[p.Name]:
			b.stop(*problem)
		case problem == nil:
			c.used = named[p.Name]
			b.plates = append(b.plates, c)
		}
	}
	if b.broken {
		return
	}
	for _, v := range b.variables() {
		c := b.columns[v.ID]
		if c == nil || len(v.Plates) == 0 {
			continue
		}
		if len(v.Plates) > 1 && b.plateAt(crossed(v.Plates)) < 0 {
			b.cross(v.Plates)
		}
		c.plate = b.plateAt(crossed(v.Plates))
	}
}

func (b *builder) studyPlate(name string) *study.Plate {
	for _, p := range b.study.Plates {
		if p.Name == name {
			return p
		}
	}
	return nil
}

// plateAt finds a plate among those read; −1 if it is not there.
func (b *builder) plateAt(name string) int {
	for i, p := range b.plates {
		if p.name == name {
			return i
		}
	}
	return -1
}

func (b *builder) unknownPlate(owner, plate string) {
	p := Problem{Code: "unknown-plate", Variable: owner, Place: "law"}
	p.Message = fmt.Sprintf("There is no plate named %s", plate)
	if owner != "" {
		p.Message += ", over which the law of " + owner + " varies"
		if v := b.variable(owner); v != nil && slices.Contains(v.Plates, plate) {
			p.Message = fmt.Sprintf("There is no plate named %s, on which %s is said to live", plate, owner)
		}
	}
	var names []string
	for _, q := range b.study.Plates {
		names = append(names, q.Name)
	}
	if near := nearest(plate, names); near != "" {
		p.Message += fmt.Sprintf("; did you mean %s?", near)
		if d := b.draftOf(owner); d != nil && slices.Contains(d.user.VariesBy, plate) {
			p.Repairs = append(p.Repairs, Repair{Label: "Let it vary by " + near, Edit: b.changeLaw(owner, func(l *study.Law) {
				l.VariesBy[slices.Index(l.VariesBy, plate)] = near
			})})
		}
	} else {
		p.Message += "."
	}
	if b.table.Column(plate) != nil {
		p.Repairs = append(p.Repairs, Repair{Label: "Make a plate of the column " + plate, Edit: study.AddPlate{Plate: study.Plate{Name: plate}}})
	}
	b.stop(p)
}

// readPlate reads one plate's column. A plate within another tells its levels
// apart by both names, since field 1 of one farm is not field 1 of the next.
func (b *builder) readPlate(p *study.Plate) (*plateColumn, *Problem) {
	out := &plateColumn{name: p.Name, index: -1}
	if b.table == nil {
		return out, nil
	}
	name := p.Column
	if name == "" {
		name = p.Name
	}
	c := b.table.Column(name)
	if c == nil {
		problem := &Problem{Code: "column-gone", Place: "plate", Message: fmt.Sprintf("%s has no column %s, which names the levels of the plate %s", b.table.Name, name, p.Name)}
		near := nearest(name, columnNames(b.table))
		if near == "" {
			problem.Message += "."
		} else {
			problem.Message += fmt.Sprintf("; did you mean %s?", near)
			to := *p
			to.Column = near
			problem.Repairs = []Repair{{Label: "Use the column " + near, Edit: study.ChangePlate{Name: p.Name, To: to}}}
		}
		problem.Repairs = append(problem.Repairs, Repair{Label: "Remove the plate " + p.Name, Edit: study.RemovePlate{Name: p.Name}})
		return nil, problem
	}
	words, levels := asWords(c)
	if p.Within != "" {
		if outer := b.studyPlate(p.Within); outer != nil && outer != p {
			parent, problem := b.readPlate(outer)
			if problem != nil {
				return nil, problem
			}
			words, levels = pair(parent.of, parent.levels, words, levels)
		}
	}
	out.of, out.levels = words, levels
	return out, nil
}

// cross adds the plate of all pairs of several plates' levels.
func (b *builder) cross(plates []string) {
	first := b.plates[b.plateAt(plates[0])]
	out := &plateColumn{name: crossed(plates), of: first.of, levels: first.levels, used: true, index: -1}
	for _, name := range plates[1:] {
		next := b.plates[b.plateAt(name)]
		out.of, out.levels = pair(out.of, out.levels, next.of, next.levels)
	}
	b.plates = append(b.plates, out)
}

// pair numbers the pairs of levels that occur, in order of appearance.
func pair(a []int32, aLevels []string, b []int32, bLevels []string) ([]int32, []string) {
	seen := make(map[[2]int32]int32)
	owner := make(map[int32]int32) // inner level → its only outer level, −1 if several
	of := make([]int32, len(a))
	var pairs [][2]int32
	for i := range a {
		if a[i] < 0 || b[i] < 0 {
			of[i] = -1
			continue
		}
		key := [2]int32{a[i], b[i]}
		n, ok := seen[key]
		if !ok {
			n = int32(len(pairs))
			seen[key] = n
			pairs = append(pairs, key)
			if _, twice := owner[b[i]]; twice {
				owner[b[i]] = -1
			} else {
				owner[b[i]] = a[i]
			}
		}
		of[i] = n
	}
	unique := true
	for _, o := range owner {
		unique = unique && o >= 0
	}
	levels := make([]string, len(pairs))
	for n, p := range pairs {
		levels[n] = bLevels[p[1]]
		if !unique {
			levels[n] = aLevels[p[0]] + " · " + levels[n]
		}
	}
	return of, levels
}

// keepPlates puts the plates into the model with the levels that used rows have.
func (b *builder) keepPlates() {
	m := b.model
	for _, p := range b.plates {
		out := &Plate{Name: p.name}
		if p.of != nil {
			place := make([]int32, len(p.levels))
			for i := range place {
				place[i] = -1
			}
			has := make([]bool, len(p.levels))
			complete := true
			for _, row := range m.Rows.Index {
				if p.of[row] < 0 {
					complete = false
					break
				}
				has[p.of[row]] = true
			}
			if !complete { // an unused plate is no reason to lose rows
				continue
			}
			for l, ok := range has {
				if ok {
					place[l] = int32(len(out.Levels))
					out.Levels = append(out.Levels, p.levels[l])
				}
			}
			out.Of = make([]int32, m.Rows.Used)
			for i, row := range m.Rows.Index {
				out.Of[i] = place[p.of[row]]
			}
		}
		p.index = len(m.Plates)
		m.Plates = append(m.Plates, out)
	}
}

// fillLevels spreads what is known of a plate's level to all of its rows, and
// finds a variable that is said to live at the level but changes within it.
func (b *builder) fillLevels(c *column) {
	if c.plate < 0 || c.values == nil {
		return
	}
	p := b.plates[c.plate]
	first := make([]int, len(p.levels))
	for i := range first {
		first[i] = -1
	}
	for i, l := range p.of {
		if l < 0 || math.IsNaN(c.values[i]) {
			continue
		}
		j := first[l]
		if j < 0 {
			first[l] = i
			continue
		}
		if c.values[j] != c.values[i] {
			v := c.variable
			to := *v
			to.Plates = nil
			b.stop(Problem{Code: "not-constant", Variable: v.ID, Place: "data",
				Message: fmt.Sprintf("%s is said to be one value per %s, but within %s it is %s in row %d and %s in row %d.", v.ID, p.name, p.levels[l], c.show(j), j+1, c.show(i), i+1),
				Repairs: []Repair{{Label: "Let it change from row to row", Edit: changeVariable(to)}}})
			return
		}
	}
	filled := append([]float64(nil), c.values...)
	for i, l := range p.of {
		if l >= 0 && math.IsNaN(filled[i]) && first[l] >= 0 {
			filled[i] = c.values[first[l]]
		}
	}
	c.values = filled
}

// asWords reads any column as words: numbers ascend, words keep the order in
// which they appear.
func asWords(c *table.Column) (of []int32, levels []string) {
	if c.Kind == table.Words {
		return c.Codes, c.Levels
	}
	place := make(map[float64]int32)
	var numbers []float64
	for _, v := range c.Numbers {
		if _, seen := place[v]; !seen && !math.IsNaN(v) {
			place[v] = 0
			numbers = append(numbers, v)
		}
	}
	sort.Float64s(numbers)
	for i, v := range numbers {
		place[v] = int32(i)
		levels = append(levels, formula.FormatNumber(v))
	}
	of = make([]int32, len(c.Numbers))
	for i, v := range c.Numbers {
		of[i] = -1
		if !math.IsNaN(v) {
			of[i] = place[v]
		}
	}
	return of, levels
}

func columnNames(t *table.Table) []string {
	var names []string
	if t != nil {
		for _, c := range t.Columns {
			names = append(names, c.Name)
		}
	}
	return names
}

// LevelOf gives for each level of plate p (−1 = each used row) its level in
// plate q. It fails where some level of p lies in several levels of q.
func (m *Model) LevelOf(p, q int) ([]int32, bool) {
	of := m.Plates[q].Of
	if p < 0 {
		return of, true
	}
	out := make([]int32, len(m.Plates[p].Levels))
	for i := range out {
		out[i] = -1
	}
	for i, l := range m.Plates[p].Of {
		if out[l] >= 0 && out[l] != of[i] {
			return nil, false
		}
		out[l] = of[i]
	}
	return out, true
}
