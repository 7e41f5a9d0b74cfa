package causal

import (
	"fmt"
	"slices"
	"strings"

	"arrowroot/compile/graph"
)

// A Direct is the controlled direct effect of an exposure: what it does to the
// outcome while other variables are kept at set values (Pearl 2009, section
// 4.5.3). It is the joint effect of the exposure and those variables, of which
// only the exposure is varied.
type Direct struct {
	Exposure, Outcome int
	Fixed             []int
	Effect            bool // arrows lead from exposure to outcome around the fixed variables
	Adjustment        *Adjustment
	Identification    *Identification
	Sentence          string
}

// ReadDirect reads a controlled direct effect. Fixed variables of nil stand for
// all measured ones through which the exposure acts, and that act on the
// outcome themselves.
func ReadDirect(g *graph.Graph, exposure, outcome int, fixed []int) *Direct {
	if fixed == nil {
		c, can := newComparison(g, []int{exposure}, []int{outcome}), available(g)
		for v := range can {
			if can[v] && c.causal[v] && v != outcome && g.HasArrow(v, outcome) {
				fixed = append(fixed, v)
			}
		}
	}
	d := &Direct{Exposure: exposure, Outcome: outcome, Fixed: tidy(fixed)}
	x := union([]int{exposure}, d.Fixed)
	d.Adjustment = Adjust(g, Aim{Exposures: x, Outcomes: []int{outcome}})
	d.Identification = Identify(g, x, []int{outcome}, nil)
	around := g.Keep(func(from, to int) bool { return !slices.Contains(d.Fixed, from) && !slices.Contains(d.Fixed, to) }, nil)
	d.Effect = around.Descendants(exposure)[outcome]

	effect := fmt.Sprintf("%s on %s with %s kept as set", g.Names[exposure], g.Names[outcome], names(g, d.Fixed))
	if len(d.Fixed) == 0 {
		effect = fmt.Sprintf("%s on %s", g.Names[exposure], g.Names[outcome])
	}
	switch {
	case !d.Effect:
		d.Sentence = fmt.Sprintf("No arrows lead around %s: this diagram says that there is no direct effect of %s.", names(g, d.Fixed), effect)
	case d.Adjustment.Sets != nil:
		d.Sentence = fmt.Sprintf("The direct effect of %s can be read: hold %s.", effect, names(g, union(d.Fixed, d.Adjustment.Sets[0])))
		if len(d.Fixed)+len(d.Adjustment.Sets[0]) == 0 {
			d.Sentence = fmt.Sprintf("The direct effect of %s can be read with nothing held.", effect)
		}
	case d.Identification.Identified:
		d.Sentence = fmt.Sprintf("No one set of variables gives the direct effect of %s, but it is identified: it is %s.", effect, d.Identification.Words())
	default:
		_, why, _ := strings.Cut(d.Identification.Sentence, "is not identified: ")
		d.Sentence = fmt.Sprintf("The direct effect of %s is not identified: %s", effect, why)
	}
	return d
}
