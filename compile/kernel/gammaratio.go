package kernel

import "math"

// Differences of log-gamma functions lose all their digits when they are
// taken between large arguments. The functions here take them through
// Stirling's series, in which the large parts have been cancelled on paper
// (C. Loader, "Fast and accurate computation of binomial probabilities",
// 2000, is the idea for the binomial; the rest is the same algebra).

// stirlingFrom is where Stirling's series reaches full double accuracy.
const stirlingFrom = 10

// stirling returns what Stirling's formula leaves out of log Γ(x):
// log Γ(x) - [(x-½) log x - x + ½ log 2π], NIST DLMF 5.11.1.
func stirling(x float64) float64 {
	if x < stirlingFrom {
		l, _ := LogGamma(x)
		return l - (x-0.5)*math.Log(x) + x - halfLog2Pi
	}
	c, _ := stirlingSeries(x)
	return c
}

// stirlingAt returns stirling(x) and x (log x - ψ(x)) given log x, for x ≥ 0:
// where x has underflowed to 0, its log still counts.
func stirlingAt(x, logx float64) (left, xq float64) {
	if x < stirlingFrom {
		l, d := LogGamma(1 + x)
		return l - (x+0.5)*logx + x - halfLog2Pi, 1 + x*(logx-d)
	}
	c, q := stirlingSeries(x)
	return c, 0.5 + x*q
}

// logMinusDigamma returns log x - ψ(x), DLMF 5.11.2.
func logMinusDigamma(x float64) float64 {
	if x < stirlingFrom {
		_, d := LogGamma(x)
		return math.Log(x) - d
	}
	_, q := stirlingSeries(x)
	return 0.5/x + q
}

// logChoose returns the log of the binomial coefficient, n over y, for whole
// 0 ≤ y ≤ n.
func logChoose(n, y float64) float64 {
	m := n - y
	if y == 0 || m == 0 {
		return 0
	}
	return stirling(n) - stirling(y) - stirling(m) - halfLog2Pi +
		0.5*math.Log(n/y/m) + y*math.Log(n/y) - m*math.Log1p(-y/n)
}

// logRising returns log Γ(k+y) - log Γ(k) - y log k for whole y ≥ 0, and its
// derivative in k: the part of a negative binomial that vanishes as k grows.
func logRising(k, y float64) (value, slope float64) {
	if y <= 16 {
		// Σ log(1 + j/k), j < y; the slope is -Σ j/(k (k+j)).
		for j := 1.0; j < y; j++ {
			value += math.Log1p(j / k)
			slope -= j / (k + j)
		}
		return value, slope / k
	}
	s := k + y
	if k < stirlingFrom {
		ls, ds := LogGamma(s)
		lk, dk := LogGamma(k)
		return ls - lk - y*math.Log(k), ds - dk - y/k
	}
	r := y / k
	leftS, psiS := stirlingSeries(s)
	leftK, psiK := stirlingSeries(k)
	value = (s-0.5)*math.Log1p(r) - y + leftS - leftK
	slope = log1pmx(r) + 0.5*r/s + psiK - psiS
	return value, slope
}

// halfStep returns log Γ(x+½) - log Γ(x) - ½ log x and its derivative, the
// normalising constant of Student's t. For large x it is
// -Σ (1-4⁻ⁿ) B₂ₙ / (n (2n-1) x²ⁿ⁻¹), from DLMF 5.11.8 with h = ½.
func halfStep(x float64) (value, slope float64) {
	if x < stirlingFrom {
		a, da := LogGamma(x + 0.5)
		b, db := LogGamma(x)
		return a - b - 0.5*math.Log(x), da - db - 0.5/x
	}
	v := 1 / (x * x)
	value = -(1./8 - v*(1./192-v*(1./640-v*(17./14336-v*(31./18432-v*691./180224))))) / x
	slope = v * (1./8 - v*(3./192-v*(5./640-v*(7*17./14336-v*(9*31./18432-v*11*691./180224)))))
	return value, slope
}

// LogBetaTerm returns log[x^a y^b / B(a, b)] for a, b > 0, 0 < x < 1 and
// y = 1-x, both given because one of them may be tiny: the leading factor of
// the incomplete beta function.
func LogBetaTerm(a, b, x, y float64) float64 {
	// x/m - 1 and y/(1-m) - 1 at m = a/(a+b), where the term is largest.
	d := x*b - y*a
	return a*log1pRatio(d/a, x, a/(a+b)) + b*log1pRatio(-d/b, y, b/(a+b)) +
		0.5*(math.Log(a)+math.Log(b)-math.Log(a+b)) - halfLog2Pi - (stirling(a) + stirling(b) - stirling(a+b))
}

// log1pRatio returns log(x/m), where r = x/m - 1 is known precisely if small.
func log1pRatio(r, x, m float64) float64 {
	if math.Abs(r) < 0.5 {
		return math.Log1p(r)
	}
	return math.Log(x / m)
}
