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
	var wrong []int
	for _, f := range all {
		wrong = append(wrong, f.Node)
	}
	for _, v := range r.misleading(c, minus(q.Held, wrong)) {
		f := Fault{Node: v, Reason: "it opens a path that was closed"}
		if fixed(g, mark(g.Len(), r.given()))[q.Exposure] {
			f.Reason = fmt.Sprintf("%s is computed from what is held, so nothing is left to compare", g.Names[q.Exposure])
		} else if p := r.opener(v); p != nil {
			f.Path = p.Nodes
			f.Reason = "it opens " + p.Text(g)
		}
		all = append(all, f)
	}
	return all
}

// misleading finds which of the held variables, all of them fit to be held, to
// leave free: one that alone spoils the set, or else what keeps any valid set
// from containing the rest.
func (r *Reading) misleading(c *comparison, held []int) []int {
	if r.Sets == nil || c.valid(held) {
		return nil
	}
	openersLast := slices.Clone(held)
	slices.SortStableFunc(openersLast, func(a, b int) int {
		switch p, q := r.opener(a), r.opener(b); {
		case p == nil && q != nil:
			return -1
		case p != nil && q == nil:
			return 1
		}
		return 0
	})
	for _, v := range slices.Backward(openersLast) {
		if c.valid(minus(held, []int{v})) {
			return []int{v}
		}
	}
	var keep, free []int
	for _, v := range openersLast {
		if with := union(keep, []int{v}); c.exists(with) {
			keep = with
		} else {
			free = append(free, v)
		}
	}
	return tidy(free)
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
