package causal

import (
	"fmt"
	"iter"
	"slices"

	"arrowroot/compile/graph"
)

// An Independence says that two sets of measured variables are unrelated once
// others are known. It holds in every model of the graph.
type Independence struct {
	A, B, Given []int
}

// Sentence says it in the user's names.
func (i *Independence) Sentence(g *graph.Graph) string {
	claim := fmt.Sprintf("%s and %s are unrelated", names(g, i.A), names(g, i.B))
	if len(i.A) == 1 && len(i.B) > 1 {
		claim = fmt.Sprintf("%s is unrelated to %s", names(g, i.A), names(g, i.B))
	}
	if len(i.Given) == 0 {
		return "Your arrows say that " + claim + "."
	}
	return fmt.Sprintf("Your arrows say that %s once %s %s known.", claim, names(g, i.Given), be(len(i.Given)))
}

// A Separation is a pair of measured variables with all minimal sets of
// measured variables that separate them. Without a set the pair is related
// whatever is known.
type Separation struct {
	A, B  int
	Given [][]int // by (size, names); nil = the pair cannot be separated
	More  bool    // there are more sets than were asked for
}

// Separations lists every pair of measured variables in the order of the
// nodes, with at most max sets each (0 = 100). A missing arrow with no
// separating set promises no independence, though it may promise a functional
// constraint. Pairs of which the given set computes one are left out: the data
// cannot contradict them. There are as many searches as pairs: a second or two
// for 100 variables, so not for the window's goroutine; with one set each, which
// is then the one nearest to A, a tenth of that.
func Separations(g *graph.Graph, max int) []Separation {
	return slices.Collect(EachSeparation(g, max))
}

// EachSeparation is Separations one pair at a time, for who may have enough
// before the last.
func EachSeparation(g *graph.Graph, max int) iter.Seq[Separation] {
	return func(yield func(Separation) bool) {
		max = limit(max, 100)
		can, computed := available(g), slices.Contains(g.Computed, true)
		nodes := list(can)
		for i, a := range nodes {
			for _, b := range nodes[i+1:] {
				s := Separation{A: a, B: b}
				if max == 1 && !computed {
					s.Given, s.More = oneSeparator(g, can, a, b)
				} else {
					s.Given, s.More = MinimalSeparators(g, a, b, nil, max)
				}
				s.Given = slices.DeleteFunc(s.Given, func(z []int) bool {
					known := fixed(g, mark(g.Len(), z))
					return known[a] || known[b]
				})
				if len(s.Given) == 0 {
					s.Given = nil
				}
				if !yield(s) {
					return
				}
			}
		}
	}
}

// oneSeparator gives a minimal separator. If the one nearest to a is also the
// one nearest to b, it is the only one, as all others lie between (Escalante
// 1972).
func oneSeparator(g *graph.Graph, can []bool, a, b int) (sets [][]int, more bool) {
	c := &comparison{g: g, x: []int{a}, y: []int{b}, backDoor: g, usable: slices.Clone(can)}
	c.usable[a], c.usable[b] = false, false
	z, ok := c.nearest()
	if !ok {
		return nil, false
	}
	c.x, c.y = c.y, c.x
	other, _ := c.nearest()
	return [][]int{z}, !slices.Equal(z, other)
}

const basisSets = 64 // ancestral sets looked at for one variable

// Basis is a list of independences from which all others between measured
// variables follow: along the arrows, each variable is unrelated to earlier
// ones given what shields it, in every ancestral set where the shield is
// another one (the ordered local Markov property, Richardson 2003; without
// unmeasured causes, earlier variables given the parents). Nothing is listed
// that an unmeasured cause makes false. More says that a variable has so many
// shields that the list may be incomplete. Statements about computed variables
// are left out.
func Basis(g *graph.Graph) (basis []Independence, more bool) {
	p := Project(g)
	h := p.Graph
	before := make([]bool, h.Len()) // ancestral: along the arrows
	budget := 2 * searchBudget
	for _, v := range h.Order {
		before[v] = true
		if h.Computed[v] {
			continue
		}
		start := slices.Clone(before)
		seen := map[string]bool{}
		var found []Independence
		for queue := [][]bool{start}; len(queue) > 0; queue = queue[1:] {
			set := queue[0]
			if k := fmt.Sprint(set); seen[k] {
				continue
			} else if len(seen) == basisSets || len(seen) > 0 && budget.spent() {
				more = true
				break
			} else {
				seen[k] = true
			}
			budget.spend(h, 4)
			given := shield(h, v, set)
			known := fixed(h, mark(h.Len(), given))
			var apart []int
			for w := range set {
				if set[w] && w != v && !known[w] {
					apart = append(apart, w)
				}
			}
			if len(apart) > 0 {
				found = append(found, Independence{A: p.node([]int{v}), B: p.node(apart), Given: p.node(given)})
			}
			// Another shield needs a member of the district gone, and with it
			// all that descends from it.
			for w, in := range district(h, v, set) {
				if !in || w == v {
					continue
				}
				below := h.Descendants(w)
				if below[v] {
					continue
				}
				smaller := slices.Clone(set)
				for u := range smaller {
					smaller[u] = smaller[u] && !below[u]
				}
				queue = append(queue, smaller)
			}
		}
		// What is said of more variables with the same shield says it all.
		for i, s := range found {
			covered := slices.ContainsFunc(found[:i], func(f Independence) bool { return slices.Equal(f.Given, s.Given) && within(s.B, f.B) })
			if !covered {
				basis = append(basis, s)
			}
		}
	}
	return basis, more
}

// Pairwise breaks independences into statements about pairs, each to be tested
// alone. Other statements follow from those of a basis if probabilities are
// positive.
func Pairwise(basis []Independence) []Independence {
	var all []Independence
	for _, s := range basis {
		for _, a := range s.A {
			for _, b := range s.B {
				all = append(all, Independence{A: []int{a}, B: []int{b}, Given: s.Given})
			}
		}
	}
	return all
}
