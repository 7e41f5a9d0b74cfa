package model

import "slices"

// Outermost lists the plates that lie within no other plate.
func (m *Model) Outermost() []int {
	var out []int
	for i, p := range m.Plates {
		inside := false
		for j, q := range m.Plates {
			if i != j && within(p, q) && (j < i || !within(q, p)) {
				inside = true
			}
		}
		if !inside {
			out = append(out, i)
		}
	}
	return out
}

// within reports whether each level of p has all its rows in one level of q.
func within(p, q *Plate) bool {
	in := slices.Repeat([]int32{-1}, len(p.Levels))
	for row, level := range p.Of {
		if in[level] >= 0 && in[level] != q.Of[row] {
			return false
		}
		in[level] = q.Of[row]
	}
	return true
}
