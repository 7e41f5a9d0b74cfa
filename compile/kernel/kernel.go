// Package kernel is the arithmetic at the bottom: special functions, fast
// elementwise functions, and one block kernel per family that gives a log
// density with its derivatives in a single pass over rows. It knows nothing
// of models. Every kernel is checked against published values at 1e-12
// relative and by finite differences; both tests walk Densities, so a kernel
// without a check fails.
//
// Read kernel.go for the contract, densities.go for the list, then the file
// of one family (those with a location and a scale share located.go);
// columns.go has the shape that most likelihoods have. Scalar
// functions stand in special.go, gamma.go, gammaratio.go and normalcdf.go;
// exp.go, log.go and softplus.go hold the fast ones.
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
	// (len 1). dy and dargs[i] are nil where no derivative is wanted (dargs
	// itself may be nil too); otherwise they have the length of their value,
	// and the derivative is ADDED to them (summed over rows where len is 1).
	// aux is nil or the rows' part of what Prepare returned, n values or one.
	// A value outside the support, or an argument outside its own, gives -Inf
	// and leaves derivatives unspecified; NaN gives NaN. A discrete value has
	// no derivative: dy is left alone. Block does not allocate. scratch has
	// room for at least 4*BlockRows.
	Block func(n int, y []float64, args [][]float64, dy []float64, dargs [][]float64, aux []float64, scratch []float64) float64

	// Prepare, where not nil, computes terms that depend on data alone
	// (log y!, log of the binomial coefficient) once, for when y is data.
	// args[i] is nil where argument i is not data. It returns one value per
	// row (one in all if everything has length 1), or nil if what it needs is
	// not data. y may be longer than a block; slice the result by rows.
	Prepare func(y []float64, args [][]float64) []float64

	// Tally, where not nil, is for data with many equal values: see there.
	Tally *Tally
}

// A Tally splits a density in two where y is data and argument Arg is one
// number for all rows: a part per row, and a costly part that depends on y and
// that argument alone, which then is needed once per distinct y. With counts c
// of the distinct values u,
//
//	Σ over rows of density(y, args) = Σ over rows of Rows(y, args) + Σ over u of Values(u, args[Arg], c)
//
// For the negative binomial, Values is c (lgamma(u+k) - lgamma(k)).
type Tally struct {
	Arg    int
	Rows   *Density // same y and args as the whole
	Values *Density // two arguments: args[Arg], and the count of each value (data: no derivative wanted)
}
