package causal

import (
	"slices"

	"arrowroot/compile/graph"
)

// findCulprits asks for them for the reading's pair.
func (r *Reading) findCulprits() {
	r.Culprits, r.CulpritArcs, r.CulpritsAll = culprits(r.Graph, []int{r.Query.Exposure}, []int{r.Query.Outcome}, r.Query.Selected)
}

// Culprits asks which unmeasured variables, drawn or behind an arc, would give
// an adjustment set if only they were measured: each that does alone, or else,
// when all is set, a smallest-by-dropping collection that does together.
func Culprits(g *graph.Graph, exposures, outcomes []int) (nodes []int, arcs [][2]int, all bool) {
	return culprits(g, exposures, outcomes, nil)
}

func culprits(g *graph.Graph, exposures, outcomes, selected []int) (nodes []int, arcs [][2]int, all bool) {
	named, first := nameArcs(g)
	var hidden []int
	for v, measured := range named.Measured {
		if !measured && !slices.Contains(selected, v) && !slices.Contains(exposures, v) && !slices.Contains(outcomes, v) {
			hidden = append(hidden, v)
		}
	}
	gives := func(measured []int) bool {
		h := *named
		h.Measured = slices.Clone(named.Measured)
		for _, v := range measured {
			h.Measured[v] = true
		}
		c := newComparison(&h, exposures, outcomes)
		c.keep(selected)
		return c.exists(nil)
	}
	var culprits []int
	for _, v := range hidden {
		if gives([]int{v}) {
			culprits = append(culprits, v)
		}
	}
	if culprits == nil && gives(hidden) {
		all = true
		culprits = hidden
		for _, v := range hidden {
			if fewer := minus(culprits, []int{v}); gives(fewer) {
				culprits = fewer
			}
		}
	}
	for _, v := range culprits {
		if v < first {
			nodes = append(nodes, v)
		} else {
			arcs = append(arcs, g.Arcs[v-first])
		}
	}
	return nodes, arcs, all
}

// nameArcs draws the cause behind every arc as an unmeasured node of its own;
// these nodes come last, in the order of the arcs, from number first on.
func nameArcs(g *graph.Graph) (named *graph.Graph, first int) {
	first = g.Len()
	spec := graph.Spec{Names: append([]string(nil), g.Names...), Arrows: append([][2]int(nil), g.Arrows...)}
	for v := range first {
		if !g.Measured[v] {
			spec.Unmeasured = append(spec.Unmeasured, v)
		}
		if g.Computed[v] {
			spec.Computed = append(spec.Computed, v)
		}
	}
	for i, ends := range g.Arcs {
		spec.Names = append(spec.Names, g.Names[ends[0]]+" ↔ "+g.Names[ends[1]])
		spec.Unmeasured = append(spec.Unmeasured, first+i)
		spec.Arrows = append(spec.Arrows, [2]int{first + i, ends[0]}, [2]int{first + i, ends[1]})
	}
	named, err := graph.New(spec)
	if err != nil { // roots close no cycle
		panic(err)
	}
	return named, first
}
