package density

import (
	"math"
	"math/rand/v2"
	"testing"

	"gonum.org/v1/gonum/diff/fd"

	"arrowroot/compile/catalog"
	"arrowroot/compile/formula"
	"arrowroot/compile/model"
	"arrowroot/compile/study"
)

// grow makes a random formula over variables of three levels and parameters
// of every shape that a formula can read.
func grow(rng *rand.Rand, depth int) formula.Expr {
	name := func(id string) *formula.Name { return &formula.Name{ID: id} }
	if depth == 0 || rng.Float64() < 0.15 {
		switch rng.IntN(8) {
		case 0:
			return &formula.Number{Value: math.Round(20*rng.NormFloat64()) / 10}
		case 1:
			return name([]string{"x", "size", "rain"}[rng.IntN(3)])
		case 2:
			return &formula.By{Name: name("b_farm"), Plates: []string{"farm"}}
		case 3:
			return &formula.By{Name: name("c_region"), Plates: []string{"region"}}
		case 4:
			return &formula.Of{Vector: name("step"), Variable: name([]string{"soil", "crop"}[rng.IntN(2)])}
		case 5:
			return &formula.Element{Vector: name("step"), At: rng.IntN(3)}
		}
		return name([]string{"a", "d", "tau"}[rng.IntN(3)])
	}
	x := grow(rng, depth-1)
	switch rng.IntN(9) {
	case 0:
		return &formula.Unary{Op: '-', X: x}
	case 1:
		return &formula.Call{Function: "inverse logit", Args: []formula.Expr{x}}
	case 2:
		return &formula.Call{Function: "sqrt", Args: []formula.Expr{
			&formula.Binary{Op: '+', X: &formula.Binary{Op: '^', X: x, Y: &formula.Number{Value: 2}}, Y: &formula.Number{Value: 1}}}}
	case 3:
		return &formula.Binary{Op: '/', X: x, Y: &formula.Call{Function: "exp", Args: []formula.Expr{
			&formula.Call{Function: "inverse logit", Args: []formula.Expr{grow(rng, depth-1)}}}}}
	}
	return &formula.Binary{Op: "+-*"[rng.IntN(3)], X: x, Y: grow(rng, depth-1)}
}

// Whatever a user types goes through the same lowering: 300 random formulas
// agree with plain evaluation row by row, and so do their gradients with
// differences.
func TestRandomFormulas(t *testing.T) {
	rng := rand.New(rand.NewPCG(9, 9))
	compared := 0
	for range 300 {
		s := newSketch(t, 6)
		farm := s.plate("farm", []int32{0, 1, 1, 2, 3, 3}, "n", "s", "w", "e")
		region := s.plate("region", []int32{1, 0, 0, 0, 1, 1}, "hill", "vale")
		s.variable("x", study.Real, -1, 0.3, -1, 2, 0.1, 1.5, -0.7)
		s.variable("size", study.Real, farm, 1, 0.5, -1, 2)
		s.variable("rain", study.Real, region, 0.3, -0.2)
		s.variable("soil", study.Category, farm, 0, 2, 1, 1)
		s.variable("crop", study.Category, -1, 2, 2, 1, 0, 0, 1)
		s.variable("y", study.Real, -1, 1, 0, 2, 1, -1, 0.5)
		s.parameter("a", catalog.Reals, "normal", "0", "1")
		s.parameter("d", catalog.Unit, "uniform", "0", "1")
		s.parameter("tau", catalog.Positives, "half-normal", "1")
		s.byPlate("b_farm", farm, "a", "tau", false)
		s.byPlate("c_region", region, "", "tau", true)
		s.vector("step", model.ZeroSum, 3, "normal", "0", "1")
		// a law without an unknown is a constant and in no block
		var e formula.Expr = &formula.Binary{Op: '+', X: &formula.Name{ID: "a"}, Y: grow(rng, 5)}
		s.law("y", "normal", nil).Arguments = []formula.Expr{nil, &formula.Number{Value: 2}}
		s.m.Laws[0].Predictors = []formula.Expr{e}
		text := formula.Format(e)
		d, err := Lower(s.m)
		if err != nil {
			t.Fatalf("%s: %v", text, err)
		}
		draw := make([]float64, len(d.Quantities))
		var qs [][]float64
		got := 0.0
		for _, b := range d.Blocks {
			q := point(rng, b.Dim())
			qs = append(qs, q)
			grad := make([]float64, len(q))
			got += b.Evaluator().LogDensity(grad, q)
			natural := make([]float64, len(b.Quantities))
			b.Natural(natural, q)
			for i, at := range b.Quantities {
				draw[at] = natural[i]
			}
			ev := b.Evaluator()
			want := fd.Gradient(nil, func(x []float64) float64 { return ev.LogDensity(make([]float64, len(x)), x) }, q,
				&fd.Settings{Formula: fd.Central, Step: 1e-6})
			for i := range grad {
				if math.Abs(grad[i]-want[i]) > 1e-5*(1+math.Abs(want[i])+math.Abs(got)) {
					t.Errorf("%s: slope along %s is %.9g, by differences %.9g", text, b.where[i], grad[i], want[i])
				}
			}
		}
		want := plain(s.m, draw)
		if math.IsInf(got, 0) || math.Abs(want) > 1e6 {
			continue
		}
		compared++
		for i, b := range d.Blocks {
			want += jacobian(s.m, d, b, qs[i], draw)
		}
		if !(math.Abs(got-want) <= 1e-6*(1+math.Abs(want))) {
			t.Errorf("%s: log density %.9g, plain evaluation %.9g", text, got, want)
		}
	}
	if compared < 250 {
		t.Errorf("only %d formulas were compared", compared)
	}
}
