package causal

import (
	"fmt"
	"iter"
	"math/big"
	"slices"

	"arrowroot/compile/graph"
)

// A Class is what can be said of the diagrams that imply the same independences
// as a given one. With unmeasured causes, or computed variables, the class is
// not listed; then Reversible has the arrows between measured variables that
// can be turned round one at a time.
type Class struct {
	Listed     bool
	Directed   [][2]int // arrows that all members share, in the order drawn; nil if not listed
	Reversible [][2]int // arrows that point the other way in some member, in the order drawn
	Undecided  [][2]int // arrows of which it could not be decided whether they can be turned round
	Size       *big.Int // the number of members; nil if not listed, or too long to count
	Sentence   string
}

// ClassOf gives the class of a diagram (Verma & Pearl 1990; Meek 1995).
func ClassOf(g *graph.Graph) *Class {
	c := &Class{Listed: listed(g)}
	if c.Listed {
		p := skeletonOf(g)
		p.close()
		for _, a := range g.Arrows {
			if p.free(a[0], a[1]) {
				c.Reversible = append(c.Reversible, a)
			} else {
				c.Directed = append(c.Directed, a)
			}
		}
		c.Size = newCounter().size(p)
	} else {
		c.turn(g)
	}
	c.Sentence = c.sentence(g)
	return c
}

// listed reports whether independences alone define the class: all is measured
// and nothing is computed.
func listed(g *graph.Graph) bool {
	return len(g.Arcs) == 0 && !slices.Contains(g.Measured, false) && !slices.Contains(g.Computed, true)
}

// turn finds the arrows that can be turned round one at a time.
func (c *Class) turn(g *graph.Graph) {
	can, computed := available(g), slices.Contains(g.Computed, true)
	basis, more := Basis(g)
	budget := 2 * searchBudget
	for _, a := range g.Arrows {
		if !can[a[0]] || !can[a[1]] || g.Computed[a[0]] || g.Computed[a[1]] {
			continue
		}
		if slices.ContainsFunc(basis, func(s Independence) bool { return s.brokenBy(g, a) }) {
			continue
		}
		if budget.spent() {
			c.Undecided = append(c.Undecided, a)
			continue
		}
		budget.spend(g, 8*len(basis)+4*g.Len())
		turned := turnedRound(g, a)
		if turned == nil {
			continue
		}
		if notIn(g, basis, turned) != nil {
			continue
		}
		var s Sameness
		if computed {
			s.byTrial(g, turned)
		} else {
			basis, moreTurned := Basis(turned)
			s.Same = notIn(turned, basis, g) == nil
			s.Unknown = s.Same && (more || moreTurned)
		}
		switch {
		case s.Unknown:
			c.Undecided = append(c.Undecided, a)
		case s.Same:
			c.Reversible = append(c.Reversible, a)
		}
	}
}

// brokenBy reports whether, with an arrow turned round, an open path of two
// lines joins what the statement says is unrelated. It is a quick look that
// misses what longer paths do.
func (i *Independence) brokenBy(g *graph.Graph, arrow [2]int) bool {
	to, from := arrow[0], arrow[1]
	open := func(ends, others []int) bool {
		if slices.Contains(ends, from) && slices.Contains(i.Given, to) { // it would meet others at its head
			for _, p := range others {
				if slices.Contains(g.Parents[to], p) || slices.Contains(g.Siblings[to], p) {
					return true
				}
			}
		}
		if slices.Contains(ends, to) && !slices.Contains(i.Given, from) { // it would lead on from its tail
			for _, p := range others {
				if slices.Contains(g.Parents[from], p) || slices.Contains(g.Siblings[from], p) || slices.Contains(g.Children[from], p) {
					return true
				}
			}
		}
		return false
	}
	return open(i.A, i.B) || open(i.B, i.A)
}

// turnedRound is g with an arrow the other way; nil if that closes a cycle.
func turnedRound(g *graph.Graph, arrow [2]int) *graph.Graph {
	spec := graph.Spec{Names: g.Names, Arcs: g.Arcs}
	for v := range g.Len() {
		if !g.Measured[v] {
			spec.Unmeasured = append(spec.Unmeasured, v)
		}
		if g.Computed[v] {
			spec.Computed = append(spec.Computed, v)
		}
	}
	for _, a := range g.Arrows {
		if a == arrow {
			a = [2]int{a[1], a[0]}
		}
		spec.Arrows = append(spec.Arrows, a)
	}
	turned, err := graph.New(spec)
	if err != nil {
		return nil
	}
	return turned
}

func (c *Class) sentence(g *graph.Graph) string {
	var turn []string
	for _, a := range c.Reversible {
		turn = append(turn, arrowText(g, a[:]))
	}
	switch {
	case len(c.Undecided) > 0:
		text := fmt.Sprintf("Of %d arrows it could not be decided whether they could be turned round without changing an implied independence.", len(c.Undecided))
		if len(turn) > 0 {
			text = fmt.Sprintf("Without changing any implied independence, %s could be turned round, one at a time; of %d more it could not be decided.", series(turn, "and"), len(c.Undecided))
		}
		return text
	case !c.Listed && len(turn) == 0:
		return "No single arrow between measured variables could be turned round without changing an implied independence. With unmeasured causes or computed variables the diagrams that imply the same are not listed."
	case !c.Listed:
		return fmt.Sprintf("Without changing any implied independence, %s could be turned round, one at a time. With unmeasured causes or computed variables the diagrams that imply the same are not listed.", series(turn, "and"))
	case len(turn) == 0:
		return "No other diagram of these variables implies the same independences."
	case c.Size == nil:
		return fmt.Sprintf("Other diagrams imply the same independences, more than could be counted: %s could be turned round.", series(turn, "and"))
	}
	return fmt.Sprintf("%v diagrams imply the same independences, this one among them: %s could be turned round.", c.Size, series(turn, "and"))
}

// Members gives every diagram that implies the same independences as g, g among
// them; nothing if the class is not listed. They come one at a time, each after
// work bounded by a polynomial, because a direction that the rules leave open
// can be chosen either way (Meek 1995).
func Members(g *graph.Graph) iter.Seq[*graph.Graph] {
	return func(yield func(*graph.Graph) bool) {
		if !listed(g) {
			return
		}
		p := skeletonOf(g)
		p.close()
		p.members(g, yield)
	}
}

func (p *pattern) members(g *graph.Graph, yield func(*graph.Graph) bool) bool {
	for _, a := range g.Arrows {
		if !p.free(a[0], a[1]) {
			continue
		}
		for _, way := range [][2]int{a, {a[1], a[0]}} {
			q := p.clone()
			q.on[way[1]][way[0]] = false
			q.close()
			if !q.members(g, yield) {
				return false
			}
		}
		return true
	}
	spec := graph.Spec{Names: g.Names}
	for _, a := range g.Arrows {
		if !p.on[a[0]][a[1]] {
			a = [2]int{a[1], a[0]}
		}
		spec.Arrows = append(spec.Arrows, a)
	}
	member, err := graph.New(spec)
	if err != nil { // the rules leave no cycle
		panic(err)
	}
	return yield(member)
}

// A Sameness is the answer to whether two diagrams of the same measured
// variables, matched by name, imply the same independences among them.
type Sameness struct {
	Same    bool
	Unknown bool // it could not be decided; Same is false

	// An independence that one implies and the other does not; A numbers the
	// nodes of the first diagram if First, else of the second.
	Witness *Independence
	First   bool

	OnlyFirst, OnlySecond []string // measured variables that the other lacks
	Hidden                bool     // one of them has unmeasured causes
	Functional            string   // with hidden causes: a constraint, no independence, that data could contradict
}

const computedNodes = 10 // measured variables up to which all sets are tried when some are computed

// SameIndependences compares two diagrams. All that a basis of the one says
// must hold in the other, and the reverse.
func SameIndependences(a, b *graph.Graph) *Sameness {
	s := compareIndependences(a, b)
	if s.Same && s.Hidden {
		for _, g := range []*graph.Graph{a, b} {
			if f, _ := Functionals(g); len(f) > 0 && s.Functional == "" {
				s.Functional = fmt.Sprintf("%s does not depend on %s", symbols(g, f[0].Formula, deeper(nil, Free(f[0].Formula))), g.Names[f[0].FreeOf])
			}
		}
	}
	return s
}

func compareIndependences(a, b *graph.Graph) *Sameness {
	s := &Sameness{Hidden: hidden(a) || hidden(b)}
	s.OnlyFirst, s.OnlySecond = onlyMeasured(a, b), onlyMeasured(b, a)
	if len(s.OnlyFirst)+len(s.OnlySecond) > 0 {
		return s
	}
	if slices.Contains(a.Computed, true) || slices.Contains(b.Computed, true) {
		s.byTrial(a, b)
		return s
	}
	first, moreFirst := Basis(a)
	second, moreSecond := Basis(b)
	if s.Witness = notIn(a, first, b); s.Witness != nil {
		s.First = true
		return s
	}
	if s.Witness = notIn(b, second, a); s.Witness != nil {
		return s
	}
	s.Unknown = moreFirst || moreSecond
	s.Same = !s.Unknown
	return s
}

func hidden(g *graph.Graph) bool { return len(Project(g).Graph.Arcs) > 0 }

func onlyMeasured(a, b *graph.Graph) []string {
	var only []string
	can := available(b)
	for v, measured := range available(a) {
		if at := b.Index(a.Names[v]); measured && (at < 0 || !can[at]) {
			only = append(only, a.Names[v])
		}
	}
	return only
}

// notIn finds a statement of g about a pair that does not hold in other.
func notIn(g *graph.Graph, statements []Independence, other *graph.Graph) *Independence {
	at := map[string]int{}
	for v, name := range other.Names {
		at[name] = v
	}
	there := func(nodes []int) []int {
		all := make([]int, len(nodes))
		for i, v := range nodes {
			all[i] = at[g.Names[v]]
		}
		return all
	}
	for _, all := range statements {
		if Separated(other, there(all.A), there(all.B), there(all.Given)) {
			continue
		}
		for _, s := range Pairwise([]Independence{all}) {
			if !Separated(other, there(s.A), there(s.B), there(s.Given)) {
				return &s
			}
		}
	}
	return nil
}

// byTrial compares by all pairs and sets: with computed variables more is
// separated than a basis says.
func (s *Sameness) byTrial(a, b *graph.Graph) {
	nodes := list(available(a))
	if len(nodes) > computedNodes {
		s.Unknown = true
		return
	}
	for _, turn := range []struct{ g, other *graph.Graph }{{a, b}, {b, a}} {
		nodes := list(available(turn.g))
		for i, v := range nodes {
			for _, w := range nodes[i+1:] {
				rest := minus(nodes, []int{v, w})
				for at := range 1 << len(rest) {
					var given []int
					for k, u := range rest {
						if at>>k&1 == 1 {
							given = append(given, u)
						}
					}
					i := Independence{[]int{v}, []int{w}, given}
					if Separated(turn.g, i.A, i.B, given) {
						if s.Witness = notIn(turn.g, []Independence{i}, turn.other); s.Witness != nil {
							s.First = turn.g == a
							return
						}
					}
				}
			}
		}
	}
	s.Same = true
}

// Sentence says how the diagrams a and b, of the given rivals, compare.
func (s *Sameness) Sentence(a, b *graph.Graph, first, second string) string {
	switch {
	case len(s.OnlyFirst) > 0:
		return fmt.Sprintf("%s and %s are not about the same measured variables: %s has %s.", first, second, first, series(s.OnlyFirst, "and"))
	case len(s.OnlySecond) > 0:
		return fmt.Sprintf("%s and %s are not about the same measured variables: %s has %s.", first, second, second, series(s.OnlySecond, "and"))
	case s.Witness != nil:
		g, by, other := a, first, second
		if !s.First {
			g, by, other = b, second, first
		}
		given := ""
		if len(s.Witness.Given) > 0 {
			given = fmt.Sprintf(" once %s %s known", names(g, s.Witness.Given), be(len(s.Witness.Given)))
		}
		return fmt.Sprintf("Data can tell %s and %s apart: %s says that %s and %s are unrelated%s, and %s does not.",
			first, second, by, names(g, s.Witness.A), names(g, s.Witness.B), given, other)
	case s.Unknown:
		return fmt.Sprintf("Whether %s and %s imply the same independences could not be decided.", first, second)
	case s.Functional != "":
		return fmt.Sprintf("%s and %s imply the same independences among what was measured. A functional constraint may still tell them apart: %s.", first, second, s.Functional)
	case s.Hidden:
		return fmt.Sprintf("%s and %s imply the same independences among what was measured. As causes are unmeasured, other traces of their arrows in the data are possible, but none was found.", first, second)
	}
	return fmt.Sprintf("%s and %s imply the same independences among what was measured: no amount of data of this kind can tell them apart by their arrows.", first, second)
}
