package study

import (
	"fmt"
	"math"
	"slices"
	"strings"

	"arrowroot/compile/formula"
)

// A Fault is something in a study that must not be. Part points to the part
// that is at fault: a *Variable, *Plate, *Data, *Rival, *Node, *Arrow, *Arc,
// *Absent, *Note, *Question or *Dismissal of the study.
type Fault struct {
	Part   any
	Reason string
}

func (f *Fault) Error() string { return f.Reason }

// Check gives the first thing that must hold of every study and does not, as a
// *Fault, or nil: names are unique and well-formed, arrows join nodes that are
// on the sheet and close no cycle, everything that is named exists. Whether
// laws and formulas make sense is not asked here.
func Check(s *Study) error {
	c := checker{study: s}
	c.checkData()
	c.checkPlates()
	c.checkLedger()
	c.checkConditions()
	c.checkRivals()
	for _, q := range s.Questions {
		c.checkQuestion(q)
	}
	c.checkDismissed()
	if c.fault == nil {
		return nil
	}
	return c.fault
}

// repeated gives the first key that an item shares with an earlier one.
func repeated[T any, K comparable](items []T, key func(T) K) (k K, found bool) {
	if len(items) < 2 {
		return k, false
	}
	seen := make(map[K]bool, len(items))
	for _, item := range items {
		if k = key(item); seen[k] {
			return k, true
		}
		seen[k] = true
	}
	return k, false
}

func itself(text string) string { return text }

// checked returns the study if it is sound. Edits end with it.
func checked(s *Study) (*Study, error) {
	if err := Check(s); err != nil {
		return nil, err
	}
	return s, nil
}

type checker struct {
	study                     *Study
	tables, plates, variables map[string]bool // the names there are
	fault                     *Fault          // the first
}

func (c *checker) insist(holds bool, part any, format string, args ...any) {
	if !holds && c.fault == nil {
		c.fault = &Fault{Part: part, Reason: fmt.Sprintf(format, args...)}
	}
}

func (c *checker) checkData() {
	seen := make(map[string]bool)
	c.tables = seen
	for _, d := range c.study.Data {
		c.insist(d.Name != "", d, "a data table has no name")
		c.insist(!seen[d.Name], d, "there are two data tables named “%s”", d.Name)
		c.insist(d.File == "" || d.Text == "", d, "the data “%s” have both a file and embedded text", d.Name)
		c.insist(d.Rows >= 0, d, "the data “%s” have a negative number of rows", d.Name)
		seen[d.Name] = true
	}
}

func (c *checker) checkPlates() {
	seen := make(map[string]bool)
	c.plates = seen
	within := make(map[string]string)
	for _, p := range c.study.Plates {
		c.name(p, p.Name, "plate")
		c.insist(!seen[p.Name], p, "there are two plates named %s", p.Name)
		seen[p.Name] = true
		within[p.Name] = p.Within
	}
	sound := make(map[string]bool) // plates known to end in one that is within none
	for _, p := range c.study.Plates {
		c.insist(p.Within == "" || seen[p.Within], p, "the plate %s is within %s, which is no plate", p.Name, p.Within)
		way := make(map[string]bool)
		for at := p.Name; at != "" && !sound[at]; at = within[at] {
			if way[at] {
				c.insist(false, p, "the plate %s is within itself", at)
				break
			}
			way[at] = true
		}
		for name := range way {
			sound[name] = true
		}
	}
}

func (c *checker) name(part any, name, kind string) {
	switch {
	case name == "":
		c.insist(false, part, "a %s has no name", kind)
	case formula.Reserved(name):
		c.insist(false, part, "“%s” cannot name a %s: it has a meaning in formulas", name, kind)
	case !formula.IsName(name):
		c.insist(false, part, "“%s” cannot name a %s: a name is a letter followed by letters, digits and underscores", name, kind)
	case formula.Canonical(name) != name:
		c.insist(false, part, "“%s” cannot name a %s: Greek letters are kept in their typed form, %s", name, kind, formula.Canonical(name))
	}
}

func (c *checker) plateNames(part any, where string, plates []string) {
	for _, p := range plates {
		c.insist(c.plates[p], part, "%s names the plate %s, which does not exist", where, p)
	}
	p, twice := repeated(plates, itself)
	c.insist(!twice, part, "%s names the plate %s twice", where, p)
}

func (c *checker) checkLedger() {
	seen := make(map[string]bool, len(c.study.Variables))
	c.variables = seen
	for _, v := range c.study.Variables {
		c.name(v, v.ID, "variable")
		c.insist(!seen[v.ID], v, "there are two variables named %s", v.ID)
		seen[v.ID] = true
		c.insist(v.Scale == "" || slices.Contains(Scales[:], v.Scale), v, "%s has the scale “%s”, which this version does not know (%s)", v.ID, v.Scale, scaleWords())
		if v.Range != nil {
			c.insist(finite(v.Range.Low, v.Range.High) && v.Range.Low < v.Range.High, v, "the plausible range of %s must go from a lower to a higher number", v.ID)
		}
		l, twice := repeated(v.Levels, itself)
		c.insist(!twice, v, "%s has the level “%s” twice", v.ID, l)
		c.plateNames(v, v.ID, v.Plates)
		c.insist(v.Data == "" || c.tables[v.Data], v, "%s is bound to the data “%s”, which are not in the study", v.ID, v.Data)
		c.insist(finite(v.Divide) && v.Divide >= 0, v, "%s must be divided by a positive number", v.ID)
		c.insist(finite(v.Nudge) && v.Nudge >= 0, v, "%s must be nudged by a positive number", v.ID)
		c.insist(finite(v.Cost) && v.Cost >= 0, v, "measuring %s cannot cost less than nothing", v.ID)
	}
	for _, v := range c.study.Variables {
		c.insist(v.Records == "" || seen[v.Records], v, "%s is a record of %s, which is not among the variables", v.ID, v.Records)
		c.insist(v.Records != v.ID, v, "%s cannot be a record of itself", v.ID)
		c.insist(v.Answers == "" || seen[v.Answers], v, "%s says where %s is recorded, which is not among the variables", v.ID, v.Answers)
		c.insist(v.Answers != v.ID, v, "%s cannot say where it is recorded itself", v.ID)
	}
}

func scaleWords() string {
	words := make([]string, len(Scales))
	for i, s := range Scales {
		words[i] = string(s)
	}
	return strings.Join(words, ", ")
}

func finite(values ...float64) bool {
	for _, v := range values {
		if math.IsNaN(v) || math.IsInf(v, 0) {
			return false
		}
	}
	return true
}

func (c *checker) checkRivals() {
	seen := make(map[string]bool)
	for _, r := range c.study.Rivals {
		c.insist(r.Name != "", r, "a rival has no name")
		c.insist(!seen[r.Name], r, "there are two rivals named “%s”", r.Name)
		seen[r.Name] = true
		for id, p := range r.Layout.At {
			c.insist(finite(p.X, p.Y), r, "%s has no place on the sheet of “%s”", id, r.Name)
		}
		for _, n := range r.Layout.Notes {
			c.insist(strings.TrimSpace(n.Text) != "", n, "a note on the sheet of “%s” says nothing", r.Name)
			c.insist(finite(n.At.X, n.At.Y), n, "a note has no place on the sheet of “%s”", r.Name)
		}
		c.checkDiagram(r)
	}
}

func (c *checker) checkDiagram(r *Rival) {
	d := r.Diagram
	on := make(map[string]bool)
	for _, n := range d.Nodes {
		c.insist(c.variables[n.Variable], n, "the sheet of “%s” shows %s, which is not among the variables", r.Name, n.Variable)
		c.insist(!on[n.Variable], n, "the sheet of “%s” shows %s twice", r.Name, n.Variable)
		on[n.Variable] = true
		if n.Law != nil {
			c.checkLaw(n)
		}
	}
	ends := func(part any, what, a, b string) {
		for _, end := range [2]string{a, b} {
			c.insist(on[end], part, "%s %s: %s is not on the sheet of “%s”", what, joined(part, a, b), end, r.Name)
		}
		c.insist(a != b, part, "%s cannot join %s to itself", what, a)
	}
	drawn := make(map[[2]string]bool)
	for _, a := range d.Arrows {
		ends(a, "an arrow", a.From, a.To)
		c.insist(!drawn[[2]string{a.From, a.To}], a, "the arrow %s → %s is drawn twice in “%s”", a.From, a.To, r.Name)
		drawn[[2]string{a.From, a.To}] = true
		c.insist(a.Form == "" || slices.Contains(forms[:], a.Form), a, "“%s” is not a form this version knows (%s)", a.Form, strings.Join(forms[:], ", "))
		c.plateNames(a, fmt.Sprintf("the arrow %s → %s", a.From, a.To), a.VariesBy)
	}
	for _, a := range d.Arrows {
		for _, w := range a.With {
			c.insist(drawn[[2]string{w, a.To}] && w != a.From, a, "the arrow %s → %s is a product with %s, which is no other parent of %s", a.From, a.To, w, a.To)
		}
		w, twice := repeated(a.With, itself)
		c.insist(!twice, a, "the arrow %s → %s is a product with %s twice", a.From, a.To, w)
	}
	arcs := make(map[[2]string]bool)
	for _, a := range d.Arcs {
		ends(a, "an arc", a.A, a.B)
		pair := [2]string{min(a.A, a.B), max(a.A, a.B)}
		c.insist(!arcs[pair], a, "the arc %s ↔ %s is drawn twice in “%s”", a.A, a.B, r.Name)
		arcs[pair] = true
		c.plateNames(a, fmt.Sprintf("the arc %s ↔ %s", a.A, a.B), a.Plates)
	}
	absent := make(map[[2]string]bool)
	for _, a := range d.Absent {
		ends(a, "an absent arrow", a.From, a.To)
		c.insist(!absent[[2]string{a.From, a.To}], a, "the absent arrow %s → %s is argued twice in “%s”", a.From, a.To, r.Name)
		absent[[2]string{a.From, a.To}] = true
		c.insist(!drawn[[2]string{a.From, a.To}], a, "the arrow %s → %s is drawn in “%s” and argued to be absent", a.From, a.To, r.Name)
	}
	if c.fault == nil && cyclic(d) {
		a, cycle := closing(d)
		c.insist(false, a, "the arrows of “%s” close a cycle: %s", r.Name, strings.Join(cycle, " → "))
	}
}

func joined(part any, a, b string) string {
	if _, arc := part.(*Arc); arc {
		return a + " ↔ " + b
	}
	return a + " → " + b
}

// forms are the words of Arrow.Form.
var forms = [...]string{Slope, Log, Steps, OneWay, Threshold, Saturating, Offset}

func (c *checker) checkLaw(n *Node) {
	l := n.Law
	c.insist(l.Treat == "" || l.Treat == Given || l.Treat == Modelled || l.Treat == Imputed, n, "%s is to be treated as “%s”; what can be is given, modelled or imputed", n.Variable, l.Treat)
	c.plateNames(n, "the law of "+n.Variable, l.VariesBy)
	for _, a := range l.Arguments {
		c.insist(a.Name != "", n, "an argument in the law of %s has no name", n.Variable)
	}
	name, twice := repeated(l.Arguments, func(a Argument) string { return a.Name })
	c.insist(!twice, n, "the law of %s has the argument %s twice", n.Variable, name)
	for _, p := range l.Priors {
		c.insist(p.Parameter != "", n, "a prior in the law of %s is for no parameter", n.Variable)
	}
	name, twice = repeated(l.Priors, func(p Prior) string { return formula.Canonical(p.Parameter) })
	c.insist(!twice, n, "the law of %s has two priors for %s", n.Variable, name)
}

// cyclic takes variables without parents away until none is left; on a cycle
// that never happens (Kahn 1962).
func cyclic(d *Diagram) bool {
	parents := make(map[string]int, len(d.Nodes))
	children := make(map[string][]string, len(d.Nodes))
	for _, a := range d.Arrows {
		parents[a.To]++
		children[a.From] = append(children[a.From], a.To)
	}
	var free []string
	for _, n := range d.Nodes {
		if parents[n.Variable] == 0 {
			free = append(free, n.Variable)
		}
	}
	for i := 0; i < len(free); i++ {
		for _, child := range children[free[i]] {
			if parents[child]--; parents[child] == 0 {
				free = append(free, child)
			}
		}
	}
	return len(free) < len(d.Nodes)
}

// closing finds an arrow on a cycle, and the cycle's names with the first
// repeated last; nil if there is none.
func closing(d *Diagram) (*Arrow, []string) {
	for i, a := range d.Arrows {
		if way := walk(d.Arrows[:i], a.To, a.From); way != nil {
			return a, append(way, a.To)
		}
	}
	return nil, nil
}

// walk finds a shortest way along arrows between two variables, both ends
// included; nil if there is none.
func walk(arrows []*Arrow, from, to string) []string {
	children := make(map[string][]string, len(arrows))
	for _, a := range arrows {
		children[a.From] = append(children[a.From], a.To)
	}
	before := map[string]string{from: ""}
	for queue := []string{from}; len(queue) > 0; queue = queue[1:] {
		if queue[0] == to {
			var way []string
			for at := to; at != ""; at = before[at] {
				way = append(way, at)
			}
			slices.Reverse(way)
			return way
		}
		for _, next := range children[queue[0]] {
			if _, seen := before[next]; !seen {
				before[next] = queue[0]
				queue = append(queue, next)
			}
		}
	}
	return nil
}

func (c *checker) checkQuestion(q *Question) {
	known := func(what, id string) {
		c.insist(id == "" || c.variables[id], q, "the %s of a question is %s, which is not among the variables", what, id)
	}
	known("exposure", q.Exposure)
	known("outcome", q.Outcome)
	c.insist(q.Exposure == "" || q.Exposure != q.Outcome, q, "a question has %s as its exposure and its outcome", q.Exposure)
	h, twice := repeated(q.Held, itself)
	c.insist(!twice, q, "a question holds %s twice", h)
	for _, h := range q.Held {
		c.insist(c.variables[h] || c.plates[h], q, "a question holds %s, which is neither among the variables nor among the plates", h)
		c.insist(h != q.Exposure && h != q.Outcome, q, "a question holds %s, which is its exposure or outcome", h)
	}
	oneOf := func(what, word string, known ...string) {
		c.insist(word == "" || slices.Contains(known, word), q, "“%s” is not %s this version knows (%s)", word, what, strings.Join(known, ", "))
	}
	oneOf("an effect", q.Effect, TotalEffect, DirectEffect)
	oneOf("a population", q.Over, TheseRows, PopulationAlike)
	oneOf("a choice of groups", q.Groups, TheseGroups, NewGroups)
	oneOf("a way to weigh", q.Weigh, ByRows, ByGroups)
	oneOf("a way to compare", q.As, Difference, Ratio)
	for _, set := range [2]*Setting{q.From, q.To} {
		c.insist(set == nil || finite(set.Number), q, "a question compares values that are not numbers")
	}
	c.insist(finite(q.Shift), q, "a question shifts by something that is not a number")
	c.insist(q.Shift == 0 || q.From == nil && q.To == nil, q, "a question asks for a shift and for two values; only one of them can be meant")
	c.checkFixed(q)
	c.conditions(q, "a question", q.Where)
	c.insist(q.Level >= 0 && q.Level < 1, q, "the credible level of a question must lie between 0 and 1, as in 0.9")
}

func (c *checker) checkFixed(q *Question) {
	c.insist(q.Fixed == nil || q.Effect == DirectEffect, q, "a question fixes a variable, which only a %s effect does", DirectEffect)
	name, twice := repeated(q.Fixed, func(f Fix) string { return f.Variable })
	c.insist(!twice, q, "a question fixes %s twice", name)
	for _, f := range q.Fixed {
		c.insist(c.variables[f.Variable], q, "a question fixes %s, which is not among the variables", f.Variable)
		c.insist(f.Variable != q.Exposure && f.Variable != q.Outcome, q, "a question fixes %s, which is its exposure or outcome", f.Variable)
		c.insist(!slices.Contains(q.Held, f.Variable), q, "a question holds %s and fixes it; only one of them can be meant", f.Variable)
		c.insist(finite(f.At.Number), q, "a question fixes %s at something that is not a number", f.Variable)
	}
}

// checkConditions looks at row filters, which name variables and so are looked
// at when the ledger is known.
func (c *checker) checkConditions() {
	for _, d := range c.study.Data {
		c.conditions(d, "the row filter of “"+d.Name+"”", d.Keep)
	}
}

// conditions checks what one place (a question, a row filter) asks of rows.
// Whether the words are levels of the variable is for the model to say.
func (c *checker) conditions(part any, where string, conditions []Condition) {
	name, twice := repeated(conditions, func(c Condition) string { return c.Variable })
	c.insist(!twice, part, "%s has two conditions on %s", where, name)
	for _, one := range conditions {
		v := one.Variable
		c.insist(c.variables[v], part, "%s has a condition on %s, which is not among the variables", where, v)
		bounded := one.Low != nil || one.High != nil
		c.insist(bounded || len(one.Words) > 0, part, "%s has a condition on %s that asks for nothing: give words or bounds", where, v)
		c.insist(!bounded || len(one.Words) == 0, part, "%s asks for words and for bounds of %s; only one of them can be meant", where, v)
		for _, bound := range [2]*float64{one.Low, one.High} {
			c.insist(bound == nil || finite(*bound), part, "%s bounds %s by something that is not a number", where, v)
		}
		c.insist(one.Low == nil || one.High == nil || *one.Low <= *one.High, part, "%s asks for %s from a higher to a lower number", where, v)
		word, twice := repeated(one.Words, itself)
		c.insist(!twice, part, "%s asks for “%s” of %s twice", where, word, v)
	}
}

func (c *checker) checkDismissed() {
	seen := make(map[[2]string]bool)
	for _, d := range c.study.Dismissed {
		c.insist(c.study.Rival(d.Rival) != nil, d, "a finding is set aside for the rival “%s”, which does not exist", d.Rival)
		c.insist(strings.TrimSpace(d.Key) != "", d, "it is not said which finding is set aside")
		finding := [2]string{d.Rival, d.Key}
		c.insist(!seen[finding], d, "the finding “%s” on “%s” is set aside twice", d.Key, d.Rival)
		seen[finding] = true
	}
}
