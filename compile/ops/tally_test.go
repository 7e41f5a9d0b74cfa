package ops

import (
	"math"
	"math/rand/v2"
	"slices"
	"testing"

	"arrowroot/compile/kernel"
)

// TestTallyIsExact: every kernel that can be split over distinct values gives
// split and whole the same value and derivatives, 1e-12 relative.
func TestTallyIsExact(t *testing.T) {
	split := 0
	for _, k := range kernel.Densities() {
		if k.Tally == nil {
			continue
		}
		split++
		const n = 1200
		src := rand.New(rand.NewPCG(8, 1))
		y := make([]float64, n)
		for i := range y {
			y[i] = math.Floor(math.Exp(3 * src.Float64()))
		}
		b := NewBuilder()
		rows := b.Plate("rows", n)
		args := make([]Value, k.Args)
		for i := range args {
			args[i] = b.Add(b.Data(rows, normals(src, n)), b.Parameter(i, Scalar))
			args[i] = b.Add(b.Softplus(args[i]), b.Const(0.2))
		}
		args[k.Tally.Arg] = b.Exp(b.Parameter(k.Tally.Arg, Scalar))
		v := b.Density(k, b.Data(rows, y), args...)
		p := mustProgram(b, nil, v)
		if !slices.ContainsFunc(p.gradient.g.nodes, func(n node) bool { return n.kernel == k.Tally.Values }) {
			t.Errorf("%s: not split\n%s", k.Name, p.Dump())
		}
		plain := mustProgram(b, func(p *pass) bool { return p.name != "tally" }, v)
		for range 10 {
			q := make([]float64, k.Args)
			for i := range q {
				q[i] = 3 * src.NormFloat64()
			}
			got, want := make([]float64, len(q)), make([]float64, len(q))
			if v, w := p.NewEvaluator().LogDensity(got, q), plain.NewEvaluator().LogDensity(want, q); !near(v, w, 1e-12) {
				t.Errorf("%s at %v: %.15g, whole %.15g", k.Name, q, v, w)
			}
			for i := range q {
				if !near(got[i], want[i], 1e-11) {
					t.Errorf("%s at %v, derivative %d: %.15g, whole %.15g", k.Name, q, i, got[i], want[i])
				}
			}
		}
	}
	if split == 0 {
		t.Error("no kernel offers a Tally")
	}
}

// TestDistinct keeps off where little would be saved.
func TestDistinct(t *testing.T) {
	values, counts := distinct([]float64{3, 1, 3, 3, 0, 1})
	if !slices.Equal(values, []float64{0, 1, 3}) || !slices.Equal(counts, []float64{1, 2, 3}) {
		t.Errorf("values %v, counts %v", values, counts)
	}
	if values, _ := distinct([]float64{1, 2, 2}); values != nil {
		t.Errorf("split for %v", values)
	}
	if values, _ := distinct([]float64{1, math.NaN(), 1, 1, 1}); values != nil {
		t.Error("split with a value that is not a number")
	}
}
