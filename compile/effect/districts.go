package effect

import (
	"slices"

	"arrowroot/compile/causal"
	"arrowroot/compile/graph"
	"arrowroot/compile/study"
)

// Districts decides whether the exposure and what the question fixes may be
// set in the fitted laws to see an outcome, one at a time, latest first
// (SEMANTICS B2); the reason is a sentence. Districts holds for each of them,
// by variable ID, the variables whose laws go on reading the value that it
// would have had. The outcome is a node of the graph.
func Districts(g *graph.Graph, q *study.Question, outcome int) (c causal.Case, districts map[string][]string, reason string) {
	set := []int{g.Index(q.Exposure)}
	for _, f := range q.Fixed {
		if v := g.Index(f.Variable); v >= 0 && v != outcome {
			set = append(set, v)
		}
	}
	several := len(set) > 1
	districts = make(map[string][]string)
	for len(set) > 0 {
		at := slices.IndexFunc(set, func(v int) bool { // nothing else that is set comes after it
			below := g.Descendants(v)
			return !slices.ContainsFunc(set, func(w int) bool { return w != v && below[w] })
		})
		v := set[at]
		set = slices.Delete(set, at, at+1)
		kind, members, why := causal.InterventionCase(g, v, outcome)
		if kind == causal.NotSimulated {
			return kind, nil, why
		}
		if kind == causal.ObservedForDistrict || reason == "" {
			c, reason = max(c, kind), why
		}
		if several && !g.Ancestors(outcome)[v] { // setting it changes nothing here: nobody is to see it
			districts[g.Names[v]] = g.Names
			continue
		}
		// Laws are ordered with the exposure as late as can be, so that in
		// case (a) none of its district reads it. Of what else is set that is
		// not so: there the others go on reading the value it would have had.
		if kind == causal.ObservedForDistrict || several {
			for _, m := range members {
				districts[g.Names[v]] = append(districts[g.Names[v]], g.Names[m])
			}
		}
		g = g.Keep(func(_, to int) bool { return to != v }, func(a, b int) bool { return a != v && b != v })
	}
	return c, districts, reason
}
