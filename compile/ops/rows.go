package ops

import "arrowroot/compile/kernel"

// The operations that lead from plate to plate, and those of small vectors.

func runGather(f *frame, in *instr) {
	dst, x := f.at(in.dst), f.all(in.args[0])
	to := in.node.index.to[f.lo : f.lo+len(dst)]
	for i, j := range to {
		dst[i] = x[j]
	}
}

func runSumOver(f *frame, in *instr) {
	dst, x := f.all(in.dst), f.at(in.args[0])
	to := in.node.index.to[f.lo : f.lo+len(x)]
	if !in.node.index.sorted {
		for i, j := range to {
			dst[j] += x[i]
		}
		return
	}
	// Rows of one entry follow one another: add them up before they are stored.
	at, sum := to[0], 0.0
	for i, j := range to {
		if j != at {
			dst[at] += sum
			at, sum = j, 0
		}
		sum += x[i]
	}
	dst[at] += sum
}

func runSumOverDot(f *frame, in *instr) {
	dst, x := f.all(in.dst), f.at(in.args[0])
	y := f.at(in.args[1])[:len(x)]
	to := in.node.index.to[f.lo : f.lo+len(x)]
	if !in.node.index.sorted {
		for i, j := range to {
			dst[j] += x[i] * y[i]
		}
		return
	}
	at, sum := to[0], 0.0
	for i, j := range to {
		if j != at {
			dst[at] += sum
			at, sum = j, 0
		}
		sum += x[i] * y[i]
	}
	dst[at] += sum
}

func runSum(f *frame, in *instr) {
	var sum float64
	for _, x := range f.at(in.args[0]) {
		sum += x
	}
	f.all(in.dst)[0] += sum
}

func runDot(f *frame, in *instr) {
	x := f.at(in.args[0])
	f.all(in.dst)[0] += dot(x, f.at(in.args[1]))
}

func dot(x, y []float64) float64 {
	y = y[:len(x)]
	var sum float64
	for i := range x {
		sum += x[i] * y[i]
	}
	return sum
}

func runElement(f *frame, in *instr) { f.all(in.dst)[0] = f.all(in.args[0])[in.node.at] }

func runPlace(f *frame, in *instr) {
	dst := f.all(in.dst)
	clear(dst)
	dst[in.node.at] = f.all(in.args[0])[0]
}

func runStack(f *frame, in *instr) {
	dst := f.all(in.dst)
	for i, a := range in.args {
		dst[i] = f.all(a)[0]
	}
}

// runLinear multiplies by the matrix (at = 0) or by its transpose (at = 1).
func runLinear(f *frame, in *instr) {
	dst, x, m := f.all(in.dst), f.all(in.args[0]), in.node.data
	if in.node.at == 0 {
		for i := range dst {
			dst[i] = dot(x, m[i*len(x):(i+1)*len(x)])
		}
		return
	}
	clear(dst)
	for i, c := range x {
		for j, w := range m[i*len(dst) : (i+1)*len(dst)] {
			dst[j] += c * w
		}
	}
}

// runCumSum adds up from the first entry (at = 0) or from the last (at = 1).
func runCumSum(f *frame, in *instr) {
	dst, x := f.all(in.dst), f.all(in.args[0])
	var sum float64
	if in.node.at == 0 {
		for i := range x {
			sum += x[i]
			dst[i] = sum
		}
		return
	}
	for i := len(x) - 1; i >= 0; i-- {
		sum += x[i]
		dst[i] = sum
	}
}

func runLogSumExp(f *frame, in *instr) {
	x := f.all(in.args[0])
	top := x[0]
	for _, v := range x {
		top = max(top, v)
	}
	var sum float64
	for _, v := range x {
		sum += kernel.Exp(v - top)
	}
	f.all(in.dst)[0] = top + kernel.Log(sum)
}

// runDots is several Sum and Dot in one: the sum of x, or of x times another
// column, for up to maxDots others, going through x once.
func runDots(f *frame, in *instr) {
	x := f.at(in.args[0])
	var y [maxDots][]float64
	dots := 0
	for i, other := range in.shared {
		if other < 0 {
			var sum float64
			for _, v := range x {
				sum += v
			}
			f.all(in.sums[i])[0] += sum
			continue
		}
		y[dots] = f.at(other)[:len(x)]
		dots++
	}
	var sums [maxDots]float64
	switch dots {
	case 4:
		y0, y1, y2, y3 := y[0][:len(x)], y[1][:len(x)], y[2][:len(x)], y[3][:len(x)]
		var s0, s1, s2, s3 float64
		for i, v := range x {
			s0 += v * y0[i]
			s1 += v * y1[i]
			s2 += v * y2[i]
			s3 += v * y3[i]
		}
		sums = [maxDots]float64{s0, s1, s2, s3}
	case 3:
		y0, y1, y2 := y[0][:len(x)], y[1][:len(x)], y[2][:len(x)]
		var s0, s1, s2 float64
		for i, v := range x {
			s0 += v * y0[i]
			s1 += v * y1[i]
			s2 += v * y2[i]
		}
		sums = [maxDots]float64{s0, s1, s2}
	case 2:
		y0, y1 := y[0][:len(x)], y[1][:len(x)]
		var s0, s1 float64
		for i, v := range x {
			s0 += v * y0[i]
			s1 += v * y1[i]
		}
		sums = [maxDots]float64{s0, s1}
	case 1:
		sums[0] = dot(x, y[0])
	}
	dots = 0
	for i, other := range in.shared {
		if other >= 0 {
			f.all(in.sums[i])[0] += sums[dots]
			dots++
		}
	}
}
