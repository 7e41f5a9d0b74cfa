package causal

import (
	"fmt"
	"slices"

	"arrowroot/compile/graph"
)

// An Answer is to a question that the arrows need not settle.
type Answer int

// The answers.
const (
	Valid Answer = iota
	NotValid
	Undecided
)

// String is "valid", "not valid" or "undecided".
func (a Answer) String() string { return [...]string{"valid", "not valid", "undecided"}[a] }

// Kept says what rows that were kept for a reason (a limit on the rows, a row
// filter, or that they are complete) show of an effect while a set is held.
type Kept struct {
	// Of the effect among the rows that were kept. Where the exposure acts on
	// what they were kept by: among rows with what is held spread as in these.
	Among Answer

	// Of the effect in all rows. It is undecided where it takes the spread in all
	// rows of what is held, which these rows do not show.
	All Answer

	Reason   []int // the path or node that makes the kept rows mislead; nil = none to show
	Sentence string
}

// ReadKept reads an effect off the rows that the given nodes kept, with held
// besides. The answers are those to whether the held average over the kept rows,
// Σ P(y | x, held, kept) P(held | kept), is the effect in every model of the
// graph; it is in all rows if and only if held and selection close all paths but
// the causal ones and selection says nothing of the outcome under intervention.
// Where the spread in all rows is known too, Bareinboim, Tian & Pearl (2014,
// selection-backdoor criterion) is used.
func ReadKept(g *graph.Graph, exposure, outcome int, held, selected []int) *Kept {
	c := newComparison(g, []int{exposure}, []int{outcome})
	c.keep(selected)
	return c.kept(minus(tidy(held), tidy(selected)))
}

// keep makes c a comparison among the rows that the given nodes kept: they are
// held whatever else is, measured or not.
func (c *comparison) keep(selected []int) {
	c.selected = tidy(selected)
	for _, v := range c.selected {
		c.usable[v] = !c.forbidden[v] && !slices.Contains(c.x, v) && !slices.Contains(c.y, v)
	}
}

func (c *comparison) kept(held []int) *Kept {
	g, x, y := c.g, c.g.Names[c.x[0]], c.g.Names[c.y[0]]
	by := names(g, c.selected)
	k := &Kept{Among: NotValid, All: NotValid}
	holding := ""
	if len(held) > 0 {
		holding = ", holding " + names(g, held) + ","
	}
	for _, v := range union(c.x, c.y) {
		if slices.Contains(c.selected, v) {
			k.Reason = []int{v}
			k.Sentence = fmt.Sprintf("Rows were kept by %s itself: nothing is left to compare.", g.Names[v])
			return k
		}
	}
	if c.valid(held) {
		k.Among = Valid
		around := *c
		around.selected = nil
		switch {
		case c.apartOnceSet():
			k.All = Valid
			k.Sentence = fmt.Sprintf("Rows were kept by %s, which says nothing of what %s would be with %s set: these rows%s give the effect in all rows.", by, y, x, holding)
		case around.valid(held) && Separated(g, c.selected, c.y, union(c.x, held)):
			k.All = Undecided
			k.Sentence = fmt.Sprintf("Rows were kept by %s: these rows%s give the effect among rows like them, and in all rows only if the spread of %s there is known.", by, holding, names(g, held))
		default:
			k.Sentence = fmt.Sprintf("Rows were kept by %s, which is related to %s: these rows%s give the effect among rows like them, not in all rows.", by, y, holding)
		}
		return k
	}
	for _, f := range c.whyForbidden() {
		if slices.Contains(c.selected, f.Node) {
			k.Reason = f.Path
			k.Sentence = fmt.Sprintf("Rows were kept by %s, and %s: the effect cannot be read from these rows by holding anything.", g.Names[f.Node], f.Reason)
			return k
		}
	}
	around := *c
	around.selected = nil
	if p := (judgement{c: &around, walks: firstPaths(g, c.x, c.y)}).changed(union(held, c.selected), held); p != nil && around.valid(held) {
		k.Reason = p.Nodes
		k.Sentence = fmt.Sprintf("Rows were kept by %s, which opens %s: these rows%s do not give the effect.", by, p.Text(g), holding)
		return k
	}
	k.Sentence = fmt.Sprintf("Rows were kept by %s: these rows%s do not give the effect of %s on %s.", by, holding, x, y)
	return k
}

// apartOnceSet reports whether selection is unrelated to what the outcome would
// be under the intervention: separated from it in the twin network, which draws
// that other world beside this one with the same unmeasured causes (Balke &
// Pearl 1994).
func (c *comparison) apartOnceSet() bool {
	named, _ := nameArcs(c.g)
	n := named.Len()
	spec := graph.Spec{Names: slices.Clone(named.Names), Arrows: slices.Clone(named.Arrows)}
	there := make([]int, n) // a node in the other world; what the exposures do not act on is the same there
	below := named.Descendants(c.x...)
	node := func(name string) int {
		spec.Names = append(spec.Names, name)
		return len(spec.Names) - 1
	}
	for v := range there {
		there[v] = v
		if below[v] {
			there[v] = node(named.Names[v] + " then")
		}
	}
	for v := range n {
		if named.Computed[v] {
			spec.Computed = append(spec.Computed, v)
		}
		if !below[v] || slices.Contains(c.x, v) {
			continue
		}
		for _, p := range named.Parents[v] {
			if !slices.Contains(c.x, p) {
				spec.Arrows = append(spec.Arrows, [2]int{there[p], there[v]})
			}
		}
		if !named.Computed[v] {
			noise := node(named.Names[v] + " besides")
			spec.Arrows = append(spec.Arrows, [2]int{noise, v}, [2]int{noise, there[v]})
		}
	}
	twin, err := graph.New(spec)
	if err != nil { // two copies of an acyclic graph
		panic(err)
	}
	var then []int
	for _, v := range c.y {
		then = append(then, there[v])
	}
	return Separated(twin, c.selected, then, nil)
}
