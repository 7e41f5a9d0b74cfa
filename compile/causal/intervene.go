package causal

import (
	"fmt"

	"arrowroot/compile/graph"
)

// Case says whether an effect may be simulated from the fitted laws, and how
// (SEMANTICS B2).
type Case int

// The cases, as SEMANTICS B2 letters them.
const (
	PinAndSimulate      Case = iota // (a) pin the exposure, simulate the fitted laws
	ObservedForDistrict             // (b) the same, but the district's other laws read each row's observed exposure
	NotSimulated                    // (c) the left-out fit must not be simulated
)

// InterventionCase decides the case for the laws that CarriersFor gives. Among
// the ancestors of the outcome, districtMembers are the other members of the
// exposure's district: the laws that read the observed exposure in case (b).
// The reason is a sentence.
func InterventionCase(g *graph.Graph, exposure, outcome int) (c Case, districtMembers []int, reason string) {
	p := Project(g)
	if p.At[exposure] < 0 {
		return NotSimulated, nil, g.Names[exposure] + " was not measured, so its fitted laws cannot be simulated"
	}
	if p.At[outcome] < 0 {
		return NotSimulated, nil, g.Names[outcome] + " was not measured, so its fitted laws cannot be simulated"
	}
	if g.Computed[exposure] && !newComparison(g, []int{exposure}, []int{outcome}).exists(nil) {
		return NotSimulated, nil, fmt.Sprintf("%s is computed from %s, so the data never show it apart", g.Names[exposure], names(g, g.Parents[exposure]))
	}
	h, x := p.Graph, p.At[exposure]
	above, below := h.Ancestors(p.At[outcome]), h.Descendants(x)
	if !above[x] {
		return PinAndSimulate, nil, fmt.Sprintf("no arrows lead from %s to %s", g.Names[exposure], g.Names[outcome])
	}
	child, descendant := -1, -1
	for v, in := range district(h, x, above) {
		if !in || v == x {
			continue
		}
		districtMembers = append(districtMembers, p.Node[v])
		if h.HasArrow(x, v) && child < 0 {
			child = p.Node[v]
		}
		if below[v] && descendant < 0 {
			descendant = p.Node[v]
		}
	}
	name := g.Names[exposure]
	switch {
	case descendant < 0:
		return PinAndSimulate, districtMembers, fmt.Sprintf("no unmeasured cause joins %s to anything it acts on", name)
	case child < 0:
		return ObservedForDistrict, districtMembers, fmt.Sprintf("unmeasured causes join %s to %s, but to nothing that %s acts on directly", name, g.Names[descendant], name)
	}
	return NotSimulated, districtMembers, fmt.Sprintf("unmeasured causes join %s to %s, on which it acts directly", name, g.Names[child])
}
