package causal

import (
	"slices"

	"arrowroot/compile/graph"
)

// A Projection is a graph over the available variables alone (Verma & Pearl
// 1990): an arrow where arrows lead from one to the other through unavailable
// nodes only, an arc where an unavailable cause reaches both through
// unavailable nodes only.
type Projection struct {
	Graph *graph.Graph
	Node  []int // the original number of a projected node
	At    []int // the projected number of an original node, -1 if it is gone

	causes  map[[2]int][]int // by arc, smaller original end first: original unmeasured nodes, -1 = an arc
	through map[[2]int][]int // by arrow, original ends: the unmeasured nodes it leads through
}

// Project gives the projection of g onto the variables that can be had as data.
func Project(g *graph.Graph) *Projection {
	n := g.Len()
	p := &Projection{At: make([]int, n), causes: map[[2]int][]int{}, through: map[[2]int][]int{}}
	can := available(g)
	for v := range n {
		p.At[v] = -1
		if can[v] {
			p.At[v] = len(p.Node)
			p.Node = append(p.Node, v)
		}
	}
	spec := graph.Spec{}
	for i, v := range p.Node {
		spec.Names = append(spec.Names, g.Names[v])
		if g.Computed[v] {
			spec.Computed = append(spec.Computed, i)
		}
	}

	// shows[v] are the available nodes that v acts on through unavailable
	// ones alone; of an available node, itself.
	shows := make([][]int, n)
	for _, v := range slices.Backward(g.Order) {
		if can[v] {
			shows[v] = []int{v}
			continue
		}
		for _, c := range g.Children[v] {
			shows[v] = union(shows[v], shows[c])
		}
	}

	for _, v := range p.Node {
		for _, c := range g.Children[v] {
			for _, w := range shows[c] {
				spec.Arrows = append(spec.Arrows, [2]int{p.At[v], p.At[w]})
				if !g.HasArrow(v, w) {
					if _, known := p.through[[2]int{v, w}]; !known {
						p.through[[2]int{v, w}] = hiddenWay(g, can, v, w)
					}
				}
			}
		}
	}

	join := func(a, b, cause int) {
		if a == b {
			return
		}
		ends := [2]int{min(a, b), max(a, b)}
		if _, known := p.causes[ends]; !known {
			spec.Arcs = append(spec.Arcs, [2]int{p.At[ends[0]], p.At[ends[1]]})
		}
		if !slices.Contains(p.causes[ends], cause) {
			p.causes[ends] = append(p.causes[ends], cause)
		}
	}
	for v := range n { // a cause joins what it shows by two different children
		if can[v] {
			continue
		}
		for i, c := range g.Children[v] {
			for _, d := range g.Children[v][:i] {
				for _, a := range shows[c] {
					for _, b := range shows[d] {
						join(a, b, v)
					}
				}
			}
		}
	}
	for _, ends := range g.Arcs {
		for _, a := range shows[ends[0]] {
			for _, b := range shows[ends[1]] {
				join(a, b, -1)
			}
		}
	}

	projected, err := graph.New(spec)
	if err != nil { // a projection of an acyclic graph is acyclic
		panic(err)
	}
	p.Graph = projected
	return p
}

// hiddenWay lists the unavailable nodes on a shortest way from a to b that
// leads through such nodes alone.
func hiddenWay(g *graph.Graph, can []bool, a, b int) []int {
	from := map[int]int{a: a}
	for queue := []int{a}; len(queue) > 0; queue = queue[1:] {
		v := queue[0]
		for _, c := range g.Children[v] {
			if _, seen := from[c]; seen {
				continue
			}
			from[c] = v
			if c == b {
				var way []int
				for u := v; u != a; u = from[u] {
					way = append(way, u)
				}
				slices.Sort(way)
				return way
			}
			if !can[c] {
				queue = append(queue, c)
			}
		}
	}
	return nil
}

// district marks the nodes that arcs join to v without leaving among.
func district(g *graph.Graph, v int, among []bool) []bool {
	in := make([]bool, g.Len())
	if !among[v] {
		return in
	}
	in[v] = true
	for stack := []int{v}; len(stack) > 0; {
		u := stack[len(stack)-1]
		stack = stack[:len(stack)-1]
		for _, s := range g.Siblings[u] {
			if among[s] && !in[s] {
				in[s] = true
				stack = append(stack, s)
			}
		}
	}
	return in
}

// Districts groups the available variables of g that arcs join in the
// projection (Tian & Pearl 2002), by their first member.
func Districts(g *graph.Graph) [][]int {
	p := Project(g)
	all := everything(p.Graph)
	done := make([]bool, p.Graph.Len())
	var districts [][]int
	for v := range done {
		if done[v] {
			continue
		}
		var members []int
		for _, w := range list(district(p.Graph, v, all)) {
			done[w] = true
			members = append(members, p.Node[w])
		}
		districts = append(districts, members)
	}
	return districts
}

func everything(g *graph.Graph) []bool {
	all := make([]bool, g.Len())
	for v := range all {
		all[v] = true
	}
	return all
}
