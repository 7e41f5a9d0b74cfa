package causal

import (
	"fmt"
	"slices"
)

// A FrontDoor is a set of variables that carry the whole effect and are
// themselves unconfounded with exposure and outcome, given some others that do
// not descend from the exposure (Pearl 1995).
type FrontDoor struct {
	Through, Given []int
}

// An Instrument moves the exposure and reaches the outcome in no other way,
// given some variables that the effect does not touch (Brito & Pearl 2002;
// Henckel, Buttenschoen & Maathuis 2024). It gives the effect in linear models
// only.
type Instrument struct {
	Node  int
	Given []int
}

const (
	frontDoorSize    = 3  // so many variables at most stand in a front door that is looked for
	instrumentTrials = 20 // sets tried for one instrument
)

// isFrontDoor checks the criterion for through, given what does not descend
// from the exposure.
func (c *comparison) isFrontDoor(through, given []int) bool {
	if len(through) == 0 {
		return false
	}
	in, exposed := mark(c.g.Len(), through), mark(c.g.Len(), c.x)
	around := c.g.Keep(func(from, to int) bool { return !in[from] && !in[to] }, nil).Descendants(c.x...)
	for _, v := range c.y {
		if around[v] || in[v] {
			return false
		}
	}
	noneFromX := c.g.Keep(func(from, _ int) bool { return !exposed[from] }, nil)
	noneFromM := c.g.Keep(func(from, _ int) bool { return !in[from] }, nil)
	return Separated(noneFromX, c.x, through, given) && Separated(noneFromM, through, c.y, union(given, c.x))
}

// frontDoor looks for a small front door on the causal paths, and for little
// that must be given with it.
func (c *comparison) frontDoor() *FrontDoor {
	can, below := available(c.g), c.g.Descendants(c.x...)
	var carriers, rest []int
	for v := range can {
		switch {
		case !can[v] || slices.Contains(c.x, v) || slices.Contains(c.y, v):
		case c.causal[v]:
			carriers = append(carriers, v)
		case !below[v]:
			rest = append(rest, v)
		}
	}
	budget := searchBudget / 4
	var found *FrontDoor
	var try func(chosen []int, from, left int) bool // reports whether to go on
	try = func(chosen []int, from, left int) bool {
		if left == 0 {
			budget.spend(c.g, 12)
			given := minus(rest, chosen)
			switch {
			case c.isFrontDoor(chosen, nil):
				given = []int{}
			case !c.isFrontDoor(chosen, given):
				return !budget.spent()
			}
			for _, v := range given {
				if fewer := minus(given, []int{v}); c.isFrontDoor(chosen, fewer) {
					given = fewer
				}
			}
			found = &FrontDoor{Through: chosen, Given: given}
			return false
		}
		for i := from; i+left <= len(carriers); i++ {
			if !try(append(slices.Clone(chosen), carriers[i]), i+1, left-1) {
				return false
			}
		}
		return true
	}
	for size := 1; size <= min(frontDoorSize, len(carriers)) && try(nil, 0, size); size++ {
	}
	if found == nil { // all that the exposure acts on directly
		try(slices.DeleteFunc(carriers, func(v int) bool {
			return !slices.ContainsFunc(c.x, func(x int) bool { return c.g.HasArrow(x, v) })
		}), 0, 0)
	}
	return found
}

// instruments lists an instrument for the total effect with something to hold
// for each node that can be one, by node. It need not find every node: it
// tries some minimal sets only.
func (c *comparison) instruments() []Instrument {
	var all []Instrument
	budget := searchBudget / 2
	for z, ok := range c.usable {
		if !ok || budget.spent() {
			continue
		}
		apart := newSeparation(c.backDoor, z, c.y[0])
		for v, no := range c.forbidden {
			apart.usable[v] = apart.usable[v] && !no && !slices.Contains(c.x, v)
		}
		budget.spend(c.g, 8)
		if !apart.exists(nil) {
			continue
		}
		for _, given := range apart.some(instrumentTrials, &budget) {
			if !Separated(c.g, []int{z}, c.x, given) {
				all = append(all, Instrument{Node: z, Given: given})
				break
			}
		}
	}
	return all
}

// some gives a few minimal sets, the smaller ones first.
func (c *comparison) some(max int, budget *budget) (sets [][]int) {
	if slices.Contains(c.g.Computed, true) {
		sets, _ = c.minimal(nil, max)
		return sets
	}
	for z := range c.moral(nil).separators {
		if sets = append(sets, z); len(sets) == max || !budget.spend(c.g, 2*(len(z)+1)) {
			break
		}
	}
	sortSets(c.g, sets)
	return sets
}

// otherWays says how the effect can be had without an adjustment set.
func (r *Reading) otherWays() string {
	g := r.Graph
	var ways []string
	given := func(what string, nodes []int) string {
		if len(nodes) > 0 {
			what += ", given " + names(g, nodes)
		}
		return what
	}
	if f := r.FrontDoor; f != nil {
		ways = append(ways, fmt.Sprintf("through %s (%s)", names(g, f.Through), given("front-door", f.Given)))
	}
	if len(r.Instruments) > 0 {
		first := r.Instruments[0]
		ways = append(ways, fmt.Sprintf("%s as an instrument (%s)", g.Names[first.Node], given("needs linear laws", first.Given)))
	}
	switch len(ways) {
	case 0:
		return ""
	case 1:
		return "One way remains: " + ways[0] + "."
	}
	return "Two ways remain: " + series(ways, "or") + "."
}
