package causal

import "arrowroot/compile/graph"

// A budget bounds a search by the nodes and lines that it looks at and not by
// the clock, so that the same diagram gets the same answer anywhere.
type budget int

// searchBudget lasts for about a tenth of a second.
const searchBudget budget = 6_000_000

// spend takes off as many searches through a graph; false when nothing is left.
func (b *budget) spend(g *graph.Graph, searches int) bool {
	*b -= budget(searches * (g.Len() + len(g.Arrows) + len(g.Arcs)))
	return *b > 0
}

func (b budget) spent() bool { return b <= 0 }
