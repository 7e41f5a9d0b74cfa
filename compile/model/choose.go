package model

import (
	"fmt"
	"slices"

	"arrowroot/compile/causal"
	"arrowroot/compile/study"
)

// choose decides which laws are fitted and what each conditions on.
func (b *builder) choose(string) {
	if b.kind == Full {
		b.chooseFull()
	} else {
		b.chooseOutcome()
	}
}

// chooseFull takes every measured variable that the rival explains
// (SEMANTICS A1 to A3).
func (b *builder) chooseFull() {
	joined := make(map[int]bool)
	for _, members := range causal.Districts(b.graph) {
		if len(members) > 1 {
			for _, v := range members {
				joined[v] = true
			}
		}
	}
	for _, f := range b.fitted() {
		v := b.variable(b.graph.Names[f.Node])
		if v.Unmeasured || v.Computed != "" {
			continue
		}
		d := &draft{variable: v, user: b.userLaw(v.ID)}
		for _, a := range b.rival.Diagram.Arrows {
			if p := b.variable(a.From); a.To == v.ID && p != nil && !p.Unmeasured && b.onSheet(a.From) {
				d.arrows = append(d.arrows, a)
			}
		}
		for _, c := range f.Carried {
			if b.graph.Measured[c.Node] { // else what it is shared by stands in for it
				d.carried = append(d.carried, b.carrier(c))
			}
		}
		explained := len(d.arrows) > 0 || len(d.carried) > 0 || joined[f.Node] ||
			speaks(d.user) || v.ID == b.question.Outcome
		if d.user.Treat == "given" && v.ID == b.question.Outcome {
			b.stop(Problem{Code: "outcome-given", Variable: v.ID, Place: "law",
				Message: fmt.Sprintf("%s is the outcome of the question, but set to be given: no law of it would be fitted.", v.ID),
				Repairs: []Repair{{Label: "Model it", Edit: b.changeLaw(v.ID, func(l *study.Law) { l.Treat = "" })}}})
		}
		if d.user.Treat == study.Modelled || d.user.Treat == study.Imputed || d.user.Treat != "given" && explained {
			b.drafts = append(b.drafts, d)
		}
	}
	b.share()
}

// speaks reports whether a user said how the variable gets its value.
func speaks(l study.Law) bool {
	return l.Family != "" || l.Formula != "" || len(l.Arguments) > 0 || len(l.VariesBy) > 0 || len(l.Priors) > 0
}

func (b *builder) carrier(c causal.Carried) carrier {
	out := carrier{id: b.graph.Names[c.Node]}
	for _, u := range c.For {
		if u < 0 {
			out.sake = append(out.sake, unnamedCause)
		} else {
			out.sake = append(out.sake, b.graph.Names[u])
		}
	}
	return out
}

const unnamedCause = "an unnamed common cause"

func hasArrow(arrows []*study.Arrow, from string) bool {
	return slices.ContainsFunc(arrows, func(a *study.Arrow) bool { return a.From == from })
}

// userLaw is what the sheet says of a variable's law; the zero value if nothing.
func (b *builder) userLaw(id string) study.Law {
	for _, n := range b.rival.Diagram.Nodes {
		if n.Variable == id && n.Law != nil {
			return *n.Law
		}
	}
	return study.Law{}
}
