package catalog

import (
	"math"

	"gonum.org/v1/gonum/mathext"

	"arrowroot/compile/kernel"
)

func standardNormalCDF(z float64) float64 { return 0.5 * math.Erfc(-z/math.Sqrt2) }

func normalQuantile(u float64, a []float64) float64 { return a[0] + a[1]*mathext.NormalQuantile(u) }
func normalCDF(x float64, a []float64) float64      { return standardNormalCDF((x - a[0]) / a[1]) }

func logNormalQuantile(u float64, a []float64) float64 {
	return a[0] * math.Exp(a[1]*mathext.NormalQuantile(u))
}

func logNormalCDF(x float64, a []float64) float64 {
	if x <= 0 {
		return 0
	}
	return standardNormalCDF(math.Log(x/a[0]) / a[1])
}

func logNormalMean(a []float64) float64 { return a[0] * math.Exp(0.5*a[1]*a[1]) }
func logNormalSD(a []float64) float64 {
	return logNormalMean(a) * math.Sqrt(math.Expm1(a[1]*a[1]))
}

func halfNormalQuantile(u float64, a []float64) float64 {
	return -a[0] * mathext.NormalQuantile(0.5*(1-u))
}

func halfNormalCDF(x float64, a []float64) float64 {
	if x <= 0 {
		return 0
	}
	return math.Erf(x / a[0] / math.Sqrt2)
}

func halfNormalMean(a []float64) float64 { return a[0] * math.Sqrt(2/math.Pi) }
func halfNormalSD(a []float64) float64   { return a[0] * math.Sqrt(1-2/math.Pi) }

// nearlyNormal is the number of degrees of freedom from which studentNormal
// is exact in double precision.
const nearlyNormal = 1e4

// studentNormal returns the z whose normal tail is the tail of Student's t
// beyond t ≥ 0, by the first terms of G. W. Hill's expansion (Algorithm 395,
// CACM 13, 1970). Its constants are from memory; the test has values from
// elsewhere.
func studentNormal(t, nu float64) float64 {
	a := nu - 0.5
	y := a * math.Log1p(t*t/nu)
	return math.Sqrt(y) * (1 + (y+3)/(48*a*a))
}

// studentFromNormal undoes studentNormal.
func studentFromNormal(z, nu float64) float64 {
	a := nu - 0.5
	y := z * z
	for range 2 {
		root := z / (1 + (y+3)/(48*a*a))
		y = root * root
	}
	return math.Sqrt(nu * math.Expm1(y/a))
}

// studentParts returns P(|T| < t) and P(|T| > t) of the standard Student t for
// t ≥ 0.
func studentParts(t, nu float64) (center, outer float64) {
	if nu > nearlyNormal {
		z := studentNormal(t, nu) / math.Sqrt2
		return math.Erf(z), math.Erfc(z)
	}
	t2 := t * t
	if math.IsInf(t2, 1) {
		return 1, 0
	}
	return incBeta(0.5, 0.5*nu, t2/(nu+t2), nu/(nu+t2))
}

// studentInverse returns the t with P(|T| < t) = center = 1 - outer, both
// given because one of them may be tiny. Newton steps on the log of the
// smaller one against log t: that curve is concave, so that after the first
// step they close in from one side.
func studentInverse(center, outer, nu float64) float64 {
	z := -mathext.NormalQuantile(0.5 * outer)
	t := studentFromNormal(z, nu)
	if nu > nearlyNormal || center == 0 {
		return t
	}
	if nu < 2 && (center > 0.5 || nu < 0.1) {
		// A heavy tail is a power of t: P(|T| > t) → 2 c (t/√ν)^-ν / ν with
		// c = Γ((ν+1)/2) / (Γ(ν/2) √π).
		hi, _ := kernel.LogGamma(0.5 * (nu + 1))
		lo, _ := kernel.LogGamma(0.5*nu + 1)
		logt := 0.5*math.Log(nu) + (hi-lo-0.5*math.Log(math.Pi)-math.Log(outer))/nu
		if logt > 340 { // t² is beyond range, the power exact
			return math.Exp(min(logt, 709))
		}
		t = math.Exp(max(logt, -300))
	}
	for range 100 {
		in, out := studentParts(t, nu)
		slope := 2 * t * studentDensity(t, nu)
		var step float64
		if center < outer {
			step = math.Log(center/in) * in / slope
		} else {
			step = math.Log(out/outer) * out / slope
		}
		if step != step || math.IsInf(step, 0) {
			break // t is beyond range
		}
		t *= math.Exp(step)
		if math.Abs(step) < 1e-9 {
			break // the next step would be its square
		}
	}
	return t
}

func studentDensity(t, nu float64) float64 {
	y, mean, scale, df := [1]float64{t}, [1]float64{0}, [1]float64{1}, [1]float64{nu}
	args := [3][]float64{mean[:], scale[:], df[:]}
	return math.Exp(kernel.StudentT.Block(1, y[:], args[:], nil, nil, nil, nil))
}

func studentQuantile(u float64, a []float64) float64 {
	if u < 0.5 {
		return a[0] - a[1]*studentInverse(1-2*u, 2*u, a[2])
	}
	return a[0] + a[1]*studentInverse(2*u-1, 2*(1-u), a[2])
}

func studentCDF(x float64, a []float64) float64 {
	z := (x - a[0]) / a[1]
	center, outer := studentParts(math.Abs(z), a[2])
	if z < 0 {
		return 0.5 * outer
	}
	return 0.5 + 0.5*center
}

func studentMean(a []float64) float64 {
	if a[2] <= 1 {
		return math.NaN()
	}
	return a[0]
}

func studentSD(a []float64) float64 {
	switch {
	case a[2] <= 1:
		return math.NaN()
	case a[2] <= 2:
		return math.Inf(1)
	}
	return a[1] * math.Sqrt(a[2]/(a[2]-2))
}

func halfTQuantile(u float64, a []float64) float64 { return a[0] * studentInverse(u, 1-u, a[1]) }

func halfTCDF(x float64, a []float64) float64 {
	if x <= 0 {
		return 0
	}
	center, _ := studentParts(x/a[0], a[1])
	return center
}

func halfTMean(a []float64) float64 {
	nu := a[1]
	if nu <= 1 {
		return math.Inf(1)
	}
	hi, _ := kernel.LogGamma(0.5 * (nu + 1))
	lo, _ := kernel.LogGamma(0.5 * nu)
	return 2 * a[0] * math.Sqrt(nu/math.Pi) / (nu - 1) * math.Exp(hi-lo)
}

func halfTSD(a []float64) float64 {
	nu := a[1]
	switch {
	case nu <= 1:
		return math.NaN()
	case nu <= 2:
		return math.Inf(1)
	}
	m := halfTMean(a)
	return math.Sqrt(a[0]*a[0]*nu/(nu-2) - m*m)
}

func gammaQuantile(u float64, a []float64) float64 {
	// Close to 0 the distribution function is x^s / Γ(s+1), and x may be
	// smaller than what the general inverse looks at.
	s := a[1]
	l, _ := kernel.LogGamma(s + 1)
	x := math.Exp((math.Log(u) + l) / s)
	if x > 1e-12 && s < 1e12 {
		x = mathext.GammaIncRegInv(s, u)
	}
	if s >= 1e12 || math.IsNaN(x) {
		// E. B. Wilson & M. M. Hilferty (1931): the cube root is nearly normal.
		root := 1 - 1/(9*s) + mathext.NormalQuantile(u)/(3*math.Sqrt(s))
		x = s * root * root * root
	}
	return max(a[0]*(x/s), math.SmallestNonzeroFloat64)
}

func gammaCDF(x float64, a []float64) float64 {
	if x <= 0 {
		return 0
	}
	return mathext.GammaIncReg(a[1], x*a[1]/a[0])
}

func gammaSD(a []float64) float64 { return a[0] / math.Sqrt(a[1]) }

func exponentialQuantile(u float64, a []float64) float64 { return -a[0] * math.Log1p(-u) }

func exponentialCDF(x float64, a []float64) float64 {
	if x <= 0 {
		return 0
	}
	return -math.Expm1(-x / a[0])
}

func betaQuantile(u float64, a []float64) float64 {
	// A draw must lie inside, where the log density is finite.
	return min(max(betaInverse(u, a[0], a[1]), math.SmallestNonzeroFloat64), 1-0x1p-53)
}

func betaInverse(u, mean, precision float64) float64 {
	p, q := mean*precision, (1-mean)*precision
	switch {
	case p < 1e-8 && q < 1e-8: // all mass is at the two ends
		if u > 1-mean {
			return 1
		}
		return 0
	case p == 0 || q == 0:
		return math.Round(mean)
	case precision > 1e12: // nearly normal
		return mean + betaSD([]float64{mean, precision})*mathext.NormalQuantile(u)
	}
	x := mathext.InvRegIncBeta(p, q, u)
	if math.IsNaN(x) {
		return mean // the inverse gave up: one of p and q is beyond 1e-100
	}
	if p > 1 && q > 1 && x > 0 && x < 1 {
		// The inverse above loses digits as the precision grows; a Newton
		// step on the log of the nearer tail gives them back.
		lower, upper := incBeta(p, q, x, 1-x)
		slope := math.Exp(kernel.LogBetaTerm(p, q, x, 1-x)) / (x * (1 - x))
		step := -math.Log(lower/u) * lower / slope
		if u >= 0.5 {
			step = math.Log(upper/(1-u)) * upper / slope
		}
		if math.Abs(step) < 0.5*min(x, 1-x) {
			x += step
		}
	}
	return x
}

func betaCDF(x float64, a []float64) float64 {
	switch {
	case x <= 0:
		return 0
	case x >= 1:
		return 1
	}
	lower, _ := incBeta(a[0]*a[1], (1-a[0])*a[1], x, 1-x)
	return lower
}

func betaSD(a []float64) float64 { return math.Sqrt(a[0] * (1 - a[0]) / (1 + a[1])) }

func uniformQuantile(u float64, a []float64) float64 { return a[0] + u*(a[1]-a[0]) }

func uniformCDF(x float64, a []float64) float64 {
	return min(1, max(0, (x-a[0])/(a[1]-a[0])))
}

func uniformMean(a []float64) float64 { return 0.5 * (a[0] + a[1]) }
func uniformSD(a []float64) float64   { return (a[1] - a[0]) / math.Sqrt(12) }
