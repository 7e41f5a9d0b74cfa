package kernel

import "math"

// softplusSigmoid returns log(1 + exp(x)) and its derivative 1/(1 + exp(-x))
// for the price of one exponential, both accurate to some 5e-16 in both tails.
// The sign of x decides nothing by a branch: on data it is a coin toss.
func softplusSigmoid(x float64) (softplus, sigmoid float64) {
	e := Exp(-math.Abs(x))
	return positivePart(x) + log1pUnit(e), chosen(x, 1, e) / (1 + e)
}

// log1pUnit returns log(1 + e) for 0 ≤ e ≤ 1 to some 3e-16, relatively: with
// c the nearest multiple of 1/128, log(1+e) = log(1+c) + log(1+r) where
// r = (e-c)/(1+c). At c = 0 nothing is rounded before the series.
func log1pUnit(e float64) float64 {
	shifted := e*128 + roundBits
	t := &log1pTable[math.Float64bits(shifted)%256]
	r := (e - (shifted-roundBits)*(1./128)) * t.inv
	r2 := r * r
	return t.log + (r + r2*(-1./2+r*(1./3)+r2*(-1./4+r*(1./5)+r2*(-1./6+r*(1./7)))))
}

// log1pTable holds 1/(1+c) and log(1+c) for c = 0, 1/128, …, 1. Its length is
// a power of two so that an index needs no check.
var log1pTable = func() (t [256]struct{ inv, log float64 }) {
	for j := range 129 {
		c := float64(j) / 128
		t[j].inv, t[j].log = 1/(1+c), math.Log1p(c)
	}
	return t
}()

// SoftplusTo stores log(1 + exp(src[i])) in dst[i] and, where slope is not
// nil, 1/(1 + exp(-src[i])) in slope[i]. dst or slope may be src.
func SoftplusTo(dst, slope, src []float64) {
	dst = dst[:len(src)]
	if slope == nil {
		for i, x := range src {
			dst[i], _ = softplusSigmoid(x)
		}
		return
	}
	slope = slope[:len(src)]
	for i, x := range src {
		dst[i], slope[i] = softplusSigmoid(x)
	}
}

// SigmoidTo stores 1/(1 + exp(-src[i])) in dst[i]; dst may be src.
func SigmoidTo(dst, src []float64) {
	dst = dst[:len(src)]
	for i, x := range src {
		_, dst[i] = softplusSigmoid(x)
	}
}
