package scene

import "arrowroot/compile/study"

// Arrange finds places for the nodes of a rival; it returns one for every
// node. With keepPlaced, nodes that already have a place keep it.
func Arrange(s *study.Study, r *study.Rival, keepPlaced bool) map[string]study.Point {
	return ArrangeFor(s, r, nil, keepPlaced)
}

// ArrangeFor is Arrange with the exposure of a question to the left and its
// outcome to the right.
func ArrangeFor(s *study.Study, r *study.Rival, q *study.Question, keepPlaced bool) map[string]study.Point {
	return nil
}
