package draw

// A Thumb is a diagram reduced to boxes and lines, places in any unit.
type Thumb struct {
	Nodes  []ThumbNode
	Arrows [][2]int
	Arcs   [][2]int
}

// A ThumbNode is one box of a Thumb.
type ThumbNode struct {
	At         Point
	Unmeasured bool
	Marked     bool // drawn filled, for exposure and outcome
}

// Thumbnail draws a small diagram that fills its size.
func Thumbnail(width, height float64, t Thumb, s Style) *List {
	l := &List{Width: width, Height: height, Background: s.Ground}
	if len(t.Nodes) == 0 {
		return l
	}
	const boxW, boxH = 12.0, 7.0
	all := Rect{t.Nodes[0].At.X, t.Nodes[0].At.Y, 0, 0}
	for _, n := range t.Nodes {
		all = all.Union(Rect{n.At.X, n.At.Y, 0, 0})
	}
	fit := 1e9
	if all.W > 0 {
		fit = min(fit, (width-boxW-6)/all.W)
	}
	if all.H > 0 {
		fit = min(fit, (height-boxH-6)/all.H)
	}
	if fit == 1e9 {
		fit = 1
	}
	middle := all.Centre()
	at := func(i int) Point {
		return Point{width / 2, height / 2}.Add(t.Nodes[i].At.Sub(middle).Times(fit))
	}
	var solid, faint Path
	for _, a := range t.Arrows {
		from, to := at(a[0]), at(a[1])
		d := to.Sub(from)
		if d.Len() < boxW {
			continue
		}
		u := d.Unit()
		end := to.Sub(u.Times(boxW * 0.55))
		into := &solid
		if t.Nodes[a[0]].Unmeasured {
			into = &faint
		}
		into.Move(from)
		into.Line(end)
		into.Move(end.Sub(u.Times(3)).Add(u.Left().Times(1.6)))
		into.Line(end)
		into.Line(end.Sub(u.Times(3)).Sub(u.Left().Times(1.6)))
	}
	for _, a := range t.Arcs {
		from, to := at(a[0]), at(a[1])
		lift := to.Sub(from).Left().Times(0.25)
		faint.Move(from)
		faint.Cubic(from.Add(lift), to.Add(lift), to)
	}
	l.Add(&Shape{Path: solid, Stroke: s.Muted, Width: 0.9},
		&Shape{Path: faint, Stroke: s.Muted, Width: 0.9, Dash: []float64{2, 2}})
	for i, n := range t.Nodes {
		c := at(i)
		box := &Shape{
			Path: RoundRect(Rect{c.X - boxW/2, c.Y - boxH/2, boxW, boxH}, boxH/2),
			Fill: s.Ground, Stroke: s.Ink, Width: 1,
		}
		if n.Unmeasured {
			box.Dash = []float64{2, 1.5}
		}
		if n.Marked {
			box.Fill = s.Ink
		}
		l.Add(box)
	}
	return l
}
