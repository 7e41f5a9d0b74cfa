package sensitivity

import (
	"math"

	"gonum.org/v1/gonum/mathext"
)

// A Robustness says what share of the variation that the held set leaves, of
// exposure and outcome both, an unmeasured cause would have to explain (Cinelli
// & Hazlett 2020, section 4). It is exact for linear regression; for other laws
// it is read off the contrast's own mean and spread, as an approximation.
type Robustness struct {
	T, Freedom float64 // the contrast over its spread; independent rows left
	PartialR2  float64 // of the exposure with the outcome
	Value      float64 // share that leaves no effect
	Limit      float64 // share that brings the interval to no effect; 0 if it is there
}

// partialR2 is the share of the outcome's variation that the exposure explains
// beyond the held set.
func partialR2(t, freedom float64) float64 { return t * t / (t*t + freedom) }

// RobustnessValue is the share that an unmeasured cause would have to explain of
// both ends to take the part q of the estimate away: q = 1 leaves nothing.
func RobustnessValue(t, freedom, q float64) float64 {
	return equalShares(q * math.Abs(t) / math.Sqrt(freedom))
}

// robustnessLimit is the share that would bring the interval of a level to the
// estimate with part q taken away; 0 if it is there already.
func robustnessLimit(t, freedom, q, level float64) float64 {
	return equalShares(limitOf(t, freedom, q, level))
}

// limitOf is f of the estimate less that of the interval's half width; 0 if the
// interval is there already.
func limitOf(t, freedom, q, level float64) float64 {
	return math.Max(0, q*math.Abs(t)/math.Sqrt(freedom)-quantileT((1+level)/2, freedom-1)/math.Sqrt(freedom-1))
}

// equalShares solves R⁴/(1 − R²) = f² for a share R² of both ends alike:
// (√(f⁴ + 4f²) − f²)/2.
func equalShares(f float64) float64 {
	f2 := f * f
	return (math.Sqrt(f2*f2+4*f2) - f2) / 2
}

// biasOf is how far an unmeasured cause that explains the shares withExposure and
// withOutcome of what the held set leaves (of the outcome, beyond the exposure
// too) can have moved an estimate with this spread (equation 10 there).
func biasOf(spread, freedom, withExposure, withOutcome float64) float64 {
	return spread * math.Sqrt(freedom*withOutcome*withExposure/(1-withExposure))
}

// Adjusted is the contrast that is left once an unmeasured cause of that
// strength, working for it, is taken out; on the scale of the contrast.
// Without a robustness value it is NaN.
func (r *Result) Adjusted(withExposure, withOutcome float64) float64 {
	if r.Robustness == nil {
		return math.NaN()
	}
	estimate := r.Input.onAddingScale(r.Input.Estimate)
	bias := biasOf(r.Input.Spread, r.Robustness.Freedom, withExposure, withOutcome)
	return r.Input.back(estimate - math.Copysign(bias, estimate))
}

func robustnessOf(in *Input) (*Robustness, string) {
	columns := 1 + len(in.Exposure)
	for _, c := range in.Covariates {
		columns += len(c.Columns)
	}
	freedom := float64(len(in.Outcome) - columns)
	estimate := in.onAddingScale(in.Estimate)
	switch {
	case freedom < 2:
		return nil, "there are too few rows beside what is held"
	case !(in.Spread > 0) || math.IsNaN(estimate) || math.IsInf(estimate, 0):
		return nil, "the contrast has no spread to be read"
	case len(in.Exposure) > 1:
		return nil, "the exposure has more than two levels, and an unmeasured cause could work on each in its own way"
	}
	t := estimate / in.Spread
	return &Robustness{
		T: t, Freedom: freedom, PartialR2: partialR2(t, freedom),
		Value: RobustnessValue(t, freedom, 1), Limit: robustnessLimit(t, freedom, 1, in.Level),
	}, ""
}

// quantileT is the p quantile, p > 1/2, of Student's t.
func quantileT(p, freedom float64) float64 {
	x := mathext.InvRegIncBeta(freedom/2, 0.5, 2*(1-p))
	return math.Sqrt(freedom * (1 - x) / x)
}

// Edge gives, for a share of the exposure that an unmeasured cause explains, the
// share of the outcome that it would have to explain for no effect to be left;
// more than 1 is out of its reach. EdgeOfLimit is the same for the interval.
// Both are +Inf without a robustness value.
func (r *Result) Edge(ofExposure float64) float64 {
	if r.Robustness == nil {
		return math.Inf(1)
	}
	return r.Robustness.T * r.Robustness.T / r.Robustness.Freedom * (1 - ofExposure) / ofExposure
}

// EdgeOfLimit: see Edge.
func (r *Result) EdgeOfLimit(ofExposure float64) float64 {
	if r.Robustness == nil {
		return math.Inf(1)
	}
	f := limitOf(r.Robustness.T, r.Robustness.Freedom, 1, r.Input.Level)
	return f * f * (1 - ofExposure) / ofExposure
}
