package findings

import "arrowroot/compile/study"

// An Ask is what is asked of a rival, by the IDs of variables.
type Ask struct {
	Exposures, Outcomes []string
	Given               []string // among those with known values of these: P(outcome | do(exposure), given)
	Held                []string
	Fixed               []string // of a direct effect: what is kept at set values; nil = all that carries the effect
	Effect              string   // "" = study.TotalEffect
	Incomplete          []string // variables that the data are known to have missing entries of; nil = nothing known
}

// AskOf is what a question asks; of nil, nothing.
func AskOf(q *study.Question) Ask {
	if q == nil {
		return Ask{}
	}
	a := Ask{Held: q.Held, Effect: q.Effect}
	if q.Exposure != "" {
		a.Exposures = []string{q.Exposure}
	}
	if q.Outcome != "" {
		a.Outcomes = []string{q.Outcome}
	}
	return a
}
