package findings

import (
	"fmt"
	"slices"

	"arrowroot/app/words"
	"arrowroot/compile/causal"
	"arrowroot/compile/effect"
	"arrowroot/compile/graph"
	"arrowroot/compile/study"
)

// laws gives the carriers of every fitted law (SEMANTICS A1) and the case of
// the intervention (B2), from the arrows as drawn.
func (r *reader) laws(f *Findings) {
	l := &Laws{Section: Section{Name: LawSection}}
	g := r.sheet.drawn
	x, y := -1, -1
	if f.Lacks == "" && len(f.Exposures) == 1 && len(f.Outcomes) == 1 {
		x, y = f.Exposures[0], f.Outcomes[0]
	}
	fitted := causal.AsFitted(g, x, y)
	l.List = measuredLaws(g, causal.CarriersFor(fitted, x, y))
	l.Shared = causal.SharedCarriers(g, x, y)
	carried := 0
	for _, law := range l.List {
		if len(law.Carried) > 0 {
			carried++
		}
		f.lawFinding(&l.Section, law)
	}
	kept := 0
	for _, law := range l.List {
		if f.keptFinding(&l.Section, law) {
			kept++
		}
	}
	for _, law := range l.Shared {
		f.sharedFinding(&l.Section, law)
	}
	switch {
	case len(l.List) == 0:
		l.Summary = "Nothing is measured, so there is no law to fit."
	case carried == 0:
		l.Summary = "Every law is fitted on the drawn parents alone."
	default:
		l.Summary = fmt.Sprintf("%s more than the drawn parents, for the sake of what is left out.", words.Upper(lawsCarry(carried, len(l.List))))
	}
	if kept > 0 {
		l.Summary += fmt.Sprintf(" Of rows chosen by %s, %s that of all rows.", f.rowsBy(), lawsNot(kept))
	}
	if x >= 0 {
		r.intervention(f, l, fitted)
	}
	f.Laws = l
}

// intervention finds the case of rule B2, of all that the question sets.
func (r *reader) intervention(f *Findings, l *Laws, fitted *graph.Graph) {
	x, y := f.Exposures[0], f.Outcomes[0]
	fixed := minus(r.fixed(f), []int{x, y})
	if len(fixed) == 0 {
		l.Case, l.District, l.Reason = causal.InterventionCase(fitted, x, y)
	} else {
		q := &study.Question{Exposure: f.Graph.Names[x]}
		for _, id := range f.names(fixed) {
			q.Fixed = append(q.Fixed, study.Fix{Variable: id})
		}
		var districts map[string][]string
		l.Case, districts, l.Reason = effect.Districts(fitted, q, y)
		for _, members := range districts {
			if len(members) < fitted.Len() { // else nothing is to see it
				l.District = union(l.District, f.nodes(members))
			}
		}
	}
	if drawn, _, _ := causal.InterventionCase(r.sheet.drawn, x, y); fitted != r.sheet.drawn && drawn != l.Case && l.Case != causal.NotSimulated {
		l.Reason += ", once each law compares within groups"
	}
	f.caseFinding(l, fixed)
}

// measuredLaws leaves away what counts as known within groups but was not
// measured: it has no law, and no law is fitted on it.
func measuredLaws(g *graph.Graph, laws []causal.Fitted) []causal.Fitted {
	hidden := func(v int) bool { return !g.Measured[v] && !g.Computed[v] }
	var out []causal.Fitted
	for _, law := range laws {
		if hidden(law.Node) {
			continue
		}
		law.Parents = slices.DeleteFunc(slices.Clone(law.Parents), hidden)
		out = append(out, law)
	}
	return out
}

func lawsCarry(n, of int) string {
	verb := "carry"
	if n == 1 {
		verb = "carries"
	}
	return fmt.Sprintf("%s of %s %s", words.Whole(float64(n)), words.Plural(of, "law"), verb)
}

func (f *Findings) lawFinding(s *Section, law causal.Fitted) {
	name := f.Graph.Names[law.Node]
	one := Finding{Key: "law " + name, Kind: "law", Nodes: union([]int{law.Node}, law.Parents)}
	for _, p := range law.Parents {
		one.Edges = append(one.Edges, causal.Edge{From: p, To: law.Node})
	}
	text := fmt.Sprintf("The law of %s is fitted on %s", name, words.List(f.names(law.Parents)))
	switch {
	case f.Graph.Computed[law.Node]:
		one.Kind, text = "computed", fmt.Sprintf("%s is computed from %s", name, words.List(f.names(law.Parents)))
	case len(law.Parents) == 0:
		text = fmt.Sprintf("The law of %s has no drawn parent that was measured", name)
	}
	if len(law.Carried) > 0 {
		one.Kind = "law with carried terms"
		var terms, causes []int
		arc := false
		for _, c := range law.Carried {
			terms = append(terms, c.Node)
			for _, u := range c.For {
				if u < 0 {
					arc = true
				} else {
					causes = append(causes, u)
				}
			}
		}
		causes = union(causes, nil)
		because := f.names(causes)
		if arc {
			because = append(because, unnamed)
		}
		one.Nodes = union(union(one.Nodes, terms), causes)
		text += fmt.Sprintf(", and carries %s, because %s %s left out", words.List(f.names(terms)), words.List(because), wasWere(len(because)))
	}
	one.Sentence = text + "."
	f.add(s, one)
}

// sharedFinding says what a law carries at the level of plates.
func (f *Findings) sharedFinding(s *Section, law causal.Shared) {
	name := f.Graph.Names[law.Node]
	for _, at := range law.Plates {
		plate := f.Graph.Plates[at.Plate].Name
		text := fmt.Sprintf("The law of %s carries a baseline that varies by %s", name, plate)
		if len(at.Means) > 0 {
			text += fmt.Sprintf(" and the means of %s within each", words.List(f.names(at.Means)))
		}
		because, causes := []string{}, []int{}
		for _, u := range at.For {
			if u >= 0 {
				causes = append(causes, u)
				because = append(because, f.Graph.Names[u])
			} else if !slices.Contains(because, unnamed) {
				because = append(because, unnamed)
			}
		}
		f.add(s, Finding{
			Key: "law " + name + " by " + plate, Kind: "law with carried groups", Nodes: union(union([]int{law.Node}, at.Means), causes),
			Sentence: fmt.Sprintf("%s, because %s %s left out.", text, words.List(because), wasWere(len(because))),
		})
	}
}

// unnamed stands for what lies behind an arc.
const unnamed = "a common cause that nobody named"

func wasWere(n int) string {
	if n == 1 {
		return "was"
	}
	return "were"
}

// keptFinding says of a law that it is not the same among the rows that there
// are as in all rows (SEMANTICS A7); false if it is.
func (f *Findings) keptFinding(s *Section, law causal.Fitted) bool {
	on := slices.Clone(law.Parents)
	for _, c := range law.Carried {
		on = append(on, c.Node)
	}
	if len(f.Selected) == 0 || slices.Contains(f.Selected, law.Node) || f.Graph.Computed[law.Node] || causal.Separated(f.Graph, []int{law.Node}, minus(f.Selected, on), on) {
		return false
	}
	name := f.Graph.Names[law.Node]
	f.add(s, Finding{
		Key: "law of kept rows " + name, Kind: "law of kept rows", Nodes: union(union(f.Selected, on), []int{law.Node}),
		Sentence: fmt.Sprintf("The law of %s is that of rows chosen by %s, not of all rows.", name, f.rowsBy()),
	})
	return true
}

func lawsNot(n int) string {
	if n == 1 {
		return "1 law is not"
	}
	return words.Whole(float64(n)) + " laws are not"
}

// caseFinding says whether the fitted laws may be simulated under the
// intervention.
func (f *Findings) caseFinding(l *Laws, fixed []int) {
	one := Finding{Key: "simulation", Nodes: union(union(f.Exposures, f.Outcomes), l.District)}
	x := f.Graph.Names[f.Exposures[0]]
	set := words.List(append([]string{x}, f.names(fixed)...))
	switch l.Case {
	case causal.PinAndSimulate:
		one.Kind, one.Sentence = "case (a)", fmt.Sprintf("The full model can be simulated with %s set: %s.", set, l.Reason)
	case causal.ObservedForDistrict:
		one.Kind, one.Sentence = "case (b)", fmt.Sprintf("The full model can be simulated with %s set, if the laws of %s go by the %s that %s observed: %s.", set, words.List(f.names(l.District)), set, wasWere(1+len(fixed)), l.Reason)
	default:
		one.Kind, one.Sentence = "case (c)", fmt.Sprintf("The full model must not be simulated with %s set: %s.", set, l.Reason)
	}
	f.add(&l.Section, one)
	l.Summary += " " + one.Sentence
}
