package causal

import (
	"fmt"
	"slices"

	"arrowroot/compile/graph"
)

// InstrumentSets is a variable that can serve as an instrument, with all
// minimal sets that must be given for it.
type InstrumentSets struct {
	Node  int
	Given [][]int // minimal, by (size, names); [[]] = nothing
	More  bool    // the search stopped early: there may be more
}

// ArrowInstruments lists the instruments for the arrow from x to y, by node:
// given a set that holds no descendant of y, they are related to x, and
// unrelated to y once the arrow is cut (Brito & Pearl 2002). They give the
// coefficient of the arrow in linear models. Nil if no such arrow is drawn.
// Whether a given variable can serve is a hard question (van der Zander, Textor
// & Liśkiewicz 2015), so More says where the search was cut short; a node that
// is missing from the list may then still be one.
func ArrowInstruments(g *graph.Graph, x, y int) []InstrumentSets {
	if !g.HasArrow(x, y) {
		return nil
	}
	cut := g.Keep(func(from, to int) bool { return from != x || to != y }, nil)
	return instrumentSets(g, cut, x, y, g.Descendants(y))
}

// TotalInstruments lists the instruments for the total effect of x on y,
// likewise: the arrows that begin causal paths are cut, and neither instrument
// nor given set may descend from a causal node (Henckel, Buttenschoen &
// Maathuis 2024).
func TotalInstruments(g *graph.Graph, x, y int) []InstrumentSets {
	c := newComparison(g, []int{x}, []int{y})
	if x == y || !c.effect() {
		return nil
	}
	return instrumentSets(g, c.backDoor, x, y, c.forbidden)
}

const minInstrumentBudget budget = 20_000

func instrumentSets(g, cut *graph.Graph, x, y int, barred []bool) []InstrumentSets {
	can := available(g)
	if !can[x] || !can[y] {
		return nil
	}
	var usable []int
	for v := range can {
		if can[v] && !barred[v] && v != x && v != y {
			usable = append(usable, v)
		}
	}
	var all []InstrumentSets
	each := max(searchBudget/budget(len(usable)+1), minInstrumentBudget) // so that every variable has its turn
	for _, z := range usable {
		s := &instrumentSearch{g: g, cut: cut, z: z, x: x, y: y, usable: minus(usable, []int{z}), budget: each}
		if !s.separable() {
			continue
		}
		s.bySeparators()
		for size := 0; size <= len(s.usable) && !s.budget.spent(); size++ {
			s.try(nil, 0, size)
		}
		if slices.Contains(g.Computed, true) { // separators of the moral graph need not be minimal
			s.found = smallest(s.found)
		}
		if len(s.found) > 0 {
			sortSets(g, s.found)
			all = append(all, InstrumentSets{Node: z, Given: s.found, More: s.budget.spent()})
		}
	}
	return all
}

type instrumentSearch struct {
	g, cut  *graph.Graph
	z, x, y int
	usable  []int
	found   [][]int
	budget  budget
}

func (s *instrumentSearch) works(given []int) bool {
	return Separated(s.cut, []int{s.z}, []int{s.y}, given) && !Separated(s.g, []int{s.z}, []int{s.x}, given)
}

func (s *instrumentSearch) known(given []int) bool {
	return slices.ContainsFunc(s.found, func(f []int) bool { return within(f, given) })
}

// separable reports whether instrument and outcome can be separated at all.
func (s *instrumentSearch) separable() bool {
	if slices.Contains(s.g.Computed, true) {
		return true // what is computed may close paths in other ways; try
	}
	above := s.cut.Ancestors(s.z, s.y)
	z := slices.DeleteFunc(slices.Clone(s.usable), func(v int) bool { return !above[v] })
	return Separated(s.cut, []int{s.z}, []int{s.y}, z)
}

// bySeparators takes the minimal separators that leave instrument and exposure
// related: as no smaller set separates, they are minimal.
func (s *instrumentSearch) bySeparators() {
	apart := newSeparation(s.cut, s.z, s.y)
	apart.usable = mark(s.g.Len(), s.usable)
	left := instrumentTrials
	for given := range apart.moral(nil).separators {
		if s.works(given) {
			s.found = append(s.found, given)
		}
		s.budget.spend(s.g, 2*(len(given)+1))
		if left--; left == 0 {
			return
		}
	}
}

// try goes through the sets of one size: a set that separates without being
// minimal may do, where holding a collider is what relates the instrument.
func (s *instrumentSearch) try(chosen []int, from, left int) {
	s.budget -= budget(1 + len(chosen)*len(s.found))
	if s.budget.spent() || s.known(chosen) {
		return
	}
	if left == 0 {
		s.budget.spend(s.g, 2)
		if s.works(chosen) {
			s.found = append(s.found, chosen)
		}
		return
	}
	for i := from; i+left <= len(s.usable); i++ {
		s.try(append(slices.Clone(chosen), s.usable[i]), i+1, left-1)
	}
}

// Sentence says what the instrument does for x and y.
func (i *InstrumentSets) Sentence(g *graph.Graph, x, y int) string {
	given := ""
	if len(i.Given[0]) > 0 {
		given = fmt.Sprintf(", given %s,", names(g, i.Given[0]))
	}
	return fmt.Sprintf("%s%s is related to %s and to %s in no other way: it can serve as an instrument where the laws are linear.",
		g.Names[i.Node], given, g.Names[x], g.Names[y])
}
