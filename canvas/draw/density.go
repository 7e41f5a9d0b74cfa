package draw

import (
	"math"
	"slices"
)

// A Curve is a density at points in rising order of X.
type Curve struct{ X, Y []float64 }

// Density is what DensityPlot shows. Prior and Posterior may be empty.
type Density struct {
	Prior     Curve
	Posterior Curve
	Low, High float64              // the interval, filled darker under the posterior; Low = High = none
	Mark      *float64             // a value worth a line, such as 0
	From, To  float64              // the axis; From = To = chosen from the curves
	Format    func(float64) string // of axis labels; nil = Number
}

// DensityPlot draws a prior (dashed) and a posterior (filled) over one axis.
// Both are drawn to one vertical scale, so that what was learned shows as
// height.
func DensityPlot(width, height float64, d Density, s Style) *List {
	l := &List{Width: width, Height: height, Background: s.Ground}
	const side = 8
	base := math.Floor(height - s.size() - 8)
	from, to := d.From, d.To
	if from == to {
		from, to = d.span()
	}
	if !(to > from) {
		return l
	}
	x := axis{from, to, side, width - side}
	top := 0.0
	for _, c := range []Curve{d.Prior, d.Posterior} {
		for i, y := range c.Y {
			if c.X[i] >= from && c.X[i] <= to && !math.IsInf(y, 0) {
				top = max(top, y)
			}
		}
	}
	if top == 0 {
		top = 1
	}
	y := axis{0, top * 1.08, base, 6}
	if d.Mark != nil && *d.Mark >= from && *d.Mark <= to {
		at := x.at(*d.Mark)
		l.Add(&Shape{Path: Polyline(Point{at, 4}, Point{at, base}), Stroke: s.Hairline, Width: 1, Crisp: true})
	}
	if post := d.Posterior.within(from, to); len(post.X) > 1 {
		l.Add(&Shape{Path: area(post, x, y), Fill: Alpha(s.Soft, 0.45)})
		if d.Low < d.High {
			if inner := d.Posterior.within(max(from, d.Low), min(to, d.High)); len(inner.X) > 1 {
				l.Add(&Shape{Path: area(inner, x, y), Fill: Alpha(s.Soft, 0.75)})
			}
		}
		l.Add(&Shape{Path: line(post, x, y), Stroke: s.Accent, Width: 1.6})
	}
	if prior := d.Prior.within(from, to); len(prior.X) > 1 {
		l.Add(&Shape{Path: line(prior, x, y), Stroke: s.Muted, Width: 1.2, Dash: []float64{4, 3}})
	}
	drawAxis(l, x, base, d.Format, s)
	return l
}

// span is the axis that shows both curves where they matter: above 1 % of
// their highest point.
func (d Density) span() (from, to float64) {
	from, to = math.Inf(1), math.Inf(-1)
	for _, c := range []Curve{d.Prior, d.Posterior} {
		if len(c.Y) == 0 {
			continue
		}
		top := slices.Max(c.Y)
		for i, y := range c.Y {
			if y > 0.01*top {
				from, to = min(from, c.X[i]), max(to, c.X[i])
			}
		}
	}
	return from, to
}

// within is the part of a curve between two values, cut exactly there.
func (c Curve) within(from, to float64) Curve {
	var part Curve
	for i := range c.X {
		if i > 0 {
			for _, edge := range []float64{from, to} {
				if c.X[i-1] < edge && edge < c.X[i] {
					share := (edge - c.X[i-1]) / (c.X[i] - c.X[i-1])
					part.X, part.Y = append(part.X, edge), append(part.Y, c.Y[i-1]+share*(c.Y[i]-c.Y[i-1]))
				}
			}
		}
		if c.X[i] >= from && c.X[i] <= to {
			part.X, part.Y = append(part.X, c.X[i]), append(part.Y, c.Y[i])
		}
	}
	return part
}

func line(c Curve, x, y axis) Path {
	pts := make([]Point, len(c.X))
	for i := range pts {
		pts[i] = Point{x.at(c.X[i]), y.at(min(c.Y[i], y.to))}
	}
	return Polyline(pts...)
}

func area(c Curve, x, y axis) Path {
	p := line(c, x, y)
	p.Line(Point{x.at(c.X[len(c.X)-1]), y.at(0)})
	p.Line(Point{x.at(c.X[0]), y.at(0)})
	p.Close()
	return p
}

// KDE estimates a density from draws on a grid of n points: Gaussian kernel,
// bandwidth 0.9 min(sd, IQR/1.34) m^(−1/5) (Silverman 1986, eq. 3.31). Fewer
// than two different draws give an empty curve.
func KDE(draws []float64, n int) Curve {
	sorted := slices.Clone(draws)
	slices.Sort(sorted)
	m := len(sorted)
	if m < 2 || n < 2 || sorted[0] == sorted[m-1] {
		return Curve{}
	}
	mean, square := 0.0, 0.0
	for _, v := range sorted {
		mean += v / float64(m)
	}
	for _, v := range sorted {
		square += (v - mean) * (v - mean) / float64(m-1)
	}
	spread := math.Sqrt(square)
	if iqr := (sorted[3*m/4] - sorted[m/4]) / 1.34; iqr > 0 {
		spread = min(spread, iqr)
	}
	h := 0.9 * spread * math.Pow(float64(m), -0.2)
	c := Curve{X: make([]float64, n), Y: make([]float64, n)}
	from, to := sorted[0]-3*h, sorted[m-1]+3*h
	for i := range n {
		x := from + (to-from)*float64(i)/float64(n-1)
		c.X[i] = x
		first, _ := slices.BinarySearch(sorted, x-5*h)
		for _, v := range sorted[first:] {
			if v > x+5*h {
				break
			}
			z := (x - v) / h
			c.Y[i] += math.Exp(-z * z / 2)
		}
		c.Y[i] /= float64(m) * h * math.Sqrt(2*math.Pi)
	}
	return c
}
