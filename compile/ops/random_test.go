package ops

import (
	"fmt"
	"math"
	"math/rand/v2"
	"os"
	"slices"
	"testing"
)

// randomGraph writes a log density at random: values on four plates, large and
// small, nested and not, that use each other freely. Numbers stay moderate, so
// that the slow evaluator is exact enough to compare with.
type randomGraph struct {
	*Builder
	src    *rand.Rand
	plates []Plate
	values map[Plate][]Value
	up     map[[2]Plate][]int32 // index by (fine, coarse)
	dim    int
}

func newRandomGraph(seed uint64) (*randomGraph, Value) {
	r := &randomGraph{Builder: NewBuilder(), src: rand.New(rand.NewPCG(seed, 2)), values: map[Plate][]Value{}, up: map[[2]Plate][]int32{}}
	r.plates = []Plate{Scalar, r.Plate("three", 3), r.Plate("groups", 40+r.src.IntN(20)), r.Plate("many groups", 520+r.src.IntN(100)), r.Plate("rows", 1200+r.src.IntN(400))}
	for i, coarse := range r.plates {
		for j, fine := range r.plates {
			if i == 0 || j <= i {
				continue
			}
			index := make([]int32, r.Rows(fine))
			for k := range index {
				index[k] = int32(r.src.IntN(r.Rows(coarse)))
				if k < r.Rows(coarse) {
					index[k] = int32(k) // no entry is without rows
				}
			}
			if r.src.IntN(2) == 0 {
				slices.Sort(index)
			}
			r.up[[2]Plate{fine, coarse}] = index
		}
	}
	for _, p := range r.plates {
		for range 2 {
			r.values[p] = append(r.values[p], r.Parameter(r.dim, p))
			r.dim += r.Rows(p)
		}
		if p != Scalar {
			for range 2 {
				c := make([]float64, r.Rows(p))
				for i := range c {
					c[i] = r.src.NormFloat64()
				}
				r.values[p] = append(r.values[p], r.Data(p, c))
			}
		}
	}
	r.values[Scalar] = append(r.values[Scalar], r.Const(r.src.NormFloat64()), r.Const(-1), r.Const(1))
	var total []Value
	for range 10 + r.src.IntN(30) {
		p := r.plates[r.src.IntN(len(r.plates))]
		if v := r.step(p); v != 0 {
			r.values[r.On(v)] = append(r.values[r.On(v)], v)
		}
		if r.src.IntN(4) == 0 {
			total = append(total, r.factor(r.plates[r.src.IntN(len(r.plates))]))
		}
	}
	total = append(total, r.factor(r.plates[len(r.plates)-1]), r.factor(Scalar))
	return r, r.Add(total[0], total[1], total[2:]...)
}

// pick takes a value of p, or one time in four a scalar.
func (r *randomGraph) pick(p Plate) Value {
	if r.src.IntN(4) == 0 {
		p = Scalar
	}
	vs := r.values[p]
	return vs[r.src.IntN(len(vs))]
}

func (r *randomGraph) own(p Plate) Value { return r.values[p][r.src.IntN(len(r.values[p]))] }

func (r *randomGraph) step(p Plate) Value {
	x, y := r.pick(p), r.pick(p)
	tame := func(v Value) Value { // keeps sums of many from running away
		return r.Mul(r.Const(1/math.Sqrt(float64(r.Rows(p)))), v)
	}
	switch r.src.IntN(22) {
	case 0, 1:
		return r.Add(x, y)
	case 2:
		return r.Sub(x, y)
	case 3:
		return r.Add(r.Mul(r.own(Scalar), x), r.Mul(r.own(Scalar), y), r.own(p))
	case 4:
		return r.Mul(r.InvLogit(x), y)
	case 5:
		return r.Neg(x)
	case 6:
		return r.Div(x, r.Add(r.Square(y), r.Const(1)))
	case 7:
		return r.Exp(r.Neg(r.Softplus(x)))
	case 8:
		return r.Log(r.Add(r.Softplus(x), r.Const(0.1)))
	case 9:
		return r.Sqrt(r.Add(r.Square(x), r.Const(0.5)))
	case 10:
		return r.InvSqrt(r.Add(r.Square(x), r.Const(0.5)))
	case 11:
		return r.Logit(r.InvLogit(r.Mul(r.InvLogit(y), x)))
	case 12:
		return r.Pow(r.Add(r.InvLogit(x), r.Const(0.5)), r.InvLogit(y))
	case 13, 14, 15:
		var finer []Plate
		for pair := range r.up {
			if pair[1] == p {
				finer = append(finer, pair[0])
			}
		}
		if len(finer) == 0 {
			return 0
		}
		slices.Sort(finer)
		to := finer[r.src.IntN(len(finer))]
		return r.Gather(r.own(p), to, r.up[[2]Plate{to, p}])
	case 16:
		if p == Scalar || p == r.plates[1] {
			return 0
		}
		to := r.plates[1+r.src.IntN(slices.Index(r.plates, p)-1)]
		index := r.up[[2]Plate{p, to}]
		if r.src.IntN(2) == 0 {
			return r.MeanOver(r.own(p), to, index)
		}
		return tame(r.SumOver(r.Mul(r.InvLogit(x), r.own(p)), to, index))
	case 17:
		return tame(r.Sum(r.Mul(r.InvLogit(x), r.own(p))))
	case 18:
		return r.LogSumExp(r.own(p))
	case 19:
		if p == Scalar {
			return 0
		}
		return tame(r.CumSum(r.own(p)))
	case 20:
		return r.Element(r.own(p), r.src.IntN(r.Rows(p)))
	default:
		if p != r.plates[1] {
			return 0
		}
		m := []float64{1, -1, .5, .2, .3, -.4, 0, 1, 1}
		return r.Linear(p, m, r.Stack(p, r.own(Scalar), r.own(Scalar), r.Element(r.own(p), 1)))
	}
}

// factor is a density on p, or something of p summed.
func (r *randomGraph) factor(p Plate) Value {
	sd := func(x Value) Value { return r.Add(r.Softplus(x), r.Const(0.5)) }
	switch r.src.IntN(4) {
	case 0:
		return r.Density(testMixed, r.own(p), r.pick(p), r.pick(p), r.pick(p))
	case 1:
		return r.Density(testNormal, r.pick(p), r.pick(p), sd(r.pick(p)))
	case 2:
		counts := make([]float64, r.Rows(p))
		for i := range counts {
			counts[i] = float64(r.src.IntN(7))
		}
		y := r.Const(3)
		if p != Scalar {
			y = r.Data(p, counts)
		}
		return r.Density(testTallied, y, r.Neg(r.Softplus(r.pick(p))), sd(r.own(Scalar)))
	default:
		mean := r.own(Scalar)
		for _, v := range r.values[p] {
			if r.g.nodes[v].op == opData {
				mean = r.Add(mean, r.Mul(r.own(Scalar), v))
			}
		}
		return r.Density(testNormal, r.values[p][len(r.values[p])-1], mean, sd(r.own(Scalar)))
	}
}

// TestRandomGraphs compares, on graphs written at random, the program with the
// slow evaluator, its gradient with differences along random directions, and
// all passes with none, with all but one and with one alone.
func TestRandomGraphs(t *testing.T) {
	graphs := 40
	if os.Getenv("ARROWROOT_LONG") != "" {
		graphs = 1000
	}
	for seed := range uint64(graphs) {
		t.Run(fmt.Sprint(seed), func(t *testing.T) {
			r, v := newRandomGraph(seed)
			if r.Err() != nil {
				t.Fatal(r.Err())
			}
			q := make([]float64, r.dim)
			for i := range q {
				q[i] = 0.5 * r.src.NormFloat64()
			}
			outputs := []Value{v}
			for _, p := range r.plates {
				outputs = append(outputs, r.own(p))
			}
			program := func(keep func(*pass) bool) (*Program, float64, []float64) {
				p, err := r.program(keep, v, outputs...)
				if err != nil {
					t.Fatal(err)
				}
				grad := make([]float64, r.dim)
				return p, p.NewEvaluator().LogDensity(grad, q), grad
			}
			p, got, grad := program(nil)
			want := r.slow(v, q)[0]
			if math.IsNaN(want) || math.IsInf(want, 0) {
				t.Fatalf("the graph is not tame: %v", want)
			}
			if !near(got, want, 1e-10) {
				t.Fatalf("value %.15g, want %.15g\n%s", got, want, p.Dump())
			}
			if v := p.NewEvaluator().LogDensity(nil, q); !near(v, want, 1e-10) {
				t.Errorf("value without gradient %.15g, want %.15g", v, want)
			}
			r.checkOutputs(t, p, outputs, q)

			for range 4 {
				along := make([]float64, r.dim)
				at, slope := slices.Clone(q), 0.0
				for i := range along {
					if r.src.IntN(3) == 0 {
						along[i] = r.src.NormFloat64()
					}
					slope += along[i] * grad[i]
				}
				const h = 1e-4
				move := func(by float64) float64 {
					for i := range at {
						at[i] = q[i] + by*along[i]
					}
					return r.slow(v, at)[0]
				}
				fd := (move(h) - move(-h)) / (2 * h)
				rounding := 10 * epsilon * math.Abs(want) / h // of the differences
				if !(math.Abs(slope-fd) <= 1e-6*(1+math.Abs(fd))+rounding) {
					t.Fatalf("slope %.12g, differences give %.12g\n%s", slope, fd, p.Dump())
				}
			}

			same := func(what string, value float64, other []float64) {
				t.Helper()
				if !near(value, got, 1e-10) {
					t.Errorf("%s: value %.15g, want %.15g", what, value, got)
				}
				size := 0.0
				for _, g := range grad {
					size = max(size, math.Abs(g))
				}
				for i := range other {
					if !(math.Abs(other[i]-grad[i]) <= 1e-9*(1+size)) {
						t.Fatalf("%s: derivative %d is %.15g, want %.15g", what, i, other[i], grad[i])
					}
				}
			}
			_, value, other := program(func(*pass) bool { return false })
			same("no passes", value, other)
			for i := range passes {
				_, value, other := program(func(p *pass) bool { return p != &passes[i] })
				same("without "+passes[i].name, value, other)
				_, value, other = program(func(p *pass) bool { return p == &passes[i] })
				same("only "+passes[i].name, value, other)
			}
		})
	}
}

func (r *randomGraph) checkOutputs(t *testing.T, p *Program, outputs []Value, q []float64) {
	t.Helper()
	out := make([]float64, p.OutputLen())
	p.NewEvaluator().Outputs(out, q)
	for _, o := range outputs {
		for i, want := range r.slow(o, q) {
			if !near(out[i], want, 1e-10) {
				t.Fatalf("output on %s, row %d: %.15g, want %.15g", r.g.plates[r.On(o)].name, i, out[i], want)
			}
		}
		out = out[r.Rows(r.On(o)):]
	}
}

func near(got, want, tolerance float64) bool {
	return math.Abs(got-want) <= tolerance*(1+math.Abs(want))
}

// TestNoAllocation: an evaluation allocates nothing, whatever it does.
func TestNoAllocation(t *testing.T) {
	for seed := range uint64(5) {
		r, v := newRandomGraph(seed)
		p, err := r.Program(v, v)
		if err != nil {
			t.Fatal(err)
		}
		e := p.NewEvaluator()
		q, grad, out := make([]float64, p.Dim()), make([]float64, p.Dim()), make([]float64, 1)
		if n := testing.AllocsPerRun(5, func() { e.LogDensity(grad, q) }); n != 0 {
			t.Errorf("gradient: %v allocations", n)
		}
		if n := testing.AllocsPerRun(5, func() { e.LogDensity(nil, q) }); n != 0 {
			t.Errorf("value: %v allocations", n)
		}
		if n := testing.AllocsPerRun(5, func() { e.Outputs(out, q) }); n != 0 {
			t.Errorf("outputs: %v allocations", n)
		}
	}
}

// TestSharedProgram: evaluators in many goroutines agree to the bit.
func TestSharedProgram(t *testing.T) {
	r, v := newRandomGraph(3)
	p, err := r.Program(v)
	if err != nil {
		t.Fatal(err)
	}
	q := make([]float64, p.Dim())
	for i := range q {
		q[i] = math.Sin(float64(i)) / 2
	}
	grads := make([][]float64, 4)
	done := make(chan int)
	for i := range grads {
		go func() {
			grads[i] = make([]float64, p.Dim())
			e := p.NewEvaluator()
			for range 3 {
				e.LogDensity(grads[i], q)
			}
			done <- i
		}()
	}
	for range grads {
		<-done
	}
	for _, g := range grads[1:] {
		if !slices.Equal(g, grads[0]) {
			t.Fatal("two evaluators of one program differ")
		}
	}
}
