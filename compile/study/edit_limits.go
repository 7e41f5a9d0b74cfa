package study

import "slices"

// LimitRows marks a node as what limits the rows: only those with one value of
// it are in the data. Off takes the mark away.
type LimitRows struct {
	Rival, Variable string
	On              bool
}

// Apply refuses a variable that is not on the sheet.
func (e LimitRows) Apply(s *Study) (*Study, error) {
	return onSheet(s, e.Rival, func(r *Rival) error {
		i := slices.IndexFunc(r.Diagram.Nodes, byVariable(e.Variable))
		if i < 0 {
			return notOnSheet(e.Variable, e.Rival)
		}
		n := *r.Diagram.Nodes[i]
		n.Limits = e.On
		r.Diagram.Nodes = with(r.Diagram.Nodes, i, &n)
		return nil
	})
}

// Label names the edit.
func (e LimitRows) Label() string {
	if e.On {
		return "Let " + e.Variable + " limit the rows"
	}
	return "Let " + e.Variable + " no longer limit the rows"
}
