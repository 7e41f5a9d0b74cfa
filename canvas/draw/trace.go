package draw

// Trace draws one line per chain over its steps.
func Trace(width, height float64, chains [][]float64, colors []Color, s Style) *List {
	return &List{Width: width, Height: height}
}
