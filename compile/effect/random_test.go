package effect

import (
	"context"
	"fmt"
	"math"
	"math/rand/v2"
	"slices"
	"testing"

	"gonum.org/v1/gonum/mat"

	"arrowroot/compile/catalog"
	"arrowroot/compile/causal"
	"arrowroot/compile/formula"
	"arrowroot/compile/graph"
	"arrowroot/compile/model"
	"arrowroot/compile/study"
)

// Random linear models with unmeasured variables: the laws get the exact
// coefficients of the regression on their carriers (covariance algebra), and
// wherever the case allows simulation, the contrast is the true total effect
// (I − B)⁻¹ of the whole model, unmeasured variables included (SEMANTICS A1
// and B2); likewise the controlled direct effect with further variables fixed.
func TestRandomDiagrams(t *testing.T) {
	rng := rand.New(rand.NewPCG(17, 4))
	simulated, direct := map[causal.Case]int{}, map[causal.Case]int{}
	for trial := range 3000 {
		n := 5 + rng.IntN(4)
		door := trial%2 == 0
		spec := graph.Spec{}
		b := mat.NewDense(n, n, nil) // b[child, parent]
		for i := range n {
			spec.Names = append(spec.Names, fmt.Sprintf("v%d", i))
			hidden := rng.Float64() < 0.3
			if door { // v0 → v1, v0 → last, and nothing from v1 to last but through others
				hidden = i == 0
			}
			if hidden {
				spec.Unmeasured = append(spec.Unmeasured, i)
			}
			for j := range i {
				draw := rng.Float64() < 0.4
				if door && (j == 0 || j == 1 && i == n-1) {
					draw = j == 0 && (i == 1 || i == n-1)
				}
				if draw {
					spec.Arrows = append(spec.Arrows, [2]int{j, i})
					b.Set(i, j, 0.3+rng.Float64())
				}
			}
		}
		g, err := graph.New(spec)
		if err != nil {
			t.Fatal(err)
		}
		var total, covariance mat.Dense
		var difference mat.Dense
		difference.Sub(eye(n), b)
		if err := total.Inverse(&difference); err != nil {
			t.Fatal(err)
		}
		covariance.Mul(&total, total.T())
		x, y := rng.IntN(n), rng.IntN(n)
		if door {
			x, y = 1, n-1
		}
		if x == y || !g.Measured[x] || !g.Measured[y] || !g.Descendants(x)[y] {
			continue
		}
		s := fittedLaws(t, g, x, &covariance)
		// The total effect, and that with one or two further variables fixed:
		// then nothing acts on them (a row of zeros in b).
		for some := range 3 {
			q, held := ask(g.Names[x], g.Names[y], 0, 1), mat.DenseCopyOf(b)
			for range some {
				if v := rng.IntN(n); v != x && v != y && g.Measured[v] && !slices.ContainsFunc(q.Fixed, func(f study.Fix) bool { return f.Variable == g.Names[v] }) {
					q.Fixed = append(q.Fixed, study.Fix{Variable: g.Names[v], At: study.Setting{Number: 0.5}})
					held.SetRow(v, make([]float64, n))
				}
			}
			if some > 0 && q.Fixed == nil {
				continue
			}
			kind, districts, _ := Districts(g, &q, y)
			if some == 0 {
				simulated[kind]++
			} else {
				direct[kind]++
			}
			if kind == causal.NotSimulated {
				continue
			}
			got, err := Simulate(context.Background(), s.m, kind, districts, q, s.draws(1), source(), Options{})
			if err != nil {
				t.Fatal(err)
			}
			difference.Sub(eye(n), held)
			if err := total.Inverse(&difference); err != nil {
				t.Fatal(err)
			}
			if want := total.At(y, x); math.Abs(got.Values[0]-want) > 1e-6 {
				t.Errorf("trial %d, case %d, %s → %s with %v fixed in %v without %v: %.6f, want %.6f", trial, kind, g.Names[x], g.Names[y], q.Fixed, spec.Arrows, spec.Unmeasured, got.Values[0], want)
			}
		}
	}
	t.Logf("diagrams by case: %v, direct effects %v", simulated, direct)
	for _, kind := range []causal.Case{causal.PinAndSimulate, causal.ObservedForDistrict, causal.NotSimulated} {
		if simulated[kind] < 5 || direct[kind] < 5 {
			t.Errorf("only %d diagrams and %d direct effects of case %d", simulated[kind], direct[kind], kind)
		}
	}
}

func eye(n int) *mat.Dense {
	m := mat.NewDense(n, n, nil)
	for i := range n {
		m.Set(i, i, 1)
	}
	return m
}

// fittedLaws gives every measured variable its regression on its carriers.
func fittedLaws(t *testing.T, g *graph.Graph, exposure int, covariance *mat.Dense) *sketch {
	const rows = 8
	s := newSketch(t, rows)
	for v := range g.Len() {
		if g.Measured[v] {
			s.variable(g.Names[v], study.Real, spreadOut(rows, -1, float64(v)))
		}
	}
	for _, f := range causal.Carriers(g, exposure) {
		on := append([]int(nil), f.Parents...)
		for _, c := range f.Carried {
			on = append(on, c.Node)
		}
		var predictor formula.Expr = &formula.Number{}
		noise := covariance.At(f.Node, f.Node)
		if k := len(on); k > 0 {
			xx, xy := mat.NewDense(k, k, nil), mat.NewVecDense(k, nil)
			for i, p := range on {
				xy.SetVec(i, covariance.At(p, f.Node))
				for j, r := range on {
					xx.Set(i, j, covariance.At(p, r))
				}
			}
			var beta mat.VecDense
			if err := beta.SolveVec(xx, xy); err != nil {
				t.Fatal(err)
			}
			noise -= mat.Dot(&beta, xy)
			for i, p := range on {
				slope := &formula.Binary{Op: '*', X: &formula.Number{Value: beta.AtVec(i)}, Y: &formula.Name{ID: g.Names[p]}}
				predictor = &formula.Binary{Op: '+', X: predictor, Y: slope}
			}
		}
		v, _ := s.m.Name(g.Names[f.Node])
		s.m.Laws = append(s.m.Laws, &model.Law{
			Variable: v, Family: catalog.FamilyByName("normal"), Plate: -1,
			Predictors: []formula.Expr{predictor},
			Arguments:  []formula.Expr{nil, &formula.Number{Value: math.Sqrt(noise)}},
		})
	}
	return s
}
