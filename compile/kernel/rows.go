package kernel

// mask turns a row number into an index: v[i&mask(v)] is v[i] for a column
// and v[0] for a value that serves all rows, without a branch per row.
func mask(v []float64) int {
	if len(v) == 1 {
		return 0
	}
	return -1
}

// wanted returns the derivative column of argument i, nil if nobody asked.
func wanted(dargs [][]float64, i int) []float64 {
	if dargs == nil {
		return nil
	}
	return dargs[i]
}

// perRow evaluates f at every row of y, for Prepare.
func perRow(f func(float64) float64) func([]float64, [][]float64) []float64 {
	return func(y []float64, _ [][]float64) []float64 {
		out := make([]float64, len(y))
		for i, v := range y {
			out[i] = f(v)
		}
		return out
	}
}
