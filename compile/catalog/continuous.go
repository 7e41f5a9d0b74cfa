package catalog

import (
	"math"

	"gonum.org/v1/gonum/mathext"
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

// studentTail returns P(T > t) of the standard Student t for t ≥ 0.
func studentTail(t, nu float64) float64 {
	if t*t < nu {
		return 0.5 - 0.5*mathext.RegIncBeta(0.5, 0.5*nu, t*t/(nu+t*t))
	}
	return 0.5 * mathext.RegIncBeta(0.5*nu, 0.5, nu/(nu+t*t))
}

// studentUpper returns the t with P(T > t) = p, for 0 < p ≤ ½.
func studentUpper(p, nu float64) float64 {
	w := mathext.InvRegIncBeta(0.5*nu, 0.5, 2*p)
	return math.Sqrt(nu * (1 - w) / w)
}

func studentQuantile(u float64, a []float64) float64 {
	if u < 0.5 {
		return a[0] - a[1]*studentUpper(u, a[2])
	}
	return a[0] + a[1]*studentUpper(1-u, a[2])
}

func studentCDF(x float64, a []float64) float64 {
	z := (x - a[0]) / a[1]
	if z < 0 {
		return studentTail(-z, a[2])
	}
	return 1 - studentTail(z, a[2])
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

func halfTQuantile(u float64, a []float64) float64 { return a[0] * studentUpper(0.5*(1-u), a[1]) }

func halfTCDF(x float64, a []float64) float64 {
	if x <= 0 {
		return 0
	}
	return 1 - 2*studentTail(x/a[0], a[1])
}

func halfTMean(a []float64) float64 {
	nu := a[1]
	if nu <= 1 {
		return math.Inf(1)
	}
	hi, _ := math.Lgamma(0.5 * (nu + 1))
	lo, _ := math.Lgamma(0.5 * nu)
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
	return a[0] / a[1] * mathext.GammaIncRegInv(a[1], u)
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
	return mathext.InvRegIncBeta(a[0]*a[1], (1-a[0])*a[1], u)
}

func betaCDF(x float64, a []float64) float64 {
	switch {
	case x <= 0:
		return 0
	case x >= 1:
		return 1
	}
	return mathext.RegIncBeta(a[0]*a[1], (1-a[0])*a[1], x)
}

func betaSD(a []float64) float64 { return math.Sqrt(a[0] * (1 - a[0]) / (1 + a[1])) }

func uniformQuantile(u float64, a []float64) float64 { return a[0] + u*(a[1]-a[0]) }

func uniformCDF(x float64, a []float64) float64 {
	return min(1, max(0, (x-a[0])/(a[1]-a[0])))
}

func uniformMean(a []float64) float64 { return 0.5 * (a[0] + a[1]) }
func uniformSD(a []float64) float64   { return (a[1] - a[0]) / math.Sqrt(12) }
