package ui

import (
	"math"
	"testing"

	"gonum.org/v1/gonum/stat/distuv"

	"arrowroot/compile/catalog"
	"arrowroot/compile/formula"
	"arrowroot/compile/model"
)

// Marginal priors of the entries of vectors, against Gonum's distributions: a
// share of Dirichlet(1) is beta(1, K−1), the share up to the j-th cut is
// beta(j, K−j), and an entry of a zero-sum vector is normal with variance
// sd²/2 · (1 − 1/K), which follows from the definition in compile/model.
func TestPriorsOfEntries(t *testing.T) {
	normal := catalog.FamilyByName("normal")
	number := func(text string) formula.Expr {
		e, err := formula.Parse(text)
		if err != nil {
			t.Fatal(err)
		}
		return e.Right
	}
	prior := model.Prior{Family: normal, Arguments: []formula.Expr{number("0"), number("1.4")}}
	m := &model.Model{}
	logit := func(u float64) float64 { return math.Log(u / (1 - u)) }
	for _, c := range []struct {
		name string
		p    *model.Parameter
		at   int
		want func(u float64) float64
	}{
		{"zero sum", &model.Parameter{Shape: model.ZeroSum, Size: 3, Prior: prior}, 1,
			distuv.Normal{Sigma: 1.4 / math.Sqrt2 * math.Sqrt(2.0/3)}.Quantile},
		{"free", &model.Parameter{Shape: model.Vector, Size: 2, Prior: prior}, 0, distuv.Normal{Sigma: 1.4}.Quantile},
		{"middle of a rise over four levels", &model.Parameter{Shape: model.Rising, Size: 4}, 1, distuv.Beta{Alpha: 1, Beta: 2}.Quantile},
		{"shares", &model.Parameter{Shape: model.Simplex, Size: 4}, 2, distuv.Beta{Alpha: 1, Beta: 3}.Quantile},
		{"second cut of four levels", &model.Parameter{Shape: model.Cuts, Size: 3}, 1,
			func(u float64) float64 { return logit(distuv.Beta{Alpha: 2, Beta: 2}.Quantile(u)) }},
	} {
		low, high := entryRange(m, c.p, c.at, 0.8)
		if math.Abs(low-c.want(0.1)) > 1e-6 || math.Abs(high-c.want(0.9)) > 1e-6 {
			t.Errorf("%s: %g to %g, want %g to %g", c.name, low, high, c.want(0.1), c.want(0.9))
		}
	}
}
