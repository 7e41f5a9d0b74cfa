package mistake

import (
	"fmt"
	"slices"

	"arrowroot/compile/causal"
	"arrowroot/compile/graph"
)

// A ReadAs is what the coefficient of one variable in the law of another may
// be read as (M9; Westreich & Greenland 2013 call it a fallacy to read all of
// one table alike).
type ReadAs int

// What a coefficient may be read as.
const (
	TotalEffect  ReadAs = iota // of the variable on the other
	DirectEffect               // with the law's other variables kept fixed, not the total one
	Association                // no effect at all
)

// A Coefficient says what the coefficient of Parent in the law of Child may be
// read as, on the scale of the law.
type Coefficient struct {
	Parent, Child int
	As            ReadAs
	Control       bool   // it is not the exposure's in the law of the outcome: tables leave it out at first
	Path          []int  // of an association: what makes it one; nil = none to show
	Words         string // "total effect of hedge on bees"
}

// ReadCoefficient reads one coefficient of a fitted law off the arrows. Given is what the
// law conditions on, drawn or carried, the parent included. Exposure and
// outcome are those of the question; -1 = none.
func ReadCoefficient(g *graph.Graph, exposure, outcome, parent, child int, given []int) Coefficient {
	p, c := g.Names[parent], g.Names[child]
	rest := minus(plus(nil, given...), parent)
	r := Coefficient{Parent: parent, Child: child, Control: parent != exposure || child != outcome}
	reaches := g.Descendants(parent)[child]
	switch {
	case reaches && causal.ValidAdjustment(g, parent, child, rest):
		r.As = TotalEffect
		r.Words = fmt.Sprintf("total effect of %s on %s", p, c)
	case g.HasArrow(parent, child) && singleDoor(g, parent, child, rest):
		r.As = DirectEffect
		r.Words = fmt.Sprintf("not a total effect: what %s does to %s directly, with %s kept fixed", p, c, names(g.NamesOf(rest)))
	default:
		r.As = Association
		r.Words = fmt.Sprintf("association, not an effect of %s on %s", p, c)
		if path := leftOpen(g, parent, child, rest); path != nil {
			r.Path = path.Nodes
			r.Words += ": " + path.Text(g) + " is open"
		} else if !reaches {
			r.Words += ": no arrows lead there"
		}
	}
	return r
}

// singleDoor reports whether the coefficient is that of the arrow (Pearl 2009,
// theorem 5.3.1): without the arrow the rest separates its ends, and nothing of
// the rest comes after the child.
func singleDoor(g *graph.Graph, parent, child int, rest []int) bool {
	below := g.Descendants(child)
	if slices.ContainsFunc(rest, func(v int) bool { return below[v] }) {
		return false
	}
	without := g.Keep(func(from, to int) bool { return from != parent || to != child }, nil)
	return causal.Separated(without, []int{parent}, []int{child}, rest)
}

// leftOpen is the first path that is open and no part of an effect.
func leftOpen(g *graph.Graph, parent, child int, rest []int) *causal.Path {
	r := causal.Read(g, causal.Query{Exposure: parent, Outcome: child, Held: rest, MaxSets: 1})
	for i := range r.Paths {
		if p := &r.Paths[i]; p.Open && p.Kind != causal.Causal {
			return p
		}
	}
	return nil
}
