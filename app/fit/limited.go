package fit

import (
	"fmt"
	"slices"

	"arrowroot/compile/causal"
	"arrowroot/compile/graph"
	"arrowroot/compile/study"
)

// limitsOf lists what the rows of a rival were chosen by: nodes of which only
// one value is in the data, and variables of the sheet that the row filter
// names (SEMANTICS A7).
func limitsOf(s *study.Study, rival string, g *graph.Graph) []int {
	var out []int
	add := func(id string) {
		if v := g.Index(id); v >= 0 && !slices.Contains(out, v) {
			out = append(out, v)
		}
	}
	for _, n := range s.Rival(rival).Diagram.Nodes {
		if n.Limits {
			add(n.Variable)
		}
	}
	if d := s.DataOf(rival); d != nil {
		for _, c := range d.Keep {
			add(c.Variable)
		}
	}
	return out
}

// bent says why the laws between what is set and the outcome, fitted to chosen
// rows, are not those of all rows: what the rows were chosen by still tells
// something of a variable once its carriers are known. It is empty where every
// such law is the same in all rows.
func (h *holding) bent(g *graph.Graph) string {
	if len(h.limits) == 0 {
		return ""
	}
	fitted := causal.AsFitted(g, h.set[0], h.outcome)
	below, above := fitted.Descendants(h.set...), fitted.Ancestors(h.outcome)
	for _, law := range causal.CarriersFor(fitted, h.set[0], h.outcome) {
		v := law.Node
		if !(below[v] && above[v]) && v != h.outcome || slices.Contains(h.set, v) || fitted.Computed[v] {
			continue
		}
		carriers := slices.Clone(law.Parents)
		for _, c := range law.Carried {
			carriers = append(carriers, c.Node)
		}
		for _, w := range h.limits {
			if !h.tells(fitted, w, v, carriers) {
				continue
			}
			if w == v {
				return fmt.Sprintf("the rows were chosen by %s itself, so its law among them is not that of all rows. The rows left out, with what else is known of them, would help.", g.Names[v])
			}
			return fmt.Sprintf("the rows were chosen by %s, which goes together with %s beyond what its law reads (%s), so that law is not that of all rows. The rows left out, with what is known of them, would help.",
				g.Names[w], g.Names[v], orNothing(g.NamesOf(carriers)))
		}
	}
	return ""
}

// tells reports whether a variable says anything of another once some are
// known.
func (h *holding) tells(g *graph.Graph, w, v int, known []int) bool {
	return w == v || !slices.Contains(known, w) && !causal.Separated(g, []int{w}, []int{v}, known)
}
