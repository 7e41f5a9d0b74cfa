package mistake

import (
	"fmt"

	"arrowroot/compile/causal"
)

// heldForNoReason finds held variables that the arrows give no reason to hold
// (M8): beside the others they go neither with the exposure nor with the
// outcome. Lists of covariates chosen by tests, step by step or by how much an
// estimate changes look like that. Arrowroot offers no such choice; whether a
// list that came from elsewhere was made so it cannot know, so it says what
// the arrows say of each and asks nothing of those that they do explain.
func heldForNoReason(l *look) []Mistake {
	if l.read == nil || l.direct {
		return nil
	}
	var all []Mistake
	x, y := l.g.Names[l.x], l.g.Names[l.y]
	around := l.around()
	for _, v := range l.held {
		rest := l.beside(v)
		if l.blamed[v] || !l.g.Measured[v] ||
			!causal.Separated(around, []int{v}, []int{l.y}, rest) || !causal.Separated(around, []int{v}, []int{l.x}, rest) {
			continue
		}
		id := l.g.Names[v]
		m := Mistake{
			Code: HeldForNoReason, Severity: Note, Key: key(HeldForNoReason, x, y, id), Nodes: []string{id}, Repairs: l.leaveFree(v),
			Sentence: fmt.Sprintf("%s is held, but no arrows give a reason: it goes neither with %s nor with %s.", id, x, y),
			Why:      "A variable that a test or a change of the estimate picked need not make a comparison fair; the arrows say which do.",
		}
		if len(rest) > 0 {
			m.Sentence = fmt.Sprintf("%s is held, but no arrows give a reason: with %s held it goes neither with %s nor with %s.", id, names(l.ids(rest)), x, y)
		}
		all = append(all, m)
	}
	return all
}
