package findings

import (
	"fmt"
	"slices"

	"arrowroot/app/words"
	"arrowroot/compile/causal"
)

const (
	basisNodes      = 200  // variables on a sheet up to which implied independences are looked for
	pairsLooked     = 5000 // pairs of variables for which separators are listed
	statementsShown = 2000 // independences shown
	tetradNodes     = 60   // variables up to which tetrads are looked for
	functionalNodes = 120  // likewise for functional constraints
)

// basis lists independences from which all others between measured variables
// follow. Rows that were chosen show only what holds among them.
func (r *reader) basis(f *Findings) {
	c := &Contradictions{Section: Section{Name: ContradictionSection}}
	defer func() { f.Contradictions = c }()
	g := r.sheet.drawn
	if f.Sheet > basisNodes {
		c.Summary = "Implied independences are not listed on a sheet of this size."
		c.leave(fmt.Sprintf("Implied independences of %s variables are left out: more than %d.", words.Whole(float64(f.Sheet)), basisNodes))
		return
	}
	more := false
	c.Basis, more = causal.Basis(g)
	if more {
		c.leave("The basis may be incomplete: a variable has more ways to be shielded than were looked at.")
	}
	hidden, shown := 0, 0
	for _, one := range causal.Pairwise(c.Basis) {
		if !f.showsAmongRows(one) {
			hidden++
			continue
		}
		if shown++; shown <= statementsShown {
			f.add(&c.Section, f.independence("basis", one))
		}
	}
	if shown > statementsShown {
		c.leave(fmt.Sprintf("Of the basis, %s statements are left out.", words.Whole(float64(shown-statementsShown))))
	}
	c.Summary = fmt.Sprintf("The arrows promise %s between measured variables, from which all others follow.", independences(shown))
	if shown == 0 {
		c.Summary = "The arrows promise no independence between measured variables, so no independence can contradict them."
	}
	if hidden > 0 {
		c.Summary += fmt.Sprintf(" %s more in all rows, but not among rows chosen by %s.", words.Upper(holds(hidden)), f.rowsBy())
	}
}

func independences(n int) string {
	if n == 1 {
		return "1 independence"
	}
	return words.Whole(float64(n)) + " independences"
}

func holds(n int) string {
	if n == 1 {
		return "1 holds"
	}
	return words.Whole(float64(n)) + " hold"
}

// showsAmongRows reports whether an independence holds in the rows that there
// are too.
func (f *Findings) showsAmongRows(one causal.Independence) bool {
	return len(f.Selected) == 0 || causal.Separated(f.Graph, one.A, one.B, union(one.Given, f.Selected))
}

// independence is a finding on one pair.
func (f *Findings) independence(kind string, one causal.Independence) Finding {
	return Finding{
		Key: f.statement(one), Kind: kind, Sentence: one.Sentence(f.Graph),
		Nodes: union(union(one.A, one.B), one.Given),
	}
}

// statement is the key of an independence: names sorted, "soil | bees |
// flowers, hedge".
func (f *Findings) statement(one causal.Independence) string {
	ends := append(f.names(one.A), f.names(one.B)...)
	slices.Sort(ends)
	return ends[0] + " | " + ends[1] + " | " + joined(f.names(one.Given))
}

func (c *Contradictions) more() *Contradictions {
	next := *c
	next.Findings = append([]Finding{}, c.Findings...)
	return &next
}

// functionals looks for constraints that are no independences.
func (r *reader) functionals(f *Findings) {
	c := f.Contradictions.more()
	defer func() { f.Contradictions = c }()
	g := r.sheet.drawn
	switch {
	case len(f.Selected) > 0:
		c.leave("Constraints other than independences are left out: they hold in all rows, and these were chosen.")
		return
	case f.Sheet > functionalNodes:
		c.leave(fmt.Sprintf("Functional constraints are left out: the sheet has more than %d variables.", functionalNodes))
		return
	}
	more := false
	c.Functionals, more = causal.Functionals(g)
	if more {
		c.leave("There may be more functional constraints than were looked for.")
	}
	for i := range c.Functionals {
		one := &c.Functionals[i]
		f.add(&c.Section, Finding{
			Key: "functional " + g.Names[one.Node] + " | " + g.Names[one.FreeOf], Kind: "functional", Sentence: one.Sentence(g),
			Nodes: union(causal.Free(one.Formula), []int{one.Node, one.FreeOf}),
		})
	}
	if n := len(c.Functionals); n > 0 {
		c.Summary += fmt.Sprintf(" There %s %s besides.", areOne(n == 1), words.Plural(n, "functional constraint"))
	}
}

// independences lists, of every pair, all smallest sets that separate it.
func (r *reader) independences(f *Findings) {
	c := f.Contradictions.more()
	defer func() { f.Contradictions = c }()
	g := r.sheet.drawn
	if f.Sheet > basisNodes {
		return
	}
	known := map[string]bool{}
	for i := range c.Findings {
		known[c.Findings[i].Key] = true
	}
	shown, cut := 0, false
	for s := range causal.EachSeparation(g, r.limits.Sets) {
		if r.ctx.Err() != nil || len(c.Pairs) == pairsLooked {
			cut = true
			break
		}
		c.Pairs = append(c.Pairs, s)
		cut = cut || s.More
		for _, given := range s.Given {
			one := causal.Independence{A: []int{s.A}, B: []int{s.B}, Given: given}
			if known[f.statement(one)] || !f.showsAmongRows(one) {
				continue
			}
			if shown++; shown > statementsShown {
				cut = true
				continue
			}
			f.add(&c.Section, f.independence("follows", one))
		}
		if shown > statementsShown {
			break
		}
	}
	if cut {
		c.leave(fmt.Sprintf("The full list stops after %s that follow from the basis; there may be more.", independences(min(shown, statementsShown))))
	}
}

// tetrads looks for what binds covariances in linear models.
func (r *reader) tetrads(f *Findings) {
	c := f.Contradictions.more()
	defer func() { f.Contradictions = c }()
	g := r.sheet.drawn
	switch {
	case len(f.Selected) > 0:
		return // said with the functional constraints
	case f.Sheet > tetradNodes:
		c.leave(fmt.Sprintf("Tetrads are left out: the sheet has more than %d variables.", tetradNodes))
		return
	}
	more := false
	c.Tetrads, more = causal.Tetrads(g, 10*r.limits.Sets)
	if more {
		c.leave("There may be more tetrads than were looked for.")
	}
	for i := range c.Tetrads {
		t := &c.Tetrads[i]
		f.add(&c.Section, Finding{
			Key: "tetrad " + joined(f.names([]int{t.A, t.B})) + " | " + joined(f.names([]int{t.C, t.D})), Kind: "tetrad",
			Sentence: t.Sentence(g), Nodes: []int{t.A, t.B, t.C, t.D},
		})
	}
}
