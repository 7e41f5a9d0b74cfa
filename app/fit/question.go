package fit

import (
	"arrowroot/compile/model"
)

// lacks is what keeps a question from an answer, as an error; nil if nothing
// does.
func lacks(problems []model.Problem) *Blocked {
	if len(problems) == 0 {
		return nil
	}
	out := &Blocked{}
	for _, p := range problems {
		p.Stops = true // the answer, that is
		out.Problems = append(out.Problems, p)
	}
	return out
}
