package causal

import (
	"iter"
	"slices"

	"arrowroot/compile/graph"
)

// Between gives the first proper paths from one of the exposures to one of the
// outcomes while some nodes are held, at most max (0 = 500): shortest first, and
// among equals by place of exposure, outcome and nodes. A proper path meets no
// other exposure. All says whether these are all.
func Between(g *graph.Graph, exposures, outcomes, held []int, max int) (list []Path, all bool) {
	max = limit(max, enoughPaths)
	left := pathBudget
	for p := range between(g, exposures, outcomes, held) {
		if len(list) == max || left.spent() {
			return list, false
		}
		left.spend(g, len(p.Edges))
		list = append(list, p)
	}
	return list, true
}

// between is as lazy as the list for one pair.
func between(g *graph.Graph, exposures, outcomes, held []int) iter.Seq[Path] {
	return func(yield func(Path) bool) {
		type source struct {
			next func() (*Path, bool)
			head *Path
		}
		var sources []*source
		for _, x := range exposures {
			proper := without(g, minus(tidy(exposures), []int{x}))
			for _, y := range outcomes {
				next, stop := iter.Pull(paths(proper, x, y))
				defer stop()
				if head, ok := next(); ok {
					sources = append(sources, &source{next, head})
				}
			}
		}
		s := newStatus(g, held)
		for len(sources) > 0 {
			at := 0
			for i, o := range sources {
				if len(o.head.Nodes) < len(sources[at].head.Nodes) {
					at = i
				}
			}
			from := sources[at]
			s.judge(from.head)
			if !yield(*from.head) {
				return
			}
			head, ok := from.next()
			if from.head = head; !ok {
				sources = slices.Delete(sources, at, at+1)
			}
		}
	}
}

// without is g with all edges of some nodes taken away.
func without(g *graph.Graph, nodes []int) *graph.Graph {
	if len(nodes) == 0 {
		return g
	}
	gone := mark(g.Len(), nodes)
	both := func(a, b int) bool { return !gone[a] && !gone[b] }
	return g.Keep(both, both)
}

const countSteps = 200_000 // edges tried before counting is given up

// CountPaths counts the proper paths between exposures and outcomes. It stops
// after so many steps as take some milliseconds; exact says whether it counted
// all of them, else there are at least n.
func CountPaths(g *graph.Graph, exposures, outcomes []int) (n int, exact bool) {
	budget := countSteps
	for _, x := range exposures {
		proper := without(g, minus(tidy(exposures), []int{x}))
		near := make([][]int, g.Len())
		for v := range near {
			near[v] = slices.Concat(proper.Children[v], proper.Parents[v], proper.Siblings[v])
		}
		for _, y := range outcomes {
			on := make([]bool, g.Len())
			var walk func(v int)
			walk = func(v int) {
				on[v] = true
				for _, w := range near[v] {
					if budget--; budget < 0 {
						break
					}
					switch {
					case w == y:
						n++
					case !on[w]:
						walk(w)
					}
				}
				on[v] = false
			}
			if x != y {
				walk(x)
			}
		}
	}
	return n, budget >= 0
}

// Role is what the i-th node of the path, an inner one, is on it.
func (p *Path) Role(i int) Role { return p.role(i) }
