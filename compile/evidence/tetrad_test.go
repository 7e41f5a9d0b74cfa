package evidence

import (
	"math"
	"math/rand/v2"
	"testing"

	"arrowroot/compile/study"
	"gonum.org/v1/gonum/mat"
)

// wishart is the variance of s_ac s_bd − s_ad s_bc in n normal rows with
// covariance matrix Σ (Wishart 1928): D_ab and D_cd are the determinants of
// those two rows and columns, D that of all four.
func wishart(n float64, s *mat.SymDense) float64 {
	pair := func(i, j int) float64 { return s.At(i, i)*s.At(j, j) - s.At(i, j)*s.At(i, j) }
	return (pair(0, 1)*pair(2, 3)*n/(n-2) - mat.Det(s)) / (n - 3)
}

// One factor behind four variables: the spread of the difference is that of
// Wishart's formula and of simulation, and p is under 0.05 in about 5 %.
func TestTetradAgreesWithWishart(t *testing.T) {
	rng := rand.New(rand.NewPCG(2, 8))
	loadings := []float64{0.9, 0.8, 0.7, 0.6}
	sigma := mat.NewSymDense(4, nil)
	for i, a := range loadings {
		for j, b := range loadings[:i+1] {
			sigma.SetSym(i, j, a*b)
		}
		sigma.SetSym(i, i, 1)
	}
	n, reps := 300, 1500
	var squares, width float64
	flagged := 0
	for range reps {
		var x [4][]float64
		for range n {
			f := rng.NormFloat64()
			for j, l := range loadings {
				x[j] = append(x[j], l*f+math.Sqrt(1-l*l)*rng.NormFloat64())
			}
		}
		for j := range x {
			standardise(x[j])
		}
		e, p := tetradDifference(x, []scheme{{units: n, rank: 1}}, 0.9)
		squares += e.Value * e.Value
		width += (e.High - e.Low) / 2 / 1.65
		if p < 0.05 {
			flagged++
		}
	}
	want := math.Sqrt(wishart(float64(n), sigma))
	near(t, "spread in simulation", math.Sqrt(squares/float64(reps)), want, 0.06*want)
	near(t, "spread of the interval", width/float64(reps), want, 0.06*want)
	near(t, "rate of p < 0.05", float64(flagged)/float64(reps), 0.05, 0.02)
}

// A tetrad that a rival promises fails where two causes tie the four together.
func TestTetradFails(t *testing.T) {
	rng := rand.New(rand.NewPCG(2, 9))
	for _, two := range []bool{false, true} {
		w := newWorld("f -> a, b, c, d")
		w.unmeasured = []string{"f"}
		var x [4][]float64
		for range 800 {
			f, g := rng.NormFloat64(), 0.0
			if two {
				g = 0.7 * rng.NormFloat64()
			}
			for j := range x {
				v := f + rng.NormFloat64()
				if j < 2 {
					v += g
				}
				x[j] = append(x[j], v)
			}
		}
		for j, id := range []string{"a", "b", "c", "d"} {
			w.numbers(id, study.Real, x[j])
		}
		e := tested(t, w.request(t))
		if len(e.Tetrads) != 3 {
			t.Fatalf("%d tetrads", len(e.Tetrads))
		}
		if got := e.Tetrads[0].Verdict == Contradicted; got != two {
			t.Errorf("two causes %v: %s", two, e.Tetrads[0].Sentence)
		}
	}
}
