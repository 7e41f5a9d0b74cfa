package kernel

import "math"

// Fast paths for the shape that most likelihoods have: y and the predictor are
// columns, the other argument is one number. They give what the general loops
// give; what makes them fast is that no branch depends on the data (signs of
// predictors and zeros among responses cannot be foretold by a processor) and
// that sums run in strands that do not wait for one another.

// isColumn tells whether x holds n > 1 values.
func isColumn(x []float64, n int) bool { return len(x) == n && n > 1 }

// normalColumn adds up -z²/2 for z = (y - mean)/sd and derivatives by mean.
func normalColumn(y, mean, dmean []float64, inv float64) (ss float64) {
	y = y[:len(mean)]
	var s0, s1 float64
	i := 0
	if dmean == nil {
		for ; i+1 < len(mean); i += 2 {
			z0, z1 := (y[i]-mean[i])*inv, (y[i+1]-mean[i+1])*inv
			s0 += z0 * z0
			s1 += z1 * z1
		}
		if i < len(mean) {
			z := (y[i] - mean[i]) * inv
			s0 += z * z
		}
		return s0 + s1
	}
	dmean = dmean[:len(mean)]
	for ; i+1 < len(mean); i += 2 {
		z0, z1 := (y[i]-mean[i])*inv, (y[i+1]-mean[i+1])*inv
		s0 += z0 * z0
		s1 += z1 * z1
		dmean[i] += z0 * inv
		dmean[i+1] += z1 * inv
	}
	if i < len(mean) {
		z := (y[i] - mean[i]) * inv
		s0 += z * z
		dmean[i] += z * inv
	}
	return s0 + s1
}

// normalEffects adds up z² and z for z = (y - mean)/sd, one mean for all, and
// derivatives by y: the law of effects that vary by group.
func normalEffects(y, dy []float64, mean, inv float64) (ss, sz float64) {
	var ss1, sz1 float64
	i := 0
	if dy == nil {
		for ; i+1 < len(y); i += 2 {
			z0, z1 := (y[i]-mean)*inv, (y[i+1]-mean)*inv
			ss += z0 * z0
			sz += z0
			ss1 += z1 * z1
			sz1 += z1
		}
	} else {
		dy = dy[:len(y)]
		for ; i+1 < len(y); i += 2 {
			z0, z1 := (y[i]-mean)*inv, (y[i+1]-mean)*inv
			ss += z0 * z0
			sz += z0
			ss1 += z1 * z1
			sz1 += z1
			dy[i] -= z0 * inv
			dy[i+1] -= z1 * inv
		}
	}
	if i < len(y) {
		z := (y[i] - mean) * inv
		ss += z * z
		sz += z
		if dy != nil {
			dy[i] -= z * inv
		}
	}
	return ss + ss1, sz + sz1
}

// poissonLogColumn is the Poisson density of prepared counts; a y that is no
// count has been prepared as +Inf.
func poissonLogColumn(y, eta, deta, aux, rate []float64) float64 {
	y, aux, rate = y[:len(eta)], aux[:len(eta)], rate[:len(eta)]
	ExpTo(rate, eta)
	var s0, s1 float64
	i := 0
	for ; i+1 < len(eta); i += 2 {
		s0 += y[i]*eta[i] - rate[i] - aux[i]
		s1 += y[i+1]*eta[i+1] - rate[i+1] - aux[i+1]
	}
	if i < len(eta) {
		s0 += y[i]*eta[i] - rate[i] - aux[i]
	}
	sum := s0 + s1
	if math.IsNaN(sum) || math.IsInf(sum, 0) {
		return notFinite(y, eta)
	}
	if deta != nil {
		deta = deta[:len(eta)]
		for i, r := range rate {
			deta[i] += y[i] - r
		}
	}
	return sum
}

// notFinite sorts out a sum over counts that is not finite: a NaN in gives NaN,
// and everything else is impossible.
func notFinite(y, eta []float64) float64 {
	for i := range y {
		if v := y[i] + eta[i]; v != v {
			return v
		}
	}
	return math.Inf(-1)
}

// bernoulliLogitColumn is the Bernoulli density of zeros and ones. ok is false,
// and nothing has been done, if y holds anything else.
func bernoulliLogitColumn(y, eta, deta, scratch []float64) (sum float64, ok bool) {
	n := len(eta)
	y = y[:n]
	other := 0.0
	for _, v := range y {
		other += math.Abs(v * (v - 1))
	}
	if other != 0 {
		return 0, false
	}
	t, small := scratch[:n], scratch[n:2*n]
	for i, v := range y {
		t[i] = (1 - 2*v) * eta[i]
		small[i] = -math.Abs(t[i])
	}
	ExpTo(small, small)
	if deta == nil {
		for i, e := range small {
			sum -= positivePart(t[i]) + log1pUnit(e)
		}
		return sum, true
	}
	deta = deta[:n]
	for i, e := range small {
		x := t[i]
		sum -= positivePart(x) + log1pUnit(e)
		deta[i] -= (1 - 2*y[i]) * (chosen(x, 1, e) / (1 + e))
	}
	return sum, true
}

// negBinomialLogColumn is the negative binomial without the part that depends
// on y and k alone.
func negBinomialLogColumn(y, eta, deta []float64, k float64, dover *float64, aux, scratch []float64) float64 {
	n := len(eta)
	y, aux = y[:n], aux[:n]
	logk := math.Log(k)
	small := scratch[:n]
	for i, e := range eta {
		small[i] = -math.Abs(e - logk)
	}
	ExpTo(small, small)
	inv := 1 / k
	sum, slope := 0.0, 0.0
	for i, e := range small {
		v := y[i]
		u := eta[i] - logk
		l := log1pUnit(e)
		q := 1 / (1 + e)
		s, w := chosen(u, 1, e)*q, chosen(u, e, 1)*q // sigmoid of u and of -u
		sp := positivePart(u) + l
		// v η - (v+k) softplus(u), with v η = v (u + log k) put where it does not cancel
		sum += v*(logk+chosen(u, 0, u)-l) - k*sp - aux[i]
		if deta != nil {
			deta[i] += v*w - k*s
		}
		if u > -6 {
			slope += v*inv*s + (s - sp)
		} else {
			slope += v*inv*s + ratioMinusLog(Exp(u))
		}
	}
	if dover != nil {
		*dover += slope
	}
	if math.IsNaN(sum) {
		return notFinite(y, eta)
	}
	return sum
}

// positivePart is x where x > 0, else 0.
func positivePart(x float64) float64 {
	b := math.Float64bits(x)
	return math.Float64frombits(b &^ uint64(int64(b)>>63))
}

// chosen is a where the sign of x is plus, else b, without a branch.
func chosen(x, a, b float64) float64 {
	minus := uint64(int64(math.Float64bits(x)) >> 63)
	return math.Float64frombits(math.Float64bits(a)&^minus | math.Float64bits(b)&minus)
}
