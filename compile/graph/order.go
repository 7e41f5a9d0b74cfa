package graph

import "container/heap"

// sort fills Order, or returns the names along a cycle. Of the nodes that can
// come next the first by place does.
func (g *Graph) sort() []string {
	n := g.Len()
	waiting := make([]int, n)
	var ready places
	for v := range n {
		if waiting[v] = len(g.Parents[v]); waiting[v] == 0 {
			ready = append(ready, v) // in order, so a heap already
		}
	}
	g.Order = make([]int, 0, n)
	for len(ready) > 0 {
		v := heap.Pop(&ready).(int)
		g.Order = append(g.Order, v)
		for _, c := range g.Children[v] {
			if waiting[c]--; waiting[c] == 0 {
				heap.Push(&ready, c)
			}
		}
	}
	if len(g.Order) == n {
		return nil
	}
	done := make([]bool, n)
	for _, v := range g.Order {
		done[v] = true
	}
	return g.cycle(done)
}

// places is a heap of nodes, the first by place on top.
type places []int

func (p places) Len() int           { return len(p) }
func (p places) Less(i, j int) bool { return p[i] < p[j] }
func (p places) Swap(i, j int)      { p[i], p[j] = p[j], p[i] }
func (p *places) Push(v any)        { *p = append(*p, v.(int)) }
func (p *places) Pop() any {
	last := len(*p) - 1
	v := (*p)[last]
	*p = (*p)[:last]
	return v
}

// cycle walks from parent to parent among the unsorted nodes until one repeats.
func (g *Graph) cycle(done []bool) []string {
	v := 0
	for done[v] {
		v++
	}
	at := make(map[int]int)
	var walk []int
	for {
		if first, seen := at[v]; seen {
			walk = append(walk[first:], v)
			break
		}
		at[v] = len(walk)
		walk = append(walk, v)
		for _, p := range g.Parents[v] {
			if !done[p] {
				v = p
				break
			}
		}
	}
	names := make([]string, len(walk))
	for i, w := range walk { // the walk goes against the arrows
		names[len(walk)-1-i] = g.Names[w]
	}
	return names
}
