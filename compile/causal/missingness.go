package causal

import (
	"fmt"
	"slices"

	"arrowroot/compile/graph"
)

// An Indicator is a node that says whether a variable was recorded.
type Indicator struct {
	Of, Node int
}

// MissingKind sorts why entries are missing, by the arrows.
type MissingKind int

// The kinds, under their names in the trade.
const (
	AtRandomCompletely MissingKind = iota // MCAR: no variable is related to any indicator
	AtRandom                              // MAR: incomplete variables are unrelated to the indicators once the complete ones are known
	NotAtRandom                           // MNAR: neither
)

// String is the short name in the trade.
func (k MissingKind) String() string { return [...]string{"MCAR", "MAR", "MNAR"}[k] }

// A Missing says whether the joint distribution of all variables can be had
// from incomplete data.
type Missing struct {
	Kind        MissingKind
	Order       []int // Order[i] is unrelated to its own and all later indicators once the later variables are known; nil = no such order found
	ByIndicator bool  // the law of every indicator can be had, and rows weighed by it
	Masking     []int // variables that act on, or share an unmeasured cause with, their own indicator
	Recoverable bool
	Undecided   bool // neither shown to be recoverable nor shown not to be
	Sentence    string
}

const orderSteps = 3000 // sets of variables looked at for an order

// ReadMissing reads missingness off a diagram in which indicators are drawn as
// measured nodes. Every measured node that is no indicator counts as a
// variable, as complete if it has none (Mohan, Pearl & Tian 2013; Mohan &
// Pearl 2021).
func ReadMissing(g *graph.Graph, indicators []Indicator) *Missing {
	m := &Missing{}
	own := map[int]int{}
	var marks, partial, complete, variables []int
	for _, i := range indicators {
		own[i.Of] = i.Node
		marks, partial = append(marks, i.Node), append(partial, i.Of)
	}
	marks, partial = tidy(marks), tidy(partial)
	for v, can := range available(g) {
		if can && !slices.Contains(marks, v) {
			variables = append(variables, v)
			if !slices.Contains(partial, v) {
				complete = append(complete, v)
			}
		}
	}
	switch {
	case Separated(g, variables, marks, nil):
		m.Kind = AtRandomCompletely
	case Separated(g, partial, marks, complete):
		m.Kind = AtRandom
	default:
		m.Kind = NotAtRandom
	}
	p := Project(g)
	for _, v := range partial {
		if a, b := p.At[v], p.At[own[v]]; a >= 0 && b >= 0 && (p.Graph.HasArrow(a, b) || p.Graph.HasArrow(b, a) || slices.Contains(p.Graph.Siblings[a], b)) {
			m.Masking = append(m.Masking, v)
		}
	}
	m.Order = order(g, variables, own)
	m.ByIndicator = byIndicator(p, marks, own)
	m.Recoverable = m.Order != nil || m.ByIndicator
	m.Undecided = !m.Recoverable && m.Masking == nil
	m.Sentence = m.sentence(g, partial)
	return m
}

// order builds the factorisation from its last variable forward. What can come
// next depends only on which variables are behind, so every set of these is
// looked at once.
func order(g *graph.Graph, variables []int, own map[int]int) []int {
	seen := map[string]bool{}
	var extend func(behind []int) []int
	extend = func(behind []int) []int {
		if len(behind) == len(variables) {
			return behind
		}
		set := newBitset(g.Len())
		var marks []int
		for _, v := range behind {
			set.add(v)
			if r, partial := own[v]; partial {
				marks = append(marks, r)
			}
		}
		if seen[set.key()] || len(seen) == orderSteps {
			return nil
		}
		seen[set.key()] = true
		for _, v := range variables {
			if slices.Contains(behind, v) {
				continue
			}
			to := slices.Clone(marks)
			if r, partial := own[v]; partial {
				to = append(to, r)
			}
			if Separated(g, []int{v}, to, behind) {
				if found := extend(append([]int{v}, behind...)); found != nil {
					return found
				}
			}
		}
		return nil
	}
	return extend([]int{})
}

// byIndicator reports whether each indicator depends on variables alone, its
// own not among them, and nothing unmeasured joins it to anything: then rows
// can be weighed by the chance of being complete.
func byIndicator(p *Projection, marks []int, own map[int]int) bool {
	h := p.Graph
	of := map[int]int{}
	for v, r := range own {
		of[r] = v
	}
	for _, r := range marks {
		at := p.At[r]
		if at < 0 || len(h.Siblings[at]) > 0 || len(h.Children[at]) > 0 {
			return false
		}
		for _, q := range h.Parents[at] {
			if node := p.Node[q]; node == of[r] || slices.Contains(marks, node) {
				return false
			}
		}
	}
	return true
}

func (m *Missing) sentence(g *graph.Graph, partial []int) string {
	if len(partial) == 0 {
		return "Nothing is missing."
	}
	what := fmt.Sprintf("The joint distribution can be had though %s %s entries missing", names(g, partial), has(len(partial)))
	switch {
	case m.Recoverable && m.Kind == AtRandomCompletely:
		return what + ": they are missing completely at random (MCAR), and complete rows are a fair sample."
	case m.Recoverable && m.Kind == AtRandom:
		return what + ": they are missing at random (MAR) once what is complete is known."
	case m.Recoverable:
		return what + ": they are not missing at random (MNAR), yet the arrows say how."
	case m.Masking != nil:
		return fmt.Sprintf("The joint distribution cannot be had from these data: whether %s %s recorded is tied to the value itself.", names(g, m.Masking), be(len(m.Masking)))
	}
	return fmt.Sprintf("Whether the joint distribution can be had is undecided: %s %s entries missing not at random (MNAR), and neither known way applies.", names(g, partial), has(len(partial)))
}

func has(n int) string {
	if n == 1 {
		return "has"
	}
	return "have"
}

// A CompleteCase is the verdict on fitting one law to complete rows.
type CompleteCase struct {
	Valid    bool
	Sentence string
}

// ReadCompleteCase asks whether the law of an outcome on other variables is the
// same in rows where all of them are recorded as in all rows. It is in every
// model of the graph if the indicators tell nothing more of the outcome, and
// in general not otherwise.
func ReadCompleteCase(g *graph.Graph, indicators []Indicator, outcome int, on []int) *CompleteCase {
	on = tidy(on)
	var marks []int
	for _, i := range indicators {
		if i.Of == outcome || slices.Contains(on, i.Of) {
			marks = append(marks, i.Node)
		}
	}
	c := &CompleteCase{Valid: Separated(g, []int{outcome}, marks, on)}
	y := g.Names[outcome]
	switch {
	case len(marks) == 0:
		c.Sentence = fmt.Sprintf("All rows are complete in %s.", names(g, union(on, []int{outcome})))
	case c.Valid:
		c.Sentence = fmt.Sprintf("Complete rows will do: whether a row is complete tells nothing of %s once %s %s known.", y, names(g, on), be(len(on)))
		if len(on) == 0 {
			c.Sentence = fmt.Sprintf("Complete rows will do: whether a row is complete tells nothing of %s.", y)
		}
	default:
		c.Sentence = fmt.Sprintf("Complete rows mislead: even once %s %s known, whether a row is complete is tied to %s.", names(g, on), be(len(on)), y)
		if len(on) == 0 {
			c.Sentence = fmt.Sprintf("Complete rows mislead: whether a row is complete is tied to %s.", y)
		}
	}
	return c
}
