package kernel

// expFours is ExpTo for whole groups of four from the start, as far as every
// value of a group is in range. It returns how many values it has done.
func expFours(dst, src []float64) int {
	if len(src) < 4 || !hasAVX2 {
		return 0
	}
	return expAVX2(&dst[0], &src[0], len(src)/4, &expTable[0].bits, &expConstants[0][0])
}

// expAVX2 does up to groups fours and returns 4 times how many it did: it
// stops at the first that holds a value out of range. Its operations are
// those of Exp, one for one and without fused ones, hence the same bits.
//
//go:noescape
func expAVX2(dst, src *float64, groups int, table *uint64, constants *float64) int

// expConstants holds what expAVX2 reads, four of each, in its order.
var expConstants = func() (c [10][4]float64) {
	for i, v := range []float64{expLow, expHigh, stepsPerUnit, roundBits, stepHi, stepLo, 1. / 2, 1. / 6, 1. / 24, 1. / 120} {
		c[i] = [4]float64{v, v, v, v}
	}
	return c
}()

// hasAVX2 says whether processor and operating system offer 256-bit integer
// instructions (Intel's manual, volume 1, section 14.7.1).
var hasAVX2 = func() bool {
	const avx, xsave, avx2 = 1 << 28, 1 << 27, 1 << 5
	top, _, _, _ := cpuid(0, 0)
	if top < 7 {
		return false
	}
	_, _, c, _ := cpuid(1, 0)
	if c&avx == 0 || c&xsave == 0 || xgetbv()&6 != 6 {
		return false
	}
	_, b, _, _ := cpuid(7, 0)
	return b&avx2 != 0
}()

func cpuid(leaf, sub uint32) (a, b, c, d uint32)
func xgetbv() uint32
