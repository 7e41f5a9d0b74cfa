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
	opPartial    // derivative of a density by y (at 0) or by argument at
	opAffine     // a sum of products in one pass: the linear predictor
	opDot        // Sum of x y
	opSumOverDot // SumOver of x y
	numOps
)

// An opRow is what is known of an operation. One that a builder makes has a
// gradient rule, or is a source; a test walks the table and says so.
type opRow struct {
	name  string
	arity int // -1 = any number, at least one
	shape func(g *graph, n *node) (Plate, error)

	// run evaluates f.n rows from row f.lo on. nil for sources and for Partial,
	// which the density's own run fills.
	run func(f *frame, in *instr)

	// grad gives the contribution of n to the adjoint of its argument i, on
	// n's plate or a scalar that serves all its rows (elementwise operations),
	// or on the argument's plate (others). adj is n's adjoint.
	grad func(s *sweep, n, adj id, i int) id

	elementwise bool // row i of the result needs row i of the arguments only
	whole       bool // needs its arguments complete, and its rows at once
	adds        bool // the result is added up over blocks, so it starts at 0
	derived     bool // only passes make it
}

// table has one row per op. It is filled at start because its rules name it.
var table [numOps]opRow

func init() {
	table = [numOps]opRow{
		opNone:      {name: "None", shape: asGiven},
		opParameter: {name: "Parameter", shape: asGiven},
		opConst:     {name: "Const", shape: asGiven},
		opData:      {name: "Data", shape: asGiven},

		opAdd: {name: "Add", arity: -1, shape: joined, elementwise: true, run: runAdd,
			grad: func(_ *sweep, _, adj id, _ int) id { return adj }},
		opMul: {name: "Mul", arity: -1, shape: joined, elementwise: true, run: runMul,
			grad: gradMul},
		opSub: {name: "Sub", arity: 2, shape: joined, elementwise: true, run: runSub,
			grad: func(s *sweep, _, adj id, i int) id {
				if i == 0 {
					return adj
				}
				return s.g.negated(adj)
			}},
		opDiv: {name: "Div", arity: 2, shape: joined, elementwise: true, run: runDiv,
			grad: func(s *sweep, n, adj id, i int) id {
				slope := s.g.make(opDiv, adj, s.arg(n, 1))
				if i == 0 {
					return slope
				}
				return s.g.negated(s.g.make(opMul, slope, n))
			}},
		opPow: {name: "Pow", arity: 2, shape: joined, elementwise: true, run: runPow,
			grad: gradPow},
		opMin: {name: "Min", arity: 2, shape: joined, elementwise: true, run: runMin,
			grad: func(s *sweep, n, adj id, i int) id { return s.chosen(s.arg(n, 0), s.arg(n, 1), adj, i) }},
		opMax: {name: "Max", arity: 2, shape: joined, elementwise: true, run: runMax,
			grad: func(s *sweep, n, adj id, i int) id { return s.chosen(s.arg(n, 1), s.arg(n, 0), adj, i) }},
		opNeg: {name: "Neg", arity: 1, shape: joined, elementwise: true, run: runNeg,
			grad: func(s *sweep, _, adj id, _ int) id { return s.g.negated(adj) }},
		opExp: {name: "Exp", arity: 1, shape: joined, elementwise: true, run: runExp,
			grad: func(s *sweep, n, adj id, _ int) id { return s.g.make(opMul, adj, n) }},
		opLog: {name: "Log", arity: 1, shape: joined, elementwise: true, run: runLog,
			grad: func(s *sweep, n, adj id, _ int) id { return s.g.make(opDiv, adj, s.arg(n, 0)) }},
		opLogit: {name: "Logit", arity: 1, shape: joined, elementwise: true, run: runLogit,
			grad: func(s *sweep, n, adj id, _ int) id {
				x := s.arg(n, 0)
				return s.g.make(opDiv, adj, s.g.make(opMul, x, s.g.make(opSub, s.g.constant(1), x)))
			}},
		opInvLogit: {name: "InvLogit", arity: 1, shape: joined, elementwise: true, run: runInvLogit,
			grad: func(s *sweep, n, adj id, _ int) id {
				return s.g.make(opMul, adj, n, s.g.make(opSub, s.g.constant(1), n))
			}},
		opSoftplus: {name: "Softplus", arity: 1, shape: joined, elementwise: true, run: runSoftplus,
			grad: func(s *sweep, n, adj id, _ int) id {
				return s.g.make(opMul, adj, s.g.make(opInvLogit, s.arg(n, 0)))
			}},
		opSqrt: {name: "Sqrt", arity: 1, shape: joined, elementwise: true, run: runSqrt,
			grad: func(s *sweep, n, adj id, _ int) id {
				return s.g.make(opDiv, s.g.make(opMul, s.g.constant(0.5), adj), n)
			}},
		opInvSqrt: {name: "InvSqrt", arity: 1, shape: joined, elementwise: true, run: runInvSqrt,
			grad: func(s *sweep, n, adj id, _ int) id {
				return s.g.make(opMul, s.g.constant(-0.5), adj, s.g.make(opDiv, n, s.arg(n, 0)))
			}},
		opSquare: {name: "Square", arity: 1, shape: joined, elementwise: true, run: runSquare,
			grad: func(s *sweep, n, adj id, _ int) id { return s.g.make(opMul, s.g.constant(2), adj, s.arg(n, 0)) }},
		opAbs: {name: "Abs", arity: 1, shape: joined, elementwise: true, run: runAbs,
			grad: func(s *sweep, n, adj id, _ int) id { return s.g.make(opMul, adj, s.g.make(opSign, s.arg(n, 0))) }},

		opGather: {name: "Gather", arity: 1, shape: asGiven, run: runGather,
			grad: func(s *sweep, n, adj id, _ int) id {
				return s.g.sumOver(s.full(adj, n), s.g.nodes[s.arg(n, 0)].plate, s.g.nodes[n].index)
			}},
		opSumOver: {name: "SumOver", arity: 1, shape: asGiven, run: runSumOver, adds: true,
			grad: func(s *sweep, n, adj id, _ int) id {
				return s.g.gather(adj, s.g.nodes[s.arg(n, 0)].plate, s.g.nodes[n].index)
			}},
		opSum: {name: "Sum", arity: 1, shape: scalarOfColumn, run: runSum, adds: true,
			grad: func(_ *sweep, _, adj id, _ int) id { return adj }},
		opElement: {name: "Element", arity: 1, shape: scalarOfEntry, run: runElement, whole: true,
			grad: func(s *sweep, n, adj id, _ int) id {
				return s.g.put(node{op: opPlace, plate: s.g.nodes[s.arg(n, 0)].plate, args: []id{adj}, at: s.g.nodes[n].at})
			}},
		opStack: {name: "Stack", arity: -1, shape: stacked, run: runStack, whole: true,
			grad: func(s *sweep, n, adj id, i int) id {
				return s.g.put(node{op: opElement, args: []id{s.full(adj, n)}, at: i})
			}},
		opLinear: {name: "Linear", arity: 1, shape: mapped, run: runLinear, whole: true,
			grad: func(s *sweep, n, adj id, _ int) id {
				m := s.g.nodes[n]
				return s.g.put(node{op: opLinear, plate: s.g.nodes[s.arg(n, 0)].plate, args: []id{s.full(adj, n)}, data: m.data, at: 1 - m.at})
			}},
		opCumSum: {name: "CumSum", arity: 1, shape: joined, run: runCumSum, whole: true,
			grad: func(s *sweep, n, adj id, _ int) id {
				return s.g.put(node{op: opCumSum, args: []id{s.full(adj, n)}, at: 1 - s.g.nodes[n].at})
			}},
		opLogSumExp: {name: "LogSumExp", arity: 1, shape: scalarOfOne, run: runLogSumExp, whole: true,
			grad: func(s *sweep, n, adj id, _ int) id {
				return s.g.make(opMul, adj, s.g.make(opExp, s.g.make(opSub, s.arg(n, 0), n)))
			}},
		opDensity: {name: "Density", arity: -1, shape: scalarOfJoined, run: runDensity, adds: true,
			grad: func(s *sweep, n, adj id, i int) id {
				return s.g.make(opMul, adj, s.g.put(node{op: opPartial, args: []id{n}, at: i}))
			}},

		opSign:       {name: "Sign", arity: 1, shape: joined, elementwise: true, run: runSign, derived: true},
		opNotAbove:   {name: "NotAbove", arity: 2, shape: joined, elementwise: true, run: runNotAbove, derived: true},
		opPlace:      {name: "Place", arity: 1, shape: asGiven, run: runPlace, whole: true, derived: true},
		opPartial:    {name: "Partial", arity: 1, shape: ofArgument, derived: true},
		opAffine:     {name: "Affine", arity: -1, shape: asGiven, run: runAffine, derived: true},
		opDot:        {name: "Dot", arity: 2, shape: scalarOfJoined, run: runDot, adds: true, derived: true},
		opSumOverDot: {name: "SumOverDot", arity: 2, shape: asGiven, run: runSumOverDot, adds: true, derived: true},
	}
}

// joined is the shape rule of elementwise operations: one plate, and scalars.
func joined(g *graph, n *node) (Plate, error) {
	p := Scalar
	for _, a := range n.args {
		q := g.nodes[a].plate
		switch {
		case q == Scalar || q == p:
		case p == Scalar:
			p = q
		default:
			return 0, fmt.Errorf("values of plate %q and plate %q do not mix; gather one to the other", g.plates[p].name, g.plates[q].name)
		}
	}
	return p, nil
}

func asGiven(_ *graph, n *node) (Plate, error) { return n.plate, nil }

func scalarOfOne(*graph, *node) (Plate, error) { return Scalar, nil }

func scalarOfColumn(g *graph, n *node) (Plate, error) {
	if g.nodes[n.args[0]].plate == Scalar {
		return 0, fmt.Errorf("a scalar has no rows to sum over")
	}
	return Scalar, nil
}

func scalarOfEntry(g *graph, n *node) (Plate, error) {
	if rows := g.rows(g.nodes[n.args[0]].plate); n.at < 0 || n.at >= rows {
		return 0, fmt.Errorf("no entry %d among %d", n.at, rows)
	}
	return Scalar, nil
}

func scalarOfJoined(g *graph, n *node) (Plate, error) {
	_, err := joined(g, n)
	return Scalar, err
}

func stacked(g *graph, n *node) (Plate, error) {
	if len(n.args) != g.rows(n.plate) {
		return 0, fmt.Errorf("%d scalars do not fill the %d rows of plate %q", len(n.args), g.rows(n.plate), g.plates[n.plate].name)
	}
	for _, a := range n.args {
		if p := g.nodes[a].plate; p != Scalar {
			return 0, fmt.Errorf("an entry is not a scalar but on plate %q", g.plates[p].name)
		}
	}
	return n.plate, nil
}

func mapped(g *graph, n *node) (Plate, error) {
	from := g.rows(g.nodes[n.args[0]].plate)
	if len(n.data) != from*g.rows(n.plate) {
		return 0, fmt.Errorf("a matrix of %d numbers cannot lead from %d rows to the %d of plate %q", len(n.data), from, g.rows(n.plate), g.plates[n.plate].name)
	}
	return n.plate, nil
}

// ofArgument is the shape of a Partial: that of what it differentiates by.
func ofArgument(g *graph, n *node) (Plate, error) {
	d := &g.nodes[n.args[0]]
	if d.op != opDensity || n.at >= len(d.args) {
		return 0, fmt.Errorf("argument %d of %s", n.at, table[d.op].name)
	}
	return g.nodes[d.args[n.at]].plate, nil
}

// gradMul is adj times the other factors.
func gradMul(s *sweep, n, adj id, i int) id {
	factors := []id{adj}
	for j, a := range s.g.nodes[n].args {
		if j != i {
			factors = append(factors, a)
		}
	}
	return s.g.make(opMul, factors...)
}

func gradPow(s *sweep, n, adj id, i int) id {
	x, y := s.arg(n, 0), s.arg(n, 1)
	if i == 0 {
		less := s.g.make(opSub, y, s.g.constant(1))
		return s.g.make(opMul, adj, y, s.g.make(opPow, x, less))
	}
	return s.g.make(opMul, adj, n, s.g.make(opLog, x))
}

// chosen is the adjoint of the smaller of lower and upper, which are arguments
// 0 and 1 in this order for Min and the other way round for Max.
func (s *sweep) chosen(lower, upper, adj id, i int) id {
	first := s.g.make(opMul, adj, s.g.make(opNotAbove, lower, upper))
	if i == 0 {
		return first
	}
	return s.g.make(opSub, adj, first)
}
