package causal

import (
	"slices"
)

// A Fixing divides a distribution by that of a node given others and multiplies
// it by any distribution of the node given Known, which were fixed before. What
// is left has no cause of the node any more (Richardson, Evans, Robins &
// Shpitser 2023, "Nested Markov properties for acyclic directed mixed graphs").
type Fixing struct {
	Node         int
	Given, Known []int // Known are not summed out later, or are among Given
}

// fixings lists how a factor is reached by fixing, round by round: the laws of a
// round are those of what the round before left. A node that depends on fixed
// ones alone is as good as fixed.
func (s *formulaSearch) fixings(f *factor, u int) [][]Fixing {
	var chain []*factor
	for at := f; at != nil; at = at.from {
		chain = append(chain, at)
	}
	start := chain[len(chain)-1]
	play := s.h.Ancestors(append(list(start.set), u)...)
	fixed := make([]bool, s.h.Len())
	var rounds [][]Fixing
	for _, at := range slices.Backward(chain) {
		if at.from != nil {
			play = at.left
		}
		if round := s.round(play, at.set, fixed, f.depends, u); len(round) > 0 {
			rounds = append(rounds, round)
		}
	}
	return rounds
}

// round fixes all nodes in play but those of a set, and marks them fixed.
func (s *formulaSearch) round(play, set, fixed, depends []bool, u int) []Fixing {
	var all []Fixing
	earlier := make([]bool, s.h.Len())
	for _, w := range s.h.Order {
		if !play[w] {
			continue
		}
		if earlier[w] = true; set[w] {
			continue
		}
		given := shield(s.h, w, earlier)
		if slices.ContainsFunc(given, func(v int) bool { return !fixed[v] }) {
			var known []int
			for v, is := range fixed {
				if is && (depends[v] || v == u || slices.Contains(given, v)) {
					known = append(known, v)
				}
			}
			all = append(all, Fixing{s.p.Node[w], s.p.node(given), s.p.node(known)})
		}
		fixed[w] = true
	}
	return all
}

// known lists what a factor's last node may depend on besides.
func (s *formulaSearch) known(f *factor, v int) []int {
	return s.p.node(minus(list(f.depends), []int{v}))
}
