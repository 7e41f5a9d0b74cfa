package draw

// An Interval is one line of Intervals: a point with an inner and an outer
// interval; the inner one is left out if it is empty.
type Interval struct {
	Label               string
	Mid                 float64
	Low, High           float64
	InnerLow, InnerHigh float64
	Words               string // printed at the right, "1.17 (1.05 to 1.31)"
	Faint               bool
}

// Intervals draws labelled intervals under one another over one axis. ref, if
// not nil, is a value worth a line, such as 0 or 1.
func Intervals(width, height float64, rows []Interval, ref *float64, s Style) *List {
	return &List{Width: width, Height: height}
}
