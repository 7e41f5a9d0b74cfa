package ops

import "fmt"

// An op is an operation: a row of the table.
type op uint8

// The operations that a builder makes, then those that only passes make.
const (
	opNone op = iota
	opParameter
	opConst
	opData
	opAdd
	opMul
	opSub
	opDiv
	opPow
	opMin
	opMax
	opNeg
	opExp
	opLog
	opLogit
	opInvLogit
	opSoftplus
	opSqrt
	opInvSqrt
	opSquare
	opAbs
	opGather
	opSumOver
	opSum
	opElement
	opStack
	opLinear
	opCumSum
	opLogSumExp
	opDensity

	opSign       // derivative of Abs
	opNotAbove   // 1 where x ≤ y, else 0: derivative of Min and Max
	opPlace      // entry at = the scalar, the others 0: adjoint of Element
	opPartial    // derivative of a density by y (at 0) or an argument
	opAffine     // sum of terms, each a product: the linear predictor in one pass
	opDot        // sum of x y
	opSumOverDot // SumOver of x y
	numOps
)

// opRow is what is known of an operation.
type opRow struct {
	name    string
	arity   int // -1 = any number, at least one
	shape   func(g *graph, n *node) (Plate, error)
	derived bool // made by passes after the reverse sweep, or by it: has no gradient
}

var table [numOps]opRow

func init() {
	elementwise := func(name string, arity int) opRow { return opRow{name: name, arity: arity, shape: joined} }
	given := func(name string, arity int) opRow { return opRow{name: name, arity: arity, shape: asGiven} }
	toScalar := func(name string, arity int) opRow { return opRow{name: name, arity: arity, shape: scalarOfOne} }
	table = [numOps]opRow{
		opParameter: given("Parameter", 0),
		opConst:     given("Const", 0),
		opData:      given("Data", 0),
		opAdd:       elementwise("Add", -1),
		opMul:       elementwise("Mul", -1),
		opSub:       elementwise("Sub", 2),
		opDiv:       elementwise("Div", 2),
		opPow:       elementwise("Pow", 2),
		opMin:       elementwise("Min", 2),
		opMax:       elementwise("Max", 2),
		opNeg:       elementwise("Neg", 1),
		opExp:       elementwise("Exp", 1),
		opLog:       elementwise("Log", 1),
		opLogit:     elementwise("Logit", 1),
		opInvLogit:  elementwise("InvLogit", 1),
		opSoftplus:  elementwise("Softplus", 1),
		opSqrt:      elementwise("Sqrt", 1),
		opInvSqrt:   elementwise("InvSqrt", 1),
		opSquare:    elementwise("Square", 1),
		opAbs:       elementwise("Abs", 1),
		opGather:    given("Gather", 1),
		opSumOver:   given("SumOver", 1),
		opSum:       toScalar("Sum", 1),
		opElement:   toScalar("Element", 1),
		opStack:     given("Stack", -1),
		opLinear:    given("Linear", 1),
		opCumSum:    elementwise("CumSum", 1),
		opLogSumExp: toScalar("LogSumExp", 1),
		opDensity:   {name: "Density", arity: -1, shape: scalarOfJoined},
	}
}

func errorf(format string, args ...any) error { return fmt.Errorf(format, args...) }

// joined is the shape rule of elementwise operations.
func joined(g *graph, n *node) (Plate, error) {
	p := Scalar
	for _, a := range n.args {
		q := g.nodes[a].plate
		switch {
		case q == Scalar || q == p:
		case p == Scalar:
			p = q
		default:
			return 0, errorf("values of plate %q and plate %q do not mix; gather one to the other", g.plates[p].name, g.plates[q].name)
		}
	}
	return p, nil
}

func asGiven(_ *graph, n *node) (Plate, error) { return n.plate, nil }

func scalarOfOne(*graph, *node) (Plate, error) { return Scalar, nil }

func scalarOfJoined(g *graph, n *node) (Plate, error) {
	_, err := joined(g, n)
	return Scalar, err
}

// A term of an Affine node is the product of its factors.
type term struct{}

func packedTerms(terms []term) string { return "" }
