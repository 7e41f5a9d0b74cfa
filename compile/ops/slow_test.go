package ops

import (
	"math"

	"arrowroot/compile/kernel"
)

// The slow evaluator: the graph as the builder wrote it, one number at a time,
// with math.* and without any pass, schedule or kernel function. It is the
// oracle for values, and through finite differences for gradients.

// slow evaluates v at q.
func (b *Builder) slow(v Value, q []float64) []float64 {
	memo := make([][]float64, len(b.g.nodes))
	for i := 1; i <= int(v); i++ {
		memo[i] = b.slowNode(&b.g.nodes[i], memo, q)
	}
	return memo[v]
}

func (b *Builder) slowNode(n *node, memo [][]float64, q []float64) []float64 {
	rows := b.g.rows(n.plate)
	out := make([]float64, rows)
	arg := func(a, i int) float64 {
		v := memo[n.args[a]]
		if b.g.nodes[n.args[a]].plate == Scalar {
			return v[0]
		}
		return v[i]
	}
	each := func(f func(i int) float64) {
		for i := range out {
			out[i] = f(i)
		}
	}
	switch n.op {
	case opParameter:
		copy(out, q[n.at:n.at+rows])
	case opConst:
		out[0] = n.c
	case opData:
		copy(out, n.data)
	case opAdd, opMul:
		each(func(i int) float64 {
			v := arg(0, i)
			for a := 1; a < len(n.args); a++ {
				if n.op == opAdd {
					v += arg(a, i)
				} else {
					v *= arg(a, i)
				}
			}
			return v
		})
	case opSub:
		each(func(i int) float64 { return arg(0, i) - arg(1, i) })
	case opDiv:
		each(func(i int) float64 { return arg(0, i) / arg(1, i) })
	case opPow:
		each(func(i int) float64 { return math.Pow(arg(0, i), arg(1, i)) })
	case opMin:
		each(func(i int) float64 { return math.Min(arg(0, i), arg(1, i)) })
	case opMax:
		each(func(i int) float64 { return math.Max(arg(0, i), arg(1, i)) })
	case opNeg:
		each(func(i int) float64 { return -arg(0, i) })
	case opExp:
		each(func(i int) float64 { return math.Exp(arg(0, i)) })
	case opLog:
		each(func(i int) float64 { return math.Log(arg(0, i)) })
	case opLogit:
		each(func(i int) float64 { return math.Log(arg(0, i)) - math.Log1p(-arg(0, i)) })
	case opInvLogit:
		each(func(i int) float64 { return 1 / (1 + math.Exp(-arg(0, i))) })
	case opSoftplus:
		each(func(i int) float64 { return math.Log1p(math.Exp(-math.Abs(arg(0, i)))) + math.Max(arg(0, i), 0) })
	case opSqrt:
		each(func(i int) float64 { return math.Sqrt(arg(0, i)) })
	case opInvSqrt:
		each(func(i int) float64 { return 1 / math.Sqrt(arg(0, i)) })
	case opSquare:
		each(func(i int) float64 { return arg(0, i) * arg(0, i) })
	case opAbs:
		each(func(i int) float64 { return math.Abs(arg(0, i)) })
	case opGather:
		each(func(i int) float64 { return memo[n.args[0]][n.index.to[i]] })
	case opSumOver:
		for i, j := range n.index.to {
			out[j] += memo[n.args[0]][i]
		}
	case opSum:
		for _, v := range memo[n.args[0]] {
			out[0] += v
		}
	case opElement:
		out[0] = memo[n.args[0]][n.at]
	case opStack:
		each(func(i int) float64 { return memo[n.args[i]][0] })
	case opLinear:
		x := memo[n.args[0]]
		for i := range out {
			for j, v := range x {
				out[i] += n.data[i*len(x)+j] * v
			}
		}
	case opCumSum:
		sum := 0.0
		for i, v := range memo[n.args[0]] {
			sum += v
			out[i] = sum
		}
	case opLogSumExp:
		for _, v := range memo[n.args[0]] {
			out[0] += math.Exp(v)
		}
		out[0] = math.Log(out[0])
	case opDensity:
		rows := b.g.rows(b.g.domain(b.find(n)))
		for i := range rows {
			args := make([]float64, len(n.args)-1)
			for a := range args {
				args[a] = arg(a+1, i)
			}
			lp, _ := rowOf[n.kernel](arg(0, i), args, make([]float64, len(args)))
			out[0] += lp
		}
	default:
		panic("the slow evaluator has no " + table[n.op].name)
	}
	return out
}

func (b *Builder) find(n *node) id {
	for i := range b.g.nodes {
		if &b.g.nodes[i] == n {
			return id(i)
		}
	}
	panic("not here")
}

// A row is a log density of one value. It puts its derivatives by the
// arguments into slopes and returns that by y.
type row func(y float64, args, slopes []float64) (lp, dy float64)

// rowOf gives the row of each test kernel.
var rowOf = map[*kernel.Density]row{}

// testKernel makes a kernel that follows the contract from its row. It keeps
// to the letter of it: it adds to derivatives, and checks what it is given.
func testKernel(name string, args int, f row) *kernel.Density {
	k := &kernel.Density{Name: name, Args: args}
	k.Block = func(n int, y []float64, args [][]float64, dy []float64, dargs [][]float64, _, scratch []float64) float64 {
		if n < 1 || n > kernel.BlockRows || len(scratch) < 4*kernel.BlockRows {
			panic("a block out of contract")
		}
		fits := func(x []float64) {
			if len(x) != n && len(x) != 1 {
				panic("a column out of contract")
			}
		}
		fits(y)
		for i, a := range args {
			fits(a)
			if dargs[i] != nil && len(dargs[i]) != len(a) {
				panic("a derivative out of contract")
			}
		}
		sum := 0.0
		row, slopes := scratch[:len(args)], scratch[len(args):2*len(args)]
		for i := range n {
			for j, a := range args {
				row[j] = a[i&mask(a)]
			}
			lp, d := f(y[i&mask(y)], row, slopes)
			sum += lp
			if dy != nil {
				dy[i&mask(y)] += d
			}
			for j, to := range dargs {
				if to != nil {
					to[i&mask(args[j])] += slopes[j]
				}
			}
		}
		return sum
	}
	rowOf[k] = f
	return k
}

var (
	testNormal = testKernel("normal", 2, func(y float64, a, slopes []float64) (float64, float64) {
		z := (y - a[0]) / a[1]
		slopes[0], slopes[1] = z/a[1], (z*z-1)/a[1]
		return -z*z/2 - math.Log(a[1]) - math.Log(2*math.Pi)/2, -z / a[1]
	})
	// A density in no family: it is smooth everywhere and mixes all arguments.
	testMixed = testKernel("mixed", 3, func(y float64, a, slopes []float64) (float64, float64) {
		t := math.Tanh(a[0] + math.Sin(a[1])*y - a[2]*a[2]/5)
		d := -(1 - t*t)
		slopes[0], slopes[1], slopes[2] = d, d*math.Cos(a[1])*y, -d*2*a[2]/5
		return -t, d * math.Sin(a[1])
	})
	testTallied = makeTallied()
)

// makeTallied is the negative binomial without lgamma(y+1), split by Tally.
func makeTallied() *kernel.Density {
	lgamma := func(x float64) float64 { v, _ := math.Lgamma(x); return v }
	rest := func(y float64, a, slopes []float64) (float64, float64) {
		m, k := math.Exp(a[0]), a[1]
		r := (y + k) / (m + k)
		slopes[0], slopes[1] = y-m*r, math.Log(k)+1-math.Log(m+k)-r
		return y*a[0] + k*math.Log(k) - (y+k)*math.Log(m+k), 0
	}
	whole := testKernel("negative binomial log", 2, func(y float64, a, slopes []float64) (float64, float64) {
		lp, _ := rest(y, a, slopes)
		k := a[1]
		slopes[1] += digamma(y+k) - digamma(k)
		return lp + lgamma(y+k) - lgamma(k), 0
	})
	whole.Tally = &kernel.Tally{
		Arg:  1,
		Rows: testKernel("negative binomial log, rest", 2, rest),
		Values: testKernel("negative binomial, by value", 2, func(y float64, a, slopes []float64) (float64, float64) {
			k, c := a[0], a[1]
			slopes[0], slopes[1] = c*(digamma(y+k)-digamma(k)), 0
			return c * (lgamma(y+k) - lgamma(k)), 0
		}),
	}
	return whole
}

// digamma by recurrence and asymptotic series: Abramowitz & Stegun 6.3.5, 6.3.18.
func digamma(x float64) float64 {
	sum := 0.0
	for ; x < 12; x++ {
		sum -= 1 / x
	}
	w := 1 / (x * x)
	return sum + math.Log(x) - 0.5/x - w*(1./12-w*(1./120-w*(1./252-w*(1./240-w/132))))
}
