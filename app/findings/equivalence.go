package findings

import (
	"fmt"

	"arrowroot/compile/causal"
)

const classNodes = 120 // variables on a sheet up to which its class is asked for

// class says which arrows could be turned round.
func (r *reader) class(f *Findings) {
	e := &Equivalence{Section: Section{Name: EquivalenceSection}}
	defer func() { f.Equivalence = e }()
	g := r.sheet.drawn
	if f.Sheet > classNodes {
		e.Summary = "Which arrows could be turned round is not asked on a sheet of this size."
		e.leave(fmt.Sprintf("The class of this diagram is left out: the sheet has more than %d variables.", classNodes))
		return
	}
	e.Class = causal.ClassOf(g)
	e.Summary = e.Class.Sentence
	for _, a := range e.Class.Reversible {
		f.add(&e.Section, Finding{
			Key: "reversible " + g.Names[a[0]] + " → " + g.Names[a[1]], Kind: "reversible", Nodes: a[:], Edges: []causal.Edge{{From: a[0], To: a[1]}},
			Sentence: fmt.Sprintf("%s → %s could be turned round without changing any implied independence.", g.Names[a[0]], g.Names[a[1]]),
		})
	}
	for _, a := range e.Class.Undecided {
		f.add(&e.Section, Finding{
			Key: "undecided " + g.Names[a[0]] + " → " + g.Names[a[1]], Kind: "undecided", Nodes: a[:], Edges: []causal.Edge{{From: a[0], To: a[1]}},
			Sentence: fmt.Sprintf("Whether %s → %s could be turned round without changing an implied independence could not be decided.", g.Names[a[0]], g.Names[a[1]]),
		})
	}
}

// rivals compares what the rivals imply.
func (r *reader) rivals(f *Findings) {
	e := *f.Equivalence
	e.Findings = append([]Finding{}, e.Findings...)
	g := r.sheet.drawn
	for _, other := range f.Study.Rivals {
		if other.Name == f.Rival || r.ctx.Err() != nil {
			continue
		}
		h, err := f.Study.Graph(other.Name)
		if err != nil {
			continue // it says so where it is shown itself
		}
		if max(f.Sheet, h.Len()) > basisNodes {
			e.leave(fmt.Sprintf("“%s” is not compared with “%s”: there are more than %d variables.", f.Rival, other.Name, basisNodes))
			continue
		}
		same := causal.SameIndependences(g, h)
		e.Rivals = append(e.Rivals, Likeness{Rival: other.Name, Sameness: same})
		one := Finding{Key: "rival " + other.Name, Kind: "told apart", Sentence: same.Sentence(g, h, quoted(f.Rival), quoted(other.Name))}
		drawn := causal.Compare(g, h)
		switch {
		case same.Same && drawn.Same():
			one.Kind, one.Sentence = "the same arrows", fmt.Sprintf("“%s” and “%s” draw the same arrows: they can differ by their laws alone.", f.Rival, other.Name)
		case same.Same:
			one.Kind = "not told apart"
		case same.Unknown:
			one.Kind = "undecided"
		case len(same.OnlyFirst)+len(same.OnlySecond) > 0:
			one.Kind = "other variables"
		}
		if w := same.Witness; w != nil && same.First {
			one.Nodes = union(union(w.A, w.B), w.Given)
		}
		f.add(&e.Section, one)
	}
	f.Equivalence = &e
}
