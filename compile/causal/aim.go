package causal

import (
	"fmt"
	"math"
	"slices"

	"arrowroot/compile/graph"
)

// An Aim is a question about adjustment in full: the joint effect of several
// exposures on several outcomes, with wishes about the sets.
type Aim struct {
	Exposures, Outcomes []int
	Forced              []int     // in every set
	Unavailable         []int     // in no set, measured or not
	Costs               []float64 // of measuring, by node, finite and not negative; nil = 1 each
	MaxSets             int       // 0 = 100
}

// An Adjustment says which measured variables to hold for an aim.
type Adjustment struct {
	Graph *graph.Graph
	Aim   Aim

	Effect    bool    // some causal path is drawn
	Forbidden []int   // may be in no set
	Sets      [][]int // all minimal sets that contain the forced, as in a Reading
	MoreSets  bool

	// The claims below are nil when they cannot be made. The precise ones hold
	// for every model of the graph (Rotnitzky & Smucler 2020; Henckel, Perković &
	// Maathuis 2022; Smucler, Sapienza & Rotnitzky 2022).
	Cheapest     []int // a set of least total cost
	Cost         float64
	Optimal      []int // the most precise of all valid sets, which need not be minimal
	BestMinimal  []int // the most precise of the minimal sets
	BestSmallest []int // the most precise of the sets with fewest members

	Sentence string
}

// Adjust answers an aim. Exposures that are outcomes too, or a cost that is
// negative or infinite, are programming errors and panic.
func Adjust(g *graph.Graph, aim Aim) *Adjustment {
	aim.Exposures, aim.Outcomes, aim.Forced = tidy(aim.Exposures), tidy(aim.Outcomes), tidy(aim.Forced)
	aim.Unavailable, aim.MaxSets = tidy(aim.Unavailable), limit(aim.MaxSets, 100)
	if len(minus(aim.Exposures, aim.Outcomes)) < len(aim.Exposures) {
		panic("causal: an exposure that is an outcome")
	}
	c := newComparison(g, aim.Exposures, aim.Outcomes)
	for _, v := range aim.Unavailable {
		c.usable[v] = false
	}
	a := &Adjustment{Graph: g, Aim: aim, Effect: c.effect(), Forbidden: list(c.forbidden)}
	a.Sets, a.MoreSets = c.minimal(aim.Forced, aim.MaxSets)
	if len(a.Sets) > 0 {
		a.cheapest(c)
		if a.Effect {
			a.precise(c)
		}
	}
	a.Sentence = a.sentence()
	return a
}

func (a *Adjustment) precise(c *comparison) {
	if o, ok := c.optimal(); ok && within(a.Aim.Forced, o) {
		a.Optimal = o
	}
	best := func(sets [][]int) []int {
		if at := c.best(sets); at >= 0 {
			return sets[at]
		}
		return nil
	}
	smallest := slices.IndexFunc(a.Sets, func(z []int) bool { return len(z) > len(a.Sets[0]) })
	if smallest < 0 {
		smallest = len(a.Sets)
	}
	switch {
	case !a.MoreSets:
		a.BestMinimal = best(a.Sets)
		a.BestSmallest = best(a.Sets[:smallest])
	case len(a.Aim.Forced) == 0 && !slices.Contains(a.Graph.Computed, true):
		a.BestMinimal = c.moral(nil).nearest()
	}
}

// nearest is the minimal separator nearest to pole b: the most precise of the
// minimal sets (Smucler, Sapienza & Rotnitzky 2022). Nil if there is none.
func (u *undirected) nearest() []int {
	side := newBitset(len(u.near))
	side.add(u.b)
	wall := u.rim(side)
	if wall.has(u.a) {
		return nil
	}
	return u.rim(u.component(u.a, wall)).members()
}

func (a *Adjustment) cost(z []int) float64 {
	total := 0.0
	for _, v := range z {
		total += a.costOf(v)
	}
	return total
}

func (a *Adjustment) costOf(v int) float64 {
	if a.Aim.Costs == nil {
		return 1
	}
	c := a.Aim.Costs[v]
	if !(c >= 0) || math.IsInf(c, 1) {
		panic(fmt.Sprintf("causal: %s has the cost %g", a.Graph.Names[v], c))
	}
	return c
}

// cheapest cuts exposures from outcomes in the moral graph at least cost. With
// computed variables there are sets that the moral graph does not show, so the
// claim is made only if all are listed.
func (a *Adjustment) cheapest(c *comparison) {
	var z []int
	if slices.Contains(a.Graph.Computed, true) {
		if a.MoreSets {
			return
		}
		z = slices.MinFunc(a.Sets, func(s, t []int) int {
			switch d := a.cost(s) - a.cost(t); {
			case d < 0:
				return -1
			case d > 0:
				return 1
			}
			return 0
		})
	} else {
		z = union(c.moral(a.Aim.Forced).cheapest(a.costOf), a.Aim.Forced)
		for _, v := range minus(z, a.Aim.Forced) { // what costs nothing may be in the cut for no reason
			if fewer := minus(z, []int{v}); c.valid(fewer) {
				z = fewer
			}
		}
	}
	a.Cheapest, a.Cost = z, a.cost(z)
}

// cheapest is a set of nodes that cuts the poles apart at least cost; there
// must be one.
func (u *undirected) cheapest(cost func(int) float64) []int {
	n := len(u.near)
	net := newNetwork(2 * n) // a node is entered at v and left at n+v
	for _, v := range u.on.members() {
		room := math.Inf(1)
		if v != u.a && v != u.b {
			room = cost(v)
		}
		net.edge(v, n+v, room)
		for _, w := range u.near[v].and(u.on).members() {
			net.edge(n+v, w, math.Inf(1))
		}
	}
	_, reached := net.most(u.a, u.b)
	cut := []int{}
	for _, v := range u.on.members() {
		if reached[v] && !reached[n+v] {
			cut = append(cut, v)
		}
	}
	return cut
}

func (a *Adjustment) sentence() string {
	g := a.Graph
	effect := fmt.Sprintf("the effect of %s on %s", names(g, a.Aim.Exposures), names(g, a.Aim.Outcomes))
	if len(a.Aim.Exposures) > 1 {
		effect = fmt.Sprintf("the joint effect of %s on %s", names(g, a.Aim.Exposures), names(g, a.Aim.Outcomes))
	}
	with := ""
	if len(a.Aim.Forced) > 0 {
		with = " together with " + names(g, a.Aim.Forced)
	}
	switch {
	case a.Sets == nil && len(a.Aim.Unavailable) > 0:
		return fmt.Sprintf("Without %s, no set of measured variables gives %s%s.", names(g, a.Aim.Unavailable), effect, with)
	case a.Sets == nil:
		return fmt.Sprintf("No set of measured variables gives %s%s.", effect, with)
	case len(a.Sets[0]) == len(a.Aim.Forced):
		more := ""
		if extra := minus(a.Optimal, a.Aim.Forced); len(extra) > 0 {
			more = fmt.Sprintf("; holding %s makes it as precise as can be", names(g, extra))
		}
		return fmt.Sprintf("Nothing more need be held to read %s%s%s.", effect, with, more)
	case a.Optimal != nil:
		return fmt.Sprintf("Hold %s to read %s; no other set is more precise.", names(g, a.Optimal), effect)
	case a.BestMinimal != nil && len(a.Sets) > 1:
		return fmt.Sprintf("Hold %s to read %s; no other set with nothing to spare is more precise.", names(g, a.BestMinimal), effect)
	}
	return fmt.Sprintf("Hold %s to read %s.", names(g, a.Sets[0]), effect)
}
