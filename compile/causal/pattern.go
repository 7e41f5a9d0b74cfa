package causal

import (
	"math/big"
	"slices"

	"arrowroot/compile/graph"
)

// A pattern is a graph of lines some of which have a direction. A line from v
// to w is undirected if both on[v][w] and on[w][v].
type pattern struct{ on [][]bool }

func newPattern(n int) *pattern {
	p := &pattern{on: make([][]bool, n)}
	for v := range p.on {
		p.on[v] = make([]bool, n)
	}
	return p
}

func (p *pattern) clone() *pattern {
	q := &pattern{on: make([][]bool, len(p.on))}
	for v := range p.on {
		q.on[v] = slices.Clone(p.on[v])
	}
	return q
}

func (p *pattern) adjacent(v, w int) bool { return p.on[v][w] || p.on[w][v] }
func (p *pattern) directed(v, w int) bool { return p.on[v][w] && !p.on[w][v] }
func (p *pattern) free(v, w int) bool     { return p.on[v][w] && p.on[w][v] }

// skeletonOf keeps of a graph's arrows only the directions of those that meet
// from nodes which are not adjacent: what all members of the class share at
// first sight (Verma & Pearl 1990).
func skeletonOf(g *graph.Graph) *pattern {
	p := newPattern(g.Len())
	for _, a := range g.Arrows {
		p.on[a[0]][a[1]], p.on[a[1]][a[0]] = true, true
	}
	for v, parents := range g.Parents {
		for i, a := range parents {
			for _, b := range parents[:i] {
				if !p.adjacent(a, b) {
					p.on[v][a], p.on[v][b] = false, false
				}
			}
		}
	}
	return p
}

// close directs every line whose other direction would close a cycle or make
// two arrows meet that must not (Meek 1995, rules 1 to 4).
func (p *pattern) close() {
	n := len(p.on)
	for again := true; again; {
		again = false
		for a := range n {
			for b := range n {
				if p.free(a, b) && p.forced(a, b) {
					p.on[b][a] = false
					again = true
				}
			}
		}
	}
}

// forced reports whether the undirected line between a and b must be a → b.
func (p *pattern) forced(a, b int) bool {
	for c := range p.on {
		switch {
		case p.directed(c, a) && !p.adjacent(c, b): // rule 1
			return true
		case p.directed(a, c) && p.directed(c, b): // rule 2
			return true
		case !p.free(a, c):
			continue
		}
		for d := range p.on {
			if d == c || d == a || d == b {
				continue
			}
			switch {
			case p.free(a, d) && p.directed(c, b) && p.directed(d, b) && !p.adjacent(c, d): // rule 3
				return true
			case p.directed(c, d) && p.directed(d, b) && p.adjacent(a, d) && !p.adjacent(c, b): // rule 4
				return true
			}
		}
	}
	return false
}

// components are the groups of nodes that undirected lines join, of two nodes
// or more.
func (p *pattern) components() [][]int {
	seen := make([]bool, len(p.on))
	var all [][]int
	for v := range p.on {
		if seen[v] {
			continue
		}
		seen[v] = true
		group := []int{v}
		for i := 0; i < len(group); i++ {
			for w := range p.on {
				if p.free(group[i], w) && !seen[w] {
					seen[w] = true
					group = append(group, w)
				}
			}
		}
		if len(group) > 1 {
			slices.Sort(group)
			all = append(all, group)
		}
	}
	return all
}

// A counter counts the ways to direct undirected parts without a cycle and
// without new arrows that meet (He, Jia & Yu 2015: by the root of each part).
type counter struct {
	known map[string]*big.Int
	left  budget // pairs of nodes looked at before the size is given up
}

func newCounter() *counter {
	return &counter{known: map[string]*big.Int{}, left: 5 * searchBudget}
}

// size is the number of ways for a pattern; nil if that takes too long.
func (c *counter) size(p *pattern) *big.Int {
	total := big.NewInt(1)
	for _, group := range p.components() {
		n := c.part(p, group)
		if n == nil {
			return nil
		}
		total.Mul(total, n)
	}
	return total
}

func (c *counter) part(p *pattern, group []int) *big.Int {
	n, lines := len(group), 0
	part := newPattern(len(p.on))
	for _, v := range group {
		for _, w := range group {
			if p.free(v, w) {
				part.on[v][w] = true
				lines++
			}
		}
	}
	switch lines / 2 {
	case n - 1: // a tree: any node may be the root
		return big.NewInt(int64(n))
	case n * (n - 1) / 2: // any order
		return new(big.Int).MulRange(1, int64(n))
	}
	members := newBitset(len(p.on))
	for _, v := range group {
		members.add(v)
	}
	k := members.key()
	if known := c.known[k]; known != nil {
		return known
	}
	total := new(big.Int)
	for _, root := range group {
		if c.left -= budget(len(p.on) * len(p.on)); c.left.spent() {
			return nil
		}
		rooted := part.clone()
		for _, w := range group {
			if rooted.free(root, w) {
				rooted.on[w][root] = false
			}
		}
		rooted.close()
		ways := c.size(rooted)
		if ways == nil {
			return nil
		}
		total.Add(total, ways)
	}
	c.known[k] = total
	return total
}
