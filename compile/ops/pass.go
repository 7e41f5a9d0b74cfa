package ops

import "fmt"

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
	gradient bool // only where a gradient is wanted
}

// passes in the order in which they run.
var passes = []pass{
	{name: "simplify", run: passSimplify},
	{name: "gauss", run: passGauss},
	{name: "tally", run: passTally},
	{name: "fold tallied", run: passSimplify},
	{name: "gradient", run: passGradient, required: true, gradient: true},
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

// compile runs the passes that keep selects (nil = all) and schedules.
func compile(g *graph, roots []id, dim int, gradient bool, keep func(p *pass) bool) (*schedule, error) {
	u := &unit{g: g, roots: roots}
	u.g, u.roots = g.rebuild(roots, func(next *graph, _ id, n node) id { return next.add(n) })
	if err := verify(u); err != nil {
		return nil, err
	}
	for i := range passes {
		p := &passes[i]
		if p.gradient && !gradient || !p.required && keep != nil && !keep(p) {
			continue
		}
		p.run(u)
		if err := verify(u); err != nil {
			return nil, fmt.Errorf("ops: after pass %q: %w", p.name, err)
		}
	}
	return plan(u.g, u.roots, u.into, dim), nil
}

// rewrite replaces the unit's graph by its rebuilding through f.
func (u *unit) rewrite(f func(next *graph, old id, n node) id) {
	u.g, u.roots = u.g.rebuild(u.roots, f)
}
