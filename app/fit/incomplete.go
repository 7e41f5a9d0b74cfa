package fit

import (
	"fmt"
	"slices"

	"arrowroot/compile/graph"
	"arrowroot/compile/model"
	"arrowroot/compile/study"
)

// indicators are the nodes that tell where variables are recorded: rows without
// an entry of those were left out, so the others were chosen by these
// (SEMANTICS A7). Where nothing of the kind is drawn nothing is known.
func indicators(s *study.Study, g *graph.Graph, lost []string) []int {
	var out []int
	for _, v := range s.Variables {
		if at := g.Index(v.ID); at >= 0 && v.Answers != "" && slices.Contains(lost, v.Answers) {
			out = append(out, at)
		}
	}
	return out
}

// leaveOut takes into account that rows with missing entries were left out of
// the full model, and of the held and crude laws, which need not be the same
// rows: what cannot be said of complete rows is no longer claimed.
func (c *claims) leaveOut(g *graph.Graph, q *study.Question, s *study.Study, m *model.Model) {
	if c.none {
		return
	}
	gaps := func(ids []string) (lost []string) {
		for _, v := range m.Variables {
			if slices.Contains(ids, v.ID) && (len(v.Missing) > 0 || slices.ContainsFunc(m.Rows.Lost, func(l model.Loss) bool { return l.Variable == v.ID })) {
				lost = append(lost, v.ID)
			}
		}
		return lost
	}
	var lost []string
	for _, l := range m.Rows.Lost {
		lost = append(lost, l.Variable)
	}
	slices.Sort(lost)
	whole := newHolding(g, q, indicators(s, g, lost))
	if why := whole.bent(g); why != "" {
		c.fullWhy = fmt.Sprintf("rows in which %s is missing were left out: %s To impute it would keep them.", orNothing(lost), why)
	}
	alone := append([]string{q.Outcome}, g.NamesOf(whole.set)...)
	if h := newHolding(g, q, indicators(s, g, gaps(slices.Concat(alone, c.held)))); c.heldValid {
		if unlike := h.unlike(indices(g, c.held)); unlike != nil {
			c.heldValid = false
			c.notes = append(c.notes, fmt.Sprintf("the held number leaves out rows by %s, which goes together with %s whatever is held: it is not that of all rows", orNothing(g.NamesOf(unlike)), q.Outcome))
		}
	}
	if h := newHolding(g, q, indicators(s, g, gaps(alone))); c.crudeValid {
		c.crudeValid = h.unlike(nil) == nil
	}
	if c.fullWhy != "" && !c.heldValid && c.identified {
		c.identified, c.why = false, c.fullWhy
	}
}
