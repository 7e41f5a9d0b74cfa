package model

import (
	"arrowroot/compile/study"
	"arrowroot/compile/table"
)

// Build makes the model of one rival for one question from a table. Problems
// come in the order of the ledger. The model is nil where it could not be
// made; a problem that Stops forbids a fit even where a model came along (a
// study without data still has a statement).
func Build(s *study.Study, rival string, q study.Question, t *table.Table, kind Kind) (*Model, []Problem) {
	return nil, nil
}

// Problems lists what is wrong with a rival's laws and data while it is being
// drawn. It is what Build would say of the full model.
func Problems(s *study.Study, rival string, q study.Question, t *table.Table) []Problem {
	_, problems := Build(s, rival, q, t, Full)
	return problems
}

// Stops reports whether one of the problems forbids a fit.
func Stops(problems []Problem) bool {
	for _, p := range problems {
		if p.Stops {
			return true
		}
	}
	return false
}
