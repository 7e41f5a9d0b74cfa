package draw

// A Style is the colours and sizes that plots are drawn with; make one from
// the palette of the window.
type Style struct {
	Ground, Ink, Muted, Hairline Color
	Accent                       Color   // the posterior's line
	Soft                         Color   // its filling
	Size                         float64 // of text; 0 = 10.5
}

// A Curve is a density at points in rising order of X.
type Curve struct{ X, Y []float64 }

// Density is what DensityPlot shows. Prior and Posterior may be empty.
type Density struct {
	Prior     Curve
	Posterior Curve
	Low, High float64              // the interval, filled darker under the posterior; Low = High = none
	Mark      *float64             // a value worth a line, such as 0
	From, To  float64              // the axis; From = To = chosen from the curves
	Format    func(float64) string // of axis labels; nil = short numbers
}

// DensityPlot draws a prior (dashed) and a posterior (filled) over one axis.
func DensityPlot(width, height float64, d Density, s Style) *List {
	return &List{Width: width, Height: height}
}

// KDE estimates a density from draws on a grid of n points (Gaussian kernel,
// Silverman's rule of thumb, Silverman 1986 eq. 3.31).
func KDE(draws []float64, n int) Curve { return Curve{} }
