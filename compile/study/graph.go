package study

import (
	"fmt"

	"arrowroot/compile/graph"
)

// Graph is the dense view of one rival: a graph node for each node on its
// sheet, in the sheet's order, named by variable ID.
func (s *Study) Graph(rival string) (*graph.Graph, error) {
	r := s.Rival(rival)
	if r == nil {
		return nil, fmt.Errorf("there is no rival “%s”", rival)
	}
	spec := graph.Spec{}
	index := make(map[string]int, len(r.Diagram.Nodes))
	for i, n := range r.Diagram.Nodes {
		index[n.Variable] = i
		spec.Names = append(spec.Names, n.Variable)
		v := s.Variable(n.Variable)
		if v == nil {
			return nil, fmt.Errorf("%s is on the sheet of “%s” but not in the ledger", n.Variable, rival)
		}
		if v.Unmeasured {
			spec.Unmeasured = append(spec.Unmeasured, i)
		}
		if v.Computed != "" {
			spec.Computed = append(spec.Computed, i)
		}
	}
	for _, a := range r.Diagram.Arrows {
		ends, err := endsOf(index, rival, a.From, a.To)
		if err != nil {
			return nil, err
		}
		spec.Arrows = append(spec.Arrows, ends)
	}
	for _, a := range r.Diagram.Arcs {
		ends, err := endsOf(index, rival, a.A, a.B)
		if err != nil {
			return nil, err
		}
		spec.Arcs = append(spec.Arcs, ends)
	}
	return graph.New(spec)
}

func endsOf(index map[string]int, rival, a, b string) ([2]int, error) {
	i, known := index[a]
	if !known {
		return [2]int{}, fmt.Errorf("%s is not on the sheet of “%s”", a, rival)
	}
	j, known := index[b]
	if !known {
		return [2]int{}, fmt.Errorf("%s is not on the sheet of “%s”", b, rival)
	}
	return [2]int{i, j}, nil
}
