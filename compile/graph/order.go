package graph

// sort fills Order, or returns the names along a cycle.
func (g *Graph) sort() []string {
	n := g.Len()
	waiting := make([]int, n)
	for v := range n {
		waiting[v] = len(g.Parents[v])
	}
	done := make([]bool, n)
	for len(g.Order) < n {
		next := -1
		for v := range n {
			if !done[v] && waiting[v] == 0 {
				next = v
				break
			}
		}
		if next < 0 {
			return g.cycle(done)
		}
		done[next] = true
		g.Order = append(g.Order, next)
		for _, c := range g.Children[next] {
			waiting[c]--
		}
	}
	return nil
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
