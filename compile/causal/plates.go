package causal

import (
	"fmt"
	"slices"

	"arrowroot/compile/graph"
)

// Groups says what comparing within the groups of one plate gives (SEMANTICS
// A6). Everything that lives at the plate's level or a coarser one, measured or
// not, is the same throughout a group and so closes every path on which it is
// no collider.
type Groups struct {
	Plate    int
	Sets     [][]int // minimal sets to hold besides; nil = none would do, [[]] = the plate is enough
	MoreSets bool
	Refused  string // why the plate cannot be held; "" = it can
}

// A PlateFault is a held plate that cannot be held.
type PlateFault struct {
	Plate  int
	Reason string
}

// coarser lists a plate and those in whose groups its own lie.
func coarser(g *graph.Graph, plate int) []int {
	all := []int{}
	for p := plate; p >= 0 && !slices.Contains(all, p); p = g.Plates[p].Within {
		all = append(all, p)
	}
	return all
}

// sameWithin reports whether what lives at a level is the same throughout every
// group of the plate. A level of several plates takes one that is finer than
// all of them.
func sameWithin(g *graph.Graph, level []int, plate int) bool {
	return len(level) > 0 && within(level, coarser(g, plate))
}

// sameNodes marks what is the same throughout every group of one of the
// plates: by its level, or because it is computed from nothing else.
func sameNodes(g *graph.Graph, plates []int) []bool {
	same := make([]bool, g.Len())
	for _, v := range g.Order {
		for _, p := range plates {
			same[v] = same[v] || sameWithin(g, g.Levels[v], p)
		}
		if !same[v] && g.Computed[v] && len(g.Parents[v]) > 0 {
			same[v] = !slices.ContainsFunc(g.Parents[v], func(p int) bool { return !same[p] })
		}
	}
	return same
}

// sameArc reports whether the cause behind arc i is the same throughout every
// group of one of the plates. A cause of what does not change within a group
// does not either.
func sameArc(g *graph.Graph, i int, plates []int, same []bool) bool {
	return same[g.Arcs[i][0]] || same[g.Arcs[i][1]] ||
		slices.ContainsFunc(plates, func(p int) bool { return sameWithin(g, g.ArcLevels[i], p) })
}

// Within is g as it is within the groups of plates: what is the same throughout
// a group acts on nothing there, and causes at that level join nothing. It
// supposes that nothing that changes within a group acts on what does not; then
// separation in it is separation given the groups.
func Within(g *graph.Graph, plates []int) *graph.Graph {
	same := sameNodes(g, plates)
	return rebuild(g, func(a [2]int) bool { return !same[a[0]] }, func(i int) bool { return !sameArc(g, i, plates, same) })
}

// rebuild is g with some of its arrows and arcs.
func rebuild(g *graph.Graph, arrow func([2]int) bool, arc func(i int) bool) *graph.Graph {
	spec := graph.Spec{Names: g.Names, Plates: g.Plates, Levels: g.Levels}
	for v := range g.Len() {
		if !g.Measured[v] {
			spec.Unmeasured = append(spec.Unmeasured, v)
		}
		if g.Computed[v] {
			spec.Computed = append(spec.Computed, v)
		}
	}
	for _, a := range g.Arrows {
		if arrow(a) {
			spec.Arrows = append(spec.Arrows, a)
		}
	}
	for i, a := range g.Arcs {
		if arc(i) {
			spec.Arcs = append(spec.Arcs, a)
			spec.ArcLevels = append(spec.ArcLevels, g.ArcLevels[i])
		}
	}
	out, err := graph.New(spec)
	if err != nil { // fewer arrows close no cycle
		panic(err)
	}
	return out
}

// refuse says why a plate cannot be held for a comparison; "" if it can.
func (c *comparison) refuse(plate int) string {
	g := c.g
	name := g.Plates[plate].Name
	same := sameNodes(g, []int{plate})
	for _, x := range c.x {
		if same[x] {
			return fmt.Sprintf("%s is the same throughout each %s, so that nothing is left to compare within it", g.Names[x], name)
		}
	}
	for _, y := range c.y {
		if same[y] {
			return fmt.Sprintf("%s is the same throughout each %s, so that nothing can change it within one", g.Names[y], name)
		}
	}
	for _, f := range c.whyForbidden() {
		if same[f.Node] {
			return fmt.Sprintf("that holds %s too, and %s", g.Names[f.Node], f.Reason)
		}
	}
	for _, a := range g.Arrows {
		if same[a[1]] && !same[a[0]] {
			return fmt.Sprintf("that holds %s too, on which %s acts, though %s changes within each %s", g.Names[a[1]], g.Names[a[0]], g.Names[a[0]], name)
		}
	}
	return ""
}

// closes reports whether anything lives at a plate's level.
func closes(g *graph.Graph, plate int) bool {
	same := sameNodes(g, []int{plate})
	for i := range g.Arcs {
		if sameArc(g, i, []int{plate}, same) {
			return true
		}
	}
	return slices.Contains(same, true)
}

// findGroups looks at every plate at whose level something lives.
func (r *Reading) findGroups(c *comparison) {
	g, q := r.Graph, r.Query
	for p := range g.Plates {
		if !closes(g, p) {
			continue
		}
		one := Groups{Plate: p, Refused: c.refuse(p)}
		if one.Refused == "" {
			one.Sets, one.MoreSets = r.withinGroups([]int{p}).minimal(nil, q.MaxSets)
			r.Identifiable = r.Identifiable || one.Sets != nil && g.Measured[q.Exposure] && g.Measured[q.Outcome]
		}
		r.Groups = append(r.Groups, one)
	}
}

// withinGroups is the comparison within the groups of plates. What does not
// change within them need not be held, and is not offered.
func (r *Reading) withinGroups(plates []int) *comparison {
	c := newComparison(Within(r.Graph, plates), []int{r.Query.Exposure}, []int{r.Query.Outcome})
	c.keep(r.Query.Selected)
	for v, same := range sameNodes(r.Graph, plates) {
		c.usable[v] = c.usable[v] && !same
	}
	return c
}

// compareWithin says what holding plates does for the reading: what those that
// are held have made of it, or that holding one would do where no set does.
func (r *Reading) compareWithin(c *comparison) {
	r.findGroups(c)
	if len(r.Query.Within) > 0 {
		r.readWithin(c)
		return
	}
	if !r.Effect || r.Verdict.Kind != NoSet {
		return
	}
	best := -1
	for i, one := range r.Groups {
		if one.Sets != nil && (best < 0 || len(one.Sets[0]) < len(r.Groups[best].Sets[0])) {
			best = i
		}
	}
	if best < 0 || !r.Graph.Measured[r.Query.Exposure] || !r.Graph.Measured[r.Query.Outcome] {
		return
	}
	r.proposeGroups(&r.Groups[best])
}

// proposeGroups offers a plate where no set of variables does.
func (r *Reading) proposeGroups(one *Groups) {
	g, q := r.Graph, r.Query
	plate := g.Plates[one.Plate].Name
	v := Verdict{Kind: Confounded, HasProposal: true, Propose: one.Sets[0], ProposeWithin: []int{one.Plate}}
	hold := plate
	if len(v.Propose) > 0 {
		hold = series(append([]string{plate}, g.NamesOf(v.Propose)...), "and")
	}
	v.Sentence = fmt.Sprintf("%s → %s is confounded along %s. Hold %s: compare within each %s.",
		g.Names[q.Exposure], g.Names[q.Outcome], r.openPaths(), hold, plate)
	v.Way = "No set of measured variables closes every back-door path"
	if why := r.whyNoSet(); why != "" {
		v.Way += ": " + why
	}
	v.Way += fmt.Sprintf("; what is the same throughout each %s cannot confound a comparison within it.", plate)
	r.Verdict = v
}

// readWithin reads the query within the groups of the held plates.
func (r *Reading) readWithin(c *comparison) {
	g, q := r.Graph, r.Query
	for _, p := range q.Within {
		if why := c.refuse(p); why != "" {
			r.PlateFaults = append(r.PlateFaults, PlateFault{Plate: p, Reason: why})
		}
	}
	r.closePaths()
	if len(r.PlateFaults) > 0 {
		f := r.PlateFaults[0]
		plate := g.Plates[f.Plate].Name
		r.HeldValid = false
		free := q
		free.Within = nil
		v := Read(g, free).Verdict // what to do without the plate
		r.Verdict = Verdict{
			Kind: OverHeld, Sentence: fmt.Sprintf("%s cannot be held: %s.", plate, f.Reason), Way: fmt.Sprintf("Leave %s free.", plate),
			HasProposal: v.HasProposal, Propose: v.Propose, ProposeWithin: v.ProposeWithin,
		}
		if !v.HasProposal && v.Kind == Readable {
			r.Verdict.HasProposal, r.Verdict.Propose = true, q.Held
		}
		return
	}
	same := list(sameNodes(g, q.Within))
	inner := q
	inner.Within, inner.Held = nil, minus(q.Held, same)
	in := Read(Within(g, q.Within), inner)
	r.HeldValid, r.HeldFaults = in.HeldValid, in.HeldFaults
	r.Verdict = in.Verdict
	if in.Verdict.HasProposal {
		r.Verdict.Propose, r.Verdict.ProposeWithin = minus(in.Verdict.Propose, same), q.Within
	}
	each := "each " + series(plateNames(g, q.Within), "and")
	switch {
	case !r.Effect:
	case in.Verdict.Kind == Readable:
		besides := ""
		if len(inner.Held) > 0 {
			besides = " and holding " + names(g, inner.Held)
		}
		r.Verdict.Sentence = fmt.Sprintf("%s → %s can be read from these data, comparing within %s%s, if the arrows drawn and not drawn are right.",
			g.Names[q.Exposure], g.Names[q.Outcome], each, besides)
	default:
		r.Verdict.Sentence = fmt.Sprintf("Within %s: %s", each, in.Verdict.Sentence)
	}
}

// closePaths judges the listed paths anew, given the groups of the held plates.
func (r *Reading) closePaths() {
	g, q := r.Graph, r.Query
	same := sameNodes(g, q.Within)
	plate := series(plateNames(g, q.Within), "and")
	s := newStatus(g, union(r.given(), list(same)))
	for i := range r.Paths {
		p := &r.Paths[i]
		s.judge(p)
		for j, stop := range p.ClosedAt {
			if same[stop.Node] && !slices.Contains(q.Held, stop.Node) {
				p.ClosedAt[j].Reason = fmt.Sprintf("%s is the same throughout each %s", g.Names[stop.Node], plate)
			}
		}
		for _, e := range p.Edges {
			if at := slices.IndexFunc(g.Arcs, func(a [2]int) bool { return a == [2]int{e.From, e.To} || a == [2]int{e.To, e.From} }); e.Arc && sameArc(g, at, q.Within, same) {
				p.ClosedAt = append(p.ClosedAt, Stop{Node: e.From, Role: Fork,
					Reason: fmt.Sprintf("what %s and %s share is the same throughout each %s", g.Names[e.From], g.Names[e.To], plate)})
			}
		}
		p.Open = len(p.ClosedAt) == 0
	}
}

func plateNames(g *graph.Graph, plates []int) []string {
	out := make([]string, len(plates))
	for i, p := range plates {
		out[i] = g.Plates[p].Name
	}
	return out
}

// Proposed is what the verdict proposes to hold, plates first, by name.
func (r *Reading) Proposed() []string {
	return append(plateNames(r.Graph, r.Verdict.ProposeWithin), r.Graph.NamesOf(r.Verdict.Propose)...)
}
