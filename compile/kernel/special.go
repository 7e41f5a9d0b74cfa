package kernel

import "math"

// Log1pExp returns log(1 + exp(x)), the softplus function, accurate in both
// tails.
func Log1pExp(x float64) float64 {
	if x > 0 {
		return x + math.Log1p(math.Exp(-x))
	}
	return math.Log1p(math.Exp(x))
}

// Log1mExp returns log(1 - exp(x)) for x < 0; -Inf at 0, NaN above. The
// switch at -log 2 keeps both branches at full relative accuracy (M. Mächler,
// "Accurately computing log(1 - exp(-|a|))", 2012).
func Log1mExp(x float64) float64 {
	if x > -math.Ln2 {
		return math.Log(-math.Expm1(x))
	}
	return math.Log1p(-math.Exp(x))
}

// LogDiffExp returns log(exp(a) - exp(b)) for a ≥ b; -Inf at a = b, NaN for
// a < b.
func LogDiffExp(a, b float64) float64 {
	if a == b {
		return math.Inf(-1)
	}
	return a + Log1mExp(b-a)
}

// LogSumExp returns log(exp(a) + exp(b)).
func LogSumExp(a, b float64) float64 {
	if a < b {
		a, b = b, a
	}
	if math.IsInf(a, 0) {
		return a
	}
	return a + math.Log1p(math.Exp(b-a))
}

// Sigmoid returns 1/(1 + exp(-x)), the inverse logit, accurate in both tails.
func Sigmoid(x float64) float64 {
	if x >= 0 {
		return 1 / (1 + math.Exp(-x))
	}
	e := math.Exp(x)
	return e / (1 + e)
}

// Logit returns log(p/(1-p)).
func Logit(p float64) float64 {
	return math.Log(p) - math.Log1p(-p)
}

// log1pmx returns log(1+x) - x without the cancellation at small x.
func log1pmx(x float64) float64 {
	if x < -0.5 || x > 0.7 {
		return math.Log1p(x) - x
	}
	// With s = x/(2+x), log(1+x) = 2 artanh(s) = 2s + 2s³/3 + 2s⁵/5 + …
	// and 2s - x = -x s.
	s := x / (2 + x)
	s2 := s * s
	sum := 0.0
	for k := 41; k >= 3; k -= 2 {
		sum = sum*s2 + 1/float64(k)
	}
	return s * (2*s2*sum - x)
}

// expm1mx returns exp(x) - 1 - x without the cancellation at small x.
func expm1mx(x float64) float64 {
	if math.Abs(x) > 0.5 {
		return math.Expm1(x) - x
	}
	sum := 0.0
	for k := 16; k >= 3; k-- {
		sum = (sum + 1) * x / float64(k)
	}
	return (sum + 1) * x * x / 2
}

// ratioMinusLog returns x/(1+x) - log(1+x) without the cancellation at small
// x; it turns up where a spread parameter meets log(1+x).
func ratioMinusLog(x float64) float64 {
	if math.Abs(x) > 0.5 {
		return x/(1+x) - math.Log1p(x)
	}
	return -log1pmx(x) - x*x/(1+x)
}
