package graph

import "slices"

// Keep is g with the same nodes and only those arrows and arcs for which the
// functions say yes. A nil function keeps all. A computed node that loses an
// arrow counts as computed no more: the rest does not tell its value.
func (g *Graph) Keep(arrow func(from, to int) bool, arc func(a, b int) bool) *Graph {
	n := g.Len()
	kept := &Graph{
		Names:    g.Names,
		Measured: g.Measured,
		Computed: g.Computed,
		Parents:  make([][]int, n),
		Children: make([][]int, n),
		Siblings: make([][]int, n),
		Order:    g.Order, // fewer arrows ask for less
		Plates:   g.Plates,
		Levels:   g.Levels,
	}
	for _, a := range g.Arrows {
		if arrow == nil || arrow(a[0], a[1]) {
			insert(&kept.Parents[a[1]], a[0])
			insert(&kept.Children[a[0]], a[1])
			kept.Arrows = append(kept.Arrows, a)
		} else if kept.Computed[a[1]] {
			kept.Computed = slices.Clone(kept.Computed)
			kept.Computed[a[1]] = false
		}
	}
	for i, a := range g.Arcs {
		if arc == nil || arc(a[0], a[1]) {
			insert(&kept.Siblings[a[0]], a[1])
			insert(&kept.Siblings[a[1]], a[0])
			kept.Arcs = append(kept.Arcs, a)
			kept.ArcLevels = append(kept.ArcLevels, g.ArcLevels[i])
		}
	}
	return kept
}
