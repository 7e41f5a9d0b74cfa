package ops

import "errors"

// A Program gives the log density, its gradient and further outputs. It never
// changes and may be shared by goroutines; each needs an Evaluator of its own.
type Program struct {
	dim, outputLen           int
	gradient, value, outputs *schedule
}

// Program compiles. logDensity is a scalar; outputs are values of any plates
// that Evaluator.Outputs gives. A builder can make several programs. The error
// is the builder's first misuse.
func (b *Builder) Program(logDensity Value, outputs ...Value) (*Program, error) {
	return b.program(nil, logDensity, outputs...)
}

// program leaves out the passes that keep rejects, for tests.
func (b *Builder) program(keep func(p *pass) bool, logDensity Value, outputs ...Value) (*Program, error) {
	b.bad(logDensity)
	b.bad(outputs...)
	if b.err == nil && b.On(logDensity) != Scalar {
		b.fail("Program", "the log density is not a scalar but on plate %q", b.g.plates[b.On(logDensity)].name)
	}
	if b.err != nil {
		return nil, b.err
	}
	p := &Program{dim: b.dim}
	for _, v := range outputs {
		p.outputLen += b.Rows(b.On(v))
	}
	density, err := start(b.g, []id{id(logDensity)}, keep)
	if err != nil {
		return nil, err
	}
	rest, err := start(b.g, ids(outputs), keep)
	if err != nil {
		return nil, err
	}
	var errs [3]error
	p.gradient, errs[0] = density.finish(true, b.dim, keep)
	p.value, errs[1] = density.finish(false, b.dim, keep)
	p.outputs, errs[2] = rest.finish(false, b.dim, keep)
	if err := errors.Join(errs[:]...); err != nil {
		return nil, err
	}
	return p, nil
}

// Dim is the length of a position q: the end of the furthest Parameter that
// the builder declared, used or not.
func (p *Program) Dim() int { return p.dim }

// OutputLen is the length of what Outputs gives: the rows of all outputs.
func (p *Program) OutputLen() int { return p.outputLen }

// NewEvaluator makes the work space of one goroutine.
func (p *Program) NewEvaluator() *Evaluator {
	return &Evaluator{p: p, gradient: p.gradient.frame()}
}

// Dump is the program for value and gradient as text: what it reads, then its
// stages with their instructions.
func (p *Program) Dump() string { return p.gradient.text() }
