package evidence

import (
	"fmt"
	"slices"

	"arrowroot/compile/causal"
)

// controls looks for negative controls of the question and the held set
// (Lipsitch, Tchetgen Tchetgen & Cohen 2010). A control outcome does not descend
// from the exposure, and goes together with it by the causes they share; a
// control exposure has no arrows to the outcome, and goes together with it
// likewise. Either must be unrelated to the end that it is held against once
// the held set is known (for a control exposure, the exposure too), if the
// arrows are right. What would stay related whatever is held checks nothing and
// is left out.
func (b *bench) controls() []Control {
	q := b.req.Question
	if q == nil {
		return nil
	}
	x, y := b.g.Index(q.Exposure), b.g.Index(q.Outcome)
	if x < 0 || y < 0 || x == y {
		return nil
	}
	held := b.held(x, y)
	below := b.g.Descendants(x)
	acts := b.g.Ancestors(y)
	var all []Control
	add := func(c Control) {
		if b.untestable(c.Independence) == "" {
			all = append(all, c)
		}
	}
	for v := range b.g.Len() {
		if v == x || v == y || b.data.of[v] == nil || b.g.Computed[v] || slices.Contains(held, v) || b.selected(v) {
			continue
		}
		if !below[v] && !b.apart(x, v, nil) && b.apart(x, v, held) {
			add(Control{
				Kind: ControlOutcome, Node: v, Finding: Finding{Independence: causal.Independence{A: []int{x}, B: []int{v}, Given: held}},
				Offer: fmt.Sprintf("%s cannot act on %s but shares causes with it, so %s can stand in for the outcome.", q.Exposure, b.g.Names[v], b.g.Names[v]),
			})
		}
		if with := union(held, []int{x}); !acts[v] && !below[v] && !b.apart(v, y, nil) && b.apart(v, y, with) {
			add(Control{
				Kind: ControlExposure, Node: v, Finding: Finding{Independence: causal.Independence{A: []int{v}, B: []int{y}, Given: with}},
				Offer: fmt.Sprintf("%s cannot act on %s but shares causes with it, so %s can stand in for the exposure.", b.g.Names[v], q.Outcome, b.g.Names[v]),
			})
		}
	}
	slices.SortStableFunc(all, func(a, c Control) int { return int(a.Kind) - int(c.Kind) })
	return all
}

// held is the set that controls check: the request's, the question's, or where
// nobody has said, the one that the reading would propose.
func (b *bench) held(x, y int) []int {
	names := b.req.Held
	if names == nil {
		names = b.req.Question.Held
	}
	var held []int
	for _, id := range names {
		if v := b.g.Index(id); v >= 0 && v != x && v != y && b.data.of[v] != nil {
			held = append(held, v)
		}
	}
	if names == nil {
		r := causal.Read(b.g, causal.Query{Exposure: x, Outcome: y, MaxPaths: 1, MaxSets: 20})
		if len(r.Sets) > 0 {
			held = r.Sets[max(r.Precise, 0)]
		}
	}
	return union(held, nil)
}

func (b *bench) apart(v, w int, given []int) bool {
	return causal.Separated(b.g, []int{v}, []int{w}, union(given, b.req.Selected))
}

// judgeControls gives controls their verdicts, adjusted among themselves.
func (b *bench) judgeControls(all []Control) []Control {
	found := make([]Finding, len(all))
	for i := range all {
		found[i] = all[i].Finding
	}
	b.judge(found)
	for i := range all {
		c := &all[i]
		c.Finding = found[i]
		a, other := b.g.Names[c.A[0]], b.g.Names[c.B[0]]
		holding := "With nothing held"
		if len(c.Given) > 0 {
			holding = "Holding " + b.list(c.Given)
		}
		c.Expected = fmt.Sprintf("%s, %s and %s should show no association if what is held is enough.", holding, a, other)
		c.Sentence = c.Offer + " " + c.Expected + " "
		switch c.Verdict {
		case Contradicted:
			c.Sentence += fmt.Sprintf("In these data they do (%s %s, %s %s to %s): what confounds them may confound %s and %s as well.",
				kindOf(c.Effect), number(c.Value), percent(b.req.Level), number(c.Low), number(c.High), b.req.Question.Exposure, b.req.Question.Outcome)
		case Holds:
			c.Sentence += fmt.Sprintf("In these data that %s.", c.Short)
		default:
			c.Sentence += b.shown(&c.Finding)
		}
	}
	return all
}
