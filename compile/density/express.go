package density

import (
	"fmt"

	"arrowroot/compile/formula"
	"arrowroot/compile/model"
	"arrowroot/compile/ops"
)

// A level says over what a value repeats: a plate of the model by index, the
// rows, or nothing.
type level int

const (
	everywhere level = -2 // one value
	byRow      level = -1
)

// A lowering writes one block into a builder.
type lowering struct {
	*resolver
	b       *ops.Builder
	plates  map[level]ops.Plate
	columns map[int]ops.Value // variables with unknowns among their entries
	natural map[int]ops.Value // parameters of the block on their natural scales
}

// plate gives the builder's plate of a level.
func (l *lowering) plate(at level) ops.Plate {
	if at == everywhere {
		return ops.Scalar
	}
	p, ok := l.plates[at]
	if !ok {
		if at == byRow {
			p = l.b.Plate("row", l.m.Rows.Used)
		} else {
			p = l.b.Plate(l.m.Plates[at].Name, len(l.m.Plates[at].Levels))
		}
		l.plates[at] = p
	}
	return p
}

// An amount is a value and the level at which it repeats. Formulas are worked
// out at the coarsest level that holds them and spread as late as possible.
type amount struct {
	v  ops.Value
	at level
}

// spread brings an amount to a level. A single value serves any level as it is.
func (l *lowering) spread(x amount, to level) (ops.Value, error) {
	switch {
	case x.at == everywhere || x.at == to:
		return x.v, nil
	case to == byRow:
		return l.b.Gather(x.v, l.plate(byRow), l.m.Plates[x.at].Of), nil
	case x.at >= 0 && to >= 0:
		if index, ok := l.nest(int(to), int(x.at)); ok {
			return l.b.Gather(x.v, l.plate(to), index), nil
		}
	}
	return 0, fmt.Errorf("a value that differs by %s cannot serve each %s", l.word(x.at), l.word(to))
}

func (l *lowering) word(at level) string {
	if at < 0 {
		return "row"
	}
	return l.m.Plates[at].Name
}

// common is the coarsest level that holds both.
func (l *lowering) common(a, b level) level {
	switch {
	case a == b || b == everywhere:
		return a
	case a == everywhere:
		return b
	case a < 0 || b < 0:
		return byRow
	}
	if _, ok := l.nest(int(a), int(b)); ok {
		return a
	}
	if _, ok := l.nest(int(b), int(a)); ok {
		return b
	}
	return byRow
}

// express lowers a formula.
func (l *lowering) express(e formula.Expr) (amount, error) {
	switch e := e.(type) {
	case *formula.Number:
		return amount{l.b.Const(e.Value), everywhere}, nil
	case *formula.Name:
		kind, i, err := l.name(e.ID)
		return l.value(kind, i, err)
	case *formula.By:
		kind, i, err := l.by(e)
		return l.value(kind, i, err)
	case *formula.Of:
		return l.entryOf(e)
	case *formula.Element:
		return l.element(e)
	case *formula.Unary:
		return l.apply(operations["negate"], "-", e.X)
	case *formula.Binary:
		return l.apply(operations[string(e.Op)], string(e.Op), e.X, e.Y)
	case *formula.Call:
		return l.apply(operations[e.Function], e.Function, e.Args...)
	}
	return amount{}, fmt.Errorf("a formula part of kind %T", e)
}

// value is a bare name's: a data column or a parameter.
func (l *lowering) value(kind what, i int, err error) (amount, error) {
	switch {
	case err != nil:
		return amount{}, err
	case kind == isVariable:
		return l.column(i), nil
	}
	p := l.m.Parameters[i]
	switch p.Shape {
	case model.Scalar:
		return amount{l.natural[i], everywhere}, nil
	case model.ByPlate:
		return amount{l.natural[i], level(p.Plate)}, nil
	}
	return amount{}, fmt.Errorf("%s has several entries; say which", p.Name)
}

// entryOf is "step_soil_flowers of soil".
func (l *lowering) entryOf(e *formula.Of) (amount, error) {
	kind, p, err := l.name(e.Vector.ID)
	if err != nil {
		return amount{}, err
	}
	kind2, v, err := l.name(e.Variable.ID)
	if err != nil {
		return amount{}, err
	}
	if kind != isParameter || kind2 != isVariable || l.m.Parameters[p].Shape == model.ByPlate {
		return amount{}, fmt.Errorf("%s has no entry for each level of %s", e.Vector.ID, e.Variable.ID)
	}
	codes, err := l.codesOf(v, l.m.Parameters[p].Size)
	if err != nil {
		return amount{}, err
	}
	at := level(l.m.Variables[v].Plate)
	return amount{l.b.Gather(l.natural[p], l.plate(at), codes), at}, nil
}

func (l *lowering) element(e *formula.Element) (amount, error) {
	name, ok := e.Vector.(*formula.Name)
	if !ok {
		return amount{}, fmt.Errorf("an entry can only be taken of a named vector")
	}
	kind, p, err := l.name(name.ID)
	if err != nil {
		return amount{}, err
	}
	if kind != isParameter || e.At < 0 || e.At >= l.m.Parameters[p].Size {
		return amount{}, fmt.Errorf("there is no entry %d of %s", e.At, name.ID)
	}
	return amount{l.b.Element(l.natural[p], e.At), everywhere}, nil
}

// An operation of formulas in terms of the builder's.
type operation struct {
	args  int
	apply func(b *ops.Builder, x []ops.Value) ops.Value
}

// operations has a row for every operator and every function of the catalogue.
var operations = map[string]operation{
	"+":             {2, func(b *ops.Builder, x []ops.Value) ops.Value { return b.Add(x[0], x[1]) }},
	"-":             {2, func(b *ops.Builder, x []ops.Value) ops.Value { return b.Sub(x[0], x[1]) }},
	"*":             {2, func(b *ops.Builder, x []ops.Value) ops.Value { return b.Mul(x[0], x[1]) }},
	"/":             {2, func(b *ops.Builder, x []ops.Value) ops.Value { return b.Div(x[0], x[1]) }},
	"^":             {2, func(b *ops.Builder, x []ops.Value) ops.Value { return b.Pow(x[0], x[1]) }},
	"negate":        {1, func(b *ops.Builder, x []ops.Value) ops.Value { return b.Neg(x[0]) }},
	"log":           {1, func(b *ops.Builder, x []ops.Value) ops.Value { return b.Log(x[0]) }},
	"exp":           {1, func(b *ops.Builder, x []ops.Value) ops.Value { return b.Exp(x[0]) }},
	"sqrt":          {1, func(b *ops.Builder, x []ops.Value) ops.Value { return b.Sqrt(x[0]) }},
	"abs":           {1, func(b *ops.Builder, x []ops.Value) ops.Value { return b.Abs(x[0]) }},
	"logit":         {1, func(b *ops.Builder, x []ops.Value) ops.Value { return b.Logit(x[0]) }},
	"inverse logit": {1, func(b *ops.Builder, x []ops.Value) ops.Value { return b.InvLogit(x[0]) }},
	"min":           {2, func(b *ops.Builder, x []ops.Value) ops.Value { return b.Min(x[0], x[1]) }},
	"max":           {2, func(b *ops.Builder, x []ops.Value) ops.Value { return b.Max(x[0], x[1]) }},
}

func (l *lowering) apply(op operation, name string, args ...formula.Expr) (amount, error) {
	if op.apply == nil {
		return amount{}, fmt.Errorf("there is no function named %s", name)
	}
	if op.args != len(args) {
		return amount{}, fmt.Errorf("%s takes %d arguments, not %d", name, op.args, len(args))
	}
	at := everywhere
	amounts := make([]amount, len(args))
	for i, e := range args {
		x, err := l.express(e)
		if err != nil {
			return amount{}, err
		}
		amounts[i] = x
		at = l.common(at, x.at)
	}
	values := make([]ops.Value, len(args))
	for i, x := range amounts {
		v, err := l.spread(x, at)
		if err != nil {
			return amount{}, err
		}
		values[i] = v
	}
	return amount{op.apply(l.b, values), at}, nil
}
