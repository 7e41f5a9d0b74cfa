package causal

import "slices"

// optimal is the O-set: the parents of the causal nodes that are neither
// forbidden nor exposures. Where it is defined, no valid set gives a smaller
// asymptotic variance (Henckel, Perković & Maathuis 2022; Rotnitzky & Smucler
// 2020). It is reported only if there is an effect, all of it can be held, and
// it is valid; with unmeasured variables a best set need not exist.
func (c *comparison) optimal() ([]int, bool) {
	if !c.effect() || len(c.selected) > 0 { // the theorems are about all rows
		return nil, false
	}
	var o []int
	for v := range c.causal {
		if c.causal[v] {
			if len(c.g.Siblings[v]) > 0 { // a parent that nobody named
				return nil, false
			}
			for _, p := range c.g.Parents[v] {
				if !c.forbidden[p] && !slices.Contains(c.x, p) {
					o = append(o, p)
				}
			}
		}
	}
	o = tidy(o)
	return o, c.valid(o)
}

// asPrecise reports whether holding a is at least as precise as holding b in
// every model of the graph, both being valid (Henckel, Perković & Maathuis
// 2022, for linear models; Rotnitzky & Smucler 2020 in general).
func (c *comparison) asPrecise(a, b []int) bool {
	a, b = union(a, c.selected), union(b, c.selected)
	return Separated(c.g, c.y, minus(b, a), union(a, c.x)) &&
		Separated(c.g, c.x, minus(a, b), b)
}

// best finds the set that is at least as precise as all others by the pairwise
// rule; -1 when none is.
func (c *comparison) best(sets [][]int) int {
	for i := range sets {
		beaten := slices.ContainsFunc(sets, func(other []int) bool {
			return !c.asPrecise(sets[i], other)
		})
		if !beaten {
			return i
		}
	}
	return -1
}
