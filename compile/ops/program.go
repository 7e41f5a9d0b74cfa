package ops

import "errors"

// A Program gives the log density, its gradient and further outputs. It never
// changes and may be shared by goroutines; each needs an Evaluator of its own.
type Program struct {
	dim     int
	outputs int
}

// Program compiles. logDensity is a scalar; outputs are values of any plates
// that Evaluator.Outputs gives. A builder can make several programs. The error
// is the builder's first misuse.
func (b *Builder) Program(logDensity Value, outputs ...Value) (*Program, error) {
	return nil, errors.New("ops: not yet")
}

// Dim is the length of a position q: the end of the furthest Parameter that
// the builder declared, used or not.
func (p *Program) Dim() int { return p.dim }

// OutputLen is the length of what Outputs gives: the rows of all outputs.
func (p *Program) OutputLen() int { return p.outputs }

// NewEvaluator makes the work space of one goroutine.
func (p *Program) NewEvaluator() *Evaluator { return nil }

// Dump is the program as text: the graph after the passes and its stages.
func (p *Program) Dump() string { return "" }

// An Evaluator evaluates its program, in one goroutine at a time.
type Evaluator struct{ p *Program }

// Dim is the length of a position.
func (e *Evaluator) Dim() int { return e.p.dim }

// LogDensity gives the log density at q and puts its gradient into grad, which
// has the length of q; with a nil grad it gives the value alone, for less. A
// NaN comes out as -Inf. The gradient of a value that is not finite means
// nothing. Nothing is allocated (but the first value without gradient and the
// first Outputs set up their work space).
func (e *Evaluator) LogDensity(grad, q []float64) float64 { return 0 }

// Outputs puts the outputs at q into dst, of OutputLen entries, one output
// after another in the order of Builder.Program.
func (e *Evaluator) Outputs(dst, q []float64) {}
