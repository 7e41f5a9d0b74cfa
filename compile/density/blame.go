package density

import (
	"fmt"
	"math"
)

// Blame names what is not finite at q, with the user's variable: a law, a
// prior, or the direction in which the density has no slope; "" if all is
// well. It is for messages, not for loops.
func (b *Block) Blame(q []float64) string {
	values := make([]float64, len(b.what))
	b.factors.NewEvaluator().Outputs(values, q)
	for i, v := range values {
		switch {
		case math.IsNaN(v):
			return fmt.Sprintf("%s is not a number", b.what[i])
		case math.IsInf(v, -1):
			return fmt.Sprintf("%s gives no probability at all", b.what[i])
		case math.IsInf(v, 1):
			return fmt.Sprintf("%s is infinitely high", b.what[i])
		}
	}
	grad := make([]float64, b.Dim())
	b.density.NewEvaluator().LogDensity(grad, q)
	for i, v := range grad {
		if math.IsNaN(v) || math.IsInf(v, 0) {
			return fmt.Sprintf("the density has no slope along %s", b.where[i])
		}
	}
	return ""
}
