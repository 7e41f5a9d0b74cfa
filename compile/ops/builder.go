package ops

import (
	"fmt"

	"arrowroot/compile/kernel"
)

// A Plate is a set of rows that values live on, as given by Builder.Plate.
type Plate int32

// Scalar is the plate with a single row; its values serve the rows of any other.
const Scalar Plate = 0

// A Value is a node of the graph being built. The zero Value stands for
// "not there, because of an error that the builder keeps".
type Value int32

// An Error says which operation was misused, and how.
type Error struct {
	Op     string
	Reason string
}

func (e *Error) Error() string { return "ops: " + e.Op + ": " + e.Reason }

// A Builder collects the operations of one log density. It is not safe for
// concurrent use.
type Builder struct {
	g   *graph
	dim int
	err error
}

// NewBuilder starts an empty graph that has only the Scalar plate.
func NewBuilder() *Builder { return &Builder{g: newGraph()} }

// Err is the first misuse so far, nil if there was none.
func (b *Builder) Err() error { return b.err }

// Plate declares a set of rows; rows ≥ 1. The name appears in dumps and errors.
func (b *Builder) Plate(name string, rows int) Plate {
	if rows < 1 {
		b.fail("Plate", "%q has %d rows, needs at least one", name, rows)
		rows = 1
	}
	b.g.plates = append(b.g.plates, plate{name, rows})
	return Plate(len(b.g.plates) - 1)
}

// Rows is the number of rows of a plate.
func (b *Builder) Rows(p Plate) int { return b.g.plates[p].rows }

// On is the plate of a value; Scalar for the zero Value.
func (b *Builder) On(v Value) Plate {
	if v == 0 {
		return Scalar
	}
	return b.g.nodes[v].plate
}

// Parameter is the part q[offset : offset+rows] of the position, one entry per
// row of p.
func (b *Builder) Parameter(offset int, p Plate) Value {
	if offset < 0 || !b.plateOK(p) {
		return b.fail("Parameter", "offset %d on plate %d", offset, p)
	}
	b.dim = max(b.dim, offset+b.Rows(p))
	return b.add(node{op: opParameter, plate: p, at: offset})
}

// Const is a number that does not depend on the position.
func (b *Builder) Const(c float64) Value { return b.add(node{op: opConst, c: c}) }

// Data is a fixed column with one number per row of p.
func (b *Builder) Data(p Plate, column []float64) Value {
	if !b.plateOK(p) {
		return b.fail("Data", "no plate %d", p)
	}
	if len(column) != b.Rows(p) {
		return b.fail("Data", "a column of %d for the %d rows of plate %q", len(column), b.Rows(p), b.g.plates[p].name)
	}
	return b.add(node{op: opData, plate: p, data: column})
}

// Gather brings v to the finer plate to: row i gets v's entry index[i]. There
// is one index per row of to, each at least 0 and less than the rows of v's
// plate. A scalar v serves all rows anyway and comes back as it is.
func (b *Builder) Gather(v Value, to Plate, index []int32) Value {
	if b.bad(v) || b.On(v) == Scalar {
		return v
	}
	if !b.indexOK("Gather", to, b.On(v), index) {
		return 0
	}
	return b.add(node{op: opGather, plate: to, args: []id{id(v)}, index: b.g.index(index)})
}

// SumOver leads v back to the coarser plate to: entry g gets the sum of v over
// the rows i with index[i] = g, 0 if there are none. There is one index per
// row of v's plate, at least 0 and less than the rows of to.
func (b *Builder) SumOver(v Value, to Plate, index []int32) Value {
	if b.bad(v) {
		return 0
	}
	if b.On(v) == Scalar {
		return b.fail("SumOver", "a scalar has no rows to sum over")
	}
	if !b.indexOK("SumOver", b.On(v), to, index) {
		return 0
	}
	return b.add(node{op: opSumOver, plate: to, args: []id{id(v)}, index: b.g.index(index)})
}

// MeanOver is SumOver divided by the number of rows of each entry. An entry
// without rows is an error.
func (b *Builder) MeanOver(v Value, to Plate, index []int32) Value {
	s := b.SumOver(v, to, index)
	if s == 0 {
		return 0
	}
	weight := make([]float64, b.Rows(to))
	for _, g := range index {
		weight[g]++
	}
	for g, n := range weight {
		if n == 0 {
			return b.fail("MeanOver", "entry %d of plate %q has no rows", g, b.g.plates[to].name)
		}
		weight[g] = 1 / n
	}
	return b.Mul(s, b.Data(to, weight))
}

// MeanWithin replaces each row of v by the mean of v over the rows of the same
// entry of the coarser plate.
func (b *Builder) MeanWithin(v Value, coarse Plate, index []int32) Value {
	return b.Gather(b.MeanOver(v, coarse, index), b.On(v), index)
}

// Sum of v over the rows of its plate, a scalar. The sum of a scalar is itself.
func (b *Builder) Sum(v Value) Value {
	if b.bad(v) || b.On(v) == Scalar {
		return v
	}
	return b.add(node{op: opSum, args: []id{id(v)}})
}

// Element is entry i of v, a scalar.
func (b *Builder) Element(v Value, i int) Value {
	if b.bad(v) {
		return 0
	}
	if i < 0 || i >= b.Rows(b.On(v)) {
		return b.fail("Element", "no entry %d among %d", i, b.Rows(b.On(v)))
	}
	return b.add(node{op: opElement, args: []id{id(v)}, at: i})
}

// Stack puts scalars together to a value of p, which has as many rows.
func (b *Builder) Stack(p Plate, scalars ...Value) Value {
	if b.bad(scalars...) {
		return 0
	}
	if !b.plateOK(p) || b.Rows(p) != len(scalars) {
		return b.fail("Stack", "%d scalars do not fill plate %d", len(scalars), p)
	}
	for _, v := range scalars {
		if b.On(v) != Scalar {
			return b.fail("Stack", "an entry is not a scalar but on plate %q", b.g.plates[b.On(v)].name)
		}
	}
	return b.add(node{op: opStack, plate: p, args: ids(scalars)})
}

// Linear is the constant matrix m times v: entry i of the result, on plate to,
// is the sum over j of m[i*rows(v)+j] v[j].
func (b *Builder) Linear(to Plate, m []float64, v Value) Value {
	if b.bad(v) {
		return 0
	}
	if !b.plateOK(to) || len(m) != b.Rows(to)*b.Rows(b.On(v)) {
		return b.fail("Linear", "a matrix of %d numbers cannot lead from %d rows to plate %d", len(m), b.Rows(b.On(v)), to)
	}
	return b.add(node{op: opLinear, plate: to, args: []id{id(v)}, data: m})
}

// CumSum is the running sum of v: entry i is v[0] + … + v[i].
func (b *Builder) CumSum(v Value) Value { return b.same(opCumSum, v) }

// LogSumExp is log(exp(v[0]) + exp(v[1]) + …), a scalar, without overflow.
func (b *Builder) LogSumExp(v Value) Value {
	if b.bad(v) {
		return 0
	}
	return b.add(node{op: opLogSumExp, args: []id{id(v)}})
}

// Softmax is exp(v) divided by its sum, without overflow.
func (b *Builder) Softmax(v Value) Value { return b.Exp(b.Sub(v, b.LogSumExp(v))) }

// Add is the sum of its arguments, row by row.
func (b *Builder) Add(x, y Value, more ...Value) Value {
	return b.same(opAdd, append([]Value{x, y}, more...)...)
}

// Mul is the product of its arguments, row by row.
func (b *Builder) Mul(x, y Value, more ...Value) Value {
	return b.same(opMul, append([]Value{x, y}, more...)...)
}

// Sub is x - y.
func (b *Builder) Sub(x, y Value) Value { return b.same(opSub, x, y) }

// Div is x / y.
func (b *Builder) Div(x, y Value) Value { return b.same(opDiv, x, y) }

// Pow is x to the power y. Its gradient asks for x > 0 unless y is a constant.
func (b *Builder) Pow(x, y Value) Value { return b.same(opPow, x, y) }

// Min is the smaller of x and y; where they tie, the gradient goes to x.
func (b *Builder) Min(x, y Value) Value { return b.same(opMin, x, y) }

// Max is the larger of x and y; where they tie, the gradient goes to x.
func (b *Builder) Max(x, y Value) Value { return b.same(opMax, x, y) }

// Neg is -x.
func (b *Builder) Neg(x Value) Value { return b.same(opNeg, x) }

// Exp is e to the power x.
func (b *Builder) Exp(x Value) Value { return b.same(opExp, x) }

// Log is the natural logarithm.
func (b *Builder) Log(x Value) Value { return b.same(opLog, x) }

// Logit is log(x/(1-x)).
func (b *Builder) Logit(x Value) Value { return b.same(opLogit, x) }

// InvLogit is 1/(1+exp(-x)).
func (b *Builder) InvLogit(x Value) Value { return b.same(opInvLogit, x) }

// Softplus is log(1+exp(x)), without overflow.
func (b *Builder) Softplus(x Value) Value { return b.same(opSoftplus, x) }

// Sqrt is the square root.
func (b *Builder) Sqrt(x Value) Value { return b.same(opSqrt, x) }

// InvSqrt is 1/√x.
func (b *Builder) InvSqrt(x Value) Value { return b.same(opInvSqrt, x) }

// Square is x².
func (b *Builder) Square(x Value) Value { return b.same(opSquare, x) }

// Abs is |x|; its gradient at 0 is 0.
func (b *Builder) Abs(x Value) Value { return b.same(opAbs, x) }

// Density is the log density of y under family k with the given arguments, row
// by row, summed: a scalar. y and the arguments are scalars or of one plate;
// the rows are that plate's, or one if all are scalars. Their number is k.Args,
// or any if that is negative.
func (b *Builder) Density(k *kernel.Density, y Value, args ...Value) Value {
	if b.bad(y) || b.bad(args...) {
		return 0
	}
	if k == nil {
		return b.fail("Density", "no family")
	}
	if k.Args >= 0 && k.Args != len(args) {
		return b.fail("Density", "%s takes %d arguments, not %d", k.Name, k.Args, len(args))
	}
	return b.add(node{op: opDensity, args: append([]id{id(y)}, ids(args)...), kernel: k})
}

func (b *Builder) same(o op, vs ...Value) Value {
	if b.bad(vs...) {
		return 0
	}
	return b.add(node{op: o, args: ids(vs)})
}

// add puts n into the graph, with the plate that its shape rule gives.
func (b *Builder) add(n node) Value {
	p, err := b.g.shape(&n)
	if err != nil {
		return b.fail(table[n.op].name, "%v", err)
	}
	n.plate = p
	return Value(b.g.add(n))
}

func (b *Builder) fail(name, format string, args ...any) Value {
	if b.err == nil {
		b.err = &Error{name, fmt.Sprintf(format, args...)}
	}
	return 0
}

// bad tells whether one of vs is missing; that is only so after an error, or
// if the caller passes a zero Value of its own.
func (b *Builder) bad(vs ...Value) bool {
	for _, v := range vs {
		if v <= 0 || int(v) >= len(b.g.nodes) {
			b.fail("argument", "a value that no operation of this builder made")
			return true
		}
	}
	return false
}

func (b *Builder) plateOK(p Plate) bool { return p >= 0 && int(p) < len(b.g.plates) }

// indexOK checks an index with one entry per row of fine into the rows of coarse.
func (b *Builder) indexOK(name string, fine, coarse Plate, index []int32) bool {
	if !b.plateOK(fine) || !b.plateOK(coarse) || fine == Scalar {
		b.fail(name, "no such plate")
		return false
	}
	if len(index) != b.Rows(fine) {
		b.fail(name, "an index of %d for the %d rows of plate %q", len(index), b.Rows(fine), b.g.plates[fine].name)
		return false
	}
	for i, g := range index {
		if g < 0 || int(g) >= b.Rows(coarse) {
			b.fail(name, "index[%d] = %d, but plate %q has %d rows", i, g, b.g.plates[coarse].name, b.Rows(coarse))
			return false
		}
	}
	return true
}

func ids(vs []Value) []id {
	out := make([]id, len(vs))
	for i, v := range vs {
		out[i] = id(v)
	}
	return out
}
