// Package ops turns a log density, written down once as a graph of whole
// columns, into a program that gives its value and gradient quickly.
//
// # How to read the package
//
//	builder.go    what a caller writes: plates, values, operations
//	graph.go      the graph: nodes, hash-consing, rebuilding
//	op.go         the op table: one row per operation with its shape rule,
//	              evaluation and gradient rule
//	pass.go       the passes, one row each, the order they must keep
//	              and why; then a file for each: fold.go and collect.go
//	              (together "simplify"), gauss.go, tally.go, gradient.go, fuse.go
//	verify.go     what must hold between passes; checked after each
//	dump.go       the one text form of a graph and of a program
//	schedule.go   what a schedule is; levels.go and emit.go make it: first
//	              stages, then where values lie, and the instructions
//	elementwise.go, rows.go, dots.go, affine.go, density.go: the evaluations
//	program.go    Program, immutable and shared
//	evaluator.go  Evaluator, one per goroutine, and the blocked executor
//
// # What is made faster
//
// Terms that depend on data alone are computed once. Work on scalars and on
// coarse plates is done before it is gathered to rows, and factors that are
// the same for all rows are taken out of sums. A normal density of data with a
// linear predictor is replaced by its sufficient statistics, and a density
// that offers kernel.Tally goes through the distinct values of its data. A
// linear predictor is one instruction, as are all sums and dot products over
// one column. The rest runs in blocks of kernel.BlockRows rows, density and
// gradient in the same go.
//
// # Adding an operation
//
// Give it a constant and a row of the table in op.go (shape rule, evaluation,
// gradient rule), a method of Builder, a case in the slow evaluator of
// slow_test.go and a check in opChecks of op_test.go; the tests fail until all
// are there. If a pass should know it, that is a matter of its own.
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
// Entries of a coarse plate to which no row leads are computed all the same; if
// such an entry is not finite, so may the gradient be.
//
// # Aliasing
//
// Slices given to a builder (columns, indices, matrices) are kept, not copied,
// and must not change afterwards. The same slice given twice is known to be
// the same column, so callers do well to share slices.
package ops
