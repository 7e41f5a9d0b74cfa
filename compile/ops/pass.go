package ops

import (
	"fmt"
	"slices"
)

// A unit is what the passes work on.
type unit struct {
	g     *graph
	roots []id  // log density or outputs; after the sweep the log density, then its derivatives
	into  []int // where in the gradient roots[i+1] begins
}

// A pass is one step from the graph as written to the graph as run.
type pass struct {
	name     string
	run      func(u *unit)
	required bool // the program is wrong without it, not only slow
}

// passes in the order in which they run. What is not to be differentiated goes
// without the one named "gradient".
var passes = []pass{
	{name: "simplify", run: passSimplify},
	{name: "gauss", run: passGauss},
	{name: "tally", run: passTally},
	{name: "fold tallied", run: passSimplify},
	{name: "gradient", run: passGradient, required: true},
	{name: "simplify gradient", run: passSimplify},
	{name: "fuse", run: passFuse},
}

// passOrder says why the order is what it is; a test holds passes to it.
var passOrder = []struct{ before, after, why string }{
	{"simplify", "gauss", "a linear predictor is recognised in its simplified form"},
	{"gauss", "gradient", "the collapsed density has a kernel and so a derivative of its own"},
	{"tally", "gradient", "both parts of a split density have kernels"},
	{"tally", "fold tallied", "the split may leave a part that depends on data alone"},
	{"gradient", "simplify gradient", "adjoints are written plainly by the rules"},
	{"gradient", "fuse", "fused operations have no gradient rules"},
	{"simplify gradient", "fuse", "simplifying does not look into fused operations"},
}

// start copies what roots need and runs the passes before the reverse sweep.
// keep says which passes run; nil is all.
func start(g *graph, roots []id, keep func(p *pass) bool) (*unit, error) {
	u := (&unit{g: g, roots: roots}).copied()
	return u, u.runAll(passes[:sweepAt()], keep)
}

// finish runs the sweep, if a gradient is wanted, and the passes after it on a
// copy of u.
func (u *unit) finish(gradient bool, dim int, keep func(p *pass) bool) (*schedule, error) {
	u = u.copied()
	rest := passes[sweepAt():]
	if !gradient {
		rest = rest[1:]
	}
	if err := u.runAll(rest, keep); err != nil {
		return nil, err
	}
	return plan(u.g, u.roots, u.into, dim), nil
}

// sweepAt is the place of the reverse sweep among the passes.
func sweepAt() int {
	return slices.IndexFunc(passes, func(p pass) bool { return p.name == "gradient" })
}

func (u *unit) copied() *unit {
	c := *u
	c.rewrite(func(next *graph, _ id, n node) id { return next.add(n) })
	return &c
}

func (u *unit) runAll(ps []pass, keep func(p *pass) bool) error {
	if err := verify(u); err != nil {
		return err
	}
	for i := range ps {
		p := &ps[i]
		if !p.required && keep != nil && !keep(p) {
			continue
		}
		p.run(u)
		if err := verify(u); err != nil {
			return fmt.Errorf("ops: after pass %q: %w", p.name, err)
		}
	}
	return nil
}

// rewrite replaces the unit's graph by its rebuilding through f.
func (u *unit) rewrite(f func(next *graph, old id, n node) id) {
	u.g, u.roots = u.g.rebuild(u.roots, f)
}
