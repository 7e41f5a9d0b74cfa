package study

import "slices"

// copyConditions shares nothing with its argument; an empty list is nil.
func copyConditions(conditions []Condition) []Condition {
	next := list(conditions)
	for i, c := range next {
		next[i].Words = list(c.Words)
		for _, bound := range [2]**float64{&next[i].Low, &next[i].High} {
			if *bound != nil {
				value := **bound
				*bound = &value
			}
		}
	}
	return next
}

// names reports whether a question is about a variable in any way.
func (q *Question) names(id string) bool {
	return q.Exposure == id || q.Outcome == id || slices.Contains(q.Held, id) ||
		slices.ContainsFunc(q.Fixed, func(f Fix) bool { return f.Variable == id }) ||
		slices.ContainsFunc(q.Where, func(c Condition) bool { return c.Variable == id })
}

// heldWithout is what a question holds but for one name; empty and not nil if
// nothing is left, since somebody has said so.
func (q *Question) heldWithout(name string) []string {
	return append([]string{}, without(q.Held, func(id string) bool { return id == name })...)
}
