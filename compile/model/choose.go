package model

import (
	"fmt"
	"slices"

	"arrowroot/compile/causal"
	"arrowroot/compile/formula"
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
			d.carried = append(d.carried, b.carrier(c))
		}
		explained := len(d.arrows) > 0 || len(d.carried) > 0 || joined[f.Node] ||
			speaks(d.user) || v.ID == b.question.Outcome
		if d.user.Treat == "given" && v.ID == b.question.Outcome {
			b.stop(Problem{Code: "outcome-given", Variable: v.ID, Place: "law",
				Message: fmt.Sprintf("%s is the outcome of the question, but set to be given: no law of it would be fitted.", v.ID),
				Repairs: []Repair{{Label: "Model it", Edit: b.changeLaw(v.ID, func(l *study.Law) { l.Treat = "" })}}})
		}
		if d.user.Treat == "modelled" || d.user.Treat != "given" && explained {
			b.drafts = append(b.drafts, d)
		}
	}
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

// chooseOutcome takes the outcome's law alone, on the exposure and, for Held,
// the held set (SEMANTICS B8). Its offset, its trials and its varying baseline
// stay; a drawn arrow lends its form, a variable without one enters with the
// default form.
func (b *builder) chooseOutcome() {
	q := b.question
	for _, id := range []string{q.Exposure, q.Outcome} {
		switch v := b.variable(id); {
		case id == "" || v == nil || !b.onSheet(id):
			b.stop(Problem{Code: "question", Place: "question", Message: "The question needs an exposure and an outcome that stand on the sheet."})
			return
		case v.Unmeasured:
			b.stop(Problem{Code: "question", Variable: id, Place: "question", Message: fmt.Sprintf("%s was not measured, so that no law can be fitted to it.", v.Name())})
			return
		}
	}
	if q.Exposure == q.Outcome {
		b.stop(Problem{Code: "question", Variable: q.Exposure, Place: "question", Message: "Exposure and outcome are the same variable."})
		return
	}
	want := []string{q.Exposure}
	if b.kind == Held {
		for _, h := range q.Held {
			if v := b.variable(h); v == nil || v.Unmeasured || !b.onSheet(h) {
				b.stop(Problem{Code: "held", Variable: h, Place: "question", Message: fmt.Sprintf("%s is held, but it is not a measured variable of this sheet.", h)})
				return
			}
			if h != q.Exposure && h != q.Outcome {
				want = append(want, h)
			}
		}
	}
	d := &draft{variable: b.variable(q.Outcome), user: b.userLaw(q.Outcome)}
	kept := make(map[string]bool)
	for _, id := range want {
		kept[id] = true
	}
	offsets, varies := typedParts(d.user.Formula, q.Outcome)
	for _, a := range b.rival.Diagram.Arrows {
		if p := b.variable(a.From); a.To != q.Outcome || p == nil || p.Unmeasured || !b.onSheet(a.From) {
			continue
		}
		drawn := *a
		if slices.Contains(offsets, a.From) {
			drawn.Form = "offset"
		}
		if !kept[a.From] && drawn.Form != "offset" {
			continue
		}
		kept[a.From] = true
		// The prior of a drawn slope is about a direct effect; this slope is another.
		drawn.Prior = ""
		drawn.With = nil
		for _, w := range a.With {
			if slices.Contains(want, w) {
				drawn.With = append(drawn.With, w)
			}
		}
		d.arrows = append(d.arrows, &drawn)
	}
	for _, id := range want {
		if !hasArrow(d.arrows, id) {
			d.arrows = append(d.arrows, &study.Arrow{From: id, To: q.Outcome})
		}
	}
	d.user.Formula = ""
	for _, p := range varies {
		if !slices.Contains(d.user.VariesBy, p) {
			d.user.VariesBy = append(append([]string(nil), d.user.VariesBy...), p)
		}
	}
	b.drafts = []*draft{d}
}

// typedParts finds in a typed formula what a model of the outcome alone keeps:
// the variables that enter as their bare log, and the plates over which the
// baseline varies. A formula that does not parse has none.
func typedParts(text, outcome string) (offsets, varies []string) {
	if text == "" {
		return nil, nil
	}
	p, err := formula.Parse(text)
	if err != nil {
		return nil, nil
	}
	for _, term := range summands(p.Right) {
		switch t := term.(type) {
		case *formula.Call:
			if n, ok := t.Args[0].(*formula.Name); ok && t.Function == "log" && len(t.Args) == 1 {
				offsets = append(offsets, n.ID)
			}
		case *formula.By:
			if t.Name.ID == "alpha_"+outcome {
				varies = append(varies, t.Plates...)
			} else if len(t.Plates) == 1 && t.Name.ID == "alpha_"+outcome+"_"+clean(t.Plates[0]) {
				varies = append(varies, t.Plates[0])
			}
		}
	}
	return offsets, varies
}

// summands splits a sum into what is added up at its top.
func summands(e formula.Expr) []formula.Expr {
	if b, ok := e.(*formula.Binary); ok && b.Op == '+' {
		return append(summands(b.X), summands(b.Y)...)
	}
	return []formula.Expr{e}
}

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
