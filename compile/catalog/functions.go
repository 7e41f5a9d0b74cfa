package catalog

import (
	"math"

	"arrowroot/compile/kernel"
)

// Functions returns the functions that a formula may use.
func Functions() []*Function { return functions }

var functions = []*Function{
	{Name: "exp", Args: 1, Doc: "e to the power of x", Value: one(math.Exp)},
	{Name: "log", Args: 1, Doc: "natural logarithm", Value: one(math.Log)},
	{Name: "logit", Args: 1, Doc: "log odds of a probability", Value: one(kernel.Logit)},
	{Name: "inverse logit", Args: 1, Doc: "probability with these log odds", Value: one(kernel.Sigmoid)},
	{Name: "sqrt", Args: 1, Doc: "square root", Value: one(math.Sqrt)},
	{Name: "abs", Args: 1, Doc: "distance from zero", Value: one(math.Abs)},
	{Name: "min", Args: 2, Doc: "the smaller of two", Value: two(math.Min)},
	{Name: "max", Args: 2, Doc: "the larger of two", Value: two(math.Max)},
}

func one(f func(float64) float64) func([]float64) float64 {
	return func(args []float64) float64 { return f(args[0]) }
}

func two(f func(a, b float64) float64) func([]float64) float64 {
	return func(args []float64) float64 { return f(args[0], args[1]) }
}
