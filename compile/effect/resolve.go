package effect

import (
	"fmt"
	"slices"
	"strings"

	"arrowroot/compile/catalog"
	"arrowroot/compile/formula"
	"arrowroot/compile/model"
)

// A code says what a node of a resolved expression does.
type code int

const (
	number code = iota // value
	scalar             // draw[at]
	byRow              // draw[at + level of the row in plate]
	byCode             // draw[at + code of variable]
	column             // variable
	negate             // −x
	add                // x + y …
	subtract
	multiply
	divide
	power
	call // function of args
)

// A node is an expression with every name resolved to a place in the draw or
// to a variable. Its slot is a buffer of one row block, its own.
type node struct {
	code     code
	slot     int
	value    float64
	at       int // place in the draw
	size     int // byCode: entries, to refuse a code outside
	plate    int
	variable int
	args     []*node
	function func(args []float64) float64
}

// A law is a fitted law resolved for evaluation.
type law struct {
	*model.Law
	predictors []*node // link scale
	arguments  []*node // natural; nil for the predicted argument
	cuts       int     // place of the cut points in the draw; -1 = none
	levels     int     // K of a categorical or ordered law; 0 otherwise
	reads      []int   // variables, sorted
}

// A resolver turns formulas into nodes. Errors name the variable whose law it is.
type resolver struct {
	m         *model.Model
	offset    []int // of each parameter in a draw
	variables map[string]int
	params    map[string]int
	slots     int
}

func newResolver(m *model.Model) *resolver {
	r := &resolver{m: m, variables: make(map[string]int), params: make(map[string]int)}
	at := 0
	for i, p := range m.Parameters {
		r.offset = append(r.offset, at)
		r.params[p.Name] = i
		if p.Shape == model.ByPlate {
			at += len(m.Plates[p.Plate].Levels)
		} else {
			at += p.Size
		}
	}
	for i, v := range m.Variables {
		r.variables[v.ID] = i
	}
	return r
}

// resolveLaw resolves one law.
func (r *resolver) resolveLaw(l *model.Law) (*law, error) {
	out := &law{Law: l, cuts: -1}
	id := r.m.Variables[l.Variable].ID
	fail := func(err error) (*law, error) { return nil, fmt.Errorf("the law of %s: %w", id, err) }
	if l.Family == nil {
		return fail(fmt.Errorf("no family"))
	}
	for _, e := range l.Predictors {
		n, err := r.expr(e)
		if err != nil {
			return fail(err)
		}
		out.predictors = append(out.predictors, n)
	}
	switch l.Family.Link {
	case catalog.Softmax:
		out.levels = len(l.Predictors)
	case catalog.Cumulate, catalog.Probit:
		p, ok := r.params[l.Cutpoints]
		if !ok {
			return fail(fmt.Errorf("no cut points named %q", l.Cutpoints))
		}
		out.cuts, out.levels = r.offset[p], r.m.Parameters[p].Size+1
	}
	if out.levels == 0 {
		out.arguments = make([]*node, len(l.Family.Arguments))
		for i, a := range l.Family.Arguments {
			if i == l.Family.Predicted && len(l.Predictors) > 0 {
				continue
			}
			var e formula.Expr
			if i < len(l.Arguments) {
				e = l.Arguments[i]
			}
			if e == nil {
				return fail(fmt.Errorf("its %s is missing", a.Name))
			}
			n, err := r.expr(e)
			if err != nil {
				return fail(err)
			}
			out.arguments[i] = n
		}
	}
	for _, n := range out.predictors {
		out.reads = n.reads(out.reads)
	}
	for _, n := range out.arguments {
		out.reads = n.reads(out.reads)
	}
	slices.Sort(out.reads)
	out.reads = slices.Compact(out.reads)
	return out, nil
}

// reads adds the variables that a node reads.
func (n *node) reads(to []int) []int {
	if n == nil {
		return to
	}
	if n.code == column || n.code == byCode {
		to = append(to, n.variable)
	}
	for _, a := range n.args {
		to = a.reads(to)
	}
	return to
}

func (r *resolver) node(n node) *node {
	n.slot = r.slots
	r.slots++
	return &n
}

func (r *resolver) expr(e formula.Expr) (*node, error) {
	switch e := e.(type) {
	case *formula.Number:
		return r.node(node{code: number, value: e.Value}), nil
	case *formula.Name:
		if v, ok := r.variables[e.ID]; ok {
			return r.node(node{code: column, variable: v}), nil
		}
		p, ok := r.params[e.ID]
		if !ok {
			return nil, fmt.Errorf("there is nothing named %s", e.ID)
		}
		switch r.m.Parameters[p].Shape {
		case model.Scalar:
			return r.node(node{code: scalar, at: r.offset[p]}), nil
		case model.ByPlate:
			return r.node(node{code: byRow, at: r.offset[p], plate: r.m.Parameters[p].Plate}), nil
		}
		return nil, fmt.Errorf("%s has several entries; say which", e.ID)
	case *formula.By:
		if v, ok := r.variables[e.Name.ID]; ok {
			return r.node(node{code: column, variable: v}), nil
		}
		p, err := r.byPlate(e)
		if err != nil {
			return nil, err
		}
		return r.node(node{code: byRow, at: r.offset[p], plate: r.m.Parameters[p].Plate}), nil
	case *formula.Of:
		p, ok := r.params[e.Vector.ID]
		if !ok {
			return nil, fmt.Errorf("there is no vector named %s", e.Vector.ID)
		}
		v, ok := r.variables[e.Variable.ID]
		if !ok {
			return nil, fmt.Errorf("there is no variable named %s", e.Variable.ID)
		}
		return r.node(node{code: byCode, at: r.offset[p], size: r.m.Parameters[p].Size, variable: v}), nil
	case *formula.Element:
		name, ok := e.Vector.(*formula.Name)
		if !ok {
			return nil, fmt.Errorf("an entry can only be taken of a named vector")
		}
		p, ok := r.params[name.ID]
		if !ok || e.At < 0 || e.At >= r.m.Parameters[p].Size {
			return nil, fmt.Errorf("there is no entry %d of %s", e.At, name.ID)
		}
		return r.node(node{code: scalar, at: r.offset[p] + e.At}), nil
	case *formula.Unary:
		return r.apply(negate, e.X)
	case *formula.Binary:
		op, ok := binary[e.Op]
		if !ok {
			return nil, fmt.Errorf("%q is no operation", e.Op)
		}
		return r.apply(op, e.X, e.Y)
	case *formula.Call:
		f := catalog.FunctionByName(e.Function)
		if f == nil {
			return nil, fmt.Errorf("there is no function named %s", e.Function)
		}
		n, err := r.apply(call, e.Args...)
		if err != nil {
			return nil, err
		}
		n.function = f.Value
		return n, nil
	}
	return nil, fmt.Errorf("a formula part of kind %T", e)
}

var binary = map[byte]code{'+': add, '-': subtract, '*': multiply, '/': divide, '^': power}

func (r *resolver) apply(op code, args ...formula.Expr) (*node, error) {
	n := r.node(node{code: op})
	for _, a := range args {
		x, err := r.expr(a)
		if err != nil {
			return nil, err
		}
		n.args = append(n.args, x)
	}
	return n, nil
}

// byPlate finds the vector that "alpha_bees_farm by farm" means.
func (r *resolver) byPlate(e *formula.By) (int, error) {
	p, ok := r.params[e.Name.ID]
	if !ok || r.m.Parameters[p].Shape != model.ByPlate || r.m.Plates[r.m.Parameters[p].Plate].Name != e.Plates[0] {
		return 0, fmt.Errorf("%s does not vary by %s", e.Name.ID, strings.Join(e.Plates, " and "))
	}
	return p, nil
}
