package model

import (
	"fmt"
	"math"
	"slices"
	"strconv"
	"strings"
	"unicode"
	"unicode/utf8"

	"arrowroot/compile/formula"
	"arrowroot/compile/study"
	"arrowroot/compile/table"
)

// A column is a variable's data over all rows of the table.
type column struct {
	variable *study.Variable
	values   []float64 // NaN = missing; places in levels for words; nil without a table
	levels   []string
	plate    int // in builder.plates, −1 = row
	computed formula.Expr
	done     bool
	imputed  bool   // missing entries stay: they are unknowns, or nothing reads them
	nudged   []bool // rows whose exact end was moved inwards; nil if none
}

// show writes a value for a message.
func (c *column) show(row int) string {
	if v := c.values[row]; len(c.levels) > 0 && v >= 0 && int(v) < len(c.levels) {
		return c.levels[int(v)]
	}
	return short(c.values[row])
}

// read fills a column from the table as its variable's scale asks.
func (b *builder) read(c *column) {
	v := c.variable
	if v.Computed != "" {
		return
	}
	if v.Unmeasured {
		b.stop(Problem{Code: "unmeasured", Variable: v.ID, Place: "data", Message: fmt.Sprintf("%s was not measured, so no law can read it.", v.Name())})
		return
	}
	c.levels = v.Levels
	if b.table == nil {
		if v.Scale == study.Binary && len(c.levels) == 0 {
			c.levels = []string{"0", "1"}
		}
		if len(c.levels) < 2 && (v.Scale == study.Category || v.Scale == study.Ordered) {
			b.stop(Problem{Code: "no-levels", Variable: v.ID, Place: "levels", Message: fmt.Sprintf("%s has no levels yet: name them, or bind it to a column.", v.ID)})
		}
		return
	}
	source := b.source(v)
	if source == nil {
		return
	}
	if v.Scale == "" {
		b.noScale(v, source)
	}
	b.namedTwice(v)
	switch v.Scale {
	case study.Binary:
		b.readBinary(c, source)
	case study.Category, study.Ordered:
		b.readLevels(c, source)
	default:
		b.readNumbers(c, source)
	}
}

// source finds the column a variable is bound to.
func (b *builder) source(v *study.Variable) *table.Column {
	names := columnNames(b.table)
	bind := func(column string) Repair {
		return Repair{Label: "Bind it to " + column, Edit: b.bindTo(v, column)}
	}
	if v.Column == "" {
		p := Problem{Code: "unbound", Variable: v.ID, Place: "data",
			Message: fmt.Sprintf("%s is not bound to a column of %s. If nobody measured it, say so, and it is left out of the fit.", v.ID, b.table.Name)}
		if near := likely(v, names); near != "" {
			p.Repairs = append(p.Repairs, bind(near))
		}
		to := *v
		to.Unmeasured = true
		p.Repairs = append(p.Repairs, Repair{Label: "It was not measured", Edit: changeVariable(to)})
		b.stop(p)
		return nil
	}
	source := b.table.Column(v.Column)
	if source == nil {
		p := Problem{Code: "column-gone", Variable: v.ID, Place: "data",
			Message: fmt.Sprintf("%s has no column %s any more, to which %s is bound.", b.table.Name, v.Column, v.ID)}
		if near := nearest(v.Column, names); near != "" {
			p.Message = strings.TrimSuffix(p.Message, ".") + fmt.Sprintf("; did you mean %s?", near)
			p.Repairs = append(p.Repairs, bind(near))
		}
		to := *v
		to.Column = ""
		p.Repairs = append(p.Repairs, Repair{Label: "Unbind " + v.ID, Edit: changeVariable(to)})
		b.stop(p)
	}
	return source
}

// namedTwice notes that a column's heading stands over another one as well: the
// table has given that one a number.
func (b *builder) namedTwice(v *study.Variable) {
	second := v.Column + " (2)"
	if b.table.Column(second) == nil || !slices.ContainsFunc(b.table.Notes, func(note string) bool {
		return strings.HasPrefix(note, fmt.Sprintf("more than one column is named “%s”;", v.Column))
	}) {
		return
	}
	b.report(Problem{Code: "named-twice", Variable: v.ID, Place: "data",
		Message: fmt.Sprintf("%s has more than one column named %s; %s reads the first, and the next is called “%s” here.", b.table.Name, v.Column, v.ID, second),
		Repairs: []Repair{{Label: "Bind it to " + second, Edit: b.bindTo(v, second)}}})
}

// likely is the column that a variable without one probably means: one of its
// name or label, the only one that begins with its name and goes on with a unit
// or the like ("rain_mm"), or a near miss.
func likely(v *study.Variable, names []string) string {
	for _, n := range names {
		if strings.EqualFold(n, v.ID) || strings.EqualFold(n, v.Label) {
			return n
		}
	}
	var longer []string
	for _, n := range names {
		rest, ok := strings.CutPrefix(strings.ToLower(n), strings.ToLower(v.ID))
		if r, _ := utf8.DecodeRuneInString(rest); ok && !unicode.IsLetter(r) && !unicode.IsDigit(r) {
			longer = append(longer, n)
		}
	}
	if len(longer) == 1 {
		return longer[0]
	}
	return nearest(v.ID, names)
}

// noScale says that a variable is read as real until somebody says better.
func (b *builder) noScale(v *study.Variable, source *table.Column) {
	guess := table.Propose(source)
	to := *v
	to.Scale = study.Scale(guess.Scale)
	if len(to.Levels) == 0 {
		to.Levels = guess.Levels
	}
	if guess.Percent && to.Divide == 0 {
		to.Divide = 100
	}
	b.report(Problem{Code: "no-scale", Variable: v.ID, Place: "scale",
		Message: fmt.Sprintf("Nobody has said yet what values %s can take; it is read as a real number. The column holds %s.", v.ID, guess.Words),
		Repairs: []Repair{{Label: "Take it as " + a(to.Scale), Edit: changeVariable(to)}}})
}

// readNumbers reads a numeric variable, divided as the ledger says.
func (b *builder) readNumbers(c *column, source *table.Column) {
	v := c.variable
	if source.Kind == table.Words {
		to := *v
		to.Scale = study.Category
		b.stop(Problem{Code: "words", Variable: v.ID, Place: "data",
			Message: fmt.Sprintf("%s, column %s: the entries are words (%s), but %s is %s.", b.table.Name, source.Name, sample(source.Levels), v.ID, a(scaleOf(v))),
			Repairs: []Repair{{Label: "Make it a category", Edit: changeVariable(to)}}})
		return
	}
	c.values = source.Numbers
	if d := v.Divide; d != 0 && d != 1 {
		c.values = make([]float64, len(source.Numbers))
		for i, x := range source.Numbers {
			c.values[i] = x / d
		}
	}
	c.nudge()
	b.strange(v, source)
}

// nudge moves exact ends of the scale inwards, where the ledger says so
// (SEMANTICS C7).
func (c *column) nudge() {
	v := c.variable
	if v.Nudge <= 0 || v.Scale != study.Positive && v.Scale != study.Proportion {
		return
	}
	moved := make([]float64, len(c.values))
	c.nudged = make([]bool, len(c.values))
	for i, x := range c.values {
		switch {
		case x == 0:
			x, c.nudged[i] = v.Nudge, true
		case x == 1 && v.Scale == study.Proportion:
			x, c.nudged[i] = 1-v.Nudge, true
		}
		moved[i] = x
	}
	c.values = moved
}

// strange reports text among numbers. The table holds it as missing already;
// somebody must agree to that before rows are lost to it.
func (b *builder) strange(v *study.Variable, source *table.Column) {
	var odd []table.Strange
	for _, s := range source.Strange {
		if !slices.Contains(v.Missing, s.Text) {
			odd = append(odd, s)
		}
	}
	if len(odd) == 0 {
		return
	}
	n := 0
	for _, x := range source.Numbers {
		if !math.IsNaN(x) {
			n++
		}
	}
	text := fmt.Sprintf("%s, row %d, column %s: “%s” is not a number", b.table.Name, odd[0].Row+1, source.Name, odd[0].Text)
	if more := len(odd) - 1; more > 0 {
		text += fmt.Sprintf(", nor are %d more entries", more)
	}
	b.report(Problem{Code: "text-in-number", Variable: v.ID, Place: "data", Stops: true,
		Message: fmt.Sprintf("%s. %d other entries are.", text, n),
		Repairs: []Repair{treatAsMissing(v, odd)}})
}

// readBinary reads 0 and 1, or two words.
func (b *builder) readBinary(c *column, source *table.Column) {
	v := c.variable
	words, levels := asWords(source)
	if n := len(v.Levels); n == 1 || n > 2 {
		b.wrongNumberOfLevels(v, source, levels)
		return
	}
	want := v.Levels
	if len(want) != 2 {
		want = append([]string(nil), levels...)
		if guess := table.Propose(source); len(guess.Levels) == 2 {
			want = guess.Levels
		}
		if len(want) == 1 && (want[0] == "0" || want[0] == "1") {
			want = []string{"0", "1"}
		}
	}
	if source.Kind == table.Numeric && zeroOne(levels) {
		c.values, c.levels = source.Numbers, want
		if len(v.Levels) != 2 {
			c.levels = []string{"0", "1"}
		}
		if !subset(levels, v.Levels) { // 0 and 1 behind two words
			b.strange(v, source)
			return
		}
	}
	if len(want) != 2 {
		to := *v
		to.Scale, to.Levels = study.Category, nil
		b.stop(Problem{Code: "not-binary", Variable: v.ID, Place: "data",
			Message: fmt.Sprintf("%s, column %s: %s is binary, but the column holds %d different values (%s).", b.table.Name, source.Name, v.ID, len(levels), sample(levels)),
			Repairs: []Repair{{Label: "Make it a category", Edit: changeVariable(to)}}})
		return
	}
	c.levels = want
	b.code(c, source, words, levels)
	b.strange(v, source)
	if len(v.Levels) == 0 {
		b.whichIsOne(v, source, want)
	}
}

// whichIsOne says which of two words counts as 1 where nobody has said so.
func (b *builder) whichIsOne(v *study.Variable, source *table.Column, levels []string) {
	b.report(Problem{Code: "which-is-one", Variable: v.ID, Place: "levels",
		Message: fmt.Sprintf("%s, column %s: nobody has said which of “%s” and “%s” is the 1 of %s; it is “%s” for now.", b.table.Name, source.Name, levels[0], levels[1], v.ID, levels[1]),
		Repairs: []Repair{oneIs(v, levels[0], levels[1]), oneIs(v, levels[1], levels[0])}})
}

// oneIs names both levels of a binary variable.
func oneIs(v *study.Variable, zero, one string) Repair {
	to := *v
	to.Levels = []string{zero, one}
	return Repair{Label: "“" + one + "” is 1", Edit: changeVariable(to)}
}

// wrongNumberOfLevels stops at a binary variable with one level named, or more
// than two.
func (b *builder) wrongNumberOfLevels(v *study.Variable, source *table.Column, seen []string) {
	p := Problem{Code: "levels", Variable: v.ID, Place: "levels",
		Message: fmt.Sprintf("%s, column %s: %s is binary, but has %s (%s), while the column holds %s. Name both, the one that counts as 1 last.",
			b.table.Name, source.Name, v.ID, count(len(v.Levels), "level"), sample(v.Levels), list(quoted(first(seen, 4))))}
	switch {
	case len(seen) == 2:
		p.Repairs = []Repair{oneIs(v, seen[0], seen[1]), oneIs(v, seen[1], seen[0])}
	case len(seen) > 2:
		to := *v
		to.Scale, to.Levels = study.Category, seen
		p.Repairs = []Repair{{Label: "Make it a category", Edit: changeVariable(to)}}
	}
	b.stop(p)
}

func first(words []string, n int) []string { return words[:min(n, len(words))] }

func zeroOne(levels []string) bool {
	for _, l := range levels {
		if l != "0" && l != "1" {
			return false
		}
	}
	return true
}

func subset(some, of []string) bool {
	for _, s := range some {
		if !slices.Contains(of, s) {
			return false
		}
	}
	return true
}

// readLevels reads a category or an ordered variable.
func (b *builder) readLevels(c *column, source *table.Column) {
	words, levels := asWords(source)
	c.levels = c.variable.Levels
	if len(c.levels) == 0 {
		c.levels = levels
		if c.variable.Scale == study.Ordered && source.Kind == table.Words && len(levels) > 1 {
			b.sayTheOrder(c.variable, source)
			return
		}
	}
	if len(c.levels) < 2 {
		b.stop(Problem{Code: "one-level", Variable: c.variable.ID, Place: "data",
			Message: fmt.Sprintf("%s, column %s: %s has a single level (%s), which nothing can depend on.", b.table.Name, source.Name, c.variable.ID, sample(c.levels))})
		return
	}
	b.code(c, source, words, levels)
}

// sayTheOrder stops at words that come in an order which nobody has said: the
// alphabet's, or the file's, would be an invention.
func (b *builder) sayTheOrder(v *study.Variable, source *table.Column) {
	found := sorted(source.Levels)
	p := Problem{Code: "no-order", Variable: v.ID, Place: "levels",
		Message: fmt.Sprintf("%s, column %s: %s is ordered, but nobody has said in which order its words come. Say the order, lowest first; found: %s.", b.table.Name, source.Name, v.ID, sample(found))}
	take := func(levels []string) {
		to := *v
		to.Levels = levels
		p.Repairs = append(p.Repairs, Repair{Label: "Take " + strings.Join(levels, " < "), Edit: changeVariable(to)})
	}
	if guess := table.Propose(source); guess.Scale == string(study.Ordered) && !slices.Equal(guess.Levels, found) {
		take(guess.Levels)
	}
	take(found)
	b.stop(p)
}

func sorted(words []string) []string { return slices.Sorted(slices.Values(words)) }

// code translates a column's words into places in the variable's levels.
func (b *builder) code(c *column, source *table.Column, words []int32, levels []string) {
	v := c.variable
	place := make([]float64, len(levels))
	var unknown []string
	for i, l := range levels {
		place[i] = math.NaN()
		for j, w := range c.levels {
			if sameWord(w, l) {
				place[i] = float64(j)
			}
		}
		if math.IsNaN(place[i]) {
			unknown = append(unknown, l)
		}
	}
	c.values = make([]float64, len(words))
	row, count := -1, 0
	for i, w := range words {
		c.values[i] = math.NaN()
		if w >= 0 {
			c.values[i] = place[w]
			if math.IsNaN(place[w]) {
				count++
				if row < 0 {
					row = i
				}
			}
		}
	}
	if row < 0 {
		return
	}
	p := Problem{Code: "unknown-level", Variable: v.ID, Place: "levels",
		Message: fmt.Sprintf("%s, row %d, column %s: “%s” is not a level of %s (%s).", b.table.Name, row+1, source.Name, levels[words[row]], v.ID, sample(c.levels))}
	if v.Scale != study.Binary {
		to := *v
		to.Levels = append(append([]string(nil), c.levels...), unknown...)
		p.Repairs = []Repair{{Label: "Add " + list(quoted(unknown)) + " to the levels", Edit: changeVariable(to)}}
	} else {
		to := *v
		to.Levels = nil
		p.Repairs = []Repair{{Label: "Take the levels from the column", Edit: changeVariable(to)}}
	}
	b.stop(p)
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

func quoted(words []string) []string {
	out := make([]string, len(words))
	for i, w := range words {
		out[i] = "“" + w + "”"
	}
	return out
}

// sample shows the first few words of a list.
func sample(words []string) string {
	if len(words) > 4 {
		return strings.Join(words[:4], ", ") + ", …"
	}
	return strings.Join(words, ", ")
}

// a puts a scale into a sentence.
func a(s study.Scale) string {
	switch s {
	case study.Proportion, study.Count, study.Category:
		return "a " + string(s)
	case study.Real, study.Positive:
		return "a " + string(s) + " number"
	}
	return string(s)
}
