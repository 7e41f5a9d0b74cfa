package density

import (
	"errors"

	"arrowroot/compile/model"
)

// A Block is a set of parameters that share no factor with any other
// (SEMANTICS A9), with its own log density over unconstrained coordinates.
type Block struct {
	Name       string   // the variables whose laws it holds: "bees, flowers"
	Names      []string // its parameters' typed names, sorted: part of the seed key
	Quantities []int    // indices in Density.Quantities, in order
	dim        int
}

// Lower makes the density of a checked model. An error is a fault of the
// program or of a prior that the model let through; it names the parameter.
func Lower(m *model.Model) (*Density, error) {
	return nil, errors.New("density: not yet written")
}

// Dim is the number of unconstrained coordinates.
func (b *Block) Dim() int { return b.dim }

// Evaluator makes the work space of one goroutine.
func (b *Block) Evaluator() *Evaluator { return &Evaluator{} }

// Natural writes the natural values of b.Quantities at the point q.
func (b *Block) Natural(dst, q []float64) {}

// Blame names the factor that is not finite at q with the user's variable, or
// "" if all are.
func (b *Block) Blame(q []float64) string { return "" }

// An Evaluator evaluates one block's log density; it satisfies infer.Target.
// It is not safe for use by several goroutines.
type Evaluator struct{ dim int }

// Dim is the number of unconstrained coordinates.
func (e *Evaluator) Dim() int { return e.dim }

// LogDensity writes the gradient and returns the log density at q; −Inf where
// it is not a number. It does not allocate.
func (e *Evaluator) LogDensity(grad, q []float64) float64 { return 0 }
