package draw

// DotStrip draws quantiles as a stacked strip of dots.
func DotStrip(width, height float64, quantiles []float64, s Style) *List {
	return &List{Width: width, Height: height}
}
