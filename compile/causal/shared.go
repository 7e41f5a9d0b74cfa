package causal

import (
	"slices"

	"arrowroot/compile/graph"
)

// A Shared law is what a fitted law carries besides for the sake of unmeasured
// causes that live at the level of a plate: they are the same for all rows of
// a group, so a baseline that varies by the plate and the means of what they
// act on take their place (SEMANTICS A6; Mundlak 1978).
type Shared struct {
	Node    int
	Carried []Carried // that the law of AsFitted's graph lacks, by node
	Plates  []SharedAt
}

// SharedAt is the part of one plate.
type SharedAt struct {
	Plate int
	Means []int // nodes whose means within the plate's groups enter
	For   []int // the unmeasured nodes behind it; -1 = an arc
}

// levelOf is the one plate at whose level something lives; -1 for the row and
// where several plates cross.
func levelOf(g *graph.Graph, level []int) int {
	for _, p := range level {
		if sameWithin(g, level, p) {
			return p
		}
	}
	return -1
}

// joinedAt gives the pairs of available nodes that unmeasured causes at a
// plate's own level join, smaller number first, with the causes.
func joinedAt(g *graph.Graph, plate int) map[[2]int][]int {
	own := rebuild(g, func([2]int) bool { return true }, func(i int) bool { return levelOf(g, g.ArcLevels[i]) == plate })
	pairs := make(map[[2]int][]int)
	for ends, causes := range Project(own).causes {
		for _, u := range causes {
			if u < 0 || levelOf(g, g.Levels[u]) == plate {
				pairs[ends] = append(pairs[ends], u)
			}
		}
	}
	return pairs
}

// closing lists the plates within whose groups the full model compares: those
// at whose level an unmeasured cause joins variables that change within them.
// Exposure and outcome must change within them too, and nothing that does may
// act on what does not; -1 asks nothing.
func closing(g *graph.Graph, exposure, outcome int) []int {
	var plates []int
	for p := range g.Plates {
		if !causes(g, p) {
			continue
		}
		same := sameNodes(g, []int{p})
		if exposure >= 0 && same[exposure] || outcome >= 0 && same[outcome] ||
			slices.ContainsFunc(g.Arrows, func(a [2]int) bool { return same[a[1]] && !same[a[0]] }) {
			continue
		}
		for ends := range joinedAt(g, p) {
			if !same[ends[0]] && !same[ends[1]] {
				plates = append(plates, p)
				break
			}
		}
	}
	return plates
}

// causes reports whether anything unmeasured lives at a plate's own level.
func causes(g *graph.Graph, plate int) bool {
	at := func(level []int) bool { return levelOf(g, level) == plate }
	if slices.ContainsFunc(g.ArcLevels, at) {
		return true
	}
	for v, measured := range g.Measured {
		if !measured && at(g.Levels[v]) {
			return true
		}
	}
	return false
}

// AsFitted is the graph of which the full model is a fit: where the model
// compares within the groups of a plate, what lives at its level counts as
// known and arcs at its level are gone. Carriers and cases of intervention are
// those of this graph; it is g itself where no plate closes anything.
func AsFitted(g *graph.Graph, exposure, outcome int) *graph.Graph {
	plates := closing(g, exposure, outcome)
	if len(plates) == 0 {
		return g
	}
	same := sameNodes(g, plates)
	fitted := rebuild(g, func([2]int) bool { return true }, func(i int) bool { return !sameArc(g, i, plates, same) })
	for v := range fitted.Measured {
		fitted.Measured[v] = fitted.Measured[v] || same[v]
	}
	return fitted
}

// SharedCarriers gives what the laws of AsFitted's graph carry at the level of
// plates, in fitting order; laws that carry nothing there are not listed.
func SharedCarriers(g *graph.Graph, exposure, outcome int) []Shared {
	plates := closing(g, exposure, outcome)
	if len(plates) == 0 {
		return nil
	}
	p := Project(g)
	joined := make([]map[[2]int][]int, len(plates))
	for i, plate := range plates {
		joined[i] = joinedAt(g, plate)
	}
	earlier := make([]bool, p.Graph.Len())
	var all []Shared
	for _, law := range CarriersFor(AsFitted(g, exposure, outcome), exposure, outcome) {
		at := p.At[law.Node]
		if at < 0 {
			continue
		}
		earlier[at] = true
		if g.Computed[law.Node] {
			continue
		}
		one := Shared{Node: law.Node}
		for _, q := range p.Graph.Parents[at] { // by way of an unmeasured node that counts as known
			one.carry(g, law, p.Node[q], p.through[[2]int{p.Node[q], law.Node}])
		}
		var members []int
		for _, m := range list(district(p.Graph, at, earlier)) {
			members = append(members, p.Node[m])
		}
		for i, plate := range plates {
			p.share(g, &one, law, members, plate, joined[i])
		}
		slices.SortFunc(one.Carried, func(a, b Carried) int { return a.Node - b.Node })
		if len(one.Carried)+len(one.Plates) > 0 {
			all = append(all, one)
		}
	}
	return all
}

// share adds what a law carries at the level of one plate, given the members
// of its district so far.
func (p *Projection) share(g *graph.Graph, one *Shared, law Fitted, members []int, plate int, joined map[[2]int][]int) {
	same := sameNodes(g, []int{plate})
	v := law.Node
	if same[v] {
		return
	}
	within, touching := []int{}, []int{}
	for ends, causes := range joined {
		if slices.Contains(members, ends[0]) && slices.Contains(members, ends[1]) {
			within = union(within, causes)
		}
		if ends[0] == v || ends[1] == v {
			touching = union(touching, causes)
		}
	}
	if len(within)+len(touching) == 0 {
		return
	}
	at := SharedAt{Plate: plate, Means: []int{}, For: union(within, touching)}
	if len(within) > 0 {
		enter := []int{}
		for _, c := range law.Carried {
			enter = append(enter, c.Node)
		}
		for _, m := range members {
			enter = append(enter, m)
			for _, q := range p.Graph.Parents[p.At[m]] {
				enter = append(enter, p.Node[q])
			}
		}
		for _, c := range tidy(enter) {
			switch {
			case c == v || p.At[c] < 0:
			case same[c]:
				one.carry(g, law, c, within)
			default:
				at.Means = append(at.Means, c)
			}
		}
	}
	one.Plates = append(one.Plates, at)
}

// carry adds a term that the law has not got yet.
func (s *Shared) carry(g *graph.Graph, law Fitted, node int, causes []int) {
	has := func(c Carried) bool { return c.Node == node }
	if g.HasArrow(node, law.Node) || slices.ContainsFunc(law.Carried, has) || slices.ContainsFunc(s.Carried, has) {
		return
	}
	s.Carried = append(s.Carried, Carried{Node: node, For: tidy(causes)})
}
