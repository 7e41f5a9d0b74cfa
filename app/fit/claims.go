package fit

import (
	"fmt"
	"slices"
	"strings"

	"arrowroot/compile/causal"
	"arrowroot/compile/graph"
	"arrowroot/compile/study"
)

// claims are what the arrows allow to be said of a question's numbers.
type claims struct {
	identified bool
	none       bool     // no arrows lead from exposure to outcome, around what is fixed
	held       []string // nil = nothing was said and nothing could be proposed
	proposed   bool     // nobody said what to hold
	heldValid  bool     // the held number is an effect
	crudeValid bool     // so is the crude one
	why        string   // what stands in the way where it is not identified
	fullWhy    string   // why the full model says nothing of all rows though the held law does; "" = it does
	notes      []string
}

func direct(q *study.Question) bool { return q.Effect == study.DirectEffect }

// claimed reads the question's own kind of effect, for the rows it asks about
// among those that limits let into the data.
func claimed(g *graph.Graph, q *study.Question, limits []int) *claims {
	h := newHolding(g, q, limits)
	c := &claims{held: q.Held}
	var sets [][]int // valid for all rows, the best first
	if direct(q) {
		d := causal.ReadDirect(g, h.set[0], h.outcome, h.set[1:])
		c.none, c.identified, c.why = !d.Effect, d.Identification.Identified || !d.Effect, d.Sentence
		if sets = d.Adjustment.Sets; d.Adjustment.BestMinimal != nil {
			sets = append([][]int{d.Adjustment.BestMinimal}, sets...)
		}
		c.heldValid = h.valid(indices(g, q.Held))
	} else {
		r := Read(g, q, 1, 0)
		c.none, c.identified, c.why = !r.Effect, r.Identifiable || !r.Effect, strings.TrimSpace(r.Verdict.Sentence+" "+r.Verdict.Way)
		if sets = r.Sets; r.Precise >= 0 {
			sets = append([][]int{r.Sets[r.Precise]}, sets...)
		}
		c.heldValid = r.HeldValid
		c.crudeValid = causal.ValidAdjustment(g, h.set[0], h.outcome, nil) && h.unlike(nil) == nil
		if q.Held == nil && sets == nil && len(r.Verdict.ProposeWithin) > 0 {
			c.proposed, c.heldValid, c.held = true, true, r.Proposed()
		}
	}
	if set := h.propose(sets); q.Held == nil && set != nil {
		c.proposed, c.heldValid, c.held = true, true, []string{}
		for _, v := range set {
			c.held = append(c.held, g.Names[v])
		}
	}
	if why := h.bent(g); why != "" && !c.none {
		c.identified, c.heldValid, c.crudeValid, c.why = false, false, false, why
		return c
	}
	if unlike := h.unlike(indices(g, c.held)); c.heldValid && unlike != nil {
		c.heldValid = false
		names := strings.Join(g.NamesOf(unlike), " and ")
		c.notes = append(c.notes, fmt.Sprintf("the law that holds %s does not tell rows apart by %s, on which %s depends: hold %s as well for a held number of these rows",
			orNothing(c.held), names, q.Outcome, names))
	}
	return c
}

// A holding looks for what to hold when some variables are set and some rows
// are asked about.
type holding struct {
	graph   *graph.Graph // within the groups of the held plates
	outcome int
	set     []int // the exposure, and what is fixed
	where   []int // what the rows asked about are told by, the exposure left out
	limits  []int // what the rows in the data were chosen by
}

func newHolding(g *graph.Graph, q *study.Question, limits []int) *holding {
	h := &holding{graph: g, outcome: g.Index(q.Outcome), set: []int{g.Index(q.Exposure)}, limits: limits}
	var plates []int
	for _, id := range q.Held {
		if p := g.Plate(id); p >= 0 && g.Index(id) < 0 {
			plates = append(plates, p)
		}
	}
	if len(plates) > 0 {
		h.graph = causal.Within(g, plates)
	}
	for _, f := range q.Fixed {
		if v := g.Index(f.Variable); v >= 0 && direct(q) {
			h.set = append(h.set, v)
		}
	}
	for _, c := range q.Where {
		if v := g.Index(c.Variable); v >= 0 && c.Variable != q.Exposure {
			h.where = append(h.where, v)
		}
	}
	return h
}

// valid reports whether holding a set gives the joint effect of what is set.
func (h *holding) valid(held []int) bool {
	if slices.ContainsFunc(held, func(v int) bool { return slices.Contains(h.set, v) || v == h.outcome }) {
		return false
	}
	a := causal.Adjust(h.graph, causal.Aim{Exposures: h.set, Outcomes: []int{h.outcome}, Forced: held, MaxSets: 1})
	return len(a.Sets) > 0 && len(a.Sets[0]) == len(held)
}

// unlike gives what rows are chosen by that still tells something of the
// outcome once a set is held and the exposure is set: the rows asked about then
// differ from the others in a way that the held law does not know. Nil if
// nothing does.
func (h *holding) unlike(held []int) []int {
	cut := h.graph.Keep(func(_, to int) bool { return !slices.Contains(h.set, to) },
		func(a, b int) bool { return !slices.Contains(h.set, a) && !slices.Contains(h.set, b) })
	given := slices.Concat(held, h.set)
	var out []int
	for _, w := range h.where {
		if h.tells(cut, w, h.outcome, given) {
			out = append(out, w)
		}
	}
	for _, w := range h.limits { // these have bent the held law as well, if it does not know them
		if !slices.Contains(out, w) && (h.tells(cut, w, h.outcome, given) || h.tells(h.graph, w, h.outcome, given)) {
			out = append(out, w)
		}
	}
	return out
}

// propose takes the first of some valid sets, with what the rows are chosen by
// added where that is needed and does no harm.
func (h *holding) propose(sets [][]int) []int {
	for _, set := range sets {
		with := slices.Concat(set, h.unlike(set))
		if len(with) == len(set) || h.valid(with) && h.unlike(with) == nil {
			return append([]int{}, with...)
		}
	}
	if len(sets) > 0 {
		return append([]int{}, sets[0]...)
	}
	return nil
}

func indices(g *graph.Graph, ids []string) []int {
	var out []int
	for _, id := range ids {
		if v := g.Index(id); v >= 0 {
			out = append(out, v)
		}
	}
	return out
}

func orNothing(held []string) string {
	if len(held) == 0 {
		return "nothing"
	}
	return strings.Join(held, " and ")
}
