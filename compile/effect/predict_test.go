package effect

import (
	"context"
	"crypto/sha256"
	"math"
	"math/rand/v2"
	"testing"

	"gonum.org/v1/gonum/mat"
	"gonum.org/v1/gonum/stat/distmv"
	"gonum.org/v1/gonum/stat/distuv"

	"arrowroot/compile/model"
	"arrowroot/compile/study"
)

func named(name string) rand.Source { return rand.NewChaCha8(sha256.Sum256([]byte(name))) }

func each(n int) []int32 {
	out := make([]int32, n)
	for i := range out {
		out[i] = int32(i)
	}
	return out
}

func predict(t *testing.T, s *sketch, draws [][]float64, units Units) *Predicted {
	t.Helper()
	p, err := Predict(context.Background(), s.m, "y", draws, units, named, Options{})
	if err != nil {
		t.Fatal(err)
	}
	return p
}

// Densities of single rows against gonum's distributions.
func TestPredictRows(t *testing.T) {
	x := []float64{-1, 0, 2}
	laws := map[string]struct {
		arguments []string
		y         []float64
		want      func(eta, y float64) float64
	}{
		"normal":    {[]string{"0.5"}, []float64{0.1, -2, 3}, func(eta, y float64) float64 { return distuv.Normal{Mu: eta, Sigma: 0.5}.LogProb(y) }},
		"Poisson":   {nil, []float64{0, 4, 1}, func(eta, y float64) float64 { return distuv.Poisson{Lambda: math.Exp(eta)}.LogProb(y) }},
		"Bernoulli": {nil, []float64{0, 1, 1}, func(eta, y float64) float64 { return distuv.Bernoulli{P: expit(eta)}.LogProb(y) }},
		"gamma": {[]string{"2"}, []float64{0.3, 4, 1}, func(eta, y float64) float64 {
			return distuv.Gamma{Alpha: 2, Beta: 2 / math.Exp(eta)}.LogProb(y)
		}},
	}
	for name, law := range laws {
		s := newSketch(t, 3)
		s.variable("x", study.Real, x)
		s.variable("y", study.Real, law.y)
		s.parameter("a", 0.3)
		s.law("y", name, "a + 0.7 * x", law.arguments...)
		got := predict(t, s, [][]float64{{0.3}, {-0.2}}, Units{Of: []int32{0, -1, 1}, Count: 2})
		for i, a := range []float64{0.3, -0.2} {
			near(t, name+", first row", got.Log[0][i], law.want(a+0.7*x[0], law.y[0]), 1e-9)
			near(t, name+", third row", got.Log[1][i], law.want(a+0.7*x[2], law.y[2]), 1e-9)
		}
	}
}

// An ordered law against its cut points.
func TestPredictLevels(t *testing.T) {
	s := newSketch(t, 3)
	s.variable("x", study.Real, []float64{0, 1, 2})
	s.variable("y", study.Ordered, []float64{0, 1, 2}).Levels = []string{"low", "mid", "high"}
	s.vector("cuts", model.Cuts, -0.5, 1)
	s.law("y", "ordered", "x").Cutpoints = "cuts"
	got := predict(t, s, s.draws(1), Units{Of: each(3), Count: 3})
	// P(y ≤ k) = expit(cut − x), with x = 0, 1 and 2 in the rows
	for i, want := range []float64{expit(-0.5), expit(0) - expit(-0.5-1), 1 - expit(1-2)} {
		near(t, "level", got.Log[i][0], math.Log(want), 1e-12)
	}
}

// Rows of one new group have a multivariate normal density, its covariances
// those of a shared baseline and slope (gonum's).
func TestPredictNewGroups(t *testing.T) {
	const sd, tau, slope = 0.8, 1.2, 0.6
	x := []float64{-1, 0.5, 1, 0, 2, -0.3, 0.2}
	y := []float64{0.4, 1.9, 2.2, -1, 0.3, 0.9, -0.2}
	s := newSketch(t, len(x))
	s.plate("farm", 3, []int32{0, 0, 0, 1, 1, 1, 2})
	s.variable("x", study.Real, x)
	s.variable("y", study.Real, y)
	s.parameter("alpha", 0.5)
	s.parameter("tau", tau)
	s.parameter("beta", 0.7)
	s.parameter("spread", slope)
	base := s.vector("alpha_y_farm", model.ByPlate, 9, 9, 9)
	base.Mean, base.SD = "alpha", "tau"
	steep := s.vector("beta_y_farm", model.ByPlate, -9, 9, 0)
	steep.Mean, steep.SD = "beta", "spread"
	s.law("y", "normal", "alpha_y_farm by farm + (beta_y_farm by farm) * x", "0.8")
	got := predict(t, s, s.draws(2), Units{Of: []int32{0, 0, 0, 1, 1, 1, 2}, Count: 3, New: true})
	if got.Replicates < 2*fewestReplicates || got.Error > replicateError {
		t.Errorf("%d replicates with error %.3f", got.Replicates, got.Error)
	}
	for unit, rows := range [][]int{{0, 1, 2}, {3, 4, 5}, {6}} {
		n := len(rows)
		mean, seen, cov := make([]float64, n), make([]float64, n), mat.NewSymDense(n, nil)
		for i, a := range rows {
			mean[i], seen[i] = 0.5+0.7*x[a], y[a]
			for j, b := range rows {
				c := tau*tau + slope*slope*x[a]*x[b]
				if i == j {
					c += sd * sd
				}
				cov.SetSym(i, j, c)
			}
		}
		law, ok := distmv.NewNormal(mean, cov, nil)
		if !ok {
			t.Fatal("no covariance")
		}
		near(t, "a new group", got.Log[unit][0], law.LogProb(seen), 0.1)
	}
}

// Effects that another law reads as well would not be a new group's.
func TestPredictSharedEffects(t *testing.T) {
	s := newSketch(t, 2)
	s.plate("farm", 2, []int32{0, 1})
	s.variable("z", study.Real, []float64{0, 1})
	s.variable("y", study.Real, []float64{0, 1})
	s.parameter("tau", 1)
	s.vector("alpha_y_farm", model.ByPlate, 0, 0).SD = "tau"
	s.law("z", "normal", "alpha_y_farm by farm", "1")
	s.law("y", "normal", "alpha_y_farm by farm", "1")
	_, err := Predict(context.Background(), s.m, "y", s.draws(1), Units{Of: each(2), Count: 2, New: true}, named, Options{})
	if err == nil {
		t.Error("nothing was said")
	}
}
