package causal

import (
	"slices"

	"arrowroot/compile/graph"
)

// A Fitted law conditions on the drawn measured parents and on what is carried.
type Fitted struct {
	Node    int
	Parents []int     // drawn and measured
	Carried []Carried // by node
}

// Carried is a term that enters a fitted law for the sake of what was left out.
type Carried struct {
	Node int
	For  []int // the unmeasured nodes that call for it; -1 = an arc
}

// Carriers gives the law that must be fitted for every available variable once
// unmeasured ones are left out, in fitting order: along the arrows, the
// exposure as late as they allow (SEMANTICS A1). Conditioned on its carriers a
// variable is independent of all earlier ones (Tian & Pearl 2002; Richardson
// 2003). A computed variable has no fitted law; it is listed with its parents
// alone. An exposure of -1 leaves the order to the arrows.
func Carriers(g *graph.Graph, exposure int) []Fitted { return CarriersFor(g, exposure, -1) }

// CarriersFor is Carriers with the ancestors of the outcome before all other
// variables, so that no law of theirs conditions on what rule B2 leaves away
// before it simulates. An outcome of -1 puts nothing first.
func CarriersFor(g *graph.Graph, exposure, outcome int) []Fitted {
	p := Project(g)
	var laws []Fitted
	earlier := make([]bool, p.Graph.Len())
	for _, v := range p.order(exposure, outcome) {
		earlier[v] = true
		laws = append(laws, p.law(g, v, earlier))
	}
	return laws
}

// order is a topological order of the projection: what acts on the outcome
// before the rest, and in each part what descends from the exposure last.
func (p *Projection) order(exposure, outcome int) []int {
	h := p.Graph
	below := make([]bool, h.Len())
	x := -1
	if exposure >= 0 && p.At[exposure] >= 0 {
		x = p.At[exposure]
		below = h.Descendants(x)
	}
	above := everything(h)
	if outcome >= 0 && p.At[outcome] >= 0 {
		above = h.Ancestors(p.At[outcome])
	}
	rank := func(v int) int {
		r := 0
		if v == x {
			r = 1
		} else if below[v] {
			r = 2
		}
		if !above[v] {
			r += 3
		}
		return r
	}
	order := slices.Clone(h.Order)
	slices.SortStableFunc(order, func(a, b int) int { return rank(a) - rank(b) })
	return order
}

// law finds the carriers of v among itself and earlier nodes (marked, v too),
// and for each which unmeasured causes call for it.
func (p *Projection) law(g *graph.Graph, v int, earlier []bool) Fitted {
	h, node := p.Graph, p.Node
	law := Fitted{Node: node[v], Parents: []int{}}
	for _, q := range h.Parents[v] {
		if g.HasArrow(node[q], node[v]) {
			law.Parents = append(law.Parents, node[q])
		}
	}
	if h.Computed[v] {
		return law
	}
	// Walk the district from v, nearest first; why[m] are the causes met.
	why := map[int][]int{v: nil}
	called := map[int][]int{}
	call := func(c int, causes []int) {
		if _, known := called[c]; !known && c != v && !slices.Contains(law.Parents, node[c]) {
			called[c] = tidy(causes)
		}
	}
	for queue := []int{v}; len(queue) > 0; queue = queue[1:] {
		m := queue[0]
		call(m, why[m])
		for _, q := range h.Parents[m] {
			call(q, slices.Concat(why[m], p.through[[2]int{node[q], node[m]}]))
		}
		for _, s := range h.Siblings[m] {
			if _, seen := why[s]; !seen && earlier[s] {
				ends := [2]int{min(node[m], node[s]), max(node[m], node[s])}
				why[s] = slices.Concat(why[m], p.causes[ends])
				queue = append(queue, s)
			}
		}
	}
	for c, causes := range called {
		law.Carried = append(law.Carried, Carried{Node: node[c], For: causes})
	}
	slices.SortFunc(law.Carried, func(a, b Carried) int { return a.Node - b.Node })
	return law
}
