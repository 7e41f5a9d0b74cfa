package ops

import (
	"math"

	"arrowroot/compile/kernel"
)

// The elementwise operations. An argument holds as many numbers as the result
// or one that serves all rows; the result holds one number only if all
// arguments do. The result never lies in the memory of an argument.

func runAdd(f *frame, in *instr) {
	dst := f.at(in.dst)
	var c float64 // the scalars
	columns := 0
	for _, a := range in.args {
		x := f.at(a)
		switch {
		case len(x) == 1:
			c += x[0]
		case columns == 0:
			copy(dst, x)
			columns++
		default:
			x = x[:len(dst)]
			for i := range dst {
				dst[i] += x[i]
			}
			columns++
		}
	}
	switch {
	case columns == 0:
		dst[0] = c
	case c != 0:
		for i := range dst {
			dst[i] += c
		}
	}
}

func runMul(f *frame, in *instr) {
	dst := f.at(in.dst)
	c := 1.0
	columns := 0
	for _, a := range in.args {
		x := f.at(a)
		switch {
		case len(x) == 1:
			c *= x[0]
		case columns == 0:
			copy(dst, x)
			columns++
		default:
			x = x[:len(dst)]
			for i := range dst {
				dst[i] *= x[i]
			}
			columns++
		}
	}
	switch {
	case columns == 0:
		dst[0] = c
	case c != 1:
		for i := range dst {
			dst[i] *= c
		}
	}
}

func runSub(f *frame, in *instr) {
	dst, x, y := f.at(in.dst), f.at(in.args[0]), f.at(in.args[1])
	switch {
	case len(y) == 1:
		c := y[0]
		x = x[:len(dst)]
		for i := range dst {
			dst[i] = x[i] - c
		}
	case len(x) == 1:
		c := x[0]
		y = y[:len(dst)]
		for i := range dst {
			dst[i] = c - y[i]
		}
	default:
		x, y = x[:len(dst)], y[:len(dst)]
		for i := range dst {
			dst[i] = x[i] - y[i]
		}
	}
}

func runDiv(f *frame, in *instr) {
	rowByRow(f, in, func(x, y float64) float64 { return x / y })
}

func runPow(f *frame, in *instr) { rowByRow(f, in, math.Pow) }

func runMin(f *frame, in *instr) {
	rowByRow(f, in, func(x, y float64) float64 {
		if y < x {
			return y
		}
		return x
	})
}

func runMax(f *frame, in *instr) {
	rowByRow(f, in, func(x, y float64) float64 {
		if y > x {
			return y
		}
		return x
	})
}

func runNotAbove(f *frame, in *instr) {
	rowByRow(f, in, func(x, y float64) float64 {
		if x <= y {
			return 1
		}
		return 0
	})
}

// rowByRow serves the operations that are too rare for loops of their own.
func rowByRow(f *frame, in *instr, op func(x, y float64) float64) {
	dst, x, y := f.at(in.dst), f.at(in.args[0]), f.at(in.args[1])
	mx, my := mask(x), mask(y)
	for i := range dst {
		dst[i] = op(x[i&mx], y[i&my])
	}
}

// mask turns a row into an index that is always 0 for a value of one number.
func mask(x []float64) int {
	if len(x) == 1 {
		return 0
	}
	return -1
}

func runNeg(f *frame, in *instr) {
	dst, x := f.unary(in)
	for i := range dst {
		dst[i] = -x[i]
	}
}

func runExp(f *frame, in *instr) { kernel.ExpTo(f.unary(in)) }

func runLog(f *frame, in *instr) { kernel.LogTo(f.unary(in)) }

func runLogit(f *frame, in *instr) {
	dst, x := f.unary(in)
	for i := range dst {
		dst[i] = kernel.Logit(x[i])
	}
}

func runInvLogit(f *frame, in *instr) { kernel.SigmoidTo(f.unary(in)) }

func runSoftplus(f *frame, in *instr) {
	dst, x := f.unary(in)
	kernel.SoftplusTo(dst, nil, x)
}

func runSqrt(f *frame, in *instr) {
	dst, x := f.unary(in)
	for i := range dst {
		dst[i] = math.Sqrt(x[i])
	}
}

func runInvSqrt(f *frame, in *instr) {
	dst, x := f.unary(in)
	for i := range dst {
		dst[i] = 1 / math.Sqrt(x[i])
	}
}

func runSquare(f *frame, in *instr) {
	dst, x := f.unary(in)
	for i := range dst {
		dst[i] = x[i] * x[i]
	}
}

func runAbs(f *frame, in *instr) {
	dst, x := f.unary(in)
	for i := range dst {
		dst[i] = math.Abs(x[i])
	}
}

func runSign(f *frame, in *instr) {
	dst, x := f.unary(in)
	for i := range dst {
		switch {
		case x[i] > 0:
			dst[i] = 1
		case x[i] < 0:
			dst[i] = -1
		default:
			dst[i] = 0
		}
	}
}

// unary gives the result and the argument of an operation of one argument,
// which are equally long.
func (f *frame) unary(in *instr) (dst, x []float64) {
	dst = f.at(in.dst)
	return dst, f.at(in.args[0])[:len(dst)]
}
