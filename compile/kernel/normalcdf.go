package kernel

import "math"

// LogNormalCDF returns log Φ(x), the log of the standard normal distribution
// function, and its derivative φ(x)/Φ(x), both to full relative accuracy in
// either tail.
func LogNormalCDF(x float64) (value, slope float64) {
	switch {
	case x < -5:
		// Φ(-t) = φ(t) R(t), with Mills' ratio R(t) = 1/(t + 1/(t + 2/(t + …)))
		// (NIST DLMF 7.9.1 and 7.18); at t = 5 forty levels are exact.
		t := -x
		f := t
		for k := 40.0; k > 0; k-- {
			f = t + k/f
		}
		return -0.5*x*x - halfLog2Pi - math.Log(f), f
	case x < 1:
		p := 0.5 * math.Erfc(-x/math.Sqrt2)
		return math.Log(p), math.Exp(-0.5*x*x-halfLog2Pi) / p
	}
	q := 0.5 * math.Erfc(x/math.Sqrt2)
	return math.Log1p(-q), math.Exp(-0.5*x*x-halfLog2Pi) / (1 - q)
}

// logNormalBetween returns log[Φ(b) - Φ(a)] for a < b, either of which may be
// infinite, its derivatives in a and b, and their sum: the derivative when both
// move together. gap is b - a, which the caller may know to more digits.
func logNormalBetween(a, b, gap float64) (value, da, db, shift float64) {
	switch {
	case math.IsInf(a, -1) && math.IsInf(b, 1):
		return 0, 0, 0, 0
	case math.IsInf(a, -1):
		value, db = LogNormalCDF(b)
		return value, 0, db, db
	case math.IsInf(b, 1):
		value, da = LogNormalCDF(-a)
		return value, -da, 0, -da
	case a > 0: // to the tail where small differences keep their digits
		value, db, da, shift = logNormalBetween(-b, -a, gap)
		return value, -da, -db, -shift
	}
	if b < -1e150 { // its square is beyond range
		return math.Inf(-1), 0, 0, 0
	}
	logDensity := func(x float64) float64 { return -0.5*x*x - halfLog2Pi }
	if m := 0.5 * (a + b); gap*max(1, math.Abs(m)) < 1e-3 {
		// The integral of φ around its middle, by Taylor's series; the two
		// derivatives are large and nearly opposite.
		m2, g2 := m*m, gap*gap
		p, q := (m2-1)/24, (m2*m2-6*m2+3)/1920
		rest := g2 * (p + g2*q)
		value = logDensity(m) + math.Log(gap) + math.Log1p(rest)
		shift = g2*m*(1./12+g2*(4*m2-12)/1920)/(1+rest) - m
		widen := 1/gap + gap*(2*p+4*g2*q)/(1+rest)
		return value, 0.5*shift - widen, 0.5*shift + widen, shift
	}
	if b > 0 {
		value = math.Log(0.5 * (math.Erf(b/math.Sqrt2) - math.Erf(a/math.Sqrt2)))
	} else {
		la, _ := LogNormalCDF(a)
		lb, _ := LogNormalCDF(b)
		value = lb + log1mExp(la-lb)
	}
	da, db = -math.Exp(logDensity(a)-value), math.Exp(logDensity(b)-value)
	return value, da, db, da + db
}
