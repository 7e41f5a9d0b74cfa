// Package kernel is the arithmetic at the bottom: special functions, fast
// elementwise functions, and one block kernel per family that gives a log
// density with its derivatives in a single pass over rows. It knows nothing
// of models. Every kernel is checked against published values at 1e-12
// relative (testdata/logpdf.json) and by finite differences.
package kernel

// BlockRows is the largest number of rows a kernel is called with. It fixes
// the order of summation, so it is a constant and not a setting.
const BlockRows = 512

// A Density is one family in one parameterisation.
type Density struct {
	Name string // unique: "normal", "poisson log", "negative binomial log"
	Args int    // arguments besides the value; -1 = any number (categories, cut points)

	// Block adds up the log density of n rows and returns the sum.
	//
	// y and each args[i] hold n values, or one value that serves all rows
	// (len 1). dy and dargs[i] are nil where no derivative is wanted;
	// otherwise they have the length of their value, and the derivative is
	// ADDED to them (summed over rows where len is 1). aux is nil or what
	// Prepare returned for this block's data. A value outside the support
	// gives -Inf and leaves derivatives unspecified; NaN gives NaN.
	// Block must not allocate. scratch has room for at least 4*BlockRows.
	Block func(n int, y []float64, args [][]float64, dy []float64, dargs [][]float64, aux []float64, scratch []float64) float64

	// Prepare, where not nil, computes per-row terms that depend on data
	// alone (log y!) once, for when y is data; nil otherwise.
	Prepare func(y []float64) []float64
}
