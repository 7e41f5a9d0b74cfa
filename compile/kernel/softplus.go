package kernel

// SoftplusSigmoid returns log(1 + exp(x)) and its derivative 1/(1 + exp(-x))
// for the price of one exponential, both accurate in both tails.
func SoftplusSigmoid(x float64) (softplus, sigmoid float64) {
	if x > 0 {
		e := Exp(-x)
		return x + log1pUnit(e), 1 / (1 + e)
	}
	e := Exp(x)
	return log1pUnit(e), e / (1 + e)
}

// SoftplusTo stores log(1 + exp(src[i])) in dst[i] and, where slope is not
// nil, 1/(1 + exp(-src[i])) in slope[i]. dst or slope may be src.
func SoftplusTo(dst, slope, src []float64) {
	dst = dst[:len(src)]
	if slope == nil {
		for i, x := range src {
			dst[i], _ = SoftplusSigmoid(x)
		}
		return
	}
	slope = slope[:len(src)]
	for i, x := range src {
		dst[i], slope[i] = SoftplusSigmoid(x)
	}
}

// SigmoidTo stores 1/(1 + exp(-src[i])) in dst[i]; dst may be src.
func SigmoidTo(dst, src []float64) {
	dst = dst[:len(src)]
	for i, x := range src {
		_, dst[i] = SoftplusSigmoid(x)
	}
}
