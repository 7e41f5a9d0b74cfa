package draw

import (
	"math"
	"slices"
)

// A ProfileKind says how a profile is drawn.
type ProfileKind int

// The kinds.
const (
	ProfileBars      ProfileKind = iota // bars of the middle from zero, with intervals, over labels
	ProfilePoints                       // intervals over a number
	ProfileIntervals                    // intervals over labels
	ProfileLine                         // a band over a number, and a line
)

// A Profile is what ProfilePlot shows: data against what replicates of them
// give, place by place. X or Labels has an entry for each.
type Profile struct {
	Kind              ProfileKind
	Across, Up        string
	X                 []float64
	Labels            []string
	Observed          []float64
	Low, Middle, High []float64
}

// ProfilePlot draws the replicates as soft bars, intervals or a band and the
// data as ink discs or a line. Data outside their interval are filled; the
// others are open.
func ProfilePlot(width, height float64, d Profile, s Style) *List {
	l := &List{Width: width, Height: height, Background: s.Ground}
	n := len(d.Observed)
	if n == 0 || width < 60 || height < 60 {
		return l
	}
	size := s.size()
	low, high := math.Inf(1), math.Inf(-1)
	for i := range n {
		low, high = min(low, d.Low[i], d.Observed[i]), max(high, d.High[i], d.Observed[i])
	}
	if d.Kind == ProfileBars {
		low = min(low, 0)
	}
	if !(high > low) {
		low, high = low-1, high+1
	}
	pad := 0.06 * (high - low)
	if low != 0 {
		low -= pad
	}
	y := axis{low, high + pad, math.Floor(height - 2*size - 14), size + 10}
	left := 10.0
	ticks := y.ticks(3)
	for _, v := range ticks {
		left = max(left, Measure(Number(v), Regular, size)+10)
	}
	x := axis{-0.5, float64(n) - 0.5, left, width - 10}
	over := d.Kind == ProfilePoints || d.Kind == ProfileLine
	if over {
		from, to := slices.Min(d.X), slices.Max(d.X)
		if !(to > from) {
			from, to = from-1, to+1
		}
		edge := 0.0
		if d.Kind == ProfilePoints {
			edge = 0.04 * (to - from)
		}
		x = axis{from - edge, to + edge, left, width - 10}
	}
	place := func(i int) float64 {
		if over {
			return x.at(d.X[i])
		}
		return x.at(float64(i))
	}
	for _, v := range ticks {
		at := y.at(v)
		l.Add(&Shape{Path: Polyline(Point{x.start, at}, Point{x.end, at}), Stroke: s.Hairline, Width: 1, Crisp: true})
		l.Add(&Text{At: Point{left - 6, at + Drop(size)}, Text: Number(v), Size: size, Color: s.Muted, Anchor: End})
	}
	if d.Kind == ProfileLine {
		l.Add(d.line(place, y, s)...)
	} else {
		l.Add(d.spots(place, (x.end-x.start)/float64(n), y, s)...)
	}
	if over {
		drawAxis(l, x, y.start, nil, s)
	} else {
		d.labels(l, x, y.start, place, s)
	}
	l.Add(
		&Text{At: Point{4, size + 1}, Text: Shorten(d.Up, Regular, size, width-8), Size: size, Color: s.Muted},
		&Text{At: Point{x.end, height - 3}, Text: Shorten(d.Across, Regular, size, width-8), Size: size, Color: s.Muted, Anchor: End},
	)
	return l
}

// line is a band and the data's line.
func (d *Profile) line(place func(int) float64, y axis, s Style) []Item {
	var upper, lower, own []Point
	for i := range d.Observed {
		upper = append(upper, Point{place(i), y.at(d.High[i])})
		lower = append(lower, Point{place(i), y.at(d.Low[i])})
		own = append(own, Point{place(i), y.at(d.Observed[i])})
	}
	slices.Reverse(lower)
	band := Polyline(append(upper, lower...)...)
	band.Close()
	return []Item{&Shape{Path: band, Fill: Alpha(s.Soft, 0.5)}, &Shape{Path: Polyline(own...), Stroke: s.Ink, Width: 1.6}}
}

// spots are bars or intervals with the data's discs, room dips apart.
func (d *Profile) spots(place func(int) float64, room float64, y axis, s Style) []Item {
	half := max(1, min(9, 0.4*room))
	radius := max(1.5, min(3.5, 0.3*room))
	var out, discs []Item
	for i, v := range d.Observed {
		at := place(i)
		if d.Kind == ProfileBars {
			top, bottom := y.at(d.Middle[i]), y.at(0)
			out = append(out, &Shape{Path: RoundRect(Rect{at - half, min(top, bottom), 2 * half, math.Abs(bottom - top)}, 0), Fill: Alpha(s.Soft, 0.5)})
		} else {
			out = append(out, &Shape{Path: Polyline(Point{at - half/2, y.at(d.Middle[i])}, Point{at + half/2, y.at(d.Middle[i])}), Stroke: s.Accent, Width: 1.5})
		}
		out = append(out, &Shape{Path: Polyline(Point{at, y.at(d.Low[i])}, Point{at, y.at(d.High[i])}), Stroke: s.Accent, Width: 1.5})
		disc := &Shape{Path: Circle(Point{at, y.at(v)}, radius), Fill: s.Ground, Stroke: s.Ink, Width: 1.3}
		if slack := 1e-9 * (y.to - y.from); v < d.Low[i]-slack || v > d.High[i]+slack {
			disc.Fill = s.Ink
		}
		discs = append(discs, disc)
	}
	return append(out, discs...)
}

// labels writes as many labels under a line as there is room for.
func (d *Profile) labels(l *List, x axis, base float64, place func(int) float64, s Style) {
	size := s.size()
	l.Add(&Shape{Path: Polyline(Point{x.start, base}, Point{x.end, base}), Stroke: s.Muted, Width: 1, Crisp: true})
	free := math.Inf(-1)
	for i, text := range d.Labels {
		text = Shorten(text, Regular, size, max(72, (x.end-x.start)/float64(len(d.Labels))-4))
		w := Measure(text, Regular, size)
		left := min(max(place(i)-w/2, 0), l.Width-w)
		if left < free {
			continue
		}
		free = left + w + 6
		l.Add(&Text{At: Point{left, base + 3 + size}, Text: text, Size: size, Color: s.Muted})
	}
}

// A Heap is what HeapPlot shows: how many replicates have which value, and
// where the data lie.
type Heap struct {
	Across string
	Values []float64
	At     float64
	Label  string // of the data
}

// HeapPlot draws values as a histogram and a line where the data lie.
func HeapPlot(width, height float64, d Heap, s Style) *List {
	l := &List{Width: width, Height: height, Background: s.Ground}
	if len(d.Values) == 0 || width < 60 || height < 60 {
		return l
	}
	size := s.size()
	from, to := min(slices.Min(d.Values), d.At), max(slices.Max(d.Values), d.At)
	if !(to > from) {
		from, to = from-0.5*max(1e-9, math.Abs(from)), to+0.5*max(1e-9, math.Abs(to))
	}
	pad := 0.05 * (to - from)
	x := axis{from - pad, to + pad, 10, width - 10}
	base := math.Floor(height - 2*size - 14)
	top := 2*size + 8
	n := max(10, int((x.end-x.start)/9))
	counts := make([]int, n)
	for _, v := range d.Values {
		counts[min(n-1, max(0, int((v-x.from)/(x.to-x.from)*float64(n))))]++
	}
	y := axis{0, float64(slices.Max(counts)), base, top}
	step := (x.end - x.start) / float64(n)
	for b, c := range counts {
		if c > 0 {
			h := y.at(float64(c))
			l.Add(&Shape{Path: RoundRect(Rect{x.start + step*float64(b), h, step - 1, base - h}, 0), Fill: Alpha(s.Soft, 0.8)})
		}
	}
	at := x.at(d.At)
	l.Add(&Shape{Path: Polyline(Point{at, top - 4}, Point{at, base}), Stroke: s.Ink, Width: 2})
	w := Measure(d.Label, Bold, size)
	l.Add(&Text{At: Point{min(max(at-w/2, 0), width-w), top - 7}, Text: d.Label, Face: Bold, Size: size, Color: s.Ink})
	drawAxis(l, x, base, nil, s)
	l.Add(&Text{At: Point{x.end, height - 3}, Text: Shorten(d.Across, Regular, size, width-8), Size: size, Color: s.Muted, Anchor: End})
	return l
}
