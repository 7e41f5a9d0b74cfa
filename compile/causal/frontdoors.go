package causal

import (
	"fmt"
	"slices"

	"arrowroot/compile/graph"
)

const givenTrials = 200 // sets of given variables tried

// FrontDoors lists the minimal front doors between x and y: first all that need
// nothing given, by (size, names), then those found for which something must be
// given, each with few such variables, through descendants of x alone. It stops
// after max (0 = 100) and says whether there may be more. Which variables to
// give is found by trial.
func FrontDoors(g *graph.Graph, x, y, max int) (doors []FrontDoor, more bool) {
	max = limit(max, 100)
	can := available(g)
	if x == y || !can[x] || !can[y] {
		return nil, false
	}
	s := &doorSearch{c: newComparison(g, []int{x}, []int{y}), budget: searchBudget}
	below := g.Descendants(x)
	var candidates, rest, carriers []int
	for v := range can {
		if can[v] && v != x && v != y {
			candidates = append(candidates, v)
			if below[v] {
				carriers = append(carriers, v)
			} else {
				rest = append(rest, v) // carries nothing of the effect: where something is given it is given too
			}
		}
	}
	take := func(sets [][]int, given []int) {
		for _, m := range sets {
			if slices.ContainsFunc(doors, func(d FrontDoor) bool { return within(d.Through, m) }) {
				continue // it is there already with less given
			}
			if len(doors) == max {
				more = true
				return
			}
			doors = append(doors, FrontDoor{Through: m, Given: s.fewer(m, given)})
		}
	}
	plain := s.minimal(candidates, nil)
	sortSets(g, plain)
	take(plain, nil)
	if !s.c.effect() {
		return doors, more || s.budget.spent()
	}
	for _, given := range givens(g, rest, x, y) {
		if s.budget.spent() || more {
			break
		}
		found := s.minimal(carriers, given)
		sortSets(g, found)
		take(found, given)
	}
	return doors, more || s.budget.spent()
}

// givens are the sets of given variables to try: one or two at a time, then
// what of them acts on exposure or outcome, then all.
func givens(g *graph.Graph, rest []int, x, y int) [][]int {
	var sets [][]int
	add := func(z []int) {
		if len(z) > 0 && len(sets) < givenTrials && !slices.ContainsFunc(sets, func(s []int) bool { return slices.Equal(s, z) }) {
			sets = append(sets, z)
		}
	}
	for _, ends := range [][]int{{x, y}, {x}, {y}} {
		above := g.Ancestors(ends...)
		add(slices.DeleteFunc(slices.Clone(rest), func(v int) bool { return !above[v] }))
	}
	add(rest)
	for i, v := range rest {
		add([]int{v})
		for _, w := range rest[:i] {
			add(tidy([]int{v, w}))
		}
	}
	slices.SortStableFunc(sets, func(a, b []int) int { return len(a) - len(b) })
	return sets
}

type doorSearch struct {
	c      *comparison
	budget budget
}

// widest is the largest set between inner and outer whose members meet the two
// conditions on back-door paths. A union of such sets is one too, and a node
// that fails in a large set fails in every smaller one, because fewer arrows
// are cut (after Jeong, Tian & Bareinboim 2022; Wienöbst, van der Zander &
// Liśkiewicz 2024).
func (s *doorSearch) widest(inner, outer, given []int) ([]int, bool) {
	g, x := s.c.g, s.c.x
	s.budget.spend(g, 6)
	exposed := mark(g.Len(), x)
	noneFromX := g.Keep(func(from, _ int) bool { return !exposed[from] }, nil)
	held := mark(g.Len(), given)
	touched := reachable(noneFromX, x, held, fixed(noneFromX, held))
	m := slices.DeleteFunc(slices.Clone(outer), func(v int) bool { return touched[v] })
	held = mark(g.Len(), union(given, x))
	for {
		s.budget.spend(g, 6)
		in := mark(g.Len(), m)
		noneFromM := g.Keep(func(from, _ int) bool { return !in[from] }, nil)
		touched := reachable(noneFromM, s.c.y, held, fixed(noneFromM, held))
		kept := slices.DeleteFunc(slices.Clone(m), func(v int) bool { return touched[v] })
		if len(kept) == len(m) {
			break
		}
		m = kept
	}
	return m, within(inner, m)
}

// minimal lists the minimal front doors among candidates, smallest first.
func (s *doorSearch) minimal(candidates, given []int) (found [][]int) {
	widest, _ := s.widest(nil, candidates, given)
	if !s.c.isFrontDoor(widest, given) {
		return nil
	}
	var try func(chosen []int, from, left int)
	try = func(chosen []int, from, left int) {
		if s.budget.spent() || slices.ContainsFunc(found, func(m []int) bool { return within(m, chosen) }) {
			return
		}
		if left == 0 {
			s.budget.spend(s.c.g, 12)
			if s.c.isFrontDoor(chosen, given) {
				found = append(found, chosen)
			}
			return
		}
		// Chosen with everything that may still be added must do.
		if m, ok := s.widest(chosen, union(chosen, widest[from:]), given); !ok || !s.c.isFrontDoor(m, given) {
			return
		}
		for i := from; i+left <= len(widest); i++ {
			try(append(slices.Clone(chosen), widest[i]), i+1, left-1)
		}
	}
	for size := 1; size <= len(widest) && !s.budget.spent(); size++ {
		try(nil, 0, size)
	}
	return found
}

// fewer drops what need not be given.
func (s *doorSearch) fewer(through, given []int) []int {
	given = tidy(given)
	for _, v := range given {
		if rest := minus(given, []int{v}); s.c.isFrontDoor(through, rest) {
			given = rest
		}
	}
	return given
}

// Sentence says what the front door between x and y does.
func (f *FrontDoor) Sentence(g *graph.Graph, x, y int) string {
	carry := "carry"
	if len(f.Through) == 1 {
		carry = "carries"
	}
	given := ""
	if len(f.Given) > 0 {
		given = fmt.Sprintf(", given %s,", names(g, f.Given))
	}
	return fmt.Sprintf("%s%s %s all that %s does to %s, and no open back door leads to or from there: the effect can be had in two steps.",
		names(g, f.Through), given, carry, g.Names[x], g.Names[y])
}
