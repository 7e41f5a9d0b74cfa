package fit

import (
	"fmt"
	"math"
	"slices"
	"strings"

	"arrowroot/compile/causal"
	"arrowroot/compile/formula"
	"arrowroot/compile/graph"
	"arrowroot/compile/model"
)

// Incomparable rivals cannot be scored against each other (SEMANTICS D1).
type Incomparable struct {
	Reasons []string // sentences
}

func (e *Incomparable) Error() string { return strings.Join(e.Reasons, " ") }

func (e *Incomparable) because(format string, args ...any) {
	reason := fmt.Sprintf(format, args...)
	if !slices.Contains(e.Reasons, reason) {
		e.Reasons = append(e.Reasons, reason)
	}
}

// orNil is the error, or nil where nothing stands in the way.
func (e *Incomparable) orNil() error {
	if len(e.Reasons) == 0 {
		return nil
	}
	return e
}

// A contender is a rival that is to be scored.
type contender struct {
	rival    string
	graph    *graph.Graph
	model    *model.Model
	outcome  int // in the model's variables
	law      *model.Law
	observed []int32  // entries of the outcome, by place
	reads    []string // what the outcome's law reads
}

// contend builds a rival's model and finds the outcome's law in it; nil with a
// reason added if there is none.
func contend(req *CompareRequest, rival string, no *Incomparable) (*contender, error) {
	if req.Study.Rival(rival) == nil {
		no.because("There is no rival %s.", rival)
		return nil, nil
	}
	c := &contender{rival: rival}
	var err error
	if c.graph, err = req.Study.Graph(rival); err != nil {
		no.because("The arrows of %s say nothing: %v.", rival, err)
		return nil, nil
	}
	var problems []model.Problem
	c.model, problems = model.Build(req.Study, rival, req.question(), req.Table, model.Full)
	problems, _ = model.Apart(problems)
	if c.model == nil || model.Stops(problems) {
		no.because("%s cannot be fitted: %s", rival, (&Blocked{problems}).Error())
		return nil, nil
	}
	id := req.question().Outcome
	c.outcome, _ = c.model.Name(id)
	for _, l := range c.model.Laws {
		if l.Variable == c.outcome {
			c.law = l
		}
	}
	switch {
	case c.outcome < 0:
		no.because("%s is not on the sheet of %s, which therefore predicts nothing of it.", id, rival)
		return nil, nil
	case c.model.Variables[c.outcome].Computed != nil:
		no.because("%s is computed in %s and has no law whose predictions could be scored; ask for a variable that it is computed from.", id, rival)
		return nil, nil
	case c.law == nil:
		no.because("%s has no law in %s, where it is given and not modelled.", id, rival)
		return nil, nil
	}
	v := c.model.Variables[c.outcome]
	for i := range v.Values {
		if !slices.Contains(v.Missing, int32(i)) {
			c.observed = append(c.observed, int32(i))
		}
	}
	for _, e := range slices.Concat(c.law.Predictors, c.law.Arguments) {
		if e == nil {
			continue
		}
		for _, name := range formula.Names(e) {
			at, _ := c.model.Name(name)
			if at < 0 {
				continue
			}
			if of := c.model.Variables[at].MeanOf; of != "" { // rows tell of their group
				name = of
			}
			if !slices.Contains(c.reads, name) && name != id {
				c.reads = append(c.reads, name)
			}
		}
	}
	return c, nil
}

// sameTask finds out whether all predict the same values from the same
// knowledge, and adds reasons where they do not.
func sameTask(req *CompareRequest, all []*contender, no *Incomparable) {
	first := all[0]
	id := req.question().Outcome
	for _, c := range all[1:] {
		a, b := first.model.Variables[first.outcome], c.model.Variables[c.outcome]
		switch {
		case req.Study.DataOf(first.rival) != req.Study.DataOf(c.rival):
			no.because("%s and %s are fitted to different data.", first.rival, c.rival)
		case !slices.Equal(first.model.Rows.Index, c.model.Rows.Index):
			no.because("%s uses %s and %s %s%s: scores of different rows cannot be compared. Leave the same rows out of both, or impute what is missing.",
				first.rival, plural(first.model.Rows.Used, "row"), c.rival, plural(c.model.Rows.Used, "row"), lostRows(first, c))
		case plateName(first.model, a.Plate) != plateName(c.model, b.Plate):
			no.because("%s has one value for each %s in %s and for each %s in %s.", id, plateName(first.model, a.Plate), first.rival, plateName(c.model, b.Plate), c.rival)
		case !slices.Equal(first.observed, c.observed):
			no.because("Different entries of %s count as recorded in %s and %s.", id, first.rival, c.rival)
		case !sameValues(a.Values, b.Values, first.observed):
			no.because("%s has other values in %s than in %s, since values at the end of its scale were moved inwards: scores on different scales cannot be compared.", id, first.rival, c.rival)
		case measure(first.law) != measure(c.law):
			no.because("The law of %s gives %s in %s and %s in %s: scores in different measures cannot be compared.", id, measure(first.law), first.rival, measure(c.law), c.rival)
		}
	}
	sameKnowledge(req, all, no)
}

// measure says what a law's score is made of.
func measure(l *model.Law) string {
	switch {
	case l.Family.Discrete:
		return "probabilities of whole values"
	case !l.Family.Masses:
		return "densities"
	}
	var given []string
	for i, a := range l.Family.Arguments {
		if a.Given && i < len(l.Arguments) && l.Arguments[i] != nil {
			given = append(given, a.Name+" "+formula.Format(l.Arguments[i]))
		}
	}
	if given == nil {
		return "densities and a probability of zero"
	}
	return "densities and probabilities beyond what was seen (" + strings.Join(given, ", ") + ")"
}

// sameKnowledge sees to it that every rival predicts from what all of them
// know: a law that leaves out what another reads is scored fairly only where
// its own arrows say that this tells nothing more of the outcome.
func sameKnowledge(req *CompareRequest, all []*contender, no *Incomparable) {
	id := req.question().Outcome
	var known []string
	of := make(map[string]string)
	for _, c := range all {
		for _, name := range c.reads {
			if of[name] == "" {
				of[name] = c.rival
				known = append(known, name)
			}
		}
	}
	for _, c := range all {
		var more, given []int
		var reader string
		for _, name := range known {
			v := c.graph.Index(name)
			switch {
			case slices.Contains(c.reads, name):
				if v >= 0 {
					given = append(given, v)
				}
			case v < 0:
				no.because("%s predicts %s from %s, which is not on the sheet of %s: put it there, with or without arrows, so that both know the same.", of[name], id, name, c.rival)
			default:
				more, reader = append(more, v), of[name]
			}
		}
		if len(more) == 0 {
			continue
		}
		q := req.question()
		fitted := causal.AsFitted(c.graph, c.graph.Index(q.Exposure), c.graph.Index(id))
		for _, w := range limitsOf(req.Study, c.rival, c.graph) {
			if !slices.Contains(given, w) && !slices.Contains(more, w) {
				given = append(given, w)
			}
		}
		if !causal.Separated(fitted, []int{c.graph.Index(id)}, more, given) {
			names := strings.Join(c.graph.NamesOf(more), " and ")
			no.because("%s predicts %s from %s, of which its law in %s knows nothing though the arrows there say that %s would tell more of it: they predict from different knowledge, and no scores are given.",
				reader, id, names, c.rival, names)
		}
	}
}

func sameValues(a, b []float64, at []int32) bool {
	if len(a) != len(b) {
		return false
	}
	for _, i := range at {
		if math.Float64bits(a[i]) != math.Float64bits(b[i]) {
			return false
		}
	}
	return true
}

// lostRows says which variables lost rows in one of two rivals alone.
func lostRows(a, b *contender) string {
	var parts []string
	for _, pair := range [][2]*contender{{a, b}, {b, a}} {
		for _, l := range pair[0].model.Rows.Lost {
			if !slices.Contains(pair[1].model.Rows.Lost, l) {
				parts = append(parts, fmt.Sprintf("%s lack %s in %s", plural(l.Rows, "row"), l.Variable, pair[0].rival))
			}
		}
	}
	if parts == nil {
		return ", others than those"
	}
	return " (" + strings.Join(parts, ", ") + ")"
}

func plateName(m *model.Model, plate int) string {
	if plate < 0 {
		return "row"
	}
	return m.Plates[plate].Name
}

func plural(n int, one string) string {
	if n == 1 {
		return "1 " + one
	}
	return fmt.Sprintf("%d %ss", n, one)
}

// A leaving says what is left out at once.
type leaving struct {
	plate string  // each unit is one of its levels; "" = an entry of the outcome
	of    []int32 // unit of each entry of the outcome, -1 = not recorded
	names []string
}

// leave decides what the rivals must predict without having seen it: groups,
// where the outcome varies by some in any rival, else one entry at a time
// (SEMANTICS D3).
func leave(req *CompareRequest, all []*contender, no *Incomparable) *leaving {
	first := all[0]
	out := &leaving{}
	var by *model.Plate
	for _, c := range all {
		varied := c.variedBy()
		if len(varied) == 0 || req.KnownGroups {
			continue
		}
		at := c.outer(varied)
		if at == nil {
			no.because("%s varies by %s in %s, none of which holds the others, so no group can be left out whole; ask how well new rows of known groups are predicted instead.",
				req.question().Outcome, strings.Join(varied, " and "), c.rival)
			return nil
		}
		if by != nil && by.Name != at.Name {
			no.because("%s varies by %s in one rival and by %s in %s: what is left out would differ.", req.question().Outcome, by.Name, at.Name, c.rival)
			return nil
		}
		by, first = at, c
	}
	v := first.model.Variables[first.outcome]
	out.of = slices.Repeat([]int32{-1}, len(v.Values))
	if by == nil {
		for _, i := range first.observed {
			out.of[i] = int32(len(out.names))
			out.names = append(out.names, first.entry(int(i)))
		}
		return out
	}
	out.plate = by.Name
	unit := make(map[int32]int32)
	level := by.Of
	if v.Plate >= 0 {
		level = nest(first.model.Plates[v.Plate], by)
	}
	for _, i := range first.observed {
		g := level[i]
		if _, seen := unit[g]; !seen {
			unit[g] = int32(len(out.names))
			out.names = append(out.names, by.Levels[g])
		}
		out.of[i] = unit[g]
	}
	return out
}

// entry names one entry of the outcome.
func (c *contender) entry(at int) string {
	if p := c.model.Variables[c.outcome].Plate; p >= 0 {
		return c.model.Plates[p].Levels[at]
	}
	return fmt.Sprintf("row %d", c.model.Rows.Index[at]+1)
}

// variedBy lists the plates by which something in the outcome's law varies.
func (c *contender) variedBy() []string {
	var out []string
	for _, e := range slices.Concat(c.law.Predictors, c.law.Arguments) {
		if e == nil {
			continue
		}
		for _, name := range formula.Names(e) {
			if _, p := c.model.Name(name); p >= 0 && c.model.Parameters[p].Shape == model.ByPlate {
				if plate := c.model.Plates[c.model.Parameters[p].Plate].Name; !slices.Contains(out, plate) {
					out = append(out, plate)
				}
			}
		}
	}
	return out
}

// outer is the outermost plate that holds all of the named ones; nil if none
// does.
func (c *contender) outer(names []string) *model.Plate {
	for _, at := range c.model.Outermost() {
		out := c.model.Plates[at]
		if !slices.ContainsFunc(c.model.Plates, func(p *model.Plate) bool {
			return slices.Contains(names, p.Name) && nest(p, out) == nil
		}) {
			return out
		}
	}
	return nil
}

// nest gives the level of the outer plate for each level of an inner one; nil
// if some level has rows in several.
func nest(inner, outer *model.Plate) []int32 {
	in := slices.Repeat([]int32{-1}, len(inner.Levels))
	for row, level := range inner.Of {
		if in[level] >= 0 && in[level] != outer.Of[row] {
			return nil
		}
		in[level] = outer.Of[row]
	}
	return in
}
