package causal

import "arrowroot/compile/graph"

// findCulprits asks which unmeasured variables, drawn or behind an arc, would
// give an adjustment set if only they were measured: each that does alone, or
// else a smallest-by-dropping collection that does together.
func (r *Reading) findCulprits() {
	g := r.Graph
	named, first := nameArcs(g)
	var hidden []int
	for v, measured := range named.Measured {
		if !measured && v != r.Query.Exposure && v != r.Query.Outcome {
			hidden = append(hidden, v)
		}
	}
	gives := func(measured []int) bool {
		h := *named
		h.Measured = append([]bool(nil), named.Measured...)
		for _, v := range measured {
			h.Measured[v] = true
		}
		return newComparison(&h, []int{r.Query.Exposure}, []int{r.Query.Outcome}).exists(nil)
	}
	var culprits []int
	for _, v := range hidden {
		if gives([]int{v}) {
			culprits = append(culprits, v)
		}
	}
	if culprits == nil && gives(hidden) {
		r.CulpritsAll = true
		culprits = hidden
		for _, v := range hidden {
			if fewer := minus(culprits, []int{v}); gives(fewer) {
				culprits = fewer
			}
		}
	}
	for _, v := range culprits {
		if v < first {
			r.Culprits = append(r.Culprits, v)
		} else {
			r.CulpritArcs = append(r.CulpritArcs, g.Arcs[v-first])
		}
	}
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
