package scene

import (
	"slices"

	"arrowroot/canvas/draw"
	"arrowroot/compile/study"
)

// A builder makes a picture: it fills a map, then a list.
type builder struct {
	Map
	in   *Input
	list *draw.List
}

// Build makes the picture of the sheet and the map of what stands where. It
// reads its input and changes nothing.
func Build(in Input) (*draw.List, *Map) {
	b := measure(&in)
	b.ground()
	b.drawFrames()
	b.drawPaths()
	b.drawArcs()
	b.drawArrows()
	b.drawNotes()
	b.drawNodes()
	b.drawArrowFindings()
	b.drawWords()
	b.drawPreview()
	return b.list, &b.Map
}

// measure places everything and draws nothing yet.
func measure(in *Input) *builder {
	b := &builder{
		Map:  Map{zoom: in.View.Scale(), index: make(map[string]int)},
		in:   in,
		list: &draw.List{Width: in.Width, Height: in.Height, Background: in.Palette.Sheet},
	}
	b.nodes = bodies(in)
	for i, n := range b.nodes {
		b.index[n.id] = i
	}
	b.route()
	b.frames()
	b.slips()
	return b
}

// ground is the grid that nodes snap to, every third point of it.
func (b *builder) ground() {
	b.list.Add(&draw.Grid{
		Within: draw.Rect{W: b.in.Width, H: b.in.Height},
		Origin: b.in.View.Pan,
		Step:   3 * unit * b.zoom,
		Size:   1,
		Color:  b.in.Palette.Hairline,
	})
}

// A line is an arrow or an arc as it runs on the sheet.
type line struct {
	pair  [2]string
	from  *body
	to    *body
	arrow *study.Arrow // nil for an arc
	arc   *study.Arc
	run   curve        // from outline to outline
	pts   []draw.Point // along run
	bend  bend
}

// route lays out arrows and arcs.
func (b *builder) route() {
	if b.in.Rival == nil || b.in.Rival.Diagram == nil {
		return
	}
	d := b.in.Rival.Diagram
	var ends [][2]int
	var drawn []*study.Arrow
	for _, a := range d.Arrows {
		from, ok := b.index[a.From]
		to, ok2 := b.index[a.To]
		if ok && ok2 {
			ends, drawn = append(ends, [2]int{from, to}), append(drawn, a)
		}
	}
	bent := bends(b.nodes, ends, b.zoom)
	for i, a := range drawn {
		l := &line{pair: [2]string{a.From, a.To}, arrow: a, from: b.nodes[ends[i][0]], to: b.nodes[ends[i][1]], bend: bent[i]}
		if l.lay(0, 1.5) {
			b.arrows = append(b.arrows, l)
		}
	}
	for _, a := range d.Arcs {
		from, ok := b.index[a.A]
		to, ok2 := b.index[a.B]
		if !ok || !ok2 {
			continue
		}
		l := &line{pair: [2]string{a.A, a.B}, arc: a, from: b.nodes[from], to: b.nodes[to]}
		l.bend = b.arcBend(l.from, l.to)
		if l.lay(1.5, 1.5) {
			b.arcs = append(b.arcs, l)
		}
	}
}

// arcBend bows an arc clearly, upwards if it can, so that it is never taken for
// an arrow between the same nodes.
func (b *builder) arcBend(from, to *body) bend {
	chord := to.at.Sub(from.at)
	size := max(34*b.zoom, 0.2*chord.Len())
	if chord.X < 0 || (chord.X == 0 && chord.Y > 0) {
		size = -size // the left of the chord is down: bow to the other side
	}
	best, least := bow(size), -1
	for _, f := range []float64{1, -1, 1.7, -1.7, 2.4} {
		hits := 0
		for _, p := range sample(joining(from.at, to.at, bow(size*f)), 14*b.zoom) {
			for _, n := range b.nodes {
				if n == from || n == to {
					continue
				}
				if n.rect().Grow(6 * b.zoom).Contains(p) {
					hits += 3
				} else if n.skirt(b.zoom).Contains(p) {
					hits++
				}
			}
		}
		if least < 0 || hits < least {
			best, least = bow(size*f), hits
		}
		if hits == 0 {
			break
		}
	}
	return best
}

// lay cuts the curve at the outlines.
func (l *line) lay(gapFrom, gapTo float64) bool {
	run, ok := joining(l.from.at, l.to.at, l.bend).between(l.from, l.to, gapFrom, gapTo)
	if !ok {
		return false
	}
	l.run, l.pts = run, run.line()
	return true
}

// find gives the arrow or arc between two variables.
func (b *builder) find(from, to string, arc bool) *line {
	lines := b.arrows
	if arc {
		lines = b.arcs
	}
	i := slices.IndexFunc(lines, func(l *line) bool {
		return l.pair == [2]string{from, to} || arc && l.pair == [2]string{to, from}
	})
	if i < 0 {
		return nil
	}
	return lines[i]
}

// label prints words on a soft ground that keeps them readable over lines.
func (b *builder) label(at draw.Point, words string, face draw.Face, size float64, c draw.Color) {
	w := draw.Measure(words, face, size)
	box := draw.Rect{X: at.X - w/2 - 4, Y: at.Y - size*0.95, W: w + 8, H: size * 1.35}
	if b.in.Width > 0 { // keep it on the widget
		dx := max(2-box.X, 0) - max(box.X+box.W-b.in.Width+2, 0)
		box.X, at.X = box.X+dx, at.X+dx
	}
	b.list.Add(
		&draw.Shape{Path: draw.RoundRect(box, 3), Fill: draw.Alpha(b.in.Palette.Sheet, 0.88)},
		&draw.Text{At: at, Text: words, Face: face, Size: size, Color: c, Anchor: draw.Middle},
	)
}
