package draw

import (
	"math"
	"slices"
)

// Trace draws one line per chain over its steps. Long chains are thinned to
// the smallest and largest value per pixel, so that no excursion is lost.
func Trace(width, height float64, chains [][]float64, colors []Color, s Style) *List {
	l := &List{Width: width, Height: height, Background: s.Ground}
	from, to, steps := math.Inf(1), math.Inf(-1), 0
	for _, c := range chains {
		steps = max(steps, len(c))
		for _, v := range c {
			if !math.IsNaN(v) && !math.IsInf(v, 0) {
				from, to = min(from, v), max(to, v)
			}
		}
	}
	if steps < 2 || math.IsInf(from, 0) {
		return l
	}
	if from == to {
		from, to = from-1, to+1
	}
	lowest, highest := Number(from), Number(to)
	left := 10 + max(Measure(lowest, Regular, s.size()), Measure(highest, Regular, s.size()))
	x := axis{0, float64(steps - 1), left, width - 6}
	y := axis{from, to, height - 6, 6}
	l.Add(
		&Text{At: Point{left - 5, 6 + s.size()*0.75}, Text: highest, Size: s.size(), Color: s.Muted, Anchor: End},
		&Text{At: Point{left - 5, height - 6}, Text: lowest, Size: s.size(), Color: s.Muted, Anchor: End},
		&Shape{Path: Polyline(Point{left, 6}, Point{left, height - 6}), Stroke: s.Hairline, Width: 1, Crisp: true},
	)
	each := max(1, int(math.Ceil(float64(steps)/(2*max(1, x.end-x.start)))))
	for i, c := range chains {
		var pts []Point
		for k := 0; k < len(c); k += each {
			part := c[k:min(k+each, len(c))]
			lo, hi := slices.Min(part), slices.Max(part)
			if math.IsNaN(lo) || math.IsInf(lo, 0) || math.IsInf(hi, 0) {
				continue
			}
			pts = append(pts, Point{x.at(float64(k)), y.at(lo)})
			if hi != lo {
				pts = append(pts, Point{x.at(float64(k)), y.at(hi)})
			}
		}
		color := s.Accent
		if len(colors) > 0 {
			color = colors[i%len(colors)]
		}
		l.Add(&Shape{Path: Polyline(pts...), Stroke: Alpha(color, 0.8), Width: 0.9})
	}
	return l
}
