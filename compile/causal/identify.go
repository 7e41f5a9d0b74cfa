package causal

import (
	"slices"

	"arrowroot/compile/graph"
)

// Identifiable reports whether the distribution of y under an intervention on
// x follows from the joint distribution of the measured variables, whatever
// the laws. The decision is complete (Tian & Pearl 2002; Shpitser & Pearl 2006;
// Huang & Valtorta 2006). An exposure or outcome that is not measured is not
// identified, unless nothing is drawn from x to y and y is measured.
func Identifiable(g *graph.Graph, x, y int) bool {
	return identifiable(g, []int{x}, []int{y})
}

// IdentifiableGiven reports whether the distribution of y under an intervention
// on x, among those with the given values of measured variables, follows from
// the measured variables (Shpitser & Pearl 2006, "Identification of conditional
// interventional distributions", algorithm IDC).
func IdentifiableGiven(g *graph.Graph, x, y int, given []int) bool {
	return identifiableGiven(g, []int{x}, []int{y}, given)
}

func identifiableGiven(g *graph.Graph, x, y, given []int) bool {
	can := available(g)
	for _, z := range given {
		if !can[z] {
			return false
		}
	}
	given = tidy(given)
	for _, z := range given {
		// Seeing z is as good as setting it if it is unrelated to y once the
		// arrows into x and out of z are cut.
		cut := g.Keep(func(from, to int) bool { return from != z && !slices.Contains(x, to) },
			func(a, b int) bool { return !slices.Contains(x, a) && !slices.Contains(x, b) })
		rest := minus(given, []int{z})
		if Separated(cut, []int{z}, y, union(rest, x)) {
			return identifiableGiven(g, union(x, []int{z}), y, rest)
		}
	}
	return identifiable(g, x, union(y, given))
}

func identifiable(g *graph.Graph, x, y []int) bool {
	if slices.Contains(g.Computed, true) {
		g = seenThrough(g, union(x, y))
	}
	p := Project(g)
	for _, v := range y {
		if p.At[v] < 0 {
			return false
		}
	}
	var exposures, outcomes []int
	above := g.Ancestors(y...)
	for _, v := range x {
		switch {
		case slices.Contains(y, v):
			return false
		case p.At[v] >= 0:
			exposures = append(exposures, p.At[v])
		case above[v]:
			return false
		}
	}
	for _, v := range y {
		outcomes = append(outcomes, p.At[v])
	}
	h := p.Graph
	exposed := mark(h.Len(), exposures)
	left := everything(h)
	for v := range left {
		left[v] = !exposed[v]
	}
	// Every district of what acts on the outcome once the exposures are gone
	// must follow from the district of the whole graph that holds it.
	wanted := ancestorsWithin(h, outcomes, left)
	done := make([]bool, h.Len())
	for v := range wanted {
		if !wanted[v] || done[v] {
			continue
		}
		part := district(h, v, wanted)
		for w := range part {
			done[w] = done[w] || part[w]
		}
		if !follows(h, part, district(h, v, everything(h))) {
			return false
		}
	}
	return true
}

// follows reports whether the factor of the district part can be computed from
// that of the district whole which holds it (Tian & Pearl 2003, "Identify").
func follows(g *graph.Graph, part, whole []bool) bool {
	for {
		above := ancestorsWithin(g, list(part), whole)
		if slices.Equal(above, part) {
			return true
		}
		if slices.Equal(above, whole) {
			return false
		}
		whole = district(g, list(part)[0], above)
	}
}

// ancestorsWithin marks what reaches the nodes by arrows inside a set.
func ancestorsWithin(g *graph.Graph, of []int, among []bool) []bool {
	inside := g.Keep(func(from, to int) bool { return among[from] && among[to] }, nil)
	above := inside.Ancestors(of...)
	for v := range above {
		above[v] = above[v] && among[v]
	}
	return above
}
