package ops

import (
	"math"
	"math/rand/v2"
	"testing"

	"arrowroot/compile/kernel"
)

// bench is what the op checks build on: plates on both sides of a block, and
// values that depend on the position in more than one way.
type bench struct {
	*Builder
	small, groups, rows Plate
	toGroup, toSmall    []int32 // of rows
	s, s2, v, u, r, x   Value   // scalars; on small, groups, rows; data on rows
}

const (
	smallRows  = 4
	groupRows  = 13
	manyRows   = 2*kernel.BlockRows + 77
	benchDim   = 2 + smallRows + groupRows
	benchSeed  = 7
	stepLength = 1e-6 // of central differences: short, so that hardly a row of Min, Max or Abs lies within it of a kink
)

func newBench() *bench {
	src := rand.New(rand.NewPCG(benchSeed, 1))
	b := &bench{Builder: NewBuilder()}
	b.small, b.groups, b.rows = b.Plate("small", smallRows), b.Plate("groups", groupRows), b.Plate("rows", manyRows)
	x := make([]float64, manyRows)
	b.toGroup, b.toSmall = make([]int32, manyRows), make([]int32, manyRows)
	for i := range x {
		x[i] = src.NormFloat64()
		b.toGroup[i] = int32(i * groupRows / manyRows) // sorted
		b.toSmall[i] = int32(src.IntN(smallRows))      // not sorted
	}
	b.s, b.s2 = b.Parameter(0, Scalar), b.Parameter(1, Scalar)
	b.v, b.u = b.Parameter(2, b.small), b.Parameter(2+smallRows, b.groups)
	b.x = b.Data(b.rows, x)
	b.r = b.Add(b.Gather(b.u, b.rows, b.toGroup), b.Mul(b.s2, b.x))
	return b
}

// weighed makes a scalar of v that tells its rows apart.
func (b *bench) weighed(v Value) Value {
	p := b.On(v)
	if p == Scalar {
		return v
	}
	w := make([]float64, b.Rows(p))
	for i := range w {
		w[i] = math.Cos(float64(3*i)) / math.Sqrt(float64(len(w)))
	}
	return b.Sum(b.Mul(v, b.Data(p, w)))
}

// unary checks an operation of one argument on every kind of plate; prepare
// brings any number into its domain.
func unary(op func(b *bench, x Value) Value, prepare func(b *bench, x Value) Value) func(b *bench) Value {
	return func(b *bench) Value {
		of := func(x Value) Value { return b.weighed(op(b, prepare(b, x))) }
		return b.Add(of(b.s), of(b.v), of(b.r))
	}
}

// twoArgs checks an operation of two arguments with columns and scalars on
// either side, and with data.
func twoArgs(op func(b *bench, x, y Value) Value, x0, y0 func(b *bench, x Value) Value) func(b *bench) Value {
	return func(b *bench) Value {
		of := func(x, y Value) Value { return b.weighed(op(b, x0(b, x), y0(b, y))) }
		square := b.Mul(b.r, b.s)
		return b.Add(of(b.s, b.s2), of(b.r, square), of(b.r, b.s), of(b.s, b.r), of(b.x, b.r), of(b.r, b.x), of(b.v, b.s2), of(b.s2, b.v))
	}
}

func anyNumber(_ *bench, x Value) Value      { return x }
func positive(b *bench, x Value) Value       { return b.Add(b.Softplus(x), b.Const(0.1)) }
func betweenZeroOne(b *bench, x Value) Value { return b.InvLogit(x) }

// opChecks has a scalar that uses each operation of a builder.
var opChecks = map[op]func(b *bench) Value{
	opParameter: func(b *bench) Value { return b.Add(b.s, b.Element(b.v, 1), b.weighed(b.u)) },
	opConst:     func(b *bench) Value { return b.Mul(b.Const(2.5), b.s) },
	opData:      func(b *bench) Value { return b.weighed(b.Mul(b.x, b.s)) },
	opAdd:       twoArgs(func(b *bench, x, y Value) Value { return b.Add(x, y, b.Exp(x)) }, anyNumber, anyNumber),
	opMul:       twoArgs(func(b *bench, x, y Value) Value { return b.Mul(x, y, x) }, anyNumber, anyNumber),
	opSub:       twoArgs((*bench).sub, anyNumber, anyNumber),
	opDiv:       twoArgs(func(b *bench, x, y Value) Value { return b.Div(x, y) }, anyNumber, positive),
	opPow: func(b *bench) Value {
		general := twoArgs(func(b *bench, x, y Value) Value { return b.Pow(x, y) }, positive, anyNumber)(b)
		for _, y := range []float64{1, 2, 3, -1, 0.5, 0} {
			x := func(x Value) Value { return b.weighed(b.Pow(positive(b, x), b.Const(y))) }
			general = b.Add(general, x(b.s), x(b.v), x(b.r))
		}
		return general
	},
	opMin:      twoArgs(func(b *bench, x, y Value) Value { return b.Min(x, y) }, anyNumber, anyNumber),
	opMax:      twoArgs(func(b *bench, x, y Value) Value { return b.Max(x, y) }, anyNumber, anyNumber),
	opNeg:      unary(func(b *bench, x Value) Value { return b.Neg(x) }, anyNumber),
	opExp:      unary(func(b *bench, x Value) Value { return b.Exp(x) }, anyNumber),
	opLog:      unary(func(b *bench, x Value) Value { return b.Log(x) }, positive),
	opLogit:    unary(func(b *bench, x Value) Value { return b.Logit(x) }, betweenZeroOne),
	opInvLogit: unary(func(b *bench, x Value) Value { return b.InvLogit(x) }, anyNumber),
	opSoftplus: unary(func(b *bench, x Value) Value { return b.Softplus(x) }, anyNumber),
	opSqrt:     unary(func(b *bench, x Value) Value { return b.Sqrt(x) }, positive),
	opInvSqrt:  unary(func(b *bench, x Value) Value { return b.InvSqrt(x) }, positive),
	opSquare:   unary(func(b *bench, x Value) Value { return b.Square(x) }, anyNumber),
	opAbs:      unary(func(b *bench, x Value) Value { return b.Abs(x) }, anyNumber),
	opGather: func(b *bench) Value {
		index := make([]int32, groupRows)
		for i := range index {
			index[i] = int32(i % smallRows)
		}
		other := make([]int32, manyRows) // another way to the same plate
		twins := b.Plate("twins", manyRows-9)
		column, toTwin := make([]float64, manyRows-9), make([]int32, manyRows)
		for i := range other {
			other[i] = int32(i * 7 % groupRows)
			toTwin[i] = int32(i * 5 % len(column))
			column[toTwin[i]] = math.Sin(float64(i))
		}
		twin := b.Gather(b.Exp(b.Mul(b.s2, b.Data(twins, column))), b.rows, toTwin) // of as many rows: not lifted through
		b1, b2 := b.Gather(b.u, b.rows, b.toGroup), b.Gather(b.Exp(b.u), b.rows, other)
		once := b.Gather(b.Exp(b.Mul(b.s, b.Data(twins, column))), b.rows, toTwin)
		mixed := b.Add(b.weighed(b.Exp(b.Add(b.Mul(b.s, once, b.x), b.r))), b.weighed(b.Div(b1, b2)),
			b.weighed(b.Exp(b.Add(twin, b.r))), b.weighed(b.Exp(b.Add(b.Mul(b.s, twin, b.x), b.r, b.Mul(b.s, twin)))),
			b.weighed(b.Exp(b.Add(b1, b2, b.x))), b.weighed(b.Mul(b1, b2, b.x)), b.weighed(b.SumOver(b.Mul(b1, b.r), b.groups, other)))
		nested := b.Gather(b.Add(b.Gather(b.v, b.groups, index), b.u), b.rows, b.toGroup)
		chained := b.Gather(b.Gather(b.v, b.groups, index), b.rows, b.toGroup)
		return b.Add(mixed, b.weighed(b.Exp(nested)), b.weighed(b.Mul(chained, b.r)), b.weighed(b.Gather(b.v, b.rows, b.toSmall)), b.weighed(b.Exp(b.Gather(b.u, b.rows, b.toGroup))),
			b.weighed(b.Mul(b.Gather(b.v, b.rows, b.toSmall), b.r)), b.weighed(b.Mul(b.Gather(b.u, b.rows, b.toGroup), b.x, b.s)))
	},
	opSumOver: func(b *bench) Value {
		return b.Add(b.weighed(b.Log(b.SumOver(b.Square(b.r), b.small, b.toSmall))),
			b.weighed(b.Square(b.SumOver(b.InvLogit(b.r), b.groups, b.toGroup))),
			b.weighed(b.InvLogit(b.MeanWithin(b.r, b.small, b.toSmall))),
			b.weighed(b.SumOver(b.Mul(b.r, b.Exp(b.r)), b.groups, b.toGroup)))
	},
	opSum: func(b *bench) Value {
		return b.Add(b.Sum(b.Exp(b.r)), b.Sum(b.Add(b.Exp(b.s), b.r)), b.Sum(b.Sub(b.Data(b.small, []float64{1, 2, 3, 4}), b.s2)), b.Square(b.Sum(b.v)), b.Sum(b.Mul(b.s, b.x)), b.Sum(b.Square(b.r)), b.Sum(b.Gather(b.Exp(b.u), b.rows, b.toGroup)))
	},
	opElement: func(b *bench) Value {
		return b.Add(b.Element(b.Exp(b.v), 2), b.Square(b.Element(b.r, manyRows-1)), b.Element(b.s, 0))
	},
	opStack: func(b *bench) Value {
		return b.weighed(b.Exp(b.Stack(b.small, b.s, b.s2, b.Mul(b.s, b.s2), b.Const(0.3))))
	},
	opLinear: func(b *bench) Value {
		m := make([]float64, groupRows*smallRows)
		for i := range m {
			m[i] = math.Sin(float64(i))
		}
		tall := make([]float64, manyRows*2)
		for i := range tall {
			tall[i] = math.Sin(float64(i))
		}
		two := b.Plate("two", 2)
		return b.Add(b.weighed(b.Square(b.Linear(b.groups, m, b.v))),
			b.weighed(b.Square(b.Linear(b.rows, tall, b.Stack(two, b.s, b.s2)))))
	},
	opCumSum: func(b *bench) Value {
		return b.Add(b.weighed(b.Square(b.CumSum(b.Exp(b.v)))), b.weighed(b.CumSum(b.r)))
	},
	opLogSumExp: func(b *bench) Value {
		return b.Add(b.LogSumExp(b.v), b.LogSumExp(b.r), b.weighed(b.Softmax(b.Mul(b.v, b.s))))
	},
	opDensity: func(b *bench) Value {
		return b.Add(
			b.Density(testMixed, b.r, b.x, b.s, b.Mul(b.r, b.s2)), b.Density(testMixed, b.x, b.r, b.r, b.s),
			b.Density(testMixed, b.s, b.r, b.s2, b.s), b.Density(testMixed, b.v, b.Const(1), b.s, b.v),
			b.Density(testNormal, b.s, b.Const(0), b.Const(1)), b.Density(testNormal, b.x, b.Add(b.s, b.Mul(b.s2, b.x)), b.Exp(b.s)),
			b.Mul(b.s2, b.Density(testMixed, b.x, b.r, b.Const(1), b.Const(2))))
	},
}

func (b *bench) sub(x, y Value) Value { return b.Sub(x, y) }

// TestEveryOpIsChecked walks the table, so that an operation without a
// gradient rule or without a check fails.
func TestEveryOpIsChecked(t *testing.T) {
	made := map[op]bool{} // in some program, after the passes
	for o := opParameter; o < numOps; o++ {
		row := &table[o]
		if row.name == "" || row.shape == nil {
			t.Fatalf("op %d has no row", o)
		}
		if row.derived {
			continue
		}
		source := o == opParameter || o == opConst || o == opData
		if !source && (row.grad == nil || row.run == nil) {
			t.Errorf("%s: no gradient rule or no evaluation", row.name)
		}
		check := opChecks[o]
		if check == nil {
			t.Errorf("%s: no check", row.name)
			continue
		}
		t.Run(row.name, func(t *testing.T) {
			b := newBench()
			v := check(b)
			if b.Err() != nil {
				t.Fatal(b.Err())
			}
			uses := false
			for _, n := range b.g.nodes {
				uses = uses || n.op == o
			}
			if !uses {
				t.Fatalf("the check of %s does not use it", row.name)
			}
			q := make([]float64, benchDim)
			src := rand.New(rand.NewPCG(benchSeed, uint64(o)))
			for i := range q {
				q[i] = 0.7 * src.NormFloat64()
			}
			compare(t, b.Builder, v, q, nil)
			compare(t, b.Builder, v, q, func(*pass) bool { return false })
			p, err := b.Program(v)
			if err != nil {
				t.Fatal(err)
			}
			for _, n := range p.gradient.g.nodes {
				made[n.op] = true
			}
		})
	}
	for o := opParameter; o < numOps; o++ {
		if table[o].derived && !made[o] {
			t.Errorf("%s: no check leads to it", table[o].name)
		}
	}
}

// compare holds the program of v to the slow evaluator: the value, and the
// gradient against central differences of the slow value.
func compare(t *testing.T, b *Builder, v Value, q []float64, keep func(*pass) bool) {
	t.Helper()
	p, err := b.program(keep, v, v)
	if err != nil {
		t.Fatal(err)
	}
	e := p.NewEvaluator()
	grad := make([]float64, len(q))
	got := e.LogDensity(grad, q)
	want := b.slow(v, q)[0]
	close := func(what string, got, want, tolerance float64) {
		t.Helper()
		if !(math.Abs(got-want) <= tolerance*(1+math.Abs(want))) {
			t.Errorf("%s is %.15g, want %.15g\n%s", what, got, want, p.Dump())
		}
	}
	close("value", got, want, 1e-11)
	close("value without gradient", e.LogDensity(nil, q), want, 1e-11)
	out := []float64{0}
	e.Outputs(out, q)
	close("output", out[0], want, 1e-11)
	close("value again", e.LogDensity(grad, q), got, 0)
	if t.Failed() {
		t.FailNow()
	}
	at := append([]float64(nil), q...)
	scale := 1 + math.Abs(want)
	for i := range q {
		at[i] = q[i] + stepLength
		up := b.slow(v, at)[0]
		at[i] = q[i] - stepLength
		down := b.slow(v, at)[0]
		at[i] = q[i]
		fd := (up - down) / (2 * stepLength)
		if !(math.Abs(grad[i]-fd) <= 1e-7*(scale+math.Abs(fd))) {
			t.Errorf("derivative %d is %.12g, differences give %.12g\n%s", i, grad[i], fd, p.Dump())
			t.FailNow()
		}
	}
}
