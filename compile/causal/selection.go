package causal

import (
	"fmt"
	"slices"

	"arrowroot/compile/graph"
)

// A Selection says what rows that were kept for a reason still show about an
// exposure and an outcome.
type Selection struct {
	Recoverable bool    // P(outcome | exposure) is the same in kept rows as in all
	OddsRatio   bool    // so is the odds ratio at least
	Sets        [][]int // all sets that give the effect from kept rows, if their spread in all rows is known; by (size, names); nil = none found
	More        bool    // the search stopped early
	Sentence    string
}

const selectionTrials = 4096 // sets tried

// ReadSelection reads a selection of rows by the given nodes. External are
// the measured variables whose joint distribution in all rows is known from
// elsewhere. Without a set the conditional distribution is recoverable only as
// Recoverable says; the effect may still be had in ways not looked for
// (Bareinboim, Tian & Pearl 2014, theorem 1 and the selection-backdoor
// criterion).
func ReadSelection(g *graph.Graph, exposure, outcome int, selected, external []int) *Selection {
	selected = tidy(selected)
	x, y := []int{exposure}, []int{outcome}
	s := &Selection{Recoverable: Separated(g, selected, y, x), OddsRatio: Separated(g, selected, x, y)}
	s.OddsRatio = s.OddsRatio || s.Recoverable
	can, below := available(g), g.Descendants(exposure)
	candidates := slices.DeleteFunc(tidy(external), func(v int) bool {
		return !can[v] || v == exposure || v == outcome || slices.Contains(selected, v)
	})
	noneFromX := g.Keep(func(from, _ int) bool { return from != exposure }, nil)
	trials := 0
	var try func(chosen []int, from, left int) bool
	try = func(chosen []int, from, left int) bool {
		if left == 0 {
			if trials++; trials > selectionTrials {
				s.More = true
				return false
			}
			var before, after []int
			for _, v := range chosen {
				if below[v] {
					after = append(after, v)
				} else {
					before = append(before, v)
				}
			}
			if Separated(noneFromX, x, y, before) &&
				(len(after) == 0 || Separated(g, after, y, union(x, before))) &&
				Separated(g, selected, y, union(x, chosen)) {
				s.Sets = append(s.Sets, tidy(chosen))
			}
			return true
		}
		for i := from; i+left <= len(candidates); i++ {
			if !try(append(slices.Clone(chosen), candidates[i]), i+1, left-1) {
				return false
			}
		}
		return true
	}
	for size := 0; size <= len(candidates) && try(nil, 0, size); size++ {
	}
	sortSets(g, s.Sets)
	s.Sentence = s.sentence(g, exposure, outcome, selected)
	return s
}

func (s *Selection) sentence(g *graph.Graph, exposure, outcome int, selected []int) string {
	x, y, by := g.Names[exposure], g.Names[outcome], names(g, selected)
	text := fmt.Sprintf("Rows were kept by %s, which is related to %s beyond %s: how they go together in these rows is not how they do in all.", by, y, x)
	if s.Recoverable {
		text = fmt.Sprintf("Rows were kept by %s, which tells nothing of %s once %s is known: how they go together in these rows is how they do in all.", by, y, x)
	} else if s.OddsRatio {
		text = fmt.Sprintf("Rows were kept by %s, which depends on %s: of how %s and %s go together, these rows keep the odds ratio alone.", by, y, x, y)
	}
	switch {
	case len(s.Sets) > 0 && len(s.Sets[0]) == 0:
		text += fmt.Sprintf(" The effect of %s on %s can be read from them.", x, y)
	case len(s.Sets) > 0:
		text += fmt.Sprintf(" The effect of %s on %s can be had from them with %s held, weighed as in all rows.", x, y, names(g, s.Sets[0]))
	}
	return text
}
