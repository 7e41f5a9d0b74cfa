// Package ops turns a log density, written down once as a graph of whole
// columns, into a program that gives its value and gradient quickly.
//
// # How to read the package
//
//	builder.go    what a caller writes: plates, values, operations
//	graph.go      the graph: nodes, hash-consing, rebuilding
//	op.go         the op table: one row per operation with its shape rule,
//	              evaluation and gradient rule
//	pass.go       the passes, one row each, and the order they must keep
//	fold.go, collect.go, tally.go, gauss.go, gradient.go, fuse.go: a pass each
//	verify.go     what must hold between passes (checked in tests)
//	dump.go       the one text form of a graph and of a program
//	schedule.go   stages, levels, storage
//	program.go    Program, immutable and shared
//	evaluator.go  Evaluator, one per goroutine, and the blocked executor
//
// # Shapes
//
// A plate is a set of rows; plate 0, Scalar, has one. Every value lives on
// one plate and holds one number per row of it. An elementwise operation
// takes values of one plate and scalars, which serve all rows, and gives a
// value of that plate; values of two different plates (other than Scalar) do
// not mix: Gather brings a value of a coarse plate to a finer one, SumOver and
// MeanOver lead back. A small vector, such as the coefficients of the levels
// of a category or the cut points of an ordered law, is a value of a plate
// with as many rows as it has entries: Element takes one entry out, Stack puts
// scalars together.
//
// # Errors
//
// A builder method that is misused (two plates mixed, an index out of range,
// a column of the wrong length) gives the zero Value and the builder keeps the
// first error, an *Error that names the operation; every method accepts the
// zero Value and gives it back. Err tells it at any time, Program returns it.
// So a lowering can be written straight through and checked once.
//
// # Aliasing
//
// Slices given to a builder (columns, indices, matrices) are kept, not copied,
// and must not change afterwards. The same slice given twice is known to be
// the same column, so callers do well to share slices.
package ops
