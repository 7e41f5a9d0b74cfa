package findings

import (
	"fmt"
	"slices"

	"arrowroot/app/words"
	"arrowroot/compile/study"
	"arrowroot/compile/table"
)

// An Ask is what is asked of a rival, by the IDs of variables.
type Ask struct {
	Exposures, Outcomes []string
	Given               []string // among those with known values of these: P(outcome | do(exposure), given)
	Held                []string // variables; plates too where there is one exposure and one outcome
	Fixed               []string // of a direct effect: what is kept at set values; nil = all that carries the effect
	Effect              string   // "" = study.TotalEffect
	Forced, Unavailable []string // in every set that is listed; in none
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
	for _, fix := range q.Fixed {
		a.Fixed = append(a.Fixed, fix.Variable)
	}
	return a
}

// Incomplete lists the variables of which a table lacks entries; of nil, none.
func Incomplete(s *study.Study, t *table.Table) []string {
	if t == nil {
		return nil
	}
	ids := []string{}
	for _, v := range s.Variables {
		if c := t.Column(v.Column); v.Column != "" && !v.Unmeasured && c != nil && c.Missing > 0 {
			ids = append(ids, v.ID)
		}
	}
	return ids
}

// lacks says why the question cannot be asked of this sheet; "" if it can.
func (f *Findings) lacks() string {
	a := f.Ask
	for _, part := range []struct {
		ids []string
		as  string
	}{{a.Exposures, "the exposure"}, {a.Outcomes, "the outcome"}, {a.Given, "given"}, {a.Fixed, "fixed"}, {a.Forced, "in every set"}, {a.Unavailable, "in no set"}} {
		for _, id := range part.ids {
			switch at := f.Graph.Index(id); {
			case at >= 0 && at < f.Sheet:
			case f.Study.Variable(id) == nil:
				return fmt.Sprintf("%s is to be %s, but the study has no such variable.", id, part.as)
			default:
				return fmt.Sprintf("%s is to be %s, but it is not on the sheet of “%s”: put it there, or ask about another variable.", id, part.as, f.Rival)
			}
		}
	}
	switch {
	case len(a.Exposures) == 0 && len(a.Outcomes) == 0:
		return "Nothing is asked yet: name an exposure and an outcome."
	case len(a.Exposures) == 0:
		return fmt.Sprintf("The effect of what on %s? Name an exposure.", words.List(a.Outcomes))
	case len(a.Outcomes) == 0:
		return fmt.Sprintf("The effect of %s on what? Name an outcome.", words.List(a.Exposures))
	}
	for _, id := range a.Exposures {
		if slices.Contains(a.Outcomes, id) {
			return fmt.Sprintf("%s cannot be exposure and outcome at once: ask about two variables.", id)
		}
	}
	for _, other := range []struct {
		ids []string
		as  string
	}{{a.Given, "given"}, {a.Fixed, "fixed"}} {
		for _, id := range other.ids {
			if slices.Contains(a.Exposures, id) || slices.Contains(a.Outcomes, id) {
				return fmt.Sprintf("%s is in the question twice: it cannot be %s as well.", id, other.as)
			}
		}
	}
	return ""
}

// direct reports whether a controlled direct effect is asked for.
func (f *Findings) direct() bool {
	return f.Ask.Effect == study.DirectEffect && len(f.Exposures) == 1 && len(f.Outcomes) == 1
}

// elsewhere lists what is to be held but is not on this sheet, plates excepted.
func (f *Findings) elsewhere() []string {
	var out []string
	for _, id := range f.Ask.Held {
		if f.Graph.Index(id) < 0 && f.Study.Plate(id) == nil {
			out = append(out, id)
		}
	}
	return out
}

// unmeasured is the first variable in the question that cannot be had as data;
// "" if all can.
func (f *Findings) unmeasured() string {
	g := f.Graph
	can := make([]bool, g.Len())
	for _, v := range g.Order {
		can[v] = g.Measured[v]
		if g.Computed[v] {
			for _, p := range g.Parents[v] {
				can[v] = can[v] && can[p]
			}
		}
	}
	for _, v := range slices.Concat(f.Exposures, f.Outcomes) {
		if !can[v] {
			return g.Names[v]
		}
	}
	if f.direct() {
		for _, id := range f.Ask.Fixed {
			if !can[g.Index(id)] {
				return id
			}
		}
	}
	return ""
}
