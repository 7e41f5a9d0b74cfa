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

func runSum(f *frame, in *instr) { f.all(in.dst)[0] += sum(f.at(in.args[0])) }

func runDot(f *frame, in *instr) { f.all(in.dst)[0] += dot(f.at(in.args[0]), f.at(in.args[1])) }

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
