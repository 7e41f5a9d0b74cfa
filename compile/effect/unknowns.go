package effect

import "arrowroot/compile/model"

// An unknown is a variable with missing entries that each draw fills in
// (SEMANTICS B4).
type unknown struct {
	variable int
	rows     []int // of the rowset that are missing …
	at       []int // … and the place of each in a draw
}

// unknowns finds them among the rows that are averaged over.
func (s *rowset) unknowns(r *resolver) []unknown {
	var out []unknown
	for i, v := range r.m.Variables {
		p := r.m.Unknowns(i)
		if p < 0 {
			continue
		}
		entry := make(map[int]int, len(v.Missing))
		for k, unit := range v.Missing {
			entry[int(unit)] = k
		}
		u := unknown{variable: i}
		for row, unit := range s.unitsOf(v) {
			if k, missing := entry[unit]; missing {
				u.rows = append(u.rows, row)
				u.at = append(u.at, r.offset[p]+k)
			}
		}
		if len(u.rows) > 0 {
			out = append(out, u)
		}
	}
	return out
}

// unitsOf gives the unit of a variable that each row belongs to.
func (s *rowset) unitsOf(v *model.Variable) []int {
	units := make([]int, s.n)
	for i, row := range s.picked {
		units[i] = row
		if v.Plate >= 0 {
			units[i] = int(s.of[v.Plate][i])
		}
	}
	return units
}

// own is the rowset with columns of its own for the unknowns, so that a
// goroutine can fill them in.
func (s *rowset) own(unknowns []unknown) *rowset {
	if len(unknowns) == 0 {
		return s
	}
	out := *s
	out.columns = append([][]float64(nil), s.columns...)
	for _, u := range unknowns {
		out.columns[u.variable] = append([]float64(nil), s.columns[u.variable]...)
	}
	return &out
}

// fill puts a draw's values in the places of missing entries.
func (s *rowset) fill(unknowns []unknown, draw []float64) {
	for _, u := range unknowns {
		for i, row := range u.rows {
			s.columns[u.variable][row] = draw[u.at[i]]
		}
	}
}
