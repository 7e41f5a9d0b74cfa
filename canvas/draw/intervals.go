package draw

import "math"

// An Interval is one line of Intervals: a point with an inner and an outer
// interval; the inner one is left out if it is empty. A prior interval stands
// dashed below it; with Mid not a number it stands alone.
type Interval struct {
	Label               string
	Mid                 float64
	Low, High           float64
	InnerLow, InnerHigh float64
	PriorLow, PriorHigh float64
	Words               string // printed at the right, "1.17 (1.05 to 1.31)"
	Faint               bool   // not to be trusted, or for comparison only
}

// IntervalRow is the height of one line of Intervals.
const IntervalRow = 24

// IntervalsHeight is the height that Intervals needs for so many rows.
func IntervalsHeight(rows int) float64 { return float64(rows)*IntervalRow + 24 }

// seen reports whether there is a point to show, not only a prior.
func (r *Interval) seen() bool { return !math.IsNaN(r.Mid) }

// Intervals draws labelled intervals under one another over one axis. ref, if
// not nil, is a value worth a line, such as 0 or 1.
func Intervals(width, height float64, rows []Interval, ref *float64, s Style) *List {
	l := &List{Width: width, Height: height, Background: s.Ground}
	if len(rows) == 0 {
		return l
	}
	labels, words := 0.0, 0.0
	from, to := math.Inf(1), math.Inf(-1)
	for _, r := range rows {
		labels = max(labels, Measure(r.Label, Regular, s.size()+1))
		words = max(words, Measure(r.Words, Regular, s.size()+1))
		if r.seen() {
			from, to = min(from, r.Low, r.Mid), max(to, r.High, r.Mid)
		}
		if r.PriorLow < r.PriorHigh {
			from, to = min(from, r.PriorLow), max(to, r.PriorHigh)
		}
	}
	if ref != nil {
		from, to = min(from, *ref), max(to, *ref)
	}
	if !(to > from) {
		from, to = from-1, to+1
	}
	pad := 0.04 * (to - from)
	labels = min(labels, width*0.35)
	x := axis{from - pad, to + pad, labels + 16, width - words - 16}
	if x.end-x.start < 40 {
		x.end = width - 8 // too narrow for words
		words = 0
	}
	base := math.Floor(height - s.size() - 8)
	step := min(IntervalRow, (base-4)/float64(len(rows)))
	if ref != nil {
		at := x.at(*ref)
		l.Add(&Shape{Path: Polyline(Point{at, 2}, Point{at, base}), Stroke: s.Muted, Width: 1, Dash: []float64{2, 3}, Crisp: true})
	}
	for i, r := range rows {
		y := 4 + step*(float64(i)+0.5)
		ink, accent := s.Ink, s.Accent
		if r.Faint {
			ink, accent = s.Muted, s.Muted
		}
		text := y + Drop(s.size()+1)
		l.Add(&Text{At: Point{8, text}, Text: Shorten(r.Label, Regular, s.size()+1, labels), Size: s.size() + 1, Color: ink})
		if r.PriorLow < r.PriorHigh {
			below := y
			if r.seen() {
				below += 6
			}
			l.Add(&Shape{Path: Polyline(Point{x.at(r.PriorLow), below}, Point{x.at(r.PriorHigh), below}), Stroke: s.Muted, Width: 1.2, Dash: []float64{4, 3}})
		}
		if !r.seen() {
			continue
		}
		l.Add(
			&Shape{Path: Polyline(Point{x.at(r.Low), y}, Point{x.at(r.High), y}), Stroke: accent, Width: 1.5},
		)
		if r.InnerLow < r.InnerHigh {
			l.Add(&Shape{Path: Polyline(Point{x.at(r.InnerLow), y}, Point{x.at(r.InnerHigh), y}), Stroke: accent, Width: 4, Round: true})
		}
		l.Add(&Shape{Path: Circle(Point{x.at(r.Mid), y}, 4), Fill: s.Ground, Stroke: accent, Width: 1.5})
		if words > 0 {
			l.Add(&Text{At: Point{width - 8, text}, Text: r.Words, Size: s.size() + 1, Color: ink, Anchor: End})
		}
	}
	drawAxis(l, x, base, nil, s)
	return l
}
