package evidence

import (
	"math"
	"math/rand/v2"
	"testing"

	"gonum.org/v1/gonum/mat"
	"gonum.org/v1/gonum/stat"
	"gonum.org/v1/gonum/stat/distuv"
)

var nan = math.NaN()

func near(t *testing.T, what string, got, want, tolerance float64) {
	t.Helper()
	if !(math.Abs(got-want) <= tolerance) {
		t.Errorf("%s: %.6g, want %.6g ± %g", what, got, want, tolerance)
	}
}

// With a linear adjustment the size is the partial correlation: gonum's
// covariance matrix, inverted.
func TestPartialCorrelation(t *testing.T) {
	rng := rand.New(rand.NewPCG(1, 3))
	n, p := 80, 5
	x := mat.NewDense(n, p, nil)
	columns := make([][]float64, p)
	for j := range columns {
		columns[j] = make([]float64, n)
		for i := range n {
			columns[j][i] = rng.NormFloat64()
			for k := range j {
				columns[j][i] += 0.4 * columns[k][i]
			}
			x.Set(i, j, columns[j][i])
		}
	}
	var c mat.SymDense
	stat.CovarianceMatrix(&c, x, nil)
	var inverse mat.Dense
	if err := inverse.Inverse(&c); err != nil {
		t.Fatal(err)
	}
	want := -inverse.At(0, 4) / math.Sqrt(inverse.At(0, 0)*inverse.At(4, 4))
	d := &design{rows: n, rank: 1}
	for _, c := range columns[1:4] {
		own := append([]float64(nil), c...)
		centre(own)
		d.columns = append(d.columns, own)
	}
	d.factorise()
	found, _ := associate([][]float64{d.residual(columns[0])}, [][]float64{d.residual(columns[4])}, []scheme{{units: n, rank: d.rank}}, 0.9)
	near(t, "partial correlation", found.Value, want, 1e-12)
	// Its interval and p are close to those of normal theory: Fisher's z with
	// n − k − 3, Student's t with n − k − 2 degrees of freedom.
	half := 1.6449 / math.Sqrt(float64(n-3-3))
	near(t, "low", found.Low, math.Tanh(math.Atanh(want)-half), 0.06)
	near(t, "high", found.High, math.Tanh(math.Atanh(want)+half), 0.06)
	df := float64(n - 3 - 2)
	near(t, "p", found.p, tailF(want*want*df/(1-want*want), 1, df), 0.05)
}

// spread writes a cross table as a row for each count.
func spread(counts [][]float64) (rows, columns []float64) {
	for i, line := range counts {
		for j, n := range line {
			for range int(n) {
				rows, columns = append(rows, float64(i)), append(columns, float64(j))
			}
		}
	}
	return rows, columns
}

// Hair and eye colour of 592 students (Snee 1974): χ² = 138.29, so that
// Cramér's V is 0.279. From memory. Ours has the mean of chance taken off,
// √((χ² − 9)/(3 n)) = 0.27.
func TestCramersV(t *testing.T) {
	hair, eyes := spread([][]float64{{68, 20, 15, 5}, {119, 84, 54, 29}, {26, 17, 14, 14}, {7, 94, 10, 16}})
	a, b := orthonormal(indicators(hair, 5)), orthonormal(indicators(eyes, 5))
	trace := 0.0
	for _, x := range a {
		for _, y := range b {
			trace += math.Pow(dot(x, y)/592, 2)
		}
	}
	near(t, "χ²", 592*trace, 138.29, 0.01)
	near(t, "V", math.Sqrt(trace/3), 0.279, 0.0005)
	found, _ := associate(indicators(hair, 5), indicators(eyes, 5), []scheme{{units: 592, rank: 1}}, 0.9)
	near(t, "V without chance", found.Value, 0.270, 0.003)
	if found.p > 1e-15 || found.Low < 0.2 || found.High > 0.34 {
		t.Errorf("%+v", found)
	}
}

// Admissions of 1973 in six departments (Bickel, Hammel & O'Connell 1975;
// counts from memory): sex and admission go together over all (φ = 0.143), and
// department by department they hardly do, but for the first one: the
// Mantel–Haenszel χ² without continuity correction is 1.52, p = 0.217 (from
// memory). With 1.96 on either side the corner is 1 % of the other rows.
func TestAdmissions(t *testing.T) {
	var sex, admitted, department []float64
	for d, c := range [][4]float64{{512, 313, 89, 19}, {353, 207, 17, 8}, {120, 205, 202, 391}, {138, 279, 131, 244}, {53, 138, 94, 299}, {22, 351, 24, 317}} {
		for cell, n := range c {
			for range int(n) {
				sex, admitted, department = append(sex, float64(cell/2)), append(admitted, float64(1-cell%2)), append(department, float64(d))
			}
		}
	}
	n := len(sex)
	if n != 4526 {
		t.Fatal(n)
	}
	none := newDesign(nil, nil, n, n)
	crude, _ := associate([][]float64{none.residual(sex)}, [][]float64{none.residual(admitted)}, []scheme{{units: n, rank: 1}}, 0.9)
	near(t, "φ", math.Abs(crude.Value), 0.1427, 0.0005)
	within := newDesign([]*column{{scale: "category"}}, [][]float64{department}, n, n)
	found, _ := associate([][]float64{within.residual(sex)}, [][]float64{within.residual(admitted)}, []scheme{{units: n, rank: within.rank}}, 0.9)
	near(t, "p within departments", found.p, 0.217, 0.02)
	if found.Value < 0 || found.Value > 0.04 { // women are favoured a little
		t.Errorf("within departments %.3f", found.Value)
	}
}

// The noncentral χ² with one degree of freedom is that of a squared normal
// number; with none of noncentrality it is the central one of gonum.
func TestNoncentralChiSquared(t *testing.T) {
	phi := distuv.UnitNormal.CDF
	for _, lambda := range []float64{0.1, 1, 9, 80, 2500} {
		for _, x := range []float64{0.5, lambda / 2, lambda, lambda + 20} {
			r, m := math.Sqrt(x), math.Sqrt(lambda)
			near(t, "cdf", chiSquared(x, 1, lambda), phi(r-m)-phi(-r-m), 1e-9)
		}
	}
	near(t, "central", chiSquared(7, 4, 0), distuv.ChiSquared{K: 4}.CDF(7), 1e-12)
	for _, p := range []float64{0.05, 0.5, 0.95} {
		near(t, "noncentrality", chiSquared(30, 4, noncentrality(30, 4, p)), p, 1e-6)
	}
	near(t, "none to be had", noncentrality(1, 4, 0.95), 0, 0)
}

// Tails and quantiles against gonum's distributions.
func TestTails(t *testing.T) {
	for _, df := range []float64{5, 37, 400} {
		s := distuv.StudentsT{Mu: 0, Sigma: 1, Nu: df}
		near(t, "t tail", tailF(2.1*2.1, 1, df), 2*s.Survival(2.1), 1e-10)
		near(t, "t quantile", quantileT(0.95, df), s.Quantile(0.95), 1e-6)
		near(t, "F tail", tailF(2.5, 3, df), distuv.F{D1: 3, D2: df}.Survival(2.5), 1e-10)
	}
}

// Holm (1979) by hand: 4 × .005, 3 × .01, 2 × .03, and .04 raised to that.
func TestHolm(t *testing.T) {
	got := holm([]float64{0.01, 0.04, nan, 0.03, 0.005})
	for i, want := range []float64{0.03, 0.06, nan, 0.06, 0.02} {
		if math.IsNaN(want) != math.IsNaN(got[i]) || math.Abs(got[i]-want) > 1e-12 {
			t.Errorf("%d: %g, not %g", i, got[i], want)
		}
	}
}

// Normal scores of Blom (1958): of five numbers Φ⁻¹(0.881) = 1.180 at the end,
// 0.497 next (from memory of the published table), before they are standardised;
// ties share their mean rank.
func TestNormalScores(t *testing.T) {
	s := normalScores([]float64{3, 1, 2, 50, 4})
	near(t, "ratio of the outer two", s[3]/s[4], 1.180/0.497, 0.005)
	near(t, "middle", s[0], 0, 1e-12)
	tied := normalScores([]float64{0, 0, 1, 0})
	near(t, "ties", tied[0], tied[3], 0)
	if normalScores([]float64{2, 2, 2}) != nil {
		t.Error("a constant has scores")
	}
}

// The spline bends as it should: it takes a parabola out.
func TestAdjustmentBends(t *testing.T) {
	rng := rand.New(rand.NewPCG(9, 9))
	n := 500
	z, y := make([]float64, n), make([]float64, n)
	for i := range z {
		z[i] = rng.NormFloat64()
		y[i] = z[i]*z[i] + 0.1*rng.NormFloat64()
	}
	standardise(y)
	d := newDesign([]*column{{scale: "real"}}, [][]float64{z}, n, n)
	left := d.residual(y)
	if share := dot(left, left) / float64(n); share > 0.05 {
		t.Errorf("%.3f of a parabola is left", share)
	}
}
