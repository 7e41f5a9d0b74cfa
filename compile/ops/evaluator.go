package ops

import (
	"math"

	"arrowroot/compile/kernel"
)

// An Evaluator evaluates its program, in one goroutine at a time.
type Evaluator struct {
	p                        *Program
	gradient, value, outputs *frame // value and outputs are made when first asked for
}

// Dim is the length of a position.
func (e *Evaluator) Dim() int { return e.p.dim }

// LogDensity gives the log density at q and puts its gradient into grad, which
// has the length of q; with a nil grad it gives the value alone, for less. A
// NaN comes out as -Inf. The gradient of a value that is not finite means
// nothing. Nothing is allocated (but the first value without gradient and the
// first Outputs set up their work space).
func (e *Evaluator) LogDensity(grad, q []float64) float64 {
	if grad == nil {
		if e.value == nil {
			e.value = e.p.value.frame()
		}
		e.value.run(q)
		return number(e.value.root(0))
	}
	f := e.gradient
	f.run(q)
	clear(grad)
	for i, at := range e.p.gradient.into {
		part := f.root(i + 1)
		to := grad[at : at+len(part)]
		for j, v := range part {
			to[j] += v
		}
	}
	return number(f.root(0))
}

// Outputs puts the outputs at q into dst, of OutputLen entries, one output
// after another in the order of Builder.Program.
func (e *Evaluator) Outputs(dst, q []float64) {
	if e.outputs == nil {
		e.outputs = e.p.outputs.frame()
	}
	e.outputs.run(q)
	for i := range e.p.outputs.roots {
		dst = dst[copy(dst, e.outputs.root(i)):]
	}
}

func number(v []float64) float64 {
	if math.IsNaN(v[0]) {
		return math.Inf(-1)
	}
	return v[0]
}

// A frame is the work space in which one goroutine runs a schedule.
type frame struct {
	s       *schedule
	slots   []slot
	lo, n   int // the rows in hand
	q       []float64
	totals  []float64 // what is added up over blocks
	scratch []float64
	calls   []call
}

// A slot is where the value of a node lies.
type slot struct {
	base []float64
	mask int  // -1: a whole column, so rows in hand start at lo; 0: one block, or one number
	one  bool // one number for all rows
}

// at is the rows in hand of a value.
func (f *frame) at(s int32) []float64 {
	p := &f.slots[s]
	if p.one {
		return p.base
	}
	lo := f.lo & p.mask
	return p.base[lo : lo+f.n]
}

// all is a value that is complete.
func (f *frame) all(s int32) []float64 { return f.slots[s].base }

func (f *frame) root(i int) []float64 { return f.slots[f.s.roots[i]].base }

// run evaluates the schedule at q.
func (f *frame) run(q []float64) {
	copy(f.q, q)
	clear(f.totals)
	for i := range f.s.stages {
		st := &f.s.stages[i]
		if st.plate == Scalar {
			f.lo = 0
			for j := range st.instrs {
				in := &st.instrs[j]
				f.n = in.rows
				in.run(f, in)
			}
			continue
		}
		for f.lo = 0; f.lo < st.rows; f.lo += kernel.BlockRows {
			f.n = min(kernel.BlockRows, st.rows-f.lo)
			for j := range st.instrs {
				in := &st.instrs[j]
				in.run(f, in)
			}
		}
	}
}
