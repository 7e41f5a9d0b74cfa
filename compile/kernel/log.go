package kernel

import "math"

// Log returns the natural logarithm of x to 0.51 units in the last place, by
// a table of short reciprocals (P. T. P. Tang, "Table-driven implementation
// of the logarithm function in IEEE floating-point arithmetic", ACM TOMS 16,
// 1990): x = 2^k z, r = z·inv - 1 is small, log x = k log 2 - log inv + log(1+r).
func Log(x float64) float64 {
	bits := math.Float64bits(x)
	if bits-minNormal >= infBits-minNormal {
		return math.Log(x) // zero, negative, subnormal, infinite, or NaN
	}
	return logParts(bits, 0)
}

const (
	minNormal = 0x0010000000000000
	infBits   = 0x7ff0000000000000
	firstGrid = 0x3fe6000000000000 // 0.6875, the first grid point of logTable
	ln2Hi     = 0x1.62e42fefa38p-1 // a multiple of 2^-42, so k*ln2Hi is exact
	ln2Lo     = 0x1.ef35793c7673p-45
)

// logParts returns log(u + c) for the bits of a positive normal u and a
// correction c below its last place.
func logParts(bits uint64, c float64) float64 {
	// Rounding to the nearest grid point, not down, keeps 1 in the middle of
	// its interval: there the table adds nothing and the result is accurate
	// relatively, however close to 0 it is.
	grid := bits - firstGrid + 1<<44
	exponent := int64(grid) >> 52
	t := &logTable[grid>>45%128]
	zbits := bits - uint64(exponent)<<52
	z := math.Float64frombits(zbits)
	// z·inv - 1 without rounding: inv is short, so both halves are exact.
	head := math.Float64frombits(zbits &^ (1<<27 - 1))
	rh, rl := float64(head*t.inv)-1, float64((z-head)*t.inv)
	r := rh + rl
	rest := rl - (r - rh)
	k := float64(exponent)
	w := float64(k*ln2Hi) + t.hi
	hi := w + r
	rest += (w - hi) + r + float64(k*ln2Lo) + t.lo
	if c != 0 {
		// c/z, with c brought to the binade of z.
		rest += c * math.Float64frombits(uint64(1023-exponent)<<52) * t.inv * (1 - r)
	}
	r2 := r * r
	return hi + (rest + r2*(-1./2+r*(1./3)+r2*(-1./4+r*(1./5)+r2*(-1./6+r*(1./7)))))
}

// log1p returns log(1 + w) for w ≥ 0, relatively accurate down to 0.
func log1p(w float64) float64 {
	u := 1 + w
	c := w - (u - 1) // what rounding 1+w lost
	if w > 1 {
		c = 1 - (u - w)
	}
	if !(u < 1e300) {
		return math.Log1p(w)
	}
	return logParts(math.Float64bits(u), c)
}

// LogTo stores log(src[i]) in dst[i]; dst may be src.
func LogTo(dst, src []float64) {
	dst = dst[:len(src)]
	for i, x := range src {
		dst[i] = Log(x)
	}
}
