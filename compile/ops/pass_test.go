package ops

import (
	"math"
	"strings"
	"testing"

	"arrowroot/compile/kernel"
)

// TestPassOrder holds the passes to the order table, and the table to passes.
func TestPassOrder(t *testing.T) {
	at := map[string]int{}
	for i, p := range passes {
		if _, twice := at[p.name]; twice {
			t.Errorf("two passes are named %q", p.name)
		}
		at[p.name] = i
	}
	for _, o := range passOrder {
		before, ok1 := at[o.before]
		after, ok2 := at[o.after]
		if !ok1 || !ok2 {
			t.Errorf("order of %q and %q: no such pass", o.before, o.after)
			continue
		}
		if before >= after {
			t.Errorf("%q runs after %q, but %s", o.before, o.after, o.why)
		}
	}
}

// TestVerify: a broken graph is found.
func TestVerify(t *testing.T) {
	whole := func() (*unit, *bench) {
		b := newBench()
		v := b.weighed(b.r)
		return &unit{g: b.g, roots: []id{id(v)}}, b
	}
	find := func(u *unit, o op) *node {
		for i := range u.g.nodes {
			if u.g.nodes[i].op == o {
				return &u.g.nodes[i]
			}
		}
		t.Fatalf("no %s", table[o].name)
		return nil
	}
	if u, _ := whole(); verify(u) != nil {
		t.Fatal(verify(u))
	}
	for name, spoil := range map[string]func(u *unit, b *bench){
		"argument after its reader": func(u *unit, _ *bench) { find(u, opGather).args[0] = id(len(u.g.nodes) - 1) },
		"no argument":               func(u *unit, _ *bench) { find(u, opGather).args = nil },
		"wrong plate":               func(u *unit, b *bench) { find(u, opAdd).plate = b.small },
		"mixed plates":              func(u *unit, b *bench) { find(u, opAdd).args[0] = id(b.v) },
		"short column":              func(u *unit, _ *bench) { n := find(u, opData); n.data = n.data[1:] },
		"index of another plate":    func(u *unit, b *bench) { find(u, opGather).index = &index{to: make([]int32, 3)} },
		"index out of range": func(u *unit, b *bench) {
			to := make([]int32, manyRows)
			to[5] = groupRows
			find(u, opGather).index = u.g.index(to)
		},
		"no root": func(u *unit, _ *bench) { u.roots[0] = 0 },
	} {
		u, b := whole()
		spoil(u, b)
		if verify(u) == nil {
			t.Errorf("%s: not found", name)
		}
	}
}

// TestErrors: misuse is kept by the builder, named, and ends in Program.
func TestErrors(t *testing.T) {
	for want, misuse := range map[string]func(b *bench) Value{
		`ops: Add: values of plate "small" and plate "groups" do not mix; gather one to the other`: func(b *bench) Value { return b.Add(b.v, b.u) },
		`ops: Data: a column of 3 for the 4 rows of plate "small"`:                                 func(b *bench) Value { return b.Data(b.small, make([]float64, 3)) },
		`ops: Gather: index[0] = 4, but plate "small" has 4 rows`:                                  func(b *bench) Value { return b.Gather(b.v, b.small, []int32{4, 0, 0, 0}) },
		`ops: Gather: an index of 1 for the 4 rows of plate "small"`:                               func(b *bench) Value { return b.Gather(b.v, b.small, []int32{0}) },
		`ops: SumOver: a scalar has no rows to sum over`:                                           func(b *bench) Value { return b.SumOver(b.s, b.small, nil) },
		`ops: MeanOver: entry 1 of plate "groups" has no rows`: func(b *bench) Value {
			return b.MeanOver(b.v, b.groups, make([]int32, 4))
		},
		`ops: Element: no entry 4 among 4`:          func(b *bench) Value { return b.Element(b.v, 4) },
		`ops: Stack: 1 scalars do not fill plate 1`: func(b *bench) Value { return b.Stack(b.small, b.s) },
		`ops: Stack: an entry is not a scalar but on plate "rows"`: func(b *bench) Value {
			return b.Stack(b.small, b.s, b.s, b.s, b.r)
		},
		`ops: Linear: a matrix of 5 numbers cannot lead from 4 rows to plate 1`: func(b *bench) Value { return b.Linear(b.small, make([]float64, 5), b.v) },
		`ops: Density: normal takes 2 arguments, not 1`:                         func(b *bench) Value { return b.Density(testNormal, b.s, b.s) },
		`ops: Density: no family`:                                               func(b *bench) Value { return b.Density(nil, b.s) },
		`ops: Density: values of plate "small" and plate "rows" do not mix; gather one to the other`: func(b *bench) Value {
			return b.Density(testNormal, b.v, b.r, b.s)
		},
		`ops: Program: the log density is not a scalar but on plate "rows"`: func(b *bench) Value { return b.r },
		`ops: argument: a value that no operation of this builder made`:     func(b *bench) Value { return b.Add(b.s, 0) },
		`ops: Parameter: offset -1 on plate 0`:                              func(b *bench) Value { return b.Parameter(-1, Scalar) },
		`ops: Plate: "empty" has 0 rows, needs at least one`:                func(b *bench) Value { return b.Parameter(0, b.Plate("empty", 0)) },
	} {
		b := newBench()
		v := misuse(b)
		_, err := b.Program(b.Exp(v))
		if err == nil || err.Error() != want {
			_, err = b.Program(v)
		}
		if err == nil || err.Error() != want {
			t.Errorf("error %v\nwant  %s", err, want)
		}
	}
}

// TestPrepare: what a kernel prepares from data comes back to it, by blocks.
func TestPrepare(t *testing.T) {
	k := &kernel.Density{Name: "prepared", Args: 1}
	k.Prepare = func(y []float64, args [][]float64) []float64 {
		if args[0] != nil {
			t.Error("an argument that is no data is given as such")
		}
		out := make([]float64, len(y))
		for i, v := range y {
			out[i] = 3 * v
		}
		return out
	}
	k.Block = func(n int, y []float64, args [][]float64, dy []float64, dargs [][]float64, aux, _ []float64) float64 {
		sum := 0.0
		for i := range n {
			sum += aux[i&mask(aux)] * args[0][0]
			if dargs[0] != nil {
				dargs[0][0] += aux[i&mask(aux)]
			}
		}
		return sum
	}
	b := newBench()
	sum := 0.0
	for _, v := range b.g.nodes[b.x].data {
		sum += 3 * v
	}
	sum += 3 * 7
	p, err := b.Program(b.Add(b.Density(k, b.x, b.s), b.Density(k, b.Const(7), b.s)))
	if err != nil {
		t.Fatal(err)
	}
	grad := make([]float64, p.Dim())
	q := ratioPoint(p.Dim())
	if got := p.NewEvaluator().LogDensity(grad, q); !near(got, sum*q[0], 1e-12) || !near(grad[0], sum, 1e-12) {
		t.Errorf("value %v and derivative %v, want %v and %v", got, grad[0], sum*q[0], sum)
	}
}

// TestDataOnly: a log density that depends on nothing is a constant.
func TestDataOnly(t *testing.T) {
	b := newBench()
	p, err := b.Program(b.Sum(b.Exp(b.x)), b.x, b.s)
	if err != nil {
		t.Fatal(err)
	}
	grad, out := make([]float64, p.Dim()), make([]float64, p.OutputLen())
	q := ratioPoint(p.Dim())
	e := p.NewEvaluator()
	want := 0.0
	for _, v := range b.g.nodes[b.x].data {
		want += math.Exp(v)
	}
	if got := e.LogDensity(grad, q); !near(got, want, 1e-12) || grad[0] != 0 {
		t.Errorf("value %v, want %v; derivative %v", got, want, grad[0])
	}
	if e.Outputs(out, q); out[manyRows] != q[0] || out[3] != b.g.nodes[b.x].data[3] {
		t.Error("outputs are not in their order")
	}
}

// TestNotANumber comes out as minus infinity.
func TestNotANumber(t *testing.T) {
	b := newBench()
	p, err := b.Program(b.Log(b.s))
	if err != nil {
		t.Fatal(err)
	}
	q := make([]float64, p.Dim())
	q[0] = -1
	if v := p.NewEvaluator().LogDensity(nil, q); !math.IsInf(v, -1) {
		t.Errorf("log(-1) comes out as %v", v)
	}
}

// TestDump shows what becomes of a small model with two groups of parameters:
// one blocked stage, in which nothing is done to rows that could be done
// before or in fewer instructions.
func TestDump(t *testing.T) {
	b := newBench()
	mean := b.Add(b.Gather(b.Add(b.s, b.Mul(b.Exp(b.s2), b.u)), b.rows, b.toGroup), b.Mul(b.s2, b.x))
	p, err := b.Program(b.Density(testNormal, b.x, mean, b.Const(2)))
	if err != nil {
		t.Fatal(err)
	}
	want := strings.TrimLeft(`
v1 = Parameter q[0]
v2 = Parameter q[1]
v3 groups = Parameter q[6:19]
v4 rows = Data d0
v11 = Const 2
stage 0: whole
  v6 = Exp v2 -> s0
  v8 groups = Affine v1 + v6 v3 -> s2
stage 1: blocks of rows, 1101 rows
  v10 rows = Affine v2 v4 + v8[i0] -> s5
  v12 = Density v4 v10 v11 of normal -> s7; v13 rows = Partial v12 at 1
  v14 groups = SumOver v13 by i0 -> s10
  v21 = Dot v13 v4 -> s11
stage 1: whole
  v15 = Sum v14 -> s12
  v16 groups = Mul v6 v14 -> s13
  v18 = Dot v3 v14 -> s14
  v19 = Mul v6 v18 -> s15
  v22 = Add v19 v21 -> s16
`, "\n")
	if got := p.Dump(); got != want {
		t.Errorf("got\n%swant\n%s", got, want)
	}
}
