package causal

import "slices"

const (
	surplus  = 40   // so many times the sets asked for are found before the smallest are kept
	attempts = 4000 // subsets tried when computed nodes are about
)

// minimal lists the minimal valid sets that contain forced, smallest first.
//
// They are the minimal vertex separators of exposure and outcome in the moral
// graph of the ancestors of exposure, outcome and forced nodes (Lauritzen et
// al. 1990; van der Zander, Liśkiewicz & Textor 2019), after the forced nodes
// are taken away and every node that may not be held is contracted into a
// clique of its neighbours.
func (c *comparison) minimal(forced []int, max int) (sets [][]int, more bool) {
	forced = tidy(forced)
	for _, v := range forced {
		if !c.usable[v] {
			return nil, false
		}
	}
	m := c.moral(forced)
	for z := range m.separators {
		if len(sets) == surplus*max {
			more = true
			break
		}
		if z = union(z, forced); c.valid(z) {
			sets = append(sets, z)
		}
	}
	if slices.Contains(c.g.Computed, true) {
		tried, all := c.byTrial(forced, attempts)
		sets = smallest(append(sets, tried...))
		more = more || !all
	}
	sortSets(c.g, sets)
	if len(sets) > max {
		return sets[:max], true
	}
	return sets, more
}

// byTrial goes through the subsets by size. Separators of the moral graph are
// valid when computed nodes are about, but holding what a node is computed
// from closes paths that the moral graph does not see closed.
func (c *comparison) byTrial(forced []int, budget int) (sets [][]int, all bool) {
	above := c.g.Ancestors(slices.Concat(c.x, c.y, forced)...)
	var candidates []int
	for v := range above {
		if above[v] && c.usable[v] && !slices.Contains(forced, v) {
			candidates = append(candidates, v)
		}
	}
	all = true
	var try func(chosen []int, from, left int) bool
	try = func(chosen []int, from, left int) bool {
		if left == 0 {
			for _, s := range sets {
				if within(s, chosen) {
					return true
				}
			}
			if budget--; budget < 0 {
				all = false
				return false
			}
			if z := union(chosen, forced); c.valid(z) {
				sets = append(sets, z)
			}
			return true
		}
		for i := from; i+left <= len(candidates); i++ {
			if !try(append(slices.Clone(chosen), candidates[i]), i+1, left-1) {
				return false
			}
		}
		return true
	}
	for size := 0; size <= len(candidates) && try(nil, 0, size); size++ {
	}
	return sets, all
}

// smallest drops every set that contains another.
func smallest(sets [][]int) [][]int {
	slices.SortStableFunc(sets, func(a, b []int) int { return len(a) - len(b) })
	var kept [][]int
	for _, s := range sets {
		if !slices.ContainsFunc(kept, func(k []int) bool { return within(k, s) }) {
			kept = append(kept, s)
		}
	}
	return kept
}

// An undirected graph with two poles, the last two nodes.
type undirected struct {
	near [][]bool
	on   []bool
	a, b int
}

func (c *comparison) moral(forced []int) *undirected {
	g := c.backDoor
	n, arcs := g.Len(), len(g.Arcs)
	u := &undirected{a: n + arcs, b: n + arcs + 1, on: make([]bool, n+arcs+2)}
	u.near = make([][]bool, n+arcs+2)
	for i := range u.near {
		u.near[i] = make([]bool, n+arcs+2)
	}
	family := make([][]int, n) // a node and its parents, the causes behind arcs among them
	above := g.Ancestors(slices.Concat(c.x, c.y, forced)...)
	for v := range n {
		if above[v] {
			u.on[v] = true
			family[v] = append(slices.Clone(g.Parents[v]), v)
		}
	}
	for i, arc := range g.Arcs {
		if above[arc[0]] && above[arc[1]] {
			u.on[n+i] = true
			family[arc[0]] = append(family[arc[0]], n+i)
			family[arc[1]] = append(family[arc[1]], n+i)
		}
	}
	for _, f := range family {
		u.clique(f)
	}
	u.on[u.a], u.on[u.b] = true, true
	for _, v := range c.x {
		u.join(u.a, v)
	}
	for _, v := range c.y {
		u.join(u.b, v)
	}
	for _, v := range forced {
		u.on[v] = false
	}
	for v := range n + arcs {
		if u.on[v] && (v >= n || !c.usable[v]) {
			u.clique(u.neighbours(v))
			u.on[v] = false
		}
	}
	return u
}

func (u *undirected) join(v, w int) {
	if v != w {
		u.near[v][w], u.near[w][v] = true, true
	}
}

func (u *undirected) clique(nodes []int) {
	for i, v := range nodes {
		for _, w := range nodes[:i] {
			u.join(v, w)
		}
	}
}

func (u *undirected) neighbours(v int) []int {
	var all []int
	for w, near := range u.near[v] {
		if near && u.on[w] {
			all = append(all, w)
		}
	}
	return all
}

// component marks what start reaches without entering a closed node.
func (u *undirected) component(start int, closed []bool) []bool {
	in := make([]bool, len(u.on))
	in[start] = true
	stack := []int{start}
	for len(stack) > 0 {
		v := stack[len(stack)-1]
		stack = stack[:len(stack)-1]
		for w, near := range u.near[v] {
			if near && u.on[w] && !closed[w] && !in[w] {
				in[w] = true
				stack = append(stack, w)
			}
		}
	}
	return in
}

// rim marks the nodes outside a set that touch it.
func (u *undirected) rim(in []bool) []bool {
	out := make([]bool, len(in))
	for v := range in {
		if in[v] {
			for w, near := range u.near[v] {
				if near && u.on[w] && !in[w] {
					out[w] = true
				}
			}
		}
	}
	return out
}

// separators gives every minimal vertex separator of the poles once. It starts
// from the one nearest to a; each separator is pushed towards b over one of its
// members at a time, and every minimal separator is met that way (Shen & Liang
// 1997). One more separator costs at most n searches.
func (u *undirected) separators(yield func([]int) bool) {
	// push is the separator nearest to a among those beyond the set.
	push := func(side []bool) ([]bool, bool) {
		wall := u.rim(side)
		if wall[u.b] {
			return nil, false
		}
		return u.rim(u.component(u.b, wall)), true
	}
	side := make([]bool, len(u.on))
	side[u.a] = true
	first, ok := push(side)
	if !ok {
		return
	}
	seen := map[string]bool{key(first): true}
	for queue := [][]bool{first}; len(queue) > 0; queue = queue[1:] {
		z := queue[0]
		if !yield(list(z)) {
			return
		}
		side := u.component(u.a, z)
		for v, in := range z {
			if !in || u.near[v][u.b] {
				continue
			}
			side[v] = true
			if next, ok := push(side); ok && !seen[key(next)] {
				seen[key(next)] = true
				queue = append(queue, next)
			}
			side[v] = false
		}
	}
}

func key(in []bool) string {
	k := make([]byte, (len(in)+7)/8)
	for v, yes := range in {
		if yes {
			k[v/8] |= 1 << (v % 8)
		}
	}
	return string(k)
}

// exists reports whether some valid set contains forced. What may be held
// among the ancestors of exposure, outcome and forced works if anything does
// (van der Zander, Liśkiewicz & Textor 2019).
func (c *comparison) exists(forced []int) bool {
	for _, v := range forced {
		if !c.usable[v] {
			return false
		}
	}
	above := c.g.Ancestors(slices.Concat(c.x, c.y, forced)...)
	z := slices.Clone(forced)
	for v := range above {
		if above[v] && c.usable[v] {
			z = append(z, v)
		}
	}
	if c.valid(tidy(z)) {
		return true
	}
	if !slices.Contains(c.g.Computed, true) {
		return false
	}
	sets, _ := c.minimal(forced, 1)
	return len(sets) > 0
}
