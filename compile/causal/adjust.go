package causal

import "arrowroot/compile/graph"

// A comparison is one total effect, or joint effect of several exposures,
// prepared for questions about adjustment sets. It follows the generalised
// adjustment criterion (Shpitser, VanderWeele & Robins 2010; Perković, Textor,
// Kalisch & Maathuis 2018) in its constructive form (van der Zander,
// Liśkiewicz & Textor 2019): a set works if and only if it can be held and
// separates exposure and outcome once the first arrows of the causal paths
// are taken away.
type comparison struct {
	g         *graph.Graph
	x, y      []int
	causal    []bool       // on a causal path, the exposures excepted
	forbidden []bool       // causal nodes and all they act on
	backDoor  *graph.Graph // g without the arrows from an exposure to a causal node
	usable    []bool       // may be held: available, not forbidden, neither exposure nor outcome
	selected  []int        // held by the rows themselves, whatever else is
}

func newComparison(g *graph.Graph, x, y []int) *comparison {
	c := &comparison{g: g, x: x, y: y}
	exposed := mark(g.Len(), x)
	// A proper causal path meets the exposures only at its start.
	proper := g.Keep(func(_, to int) bool { return !exposed[to] }, nil)
	below, above := proper.Descendants(x...), proper.Ancestors(y...)
	c.causal = make([]bool, g.Len())
	for v := range c.causal {
		c.causal[v] = below[v] && above[v] && !exposed[v]
	}
	c.forbidden = g.Descendants(list(c.causal)...)
	c.backDoor = g.Keep(func(from, to int) bool { return !exposed[from] || !c.causal[to] }, nil)
	c.usable = available(g)
	for v := range c.usable {
		c.usable[v] = c.usable[v] && !c.forbidden[v] && !exposed[v]
	}
	for _, v := range y {
		c.usable[v] = false
	}
	return c
}

// effect reports whether a causal path is drawn.
func (c *comparison) effect() bool {
	for _, v := range c.y {
		if c.causal[v] {
			return true
		}
	}
	return false
}

// valid reports whether holding z makes the effect readable.
func (c *comparison) valid(z []int) bool {
	if len(c.selected) > 0 {
		z = union(z, c.selected)
	}
	for _, v := range z {
		if !c.usable[v] {
			return false
		}
	}
	held := mark(c.g.Len(), z)
	known := fixed(c.g, held)
	for _, v := range c.x {
		if known[v] { // computed from what is held: no variation is left
			return false
		}
	}
	return separated(c.backDoor, c.x, c.y, held, known)
}

// ValidAdjustment reports whether holding z, and nothing else, makes the total
// effect of x on y readable from the measured variables. With no causal path
// from x to y this is plain separation.
func ValidAdjustment(g *graph.Graph, x, y int, z []int) bool {
	return x != y && newComparison(g, []int{x}, []int{y}).valid(z)
}

// Minimal lists the minimal adjustment sets that contain forced, by (size,
// names): no proper subset that still contains forced is valid. It stops after
// max sets (0 = 100) and says whether there are more. Nil means there is none;
// a set that is empty means that nothing need be held.
func Minimal(g *graph.Graph, x, y int, forced []int, max int) (sets [][]int, more bool) {
	if x == y {
		return nil, false
	}
	return newComparison(g, []int{x}, []int{y}).minimal(forced, limit(max, 100))
}

// BackDoorSets lists the minimal sets of Pearl's stricter back-door criterion (1993):
// none of their members descends from x, and they close every path with an
// arrowhead at x. There may be none where Minimal finds sets; otherwise as
// Minimal.
func BackDoorSets(g *graph.Graph, x, y int, forced []int, max int) (sets [][]int, more bool) {
	if x == y {
		return nil, false
	}
	c := newSeparation(g, x, y)
	c.backDoor = g.Keep(func(from, _ int) bool { return from != x }, nil)
	for v, below := range g.Descendants(x) {
		c.usable[v] = c.usable[v] && !below
	}
	return c.minimal(forced, limit(max, 100))
}

// MinimalSeparators lists the minimal sets of measured nodes that contain
// forced and separate x and y in the graph as drawn; otherwise as Minimal.
func MinimalSeparators(g *graph.Graph, x, y int, forced []int, max int) (sets [][]int, more bool) {
	if x == y {
		return nil, false
	}
	return newSeparation(g, x, y).minimal(forced, limit(max, 100))
}

// newSeparation is a comparison for which every path counts.
func newSeparation(g *graph.Graph, x, y int) *comparison {
	c := &comparison{g: g, x: []int{x}, y: []int{y}, backDoor: g, usable: available(g)}
	c.usable[x], c.usable[y] = false, false
	return c
}

func limit(asked, otherwise int) int {
	if asked > 0 {
		return asked
	}
	return otherwise
}
