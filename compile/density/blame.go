package density

import (
	"fmt"
	"math"
	"strconv"
	"sync"

	"arrowroot/compile/kernel"
	"arrowroot/compile/model"
	"arrowroot/compile/ops"
)

// A suspect is what Blame needs of a block: its factors and the graph that
// they are values of, from which programs are made only when there is blame to
// lay.
type suspect struct {
	m       *model.Model
	factors []factor
	mu      sync.Mutex // guards builder
	builder *ops.Builder
}

// Blame names what is not finite at q, with the user's variable: a law with
// the first row at fault, a prior, or the direction in which the density has
// no slope; "" if all is well. It is for messages, not for loops.
func (b *Block) Blame(q []float64) string {
	values := make([]ops.Value, len(b.factors))
	for i, f := range b.factors {
		values[i] = f.value
	}
	for i, v := range b.outputs(q, values) {
		if math.IsNaN(v) || math.IsInf(v, 0) {
			return b.factors[i].what + " " + fault(v) + b.firstRow(&b.factors[i], q)
		}
	}
	grad := make([]float64, b.Dim())
	b.density.NewEvaluator().LogDensity(grad, q)
	for i, v := range grad {
		if math.IsNaN(v) || math.IsInf(v, 0) {
			return "the density has no slope along " + b.where[i]
		}
	}
	return ""
}

func fault(v float64) string {
	switch {
	case math.IsInf(v, -1):
		return "gives no probability"
	case math.IsInf(v, 1):
		return "is infinitely high"
	}
	return "is not a number"
}

// outputs evaluates values of the block's graph at q.
func (s *suspect) outputs(q []float64, values []ops.Value) []float64 {
	s.mu.Lock()
	p, err := s.builder.Program(s.builder.Const(0), values...)
	s.mu.Unlock()
	if err != nil {
		return nil
	}
	out := make([]float64, p.OutputLen())
	p.NewEvaluator().Outputs(out, q)
	return out
}

// firstRow names the first unit of a law whose own term is not finite: " to
// row 7, where bees is 3.5". Empty for a prior.
func (s *suspect) firstRow(f *factor, q []float64) string {
	if f.law == nil {
		return ""
	}
	v := s.m.Variables[f.law.Variable]
	all := s.outputs(q, f.args)
	args, columns := make([][]float64, len(f.args)), make([][]float64, len(f.args))
	for i, a := range f.args {
		n := s.builder.Rows(s.builder.On(a))
		columns[i], all = all[:n], all[n:]
	}
	scratch := make([]float64, 4*kernel.BlockRows)
	for row := range v.Values {
		at := row
		if f.units != nil { // the arguments are those of the units that the law explains
			if row == len(f.units) {
				break
			}
			at = int(f.units[row])
		}
		y := v.Values[at]
		for i, c := range columns {
			args[i] = c[min(row, len(c)-1) : min(row, len(c)-1)+1]
		}
		term := f.form.Block(1, []float64{y}, args, nil, make([][]float64, len(args)), nil, scratch)
		if math.IsNaN(term) || math.IsInf(term, 0) {
			return " at " + s.unit(v, at) + ", where " + v.ID + " is " + strconv.FormatFloat(y, 'g', 6, 64)
		}
	}
	return ""
}

// unit names a row as it is counted in the table, or a level of a plate.
func (s *suspect) unit(v *model.Variable, row int) string {
	if v.Plate >= 0 {
		p := s.m.Plates[v.Plate]
		return p.Name + " " + p.Levels[row]
	}
	if row < len(s.m.Rows.Index) {
		row = s.m.Rows.Index[row]
	}
	return fmt.Sprintf("row %d", row+1)
}
