package catalog

import (
	"math"

	"gonum.org/v1/gonum/mathext"

	"arrowroot/compile/kernel"
)

// Cauchy, and its half.

func cauchyStandard(u float64) float64 {
	if u < 0.5 {
		return -1 / math.Tan(math.Pi*u)
	}
	return 1 / math.Tan(math.Pi*(1-u))
}

func cauchyQuantile(u float64, a []float64) float64 { return a[0] + a[1]*cauchyStandard(u) }

func cauchyCDF(x float64, a []float64) float64 {
	if z := (x - a[0]) / a[1]; z < 0 {
		return math.Atan2(1, -z) / math.Pi
	} else {
		return 0.5 + math.Atan(z)/math.Pi
	}
}

func none([]float64) float64    { return math.NaN() }
func endless([]float64) float64 { return math.Inf(1) }

func halfCauchyQuantile(u float64, a []float64) float64 {
	if u < 0.5 {
		return a[0] * math.Tan(0.5*math.Pi*u)
	}
	return a[0] / math.Tan(0.5*math.Pi*(1-u))
}

func halfCauchyCDF(x float64, a []float64) float64 {
	if x <= 0 {
		return 0
	}
	return 2 / math.Pi * math.Atan(x/a[0])
}

// Laplace and logistic: arguments mean and scale.

func laplaceQuantile(u float64, a []float64) float64 {
	if u < 0.5 {
		return a[0] + a[1]*math.Log(2*u)
	}
	return a[0] - a[1]*math.Log(2*(1-u))
}

func laplaceCDF(x float64, a []float64) float64 {
	z := (x - a[0]) / a[1]
	if z < 0 {
		return 0.5 * math.Exp(z)
	}
	return 1 - 0.5*math.Exp(-z)
}

func logisticQuantile(u float64, a []float64) float64 { return a[0] + a[1]*kernel.Logit(u) }
func logisticCDF(x float64, a []float64) float64      { return kernel.Sigmoid((x - a[0]) / a[1]) }

// Gumbel: arguments location and scale; its mean lies Euler's constant times
// the scale above the location.

const eulerGamma = 0.57721566490153286060651209008240243104215933593992

func gumbelQuantile(u float64, a []float64) float64 { return a[0] - a[1]*math.Log(-math.Log(u)) }
func gumbelCDF(x float64, a []float64) float64      { return math.Exp(-math.Exp(-(x - a[0]) / a[1])) }

// Weibull: arguments scale and shape.

func weibullQuantile(u float64, a []float64) float64 {
	return max(a[0]*math.Pow(-math.Log1p(-u), 1/a[1]), math.SmallestNonzeroFloat64)
}

func weibullCDF(x float64, a []float64) float64 {
	if x <= 0 {
		return 0
	}
	return -math.Expm1(-math.Pow(x/a[0], a[1]))
}

func weibullMean(a []float64) float64 {
	l, _ := kernel.LogGamma(1 + 1/a[1])
	return a[0] * math.Exp(l)
}

func weibullSD(a []float64) float64 {
	once, _ := kernel.LogGamma(1 + 1/a[1])
	twice, _ := kernel.LogGamma(1 + 2/a[1])
	return weibullMean(a) * math.Sqrt(math.Expm1(twice-2*once))
}

// Inverse gamma: arguments scale and shape.

func inverseGammaQuantile(u float64, a []float64) float64 {
	y := gammaQuantile(1-u, []float64{a[1], a[1]}) // a gamma with rate 1
	if u < 0.5 {
		if x := mathext.GammaIncRegCompInv(a[1], u); x > 0 && !math.IsInf(x, 0) {
			y = x
		}
	}
	return min(max(a[0]/y, math.SmallestNonzeroFloat64), math.MaxFloat64)
}

func inverseGammaCDF(x float64, a []float64) float64 {
	if x <= 0 {
		return 0
	}
	return mathext.GammaIncRegComp(a[1], a[0]/x)
}

func inverseGammaMean(a []float64) float64 {
	if a[1] <= 1 {
		return math.Inf(1)
	}
	return a[0] / (a[1] - 1)
}

func inverseGammaSD(a []float64) float64 {
	switch s := a[1]; {
	case s <= 1:
		return math.NaN()
	case s <= 2:
		return math.Inf(1)
	default:
		return inverseGammaMean(a) / math.Sqrt(s-2)
	}
}

// Pareto: arguments minimum and shape.

func paretoQuantile(u float64, a []float64) float64 {
	return min(a[0]*math.Exp(-math.Log1p(-u)/a[1]), math.MaxFloat64)
}

func paretoCDF(x float64, a []float64) float64 {
	if x <= a[0] {
		return 0
	}
	return -math.Expm1(-a[1] * math.Log(x/a[0]))
}

func paretoMean(a []float64) float64 {
	if a[1] <= 1 {
		return math.Inf(1)
	}
	return a[0] * a[1] / (a[1] - 1)
}

func paretoSD(a []float64) float64 {
	switch s := a[1]; {
	case s <= 1:
		return math.NaN()
	case s <= 2:
		return math.Inf(1)
	default:
		return a[0] / (s - 1) * math.Sqrt(s/(s-2))
	}
}

// Triangular: arguments low, high and mode.

func triangularQuantile(u float64, a []float64) float64 {
	low, high, mode := a[0], a[1], a[2]
	if below := (mode - low) / (high - low); u < below {
		return low + math.Sqrt(u*(high-low)*(mode-low))
	}
	return high - math.Sqrt((1-u)*(high-low)*(high-mode))
}

func triangularCDF(x float64, a []float64) float64 {
	low, high, mode := a[0], a[1], a[2]
	switch {
	case x <= low:
		return 0
	case x >= high:
		return 1
	case x < mode:
		return (x - low) / (high - low) * ((x - low) / (mode - low))
	}
	return 1 - (high-x)/(high-low)*((high-x)/(high-mode))
}

func triangularMean(a []float64) float64 { return (a[0] + a[1] + a[2]) / 3 }

func triangularSD(a []float64) float64 {
	low, high, mode := a[0], a[1], a[2]
	return math.Sqrt(((high-low)*(high-low) - (high-mode)*(mode-low)) / 18)
}
