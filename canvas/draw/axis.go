package draw

import (
	"math"
	"strconv"
	"strings"
)

// A Style is the colours and sizes that plots are drawn with; make one from
// the palette of the window.
type Style struct {
	Ground, Ink, Muted, Hairline Color
	Accent                       Color   // the posterior's line
	Soft                         Color   // its filling
	Size                         float64 // of text; 0 = 10.5
}

func (s Style) size() float64 {
	if s.Size == 0 {
		return 10.5
	}
	return s.Size
}

// An axis maps values to places.
type axis struct {
	from, to   float64 // values
	start, end float64 // places
}

func (a axis) at(v float64) float64 {
	if a.to == a.from {
		return (a.start + a.end) / 2
	}
	return a.start + (v-a.from)/(a.to-a.from)*(a.end-a.start)
}

// ticks are up to n+1 round values within the axis: steps of 1, 2 or 5 times
// a power of ten.
func (a axis) ticks(n int) []float64 {
	span := a.to - a.from
	if !(span > 0) || math.IsInf(span, 0) || n < 1 {
		return nil
	}
	step := math.Pow(10, math.Floor(math.Log10(span/float64(n))))
	for _, f := range []float64{1, 2, 5, 10} {
		if span/(step*f) <= float64(n) {
			step *= f
			break
		}
	}
	var all []float64
	for k := math.Ceil(a.from/step - 1e-9); k*step <= a.to+1e-9*span; k++ {
		all = append(all, k*step+0) // +0 turns −0 into 0
	}
	return all
}

// Number writes a value in few digits with a true minus sign: "−0.05", "1,200"
// is "1200".
func Number(v float64) string {
	if v == 0 {
		return "0"
	}
	s := strconv.FormatFloat(v, 'g', 3, 64)
	if a := math.Abs(v); a >= 0.001 && a < 1e6 {
		digits := max(0, 2-int(math.Floor(math.Log10(a))))
		s = strconv.FormatFloat(v, 'f', min(digits, 6), 64)
		if strings.Contains(s, ".") {
			s = strings.TrimRight(strings.TrimRight(s, "0"), ".")
		}
	}
	return strings.ReplaceAll(s, "-", "−")
}

// drawAxis adds a base line at height y and its labelled ticks below.
func drawAxis(l *List, a axis, y float64, format func(float64) string, s Style) {
	if format == nil {
		format = Number
	}
	l.Add(&Shape{Path: Polyline(Point{a.start, y}, Point{a.end, y}), Stroke: s.Muted, Width: 1, Crisp: true})
	n := max(2, int((a.end-a.start)/55))
	for n < 6 && len(a.ticks(n)) < 3 {
		n++ // one number is no scale
	}
	free := math.Inf(-1)
	for _, v := range a.ticks(n) {
		x := a.at(v)
		l.Add(&Shape{Path: Polyline(Point{x, y}, Point{x, y + 3}), Stroke: s.Muted, Width: 1, Crisp: true})
		label := format(v)
		w := Measure(label, Regular, s.size())
		left := min(max(x-w/2, 0), l.Width-w)
		if left < free {
			continue
		}
		free = left + w + 6
		l.Add(&Text{At: Point{left, y + 3 + s.size()}, Text: label, Size: s.size(), Color: s.Muted})
	}
}
