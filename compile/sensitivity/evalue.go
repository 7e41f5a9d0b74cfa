package sensitivity

import (
	"math"

	"arrowroot/compile/study"
)

// An EValue says by what risk ratio an unmeasured cause would have to go with
// exposure and outcome both (VanderWeele & Ding 2017).
type EValue struct {
	RiskRatio, Low, High float64 // the contrast as a risk ratio
	Value                float64 // for the estimate
	Limit                float64 // for the end of the interval next to 1; 1 if the interval covers 1
	Conversion           string  // how it became a risk ratio, in words; "" = it is one
}

// eOf is the E-value of a risk ratio: RR + √(RR (RR − 1)), with 1/RR below 1.
func eOf(ratio float64) float64 {
	if ratio < 1 {
		ratio = 1 / ratio
	}
	return ratio + math.Sqrt(ratio*(ratio-1))
}

// eLimit is the E-value of the end of an interval that is next to 1.
func eLimit(low, high float64) float64 {
	switch {
	case low > 1:
		return eOf(low)
	case high < 1:
		return eOf(high)
	}
	return 1
}

// boundingFactor is the most by which a cause that goes with the exposure by
// one risk ratio and with the outcome by another can have moved the risk ratio
// between the two (Ding & VanderWeele 2016).
func boundingFactor(withExposure, withOutcome float64) float64 {
	return withExposure * withOutcome / (withExposure + withOutcome - 1)
}

// fromMeans takes a difference of means in sds of the outcome as a risk ratio:
// exp(0.91 d) (Chinn 2000; VanderWeele & Ding 2017, table 2).
func fromMeans(d float64) float64 { return math.Exp(0.91 * d) }

func eValueOf(in *Input) (*EValue, string) {
	e := &EValue{}
	as := func(x float64) float64 { return x }
	switch {
	case in.Ratio && !in.Chance && in.Scale != study.Binary && in.Scale != study.Proportion:
		e.Conversion = "the ratio of expected values taken as a risk ratio"
	case in.Ratio:
	case in.Chance || in.Scale == study.Binary || in.Scale == study.Proportion || in.Scale == study.Count || in.Scale == study.Positive:
		if !(in.Baseline > 0) || in.Baseline+in.Estimate <= 0 {
			return nil, "what is expected without the change is not positive, so that there is no ratio to it"
		}
		as = func(x float64) float64 { return math.Max(0, in.Baseline+x) / in.Baseline }
		e.Conversion = "the difference as a ratio to what is expected without it"
	default:
		if !(in.OutcomeSD > 0) {
			return nil, "the outcome does not vary"
		}
		as = func(x float64) float64 { return fromMeans(x / in.OutcomeSD) }
		e.Conversion = "a difference of means of d sds taken as a risk ratio of exp(0.91 d)"
	}
	e.RiskRatio, e.Low, e.High = as(in.Estimate), as(in.Low), as(in.High)
	if !(e.RiskRatio > 0) || math.IsInf(e.RiskRatio, 0) || math.IsNaN(e.Low+e.High) {
		return nil, "the contrast is no positive ratio"
	}
	e.Value, e.Limit = eOf(e.RiskRatio), eLimit(e.Low, e.High)
	return e, ""
}
