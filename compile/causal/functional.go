package causal

import (
	"fmt"
	"slices"

	"arrowroot/compile/graph"
)

// A Functional is a constraint on the joint distribution that is no
// independence between measured variables: a formula whose value is the same
// whatever FreeOf is (Verma & Pearl 1990; Tian & Pearl 2002, "On the testable
// implications of causal models with hidden variables"). It stands for an arrow
// from FreeOf to Node that is not drawn though no set separates the two.
//
// It says that Node and FreeOf are independent given Given once the rounds of
// Fixings are done one after another, which is how rows can be weighted to test
// it.
type Functional struct {
	Node, FreeOf int
	Formula      Estimand

	Fixings [][]Fixing
	Given   []int
}

const (
	functionalSteps  = 200 // factors looked at for one variable
	functionalLength = 40  // probabilities in a formula that is taken further
)

// Functionals lists functional constraints, at most one for each pair of
// variables, in the order of the arrows. It looks at the factors of districts
// and of what is left when members are summed out; more says that it stopped
// early. There may be constraints of other forms.
func Functionals(g *graph.Graph) (all []Functional, more bool) {
	p := Project(g)
	h := p.Graph
	if slices.Contains(h.Computed, true) { // no positive distribution: not looked for
		return nil, true
	}
	before := make([]bool, h.Len())
	budget := searchBudget
	for _, v := range h.Order {
		if budget.spent() {
			return all, true
		}
		before[v] = true
		var apart []int // what a constraint on v can be free of
		for u := range h.Len() {
			if before[u] && u != v && !h.HasArrow(u, v) && !slices.Contains(h.Siblings[v], u) {
				budget.spend(h, 3)
				if !separable(h, u, v) {
					apart = append(apart, u)
				}
			}
		}
		if len(apart) == 0 {
			continue
		}
		s := &formulaSearch{p: p, h: h, above: before}
		start := &factor{set: district(h, v, before)}
		start.depends = parentsAnd(h, start.set)
		start.could = start.depends
		seen := map[string]bool{}
		for queue := []*factor{start}; len(queue) > 0 && len(apart) > 0; queue = queue[1:] {
			f := queue[0]
			if k := fmt.Sprint(f.set); seen[k] {
				continue
			} else if len(seen) == functionalSteps || budget.spent() {
				more = true
				break
			} else {
				seen[k] = true
			}
			for _, u := range apart {
				if !f.could[u] || f.depends[u] {
					continue
				}
				switch formula, ok := s.formulaOf(f); {
				case !ok:
					more = true
				case slices.Contains(Free(formula), p.Node[u]):
					all = append(all, Functional{Node: p.Node[v], FreeOf: p.Node[u], Formula: formula, Fixings: s.fixings(f, u), Given: s.known(f, v)})
					apart = minus(apart, []int{u})
				}
			}
			inside := h.Keep(func(from, to int) bool { return f.set[from] && f.set[to] }, nil)
			for w, in := range f.set {
				budget.spend(h, 2)
				below := inside.Descendants(w)
				if !in || below[v] {
					continue
				}
				left := slices.Clone(f.set)
				for u := range left {
					left[u] = left[u] && !below[u]
				}
				next := &factor{set: district(h, v, left), left: left, from: f}
				next.depends = parentsAnd(h, next.set)
				next.could = slices.Clone(f.could)
				for u := range next.could {
					next.could[u] = next.could[u] || next.depends[u]
				}
				queue = append(queue, next)
			}
		}
	}
	return all, more
}

// A factor is that of a set of nodes which unmeasured causes tie together. Its
// formula is written only when wanted, because it can be long.
type factor struct {
	set, left []bool  // set is a district of left, which is from.set with some members summed out
	from      *factor // nil for a district of the whole
	depends   []bool  // what the factor can depend on
	could     []bool  // what its formula could mention
	formula   Estimand
}

// parentsAnd marks the members of a set and their parents.
func parentsAnd(h *graph.Graph, set []bool) []bool {
	all := slices.Clone(set)
	for w, in := range set {
		for _, q := range h.Parents[w] {
			all[q] = all[q] || in
		}
	}
	return all
}

// formulaOf writes the formula of a factor; not ok if it is too long to show.
func (s *formulaSearch) formulaOf(f *factor) (Estimand, bool) {
	if f.formula != nil {
		return f.formula, true
	}
	if f.from == nil {
		f.formula = s.chain(f.set)
		return f.formula, true
	}
	before, ok := s.formulaOf(f.from)
	if !ok || length(before) > functionalLength {
		return nil, false
	}
	gone := minus(list(f.from.set), list(f.left))
	f.formula = s.within(f.set, f.left, sum(s.p.node(gone), before))
	return f.formula, true
}

// length counts the probabilities in an estimand.
func length(e Estimand) int {
	switch e := e.(type) {
	case Product:
		n := 0
		for _, f := range e.Factors {
			n += length(f)
		}
		return n
	case Quotient:
		return length(e.Above) + length(e.Below)
	case Sum:
		return length(e.Body)
	}
	return 1
}

// separable reports whether some set separates two nodes of a projection.
// Their ancestors do if anything does.
func separable(h *graph.Graph, a, b int) bool {
	return Separated(h, []int{a}, []int{b}, minus(list(h.Ancestors(a, b)), tidy([]int{a, b})))
}

// Sentence says the constraint.
func (f *Functional) Sentence(g *graph.Graph) string {
	return fmt.Sprintf("Your arrows say that %s is the same whatever %s is. No independence says so: nothing measured separates %s and %s.",
		symbols(g, f.Formula, deeper(nil, Free(f.Formula))), g.Names[f.FreeOf], g.Names[f.FreeOf], g.Names[f.Node])
}
