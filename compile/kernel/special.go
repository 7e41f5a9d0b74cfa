package kernel

import "math"

// log1mExp returns log(1 - exp(x)) for x < 0; -Inf at 0, NaN above. The
// switch at -log 2 keeps both branches at full relative accuracy (M. Mächler,
// "Accurately computing log(1 - exp(-|a|))", 2012).
func log1mExp(x float64) float64 {
	if x > -math.Ln2 {
		return math.Log(-math.Expm1(x))
	}
	return math.Log1p(-math.Exp(x))
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
	if x < -0.4 || x > 0.5 {
		return math.Log1p(x) - x
	}
	// With s = x/(2+x), log(1+x) = 2 artanh(s) = 2s + 2s³/3 + 2s⁵/5 + …
	// and 2s - x = -x s.
	s := x / (2 + x)
	v := s * s
	sum := 1./3 + v*(1./5+v*(1./7+v*(1./9+v*(1./11+v*(1./13+v*(1./15+v*(1./17+v*(1./19+v*(1./21+v*(1./23+v*(1./25+v*(1./27))))))))))))
	return s * (2*v*sum - x)
}

// expm1mx returns exp(x) - 1 - x without the cancellation at small x.
func expm1mx(x float64) float64 {
	if math.Abs(x) > 0.5 {
		return Exp(x) - 1 - x
	}
	v := x * x
	even := 1./2 + v*(1./24+v*(1./720+v*(1./40320+v*(1./3628800+v*(1./479001600+v*(1./87178291200))))))
	odd := 1./6 + v*(1./120+v*(1./5040+v*(1./362880+v*(1./39916800+v*(1./6227020800+v*(1./1307674368000))))))
	return v * (even + x*odd)
}

// ratioMinusLog returns x/(1+x) - log(1+x) for x ≥ 0 without the cancellation
// at small x; it turns up where a spread parameter meets log(1+x).
func ratioMinusLog(x float64) float64 {
	if x > 1e-3 {
		return x/(1+x) - log1p(x)
	}
	return -log1pmx(x) - x*x/(1+x)
}
