package kernel

import "math"

// Exp returns exp(x) to 0.51 units in the last place, by the table method of
// P. T. P. Tang ("Table-driven implementation of the exponential function in
// IEEE floating-point arithmetic", ACM TOMS 15, 1989): x = (k + j/128) log 2 + r
// with |r| ≤ log 2 / 256, and exp(x) = 2^k 2^(j/128) exp(r).
func Exp(x float64) float64 {
	if !(x > expLow && x < expHigh) {
		return math.Exp(x) // subnormal, out of range, or NaN
	}
	// Adding 1.5·2^52 rounds to a whole number and leaves it in the low bits.
	// Conversions keep a compiler from fusing products and sums, so that the
	// bits are the same in every build.
	shifted := float64(x*stepsPerUnit) + roundBits
	steps := math.Float64bits(shifted)
	whole := shifted - roundBits
	r := x - float64(whole*stepHi) - float64(whole*stepLo)
	t := &expTable[steps%128]
	scale := math.Float64frombits(t.bits + steps<<45)
	r2 := r * r
	tail := t.tail + r + float64(r2*(1./2+float64(r*(1./6)))) + float64(float64(r2*r2)*(1./24+float64(r*(1./120))))
	return scale + float64(scale*tail)
}

// 128/log 2, and log 2 / 128 split so that whole*stepHi is exact.
const (
	stepsPerUnit = 0x1.71547652b82fep+7
	stepHi       = 0x1.62e42fefcp-8
	stepLo       = -0x1.c610ca86c3899p-44
	roundBits    = 0x1.8p52
)

// Between these exp is a normal number.
const expLow, expHigh = -708, 709

// ExpTo stores exp(src[i]) in dst[i]; dst may be src. It gives what Exp gives,
// bit for bit, by four at a time where the machine can.
func ExpTo(dst, src []float64) {
	dst = dst[:len(src)]
	for i := 0; i < len(src); i++ {
		if i += expFours(dst[i:], src[i:]); i == len(src) {
			return
		}
		x := src[i]
		if !(x > expLow && x < expHigh) {
			dst[i] = math.Exp(x)
			continue
		}
		// Exp once more, for its call costs as much as its arithmetic.
		shifted := float64(x*stepsPerUnit) + roundBits
		steps := math.Float64bits(shifted)
		whole := shifted - roundBits
		r := x - float64(whole*stepHi) - float64(whole*stepLo)
		t := &expTable[steps%128]
		scale := math.Float64frombits(t.bits + steps<<45)
		r2 := r * r
		tail := t.tail + r + float64(r2*(1./2+float64(r*(1./6)))) + float64(float64(r2*r2)*(1./24+float64(r*(1./120))))
		dst[i] = scale + float64(scale*tail)
	}
}
