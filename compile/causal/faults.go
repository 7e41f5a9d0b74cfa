package causal

import (
	"fmt"
	"slices"
)

// faults finds the held variables that should be left free.
func (r *Reading) faults(c *comparison) []Fault {
	g, q := r.Graph, r.Query
	can := available(g)
	var all []Fault
	for _, v := range q.Held {
		name := g.Names[v]
		switch {
		case v == q.Exposure:
			all = append(all, Fault{Node: v, Reason: name + " is the exposure itself"})
		case v == q.Outcome:
			all = append(all, Fault{Node: v, Reason: name + " is the outcome itself"})
		case !g.Measured[v]:
			all = append(all, Fault{Node: v, Reason: name + " was not measured"})
		case !can[v]:
			all = append(all, Fault{Node: v, Reason: name + " is computed from something that was not measured"})
		case c.forbidden[v]:
			for _, f := range r.Forbidden {
				if f.Node == v {
					all = append(all, Fault{Node: v, Reason: f.Reason, Path: f.Path})
				}
			}
		}
	}
	if len(all) > 0 || r.HeldValid {
		return all
	}
	if fixed(g, mark(g.Len(), q.Held))[q.Exposure] {
		for _, v := range q.Held {
			if free := minus(q.Held, []int{v}); !fixed(g, mark(g.Len(), free))[q.Exposure] {
				all = append(all, Fault{Node: v, Reason: fmt.Sprintf("%s is computed from what is held, so nothing is left to compare", g.Names[q.Exposure])})
			}
		}
		return all
	}
	// A held variable that opens a path is a fault if leaving it free mends
	// the set, or if no set that contains all that is held would do.
	hopeless := !c.exists(q.Held)
	for _, v := range q.Held {
		free := minus(q.Held, []int{v})
		if c.valid(free) || hopeless && (c.exists(free) || r.opener(v) != nil) {
			f := Fault{Node: v, Reason: "it opens a path that was closed"}
			if p := r.opener(v); p != nil {
				f.Path = p.Nodes
				f.Reason = "it opens " + p.Text(g)
			}
			all = append(all, f)
		}
	}
	return all
}

// opener is the first listed path that is open because v is held.
func (r *Reading) opener(v int) *Path {
	for i := range r.Paths {
		p := &r.Paths[i]
		if p.Open && slices.ContainsFunc(p.OpenedAt, func(o Opening) bool { return o.By == v }) {
			return p
		}
	}
	return nil
}
