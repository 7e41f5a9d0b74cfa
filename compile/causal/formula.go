package causal

import (
	"fmt"
	"slices"
	"strings"

	"arrowroot/compile/graph"
)

// An Identification is the answer to whether a distribution of outcomes under
// an intervention follows from the measured variables, and by what formula.
type Identification struct {
	Graph                      *graph.Graph
	Exposures, Outcomes, Given []int

	Identified bool
	Estimand   Estimand // nil unless identified
	Anywhere   []int    // nodes in the estimand that may be fixed at any one value

	// The witness when it is not identified: all of Whole hangs together by
	// unmeasured causes, so does Part, an exposure is in Whole but not in Part,
	// and all of Whole acts on Part (Shpitser & Pearl 2006, ID line 5; it shows
	// where the algorithm stopped, no more: Shpitser 2023). Nil when the question
	// itself cannot be answered from data, as when an outcome is not measured.
	Whole, Part []int

	Sentence string
}

// Identify asks for the distribution of outcomes under an intervention on the
// exposures, among those with the given values of measured variables. It is
// complete: without computed variables, no formula exists where it finds none
// (Tian & Pearl 2003, "On the identification of causal effects"; Shpitser &
// Pearl 2006, algorithms ID and IDC; Huang & Valtorta 2006). Computed ones are
// taken for any function of their parents; of exposures that are computed only
// adjustment is looked at.
func Identify(g *graph.Graph, exposures, outcomes, given []int) *Identification {
	id := &Identification{Graph: g, Exposures: tidy(exposures), Outcomes: tidy(outcomes), Given: tidy(given)}
	if why := id.unanswerable(); why != "" {
		id.Sentence = fmt.Sprintf("%s cannot be had from these data: %s.", id.Query(), why)
		return id
	}
	var failed *stuck
	id.Estimand, failed = id.formula()
	if failed != nil {
		id.Whole, id.Part = failed.whole, failed.part
		id.Sentence = id.failure() + id.anyFunction()
		return id
	}
	id.Identified = true
	id.Anywhere = minus(Free(id.Estimand), union(id.Exposures, id.Outcomes, id.Given))
	id.Sentence = fmt.Sprintf("%s is identified: it is %s.", id.Query(), id.Words())
	return id
}

// A stuck search is where the algorithm found that it cannot go on.
type stuck struct{ whole, part []int }

func (id *Identification) unanswerable() string {
	g, can := id.Graph, available(id.Graph)
	above := g.Ancestors(slices.Concat(id.Outcomes, id.Given)...)
	if len(id.Exposures) == 0 || len(id.Outcomes) == 0 {
		return "it needs an exposure and an outcome"
	}
	for _, v := range slices.Concat(id.Exposures, id.Outcomes) {
		twice := slices.Contains(id.Outcomes, v) && slices.Contains(id.Exposures, v)
		if twice || slices.Contains(id.Given, v) {
			return g.Names[v] + " is in the question twice"
		}
	}
	for _, v := range slices.Concat(id.Outcomes, id.Given) {
		if !can[v] {
			return g.Names[v] + " was not measured"
		}
	}
	for _, v := range id.Exposures {
		if !can[v] && above[v] {
			return g.Names[v] + " was not measured"
		}
		if g.Computed[v] && id.byAdjustment() == nil {
			return fmt.Sprintf("%s is computed from %s, so they never show it apart", g.Names[v], names(g, g.Parents[v]))
		}
	}
	return ""
}

// byAdjustment is the formula of a computed exposure, whose parents tell its
// value, so that the algorithm has no positive distribution to start from.
func (id *Identification) byAdjustment() Estimand {
	if len(id.Given) > 0 {
		return nil
	}
	sets, _ := newComparison(id.Graph, id.Exposures, id.Outcomes).minimal(nil, 1)
	if len(sets) == 0 {
		return nil
	}
	outcome := Probability{id.Outcomes, union(id.Exposures, sets[0])}
	if len(sets[0]) == 0 {
		return outcome
	}
	return Sum{sets[0], product(outcome, Probability{Of: sets[0], Given: []int{}})}
}

func (id *Identification) formula() (Estimand, *stuck) {
	g, x, y, given := id.Graph, id.Exposures, id.Outcomes, id.Given
	if slices.ContainsFunc(x, func(v int) bool { return g.Computed[v] }) {
		return id.byAdjustment(), nil
	}
	if slices.Contains(g.Computed, true) {
		g = seenThrough(g, union(x, y, given))
	}
	// Seeing z is as good as setting it if it is unrelated to the outcomes once
	// the arrows into exposures and out of z are cut (IDC).
	for again := true; again; {
		again = false
		for _, z := range given {
			cut := g.Keep(func(from, to int) bool { return from != z && !slices.Contains(x, to) },
				func(a, b int) bool { return !slices.Contains(x, a) && !slices.Contains(x, b) })
			rest := minus(given, []int{z})
			if !g.Computed[z] && Separated(cut, []int{z}, y, union(rest, x)) {
				x, given, again = union(x, []int{z}), rest, true
				break
			}
		}
	}
	joint, failed := unconditional(g, x, union(y, given))
	if failed != nil {
		if slices.Contains(id.Graph.Computed, true) { // holding what is computed may do what no algorithm for general laws can
			if e := id.byAdjustment(); e != nil {
				return e, nil
			}
		}
		return nil, failed
	}
	if len(given) > 0 {
		joint = quotient(joint, sum(y, joint))
	}
	return joint, nil
}

// seenThrough is g with every computed node that is not kept replaced by what it
// is computed from. Such a node never varies apart from these, so a formula that
// takes it for a variable of its own would ask for what no data show.
func seenThrough(g *graph.Graph, kept []int) *graph.Graph {
	spec := graph.Spec{Names: g.Names, Arcs: g.Arcs}
	stands := make([][]int, g.Len()) // the nodes that stand for a node
	for _, v := range g.Order {
		if !g.Measured[v] {
			spec.Unmeasured = append(spec.Unmeasured, v)
		}
		var parents []int
		for _, p := range g.Parents[v] {
			parents = append(parents, stands[p]...)
		}
		stands[v] = []int{v}
		if g.Computed[v] && len(g.Siblings[v]) == 0 && !slices.Contains(kept, v) {
			stands[v] = tidy(parents)
			continue
		}
		if g.Computed[v] {
			spec.Computed = append(spec.Computed, v)
		}
		for _, p := range parents {
			spec.Arrows = append(spec.Arrows, [2]int{p, v})
		}
	}
	through, err := graph.New(spec)
	if err != nil { // shorter ways along the same arrows
		panic(err)
	}
	return through
}

// unconditional finds P(y | do x) district by district.
func unconditional(g *graph.Graph, x, y []int) (Estimand, *stuck) {
	p := Project(g)
	above := p.Graph.Ancestors(p.at(y)...) // the rest says nothing about y
	s := &formulaSearch{p: p, h: p.Graph, above: above}
	exposed := mark(p.Graph.Len(), p.at(x))
	left := make([]bool, p.Graph.Len())
	for v := range left {
		left[v] = above[v] && !exposed[v]
	}
	wanted := ancestorsWithin(p.Graph, p.at(y), left)
	done := make([]bool, p.Graph.Len())
	var parts []Estimand
	var failed *stuck
	for _, v := range p.Graph.Order {
		if !wanted[v] || done[v] {
			continue
		}
		part := district(p.Graph, v, wanted)
		for w := range part {
			done[w] = done[w] || part[w]
		}
		whole := district(p.Graph, v, above)
		factor, stop := s.follow(part, whole, s.chain(whole))
		if stop != nil { // later ones are nearer to the outcome and say more to the user
			failed = stop
			continue
		}
		parts = append(parts, factor)
	}
	if failed != nil {
		return nil, failed
	}
	return sum(minus(p.node(list(wanted)), y), product(parts...)), nil
}

// at gives the projected numbers of nodes, those that are gone left out.
func (p *Projection) at(nodes []int) []int {
	all := []int{}
	for _, v := range nodes {
		if p.At[v] >= 0 {
			all = append(all, p.At[v])
		}
	}
	return tidy(all)
}

// node gives the original numbers of projected nodes.
func (p *Projection) node(at []int) []int {
	all := make([]int, len(at))
	for i, v := range at {
		all[i] = p.Node[v]
	}
	return tidy(all)
}

type formulaSearch struct {
	p     *Projection
	h     *graph.Graph
	above []bool // the nodes in play
}

// chain is the factor of a district of the nodes in play: each member given
// what shields it from all earlier nodes (Tian & Pearl 2002, lemma 1).
func (s *formulaSearch) chain(whole []bool) Estimand {
	var parts []Estimand
	earlier := make([]bool, s.h.Len())
	for _, v := range s.h.Order {
		if !s.above[v] {
			continue
		}
		earlier[v] = true
		if whole[v] {
			parts = append(parts, Probability{Of: s.p.node([]int{v}), Given: s.p.node(shield(s.h, v, earlier))})
		}
	}
	return product(parts...)
}

// shield is the district of v within a set, and the parents of its members,
// all but v: given these, v is independent of the rest of an ancestral set in
// which nothing descends from v (Richardson 2003).
func shield(h *graph.Graph, v int, within []bool) []int {
	around := []int{}
	for _, w := range list(district(h, v, within)) {
		around = append(append(around, w), h.Parents[w]...)
	}
	return minus(tidy(around), []int{v})
}

// follow computes the factor of the district part from that of whole, which
// holds it (Tian & Pearl 2003, "Identify").
func (s *formulaSearch) follow(part, whole []bool, factor Estimand) (Estimand, *stuck) {
	for {
		above := ancestorsWithin(s.h, list(part), whole)
		if slices.Equal(above, whole) && !slices.Equal(above, part) {
			return nil, &stuck{s.p.node(list(whole)), s.p.node(list(part))}
		}
		factor = sum(minus(s.p.node(list(whole)), s.p.node(list(above))), factor)
		if slices.Equal(above, part) {
			return factor, nil
		}
		whole = district(s.h, list(part)[0], above)
		factor = s.within(whole, above, factor)
	}
}

// within is the factor of one district of a set, from the factor of the set
// (Tian & Pearl 2002, lemma 4).
func (s *formulaSearch) within(part, set []bool, factor Estimand) Estimand {
	var later []int
	var parts []Estimand
	for _, v := range slices.Backward(s.h.Order) {
		if !set[v] {
			continue
		}
		upTo := sum(s.p.node(later), factor)
		later = append(later, v)
		if part[v] {
			parts = append(parts, quotient(upTo, sum(s.p.node(later), factor)))
		}
	}
	slices.Reverse(parts)
	return product(parts...)
}

// Query writes what is asked: "P(bees | do(hedge), soil)".
func (id *Identification) Query() string {
	list := func(nodes []int) string { return strings.Join(id.Graph.NamesOf(nodes), ", ") }
	text := "P(" + list(id.Outcomes) + " | do(" + list(id.Exposures) + ")"
	if len(id.Given) > 0 {
		text += ", " + list(id.Given)
	}
	return text + ")"
}

// scope counts a value for each node that has one outside the estimand.
func (id *Identification) scope() map[int]int {
	return deeper(nil, union(id.Exposures, id.Outcomes, id.Given, id.Anywhere))
}

// Symbols writes the estimand: "∑{soil} [P(bees | hedge, soil) P(soil)]". A
// primed variable is summed over apart from its value in the question. It is
// empty if there is none.
func (id *Identification) Symbols() string {
	if id.Estimand == nil {
		return ""
	}
	return symbols(id.Graph, id.Estimand, id.scope())
}

// Words says the estimand in words; empty if there is none.
func (id *Identification) Words() string {
	if id.Estimand == nil {
		return ""
	}
	text := words(id.Graph, id.Estimand, id.scope())
	if len(id.Anywhere) > 0 {
		text += fmt.Sprintf(", with %s at any one value", names(id.Graph, id.Anywhere))
	}
	return text
}

func (id *Identification) failure() string {
	g := id.Graph
	exposed := minus(id.Whole, id.Part)
	var hidden []int
	for _, c := range Project(g).causesAmong(id.Whole) {
		if c >= 0 {
			hidden = append(hidden, c)
		}
	}
	by := "unmeasured causes tie"
	if len(hidden) > 0 {
		by = fmt.Sprintf("%s, unmeasured, %s", names(g, tidy(hidden)), ties(len(tidy(hidden))))
	}
	return fmt.Sprintf("%s is not identified: %s %s together, and no data show how %s would behave if %s were set rather than seen.",
		id.Query(), by, names(g, id.Whole), names(g, id.Part), names(g, exposed))
}

// anyFunction says what the failure supposes of computed variables; "" = nothing.
func (id *Identification) anyFunction() string {
	var computed []int
	for v, above := range id.Graph.Ancestors(id.Outcomes...) {
		if above && id.Graph.Computed[v] {
			computed = append(computed, v)
		}
	}
	if len(computed) == 0 {
		return ""
	}
	return fmt.Sprintf(" That takes %s for any function of what acts there; whether the one that was typed shows more was not looked at.", names(id.Graph, computed))
}

func ties(n int) string {
	if n == 1 {
		return "ties"
	}
	return "tie"
}

// causesAmong lists what lies behind the arcs among some original nodes.
func (p *Projection) causesAmong(nodes []int) []int {
	var all []int
	for ends, causes := range p.causes {
		if slices.Contains(nodes, ends[0]) && slices.Contains(nodes, ends[1]) {
			all = append(all, causes...)
		}
	}
	return tidy(all)
}
