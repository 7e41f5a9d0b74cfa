package causal

import "slices"

const (
	surplus  = 20   // so many times the sets asked for are found before the smallest are kept
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
	forced = union(forced, c.selected)
	for _, v := range forced {
		if !c.usable[v] {
			return nil, false
		}
	}
	computed := slices.Contains(c.g.Computed, true)
	left := searchBudget
	for z := range c.moral(forced).separators {
		if len(sets) == surplus*max || left.spent() {
			more = true
			break
		}
		left.spend(c.g, 2*(len(z)+1))
		z = union(z, forced)
		if !computed || c.valid(z) { // holding it may leave a computed exposure without variation
			sets = append(sets, z)
		}
	}
	if computed {
		tried, all := c.byTrial(forced, attempts)
		sets = smallest(append(sets, tried...))
		more = more || !all
	}
	if len(c.selected) > 0 { // they need not be named
		for i := range sets {
			sets[i] = minus(sets[i], c.selected)
		}
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

// An undirected graph with two poles, its last two nodes. Nodes that are not on
// have been taken away.
type undirected struct {
	near []bitset
	on   bitset
	a, b int
}

func (c *comparison) moral(forced []int) *undirected {
	g := c.backDoor
	n, arcs := g.Len(), len(g.Arcs)
	size := n + arcs + 2
	u := &undirected{near: make([]bitset, size), on: newBitset(size), a: n + arcs, b: n + arcs + 1}
	for i := range u.near {
		u.near[i] = newBitset(size)
	}
	family := make([][]int, n) // a node and its parents, the causes behind arcs among them
	above := g.Ancestors(slices.Concat(c.x, c.y, forced)...)
	for v := range n {
		if above[v] {
			u.on.add(v)
			family[v] = append(slices.Clone(g.Parents[v]), v)
		}
	}
	for i, arc := range g.Arcs {
		if above[arc[0]] && above[arc[1]] {
			u.on.add(n + i)
			family[arc[0]] = append(family[arc[0]], n+i)
			family[arc[1]] = append(family[arc[1]], n+i)
		}
	}
	for _, f := range family {
		u.clique(f)
	}
	u.on.add(u.a)
	u.on.add(u.b)
	for _, v := range c.x {
		u.clique([]int{u.a, v})
	}
	for _, v := range c.y {
		u.clique([]int{u.b, v})
	}
	for _, v := range forced {
		u.on.drop(v)
	}
	for v := range n + arcs {
		if u.on.has(v) && (v >= n || !c.usable[v]) {
			u.clique(u.near[v].and(u.on).members())
			u.on.drop(v)
		}
	}
	return u
}

func (u *undirected) clique(nodes []int) {
	for _, v := range nodes {
		for _, w := range nodes {
			if v != w {
				u.near[v].add(w)
			}
		}
	}
}

// component is what start reaches without entering the wall.
func (u *undirected) component(start int, wall bitset) bitset {
	free := u.on.without(wall)
	in := newBitset(len(u.near))
	in.add(start)
	for fresh := in; !fresh.empty(); {
		fresh = u.touched(fresh).and(free).without(in)
		in = in.or(fresh)
	}
	return in
}

// rim is what touches a set from outside.
func (u *undirected) rim(in bitset) bitset { return u.touched(in).and(u.on).without(in) }

func (u *undirected) touched(in bitset) bitset {
	out := newBitset(len(u.near))
	for _, v := range in.members() {
		for i, word := range u.near[v] {
			out[i] |= word
		}
	}
	return out
}

// separators gives every minimal vertex separator of the poles once. It starts
// from the one nearest to a; each separator is pushed towards b over one of its
// members at a time, and every minimal separator is met that way (Shen & Liang
// 1997). One more separator costs at most n searches. Small ones are pushed
// first, so that an early stop rather loses large ones.
func (u *undirected) separators(yield func([]int) bool) {
	// push is the separator nearest to a among those beyond the side.
	push := func(side bitset) (bitset, bool) {
		wall := u.rim(side)
		if wall.has(u.b) {
			return nil, false
		}
		return u.rim(u.component(u.b, wall)), true
	}
	side := newBitset(len(u.near))
	side.add(u.a)
	first, ok := push(side)
	if !ok {
		return
	}
	seen := map[string]bool{first.key(): true}
	waiting := make([][]bitset, len(u.near)+1) // by size
	waiting[first.count()] = []bitset{first}
	for size := 0; size < len(waiting); {
		if len(waiting[size]) == 0 {
			size++
			continue
		}
		z := waiting[size][0]
		waiting[size] = waiting[size][1:]
		if !yield(z.members()) {
			return
		}
		side := u.component(u.a, z)
		for _, v := range z.members() {
			if u.near[v].has(u.b) {
				continue
			}
			side.add(v)
			if next, ok := push(side); ok && !seen[next.key()] {
				seen[next.key()] = true
				n := next.count()
				waiting[n] = append(waiting[n], next)
				size = min(size, n)
			}
			side.drop(v)
		}
	}
}

// exists reports whether some valid set contains forced. What may be held
// among the ancestors of exposure, outcome and forced works if anything does
// (van der Zander, Liśkiewicz & Textor 2019).
func (c *comparison) exists(forced []int) bool {
	forced = union(forced, c.selected)
	for _, v := range forced {
		if !c.usable[v] {
			return false
		}
	}
	above := c.g.Ancestors(slices.Concat(c.x, c.y, forced)...)
	z := forced
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

// nearest is the minimal separator nearest to the exposures, in two searches
// (van der Zander & Liśkiewicz 2020); ok says whether there is one. It needs that
// nothing is computed.
func (c *comparison) nearest() (z []int, ok bool) {
	n := c.g.Len()
	above := c.backDoor.Ancestors(slices.Concat(c.x, c.y, c.selected)...)
	held := mark(n, c.selected)
	for v := range held {
		held[v] = held[v] || above[v] && c.usable[v]
	}
	touched := reachable(c.backDoor, c.x, held, held)
	for _, v := range c.y {
		if touched[v] {
			return nil, false
		}
	}
	for range 2 { // what is not touched from one side, then from the other, does nothing
		for v := range held {
			held[v] = held[v] && (touched[v] || slices.Contains(c.selected, v))
		}
		touched = reachable(c.backDoor, c.y, held, held)
	}
	return minus(list(held), c.selected), true
}
