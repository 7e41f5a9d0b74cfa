package draw

import (
	"math"
	"slices"
)

// A Strength is what StrengthPlot shows: how strong an unmeasured cause would
// have to be, as shares from 0 to 1 of what it explains of two things.
type Strength struct {
	Across, Up string // what the shares are of
	Edges      []Edge
	Trails     []Trail
}

// An Edge is where something ends: beyond it, to the upper right, nothing is
// left. The first one is filled.
type Edge struct {
	Label string
	At    func(across float64) (up float64)
}

// A Trail is one known cause and what is 1, 2, 3 … times as strong as it.
type Trail struct {
	Label  string
	Points []Point // shares: across, up
}

// reach is the part of the axes worth showing: all trails from their first
// point on, and the corner of the edges.
func (d *Strength) reach() float64 {
	most := 0.1
	for _, e := range d.Edges {
		for x := 0.01; x < 1; x += 0.01 {
			if e.At(x) <= x {
				most = math.Max(most, 1.6*x)
				break
			}
		}
	}
	for _, t := range d.Trails {
		if len(t.Points) > 0 {
			most = math.Max(most, 1.15*math.Max(t.Points[0].X, t.Points[0].Y))
		}
	}
	return math.Min(1, most)
}

// StrengthPlot draws edges as lines with the ground beyond the first one
// filled, and trails as discs that grow with the strength.
func StrengthPlot(width, height float64, d Strength, s Style) *List {
	l := &List{Width: width, Height: height, Background: s.Ground}
	if width < 60 || height < 60 {
		return l
	}
	size := s.size()
	percent := func(v float64) string { return Number(100*v) + " %" }
	left := Measure("100 %", Regular, size) + 10
	base := math.Floor(height - 2*size - 14)
	top := 3.2*size + 6
	most := d.reach()
	x, y := axis{0, most, left, width - 10}, axis{0, most, base, top}
	for _, v := range y.ticks(3) {
		at := y.at(v)
		l.Add(&Shape{Path: Polyline(Point{x.start, at}, Point{x.end, at}), Stroke: s.Hairline, Width: 1, Crisp: true})
		l.Add(&Text{At: Point{left - 6, at + Drop(size)}, Text: percent(v), Size: size, Color: s.Muted, Anchor: End})
	}
	for i, e := range d.Edges {
		var points []Point
		const steps = 240
		for k := 1; k <= steps; k++ {
			across := most * float64(k) / steps
			if up := e.At(across); up <= most {
				if len(points) == 0 { // where it comes in at the top
					points = append(points, Point{x.at(across), y.at(math.Min(up, most))})
				}
				points = append(points, Point{x.at(across), y.at(math.Max(0, up))})
			}
		}
		if len(points) < 2 {
			continue
		}
		if i == 0 {
			beyond := Polyline(points...)
			beyond.Line(Point{x.end, y.end})
			beyond.Line(Point{points[0].X, y.end})
			beyond.Close()
			l.Add(&Shape{Path: beyond, Fill: Alpha(s.Soft, 0.35)})
		}
		shape := &Shape{Path: Polyline(points...), Stroke: s.Accent, Width: 1.6}
		if i > 0 {
			shape.Width, shape.Dash = 1.2, []float64{5, 3}
		}
		l.Add(shape)
	}
	from := x.start
	for i, e := range d.Edges { // what the lines are stands above, beside a piece of each
		at := 2.6*size + 2
		sample := &Shape{Path: Polyline(Point{from, at - size/3}, Point{from + 21, at - size/3}), Stroke: s.Accent, Width: 1.6}
		if i > 0 {
			sample.Width, sample.Dash = 1.2, []float64{5, 3}
		}
		l.Add(sample, &Text{At: Point{from + 26, at}, Text: Shorten(e.Label, Regular, size, x.end-from-26), Size: size, Color: s.Ink})
		from += 26 + Measure(e.Label, Regular, size) + 14
	}
	var taken []Rect // by discs and names
	var ends [][]Point
	for _, t := range d.Trails {
		var seen []Point
		for _, p := range t.Points {
			if p.X <= most && p.Y <= most {
				seen = append(seen, Point{x.at(p.X), y.at(p.Y)})
			}
		}
		if len(seen) > 1 {
			l.Add(&Shape{Path: Polyline(seen...), Stroke: s.Ink, Width: 1, Dash: []float64{1.5, 2.5}})
		}
		for k, p := range seen {
			l.Add(&Shape{Path: Circle(p, 2.5+float64(k)), Fill: s.Ground, Stroke: s.Ink, Width: 1.3})
		}
		for k, p := range seen {
			r := 4 + float64(k)
			taken = append(taken, Rect{X: p.X - r, Y: p.Y - r, W: 2 * r, H: 2 * r})
		}
		ends = append(ends, seen)
	}
	for i, seen := range ends {
		if len(seen) == 0 {
			continue
		}
		label := d.Trails[i].Label
		at := labelBeside(seen[len(seen)-1], 6.5+float64(len(seen)-1), Measure(label, Bold, size), size, x, taken)
		taken = append(taken, at)
		l.Add(&Text{At: Point{at.X, at.Y + at.H/2 + Drop(size)}, Text: label, Face: Bold, Size: size, Color: s.Ink})
	}
	drawAxis(l, x, base, percent, s)
	l.Add(
		&Text{At: Point{4, size + 1}, Text: Shorten(d.Up+" ↑", Regular, size, width-8), Size: size, Color: s.Muted},
		&Text{At: Point{x.end, height - 3}, Text: Shorten(d.Across+" →", Regular, size, width-8), Size: size, Color: s.Muted, Anchor: End},
	)
	return l
}

// labelBeside is the first place about a disc where a name lies on nothing that
// is taken: right, left, above, below; else the first that is within the plot.
func labelBeside(p Point, apart, w, size float64, x axis, taken []Rect) Rect {
	h := size + 2
	var within []Rect
	for _, at := range []Point{
		{p.X + apart, p.Y - h/2}, {p.X - apart - w, p.Y - h/2},
		{p.X - w/2, p.Y - apart - h}, {p.X - w/2, p.Y + apart},
		{p.X - w/2, p.Y - apart - 2*h}, {p.X - w/2, p.Y - apart - 3*h},
	} {
		r := Rect{X: at.X, Y: at.Y, W: w, H: h}
		if r.X < x.start || r.X+r.W > x.end {
			continue
		}
		within = append(within, r)
		if !slices.ContainsFunc(taken, r.Meets) {
			return r
		}
	}
	if len(within) == 0 {
		return Rect{X: math.Max(x.start, p.X-apart-w), Y: p.Y - h/2, W: w, H: h}
	}
	return within[0]
}
