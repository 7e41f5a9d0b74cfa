package fit

import (
	"math"
	"testing"
)

// A certified regression is one of NIST's linear reference data sets.
type certified struct {
	Coefficients []float64
	Errors       []float64
	ResidualSD   float64 `json:"residual sd"`
	DF           float64 `json:"degrees of freedom"`
}

// spread gives mean and sd of σ, and what a certified standard error becomes
// as a posterior sd. With flat priors of the coefficients, which those of the
// studies are to better than 1e-5, the coefficients given σ are normal around
// the certified ones with sd SE·σ/s, so that their posterior sd is
// SE/s · √E(σ²); and σ has the density σ^−ν exp(−ν s²/(2σ²)) times its
// half-normal prior, which is integrated here on a fine grid of log σ. (Under
// the prior 1/σ the same gives the t distribution's √(ν/(ν−2)).)
func (c *certified) spread(scale float64) (sigma moment, factor float64) {
	const steps = 20000
	var mass, first, second float64
	for i := range steps {
		x := c.ResidualSD * math.Exp(-4+8*(float64(i)+0.5)/steps)
		z, h := c.ResidualSD/x, x/scale
		p := math.Exp(c.DF*(math.Log(z)-(z*z-1)/2) - h*h/2)
		p *= x // of log σ
		mass += p
		first += p * x
		second += p * x * x
	}
	mean := first / mass
	return moment{Mean: mean, SD: math.Sqrt(second/mass - mean*mean)}, math.Sqrt(second/mass) / c.ResidualSD
}

func TestNorris(t *testing.T) {
	long(t)
	t.Parallel()
	var c certified
	fromJSON(t, "norris", &c)
	req := request(t, "norris")
	req.Draws = 4000
	f := run(t, req).Full
	sigma, factor := c.spread(5)
	check(t, "sigma", f.of(t, parameter("sigma_y")), sigma)
	const center = 500 // the middle of 0–1,000
	check(t, "B0", f.of(t, func(p func(string) float64) float64 {
		return p("alpha_y") - center*p("beta_x_y")
	}), moment{Mean: c.Coefficients[0], SD: c.Errors[0] * factor})
	check(t, "B1", f.of(t, parameter("beta_x_y")), moment{Mean: c.Coefficients[1], SD: c.Errors[1] * factor})
}

// Columns are divided by the ledger and centred by the law; both are undone
// here. Six of the seven columns nearly determine each other.
func TestLongley(t *testing.T) {
	long(t)
	t.Parallel()
	var c certified
	fromJSON(t, "longley", &c)
	req := request(t, "longley")
	req.Draws = 12000
	f := run(t, req).Full
	const residualUnit = 1000 // employed is divided by this
	scaled := c
	scaled.ResidualSD /= residualUnit
	sigma, factor := scaled.spread(2)
	check(t, "sigma", f.of(t, parameter("sigma_employed")), sigma)
	intercept := func(p func(string) float64) float64 {
		sum := p("alpha_employed")
		for _, v := range req.Study.Variables[1:] {
			sum -= p("beta_"+v.ID+"_employed") * (v.Range.Low + v.Range.High) / 2
		}
		return residualUnit * sum
	}
	check(t, "B0", f.of(t, intercept), moment{Mean: c.Coefficients[0], SD: c.Errors[0] * factor})
	for i, v := range req.Study.Variables[1:] {
		check(t, v.ID, f.of(t, func(p func(string) float64) float64 {
			return residualUnit / v.Divide * p("beta_"+v.ID+"_employed")
		}), moment{Mean: c.Coefficients[i+1], SD: c.Errors[i+1] * factor})
	}
}

// The residuals of the first two sets are zero, so σ must be said: with
// Wampler3's certified residual sd, which has the same design, the posterior
// sds are exactly Wampler3's certified standard errors; with another they are
// in proportion. Wampler3 itself is fitted with σ unknown.
func TestWampler(t *testing.T) {
	long(t)
	var third certified
	fromJSON(t, "wampler3", &third)
	for _, w := range []struct {
		study string
		basis [][]float64 // terms as polynomials of u = (x − 10)/10
		sd    float64     // 0 = unknown, half-normal with scale 10,000
	}{
		{"wampler1", powers, third.ResidualSD},
		{"wampler2", powers, 0.1},
		{"wampler3", legendre, 0},
	} {
		t.Run(w.study, func(t *testing.T) {
			t.Parallel()
			var c certified
			fromJSON(t, w.study, &c)
			req := request(t, w.study)
			req.Draws = 8000
			f := run(t, req).Full
			factor := w.sd / third.ResidualSD
			if w.sd == 0 {
				var sigma moment
				sigma, factor = c.spread(10000)
				check(t, "sigma", f.of(t, parameter("sigma_y")), sigma)
			}
			for k := range c.Coefficients {
				// The coefficient of x^k in the sum of a_j times basis j.
				weight := make([]float64, len(w.basis))
				for j, b := range w.basis {
					weight[j] = inX(b)[k]
				}
				check(t, "B"+string(rune('0'+k)), f.of(t, func(p func(string) float64) float64 {
					sum := 0.0
					for j, x := range weight {
						sum += x * p("a"+string(rune('0'+j)))
					}
					return sum
				}), moment{Mean: c.Coefficients[k], SD: third.Errors[k] * factor})
			}
		})
	}
}

var powers = [][]float64{{1}, {0, 1}, {0, 0, 1}, {0, 0, 0, 1}, {0, 0, 0, 0, 1}, {0, 0, 0, 0, 0, 1}}

// legendre are the polynomials P0 to P5 (Abramowitz & Stegun, 22.3.8).
var legendre = [][]float64{
	{1}, {0, 1}, {-1. / 2, 0, 3. / 2}, {0, -3. / 2, 0, 5. / 2},
	{3. / 8, 0, -30. / 8, 0, 35. / 8}, {0, 15. / 8, 0, -70. / 8, 0, 63. / 8},
}

// inX writes a polynomial of u = (x − 10)/10 as one of x, by Horner's rule.
func inX(u []float64) []float64 {
	out := make([]float64, 6)
	for k := len(u) - 1; k >= 0; k-- {
		for i := len(out) - 1; i >= 0; i-- { // times x/10 − 1
			out[i] = -out[i]
			if i > 0 {
				out[i] += out[i-1] / 10
			}
		}
		out[0] += u[k]
	}
	return out
}
