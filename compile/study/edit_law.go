package study

import (
	"reflect"
	"slices"
)

// ChangeLaw gives a node another law; nil or an empty law is the default.
type ChangeLaw struct {
	Rival, Variable string
	Law             *Law
}

// Apply refuses a variable that is not on the sheet.
func (e ChangeLaw) Apply(s *Study) (*Study, error) {
	return onSheet(s, e.Rival, func(r *Rival) error {
		i := slices.IndexFunc(r.Diagram.Nodes, byVariable(e.Variable))
		if i < 0 {
			return notOnSheet(e.Variable, e.Rival)
		}
		n := *r.Diagram.Nodes[i]
		n.Law = copyLaw(e.Law)
		r.Diagram.Nodes = with(r.Diagram.Nodes, i, &n)
		return nil
	})
}

func copyLaw(l *Law) *Law {
	if l == nil {
		return nil
	}
	next := *l
	next.Arguments, next.VariesBy, next.Priors = list(l.Arguments), list(l.VariesBy), list(l.Priors)
	if reflect.DeepEqual(next, Law{}) {
		return nil
	}
	return &next
}

// Label names the edit.
func (e ChangeLaw) Label() string { return "Change the law of " + e.Variable }
