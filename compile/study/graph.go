package study

import (
	"fmt"
	"slices"

	"arrowroot/compile/graph"
)

// Graph is the dense view of one rival: a graph node for each node on its
// sheet, in the sheet's order, named by variable ID.
func (s *Study) Graph(rival string) (*graph.Graph, error) {
	r := s.Rival(rival)
	if r == nil {
		return nil, fmt.Errorf("there is no rival “%s”", rival)
	}
	spec := graph.Spec{Plates: s.platesOf()}
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
		spec.Levels = append(spec.Levels, s.level(v.Plates))
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
		spec.ArcLevels = append(spec.ArcLevels, s.level(a.Plates))
	}
	return graph.New(spec)
}

// platesOf are the study's plates by place. A plate within one that is not
// there stands alone.
func (s *Study) platesOf() []graph.Plate {
	var out []graph.Plate
	for _, p := range s.Plates {
		out = append(out, graph.Plate{Name: p.Name, Within: slices.IndexFunc(s.Plates, byPlateName(p.Within))})
	}
	return out
}

// level is a level by place; the row if it names a plate that is not there.
func (s *Study) level(plates []string) []int {
	var out []int
	for _, name := range plates {
		i := slices.IndexFunc(s.Plates, byPlateName(name))
		if i < 0 {
			return nil
		}
		out = append(out, i)
	}
	return out
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
