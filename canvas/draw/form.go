package draw

import (
	"math"
	"slices"
)

// A FormBand is a central interval and the middle at values of X in rising
// order.
type FormBand struct{ X, Low, Middle, High []float64 }

// A Form is what FormPlot shows: what an arrow adds to its child's predictor
// over its parent. Labels name the values of X where they are levels. Prior and
// Posterior may be empty.
type Form struct {
	Prior, Posterior FormBand
	Labels           []string
	Across, Up       string
}

// FormPlot draws the band of the prior dashed and that of the posterior
// filled, with its middle; for levels an interval each.
func FormPlot(width, height float64, d Form, s Style) *List {
	l := &List{Width: width, Height: height, Background: s.Ground}
	low, high, from, to := math.Inf(1), math.Inf(-1), math.Inf(1), math.Inf(-1)
	for _, b := range []FormBand{d.Prior, d.Posterior} {
		for i := range b.X {
			low, high = min(low, b.Low[i]), max(high, b.High[i])
			from, to = min(from, b.X[i]), max(to, b.X[i])
		}
	}
	if !(high > low) || !(to >= from) || math.IsInf(high-low, 0) || width < 60 || height < 60 {
		return l
	}
	size := s.size()
	pad := 0.05 * (high - low)
	y := axis{low - pad, high + pad, math.Floor(height - 2*size - 14), size + 10}
	left := 10.0
	ticks := y.ticks(3)
	for n := 4; n < 8 && len(ticks) < 2; n++ { // one number is no scale
		ticks = y.ticks(n)
	}
	for _, v := range ticks {
		left = max(left, Measure(Number(v), Regular, size)+10)
	}
	x := axis{from, to, left, width - 10}
	if len(d.Labels) > 0 {
		x.from, x.to = from-0.5, to+0.5
	}
	for _, v := range ticks {
		at := y.at(v)
		l.Add(&Shape{Path: Polyline(Point{x.start, at}, Point{x.end, at}), Stroke: s.Hairline, Width: 1, Crisp: true})
		l.Add(&Text{At: Point{left - 6, at + Drop(size)}, Text: Number(v), Size: size, Color: s.Muted, Anchor: End})
	}
	if len(d.Labels) > 0 {
		l.Add(d.Prior.intervals(x, y, -4, s.Muted, 1.2, []float64{4, 3})...)
		l.Add(d.Posterior.intervals(x, y, 4, s.Accent, 2, nil)...)
		p := Profile{Labels: d.Labels}
		p.labels(l, x, y.start, func(i int) float64 { return x.at(float64(i)) }, s)
	} else {
		l.Add(d.Posterior.filled(x, y, s)...)
		l.Add(d.Prior.edges(x, y, s)...)
		drawAxis(l, x, y.start, nil, s)
	}
	l.Add(
		&Text{At: Point{4, size + 1}, Text: Shorten(d.Up, Regular, size, width-8), Size: size, Color: s.Muted},
		&Text{At: Point{x.end, height - 3}, Text: Shorten(d.Across, Regular, size, width-8), Size: size, Color: s.Muted, Anchor: End},
	)
	return l
}

func (b FormBand) run(values []float64, x, y axis) []Point {
	out := make([]Point, len(b.X))
	for i := range out {
		out[i] = Point{x.at(b.X[i]), y.at(values[i])}
	}
	return out
}

// filled is the band with its middle.
func (b FormBand) filled(x, y axis, s Style) []Item {
	if len(b.X) < 2 {
		return nil
	}
	lower := b.run(b.Low, x, y)
	slices.Reverse(lower)
	band := Polyline(append(b.run(b.High, x, y), lower...)...)
	band.Close()
	return []Item{
		&Shape{Path: band, Fill: Alpha(s.Soft, 0.6)},
		&Shape{Path: Polyline(b.run(b.Middle, x, y)...), Stroke: s.Accent, Width: 1.6},
	}
}

// edges are the band's two dashed lines.
func (b FormBand) edges(x, y axis, s Style) []Item {
	if len(b.X) < 2 {
		return nil
	}
	dash := []float64{4, 3}
	return []Item{
		&Shape{Path: Polyline(b.run(b.Low, x, y)...), Stroke: s.Muted, Width: 1.2, Dash: dash},
		&Shape{Path: Polyline(b.run(b.High, x, y)...), Stroke: s.Muted, Width: 1.2, Dash: dash},
	}
}

// intervals are upright lines, shifted sideways, with a disc at each middle.
func (b FormBand) intervals(x, y axis, shift float64, ink Color, width float64, dash []float64) []Item {
	var out []Item
	for i := range b.X {
		at := x.at(b.X[i]) + shift
		out = append(out, &Shape{Path: Polyline(Point{at, y.at(b.Low[i])}, Point{at, y.at(b.High[i])}), Stroke: ink, Width: width, Dash: dash})
		if dash == nil {
			out = append(out, &Shape{Path: Circle(Point{at, y.at(b.Middle[i])}, 2.6), Fill: ink})
		}
	}
	return out
}
