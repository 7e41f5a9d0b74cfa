package scene

import (
	"math"

	"arrowroot/canvas/draw"
	"arrowroot/compile/study"
)

// An arrowLook is how one arrow is drawn.
type arrowLook struct {
	color  draw.Color
	width  float64
	casing bool // one pixel of ink around the colour
	dash   []float64
	core   bool // too unsure to say: pale with a dashed core
}

func (b *builder) drawArrows() {
	var later []*line
	for _, l := range b.arrows {
		if b.picked(l) {
			later = append(later, l)
			continue
		}
		b.drawArrow(l)
	}
	for _, l := range later {
		b.drawArrow(l)
	}
}

// picked reports whether an arrow or arc is selected.
func (b *builder) picked(l *line) bool {
	if l.arc != nil {
		return b.in.Selected.HasArc(l.pair[0], l.pair[1])
	}
	return b.in.Selected.HasArrow(l.pair[0], l.pair[1])
}

// hovered reports whether the pointer is on an arrow or arc.
func (b *builder) hovered(l *line) bool {
	kind := OnArrow
	if l.arc != nil {
		kind = OnArc
	}
	return b.in.Hover.Kind == kind && b.in.Hover.Pair == l.pair
}

func (b *builder) look(l *line) arrowLook {
	p := &b.in.Palette
	k := min(max(b.zoom, 0.75), 1.8)
	look := arrowLook{color: p.Ink, width: 1.5 * k}
	if l.from.unmeasured {
		look.color, look.dash = p.Muted, []float64{5 * k, 3.5 * k}
	}
	if b.in.Paint == nil {
		return look
	}
	paint, ok := b.in.Paint.Arrows[l.pair]
	if !ok || l.from.unmeasured {
		return look
	}
	if paint.Width > 0 {
		look.width = paint.Width * k
	}
	if paint.Association {
		return look
	}
	look.casing = true
	look.color = p.binColor(b.in.Paint.Kind, paint.Bin)
	if paint.Hatched {
		look.color, look.core = p.Sheet, true
	}
	if b.in.Paint.Stale {
		look.color = mix(p.Sheet, look.color, 0.45)
	}
	look.width = max(look.width, 2*k)
	return look
}

func (b *builder) drawArrow(l *line) {
	p := &b.in.Palette
	look := b.look(l)
	switch {
	case b.picked(l):
		b.list.Add(&draw.Shape{Path: l.run.path(), Stroke: draw.Alpha(p.Action, 0.28), Width: look.width + 9})
	case b.hovered(l):
		b.list.Add(&draw.Shape{Path: l.run.path(), Stroke: draw.Alpha(p.Ink, 0.10), Width: look.width + 8})
	}
	ink := look.color
	if b.picked(l) && !look.casing {
		ink = p.Action
	}
	k := min(max(b.zoom, 0.75), 1.8)
	head := headFor(look.width, k)
	shaft, tip := beforeHead(l.run, head.length*0.85)
	path := shaft.path()
	if l.arrow != nil && len(l.arrow.VariesBy) > 0 {
		path.Append(strands(shaft, 16*k, 4.5*k))
	}
	if look.casing {
		b.list.Add(&draw.Shape{Path: path, Stroke: p.Ink, Width: look.width + 2})
	}
	b.list.Add(&draw.Shape{Path: path, Stroke: ink, Width: look.width, Dash: look.dash})
	if look.core {
		b.list.Add(&draw.Shape{Path: shaft.path(), Stroke: p.Muted, Width: max(1, look.width-1), Dash: []float64{1.5, 3}})
	}
	point := &draw.Shape{Path: head.path(tip), Fill: ink}
	if look.casing {
		point.Stroke, point.Width = p.Ink, 1
	}
	if look.core {
		point.Fill = p.Sheet
	}
	b.list.Add(point)
	b.formMark(l, k)
}

// A head is a filled triangle.
type head struct{ length, half float64 }

func headFor(width, k float64) head {
	return head{length: 7*k + 1.6*width, half: 2.6*k + 0.95*width}
}

// A tip is where a head stands and where it points.
type tip struct{ at, towards draw.Point }

func (h head) path(t tip) draw.Path {
	back := t.at.Sub(t.towards.Times(h.length))
	side := t.towards.Left().Times(h.half)
	return draw.Polygon(t.at, back.Add(side), back.Sub(side))
}

// beforeHead cuts the room for a head off the end of a curve.
func beforeHead(c curve, length float64) (curve, tip) {
	total := 0.0
	pts := sample(c, 6)
	for i := 1; i < len(pts); i++ {
		total += pts[i].Sub(pts[i-1]).Len()
	}
	if total <= length {
		return c.part(0, 0.02), tip{c[3], c[3].Sub(c[0]).Unit()}
	}
	// Walk back by length; the chord of the cut-off end is where the head points.
	n := len(pts) - 1
	left, t := length, 1.0
	for i := n; i > 0; i-- {
		d := pts[i].Sub(pts[i-1]).Len()
		if d >= left {
			t = (float64(i) - left/d) / float64(n)
			break
		}
		left -= d
	}
	shaft, _ := c.split(t)
	return shaft, tip{c[3], c[3].Sub(shaft[3]).Unit()}
}

// strands splay the tail of an arrow whose slope varies by a plate.
func strands(c curve, length, side float64) draw.Path {
	var p draw.Path
	chord := c[3].Sub(c[0]).Len()
	t := min(length/max(chord, 1), 0.5)
	tail, _ := c.split(t)
	left := tail[3].Sub(tail[0]).Unit().Left()
	for _, s := range []float64{side, -side} {
		start := tail[0].Add(left.Times(s))
		p.Move(start)
		p.Cubic(start.Add(tail[3].Sub(tail[0]).Times(0.5)), tail[0].Add(tail[3].Sub(tail[0]).Times(0.6)), tail[3])
	}
	return p
}

// formMark shows any form but the slope, and a product with other arrows, as a
// small sketch on the middle of the arrow.
func (b *builder) formMark(l *line, k float64) {
	if l.arrow == nil || b.zoom < 0.5 {
		return
	}
	p := &b.in.Palette
	form := l.arrow.Form
	product := len(l.arrow.With) > 0
	if (form == "" || form == "slope") && !product {
		return
	}
	r := 7.5 * k
	at := l.run.at(0.5)
	b.list.Add(&draw.Shape{Path: draw.Circle(at, r), Fill: p.Card, Stroke: p.Border, Width: 1})
	s := r * 0.5
	rel := func(x, y float64) draw.Point { return at.Add(draw.Point{X: x * s, Y: y * s}) }
	var sketch draw.Path
	switch {
	case product:
		sketch.Move(rel(-0.8, -0.8))
		sketch.Line(rel(0.8, 0.8))
		sketch.Move(rel(-0.8, 0.8))
		sketch.Line(rel(0.8, -0.8))
	case form == "steps":
		sketch = draw.Polyline(rel(-1.1, 0.8), rel(-0.35, 0.8), rel(-0.35, 0), rel(0.4, 0), rel(0.4, -0.8), rel(1.1, -0.8))
	case form == study.OneWay: // like steps, none back, of unlike sizes
		sketch = draw.Polyline(rel(-1.1, 1), rel(-0.6, 1), rel(-0.6, 0.6), rel(0, 0.6), rel(0, -0.6), rel(0.6, -0.6), rel(0.6, -1), rel(1.1, -1))
	case form == study.Threshold:
		sketch = draw.Polyline(rel(-1.1, 0.6), rel(-0.05, 0.6), rel(1, -0.9))
	case form == study.Log:
		sketch.Move(rel(-1, 1))
		sketch.Cubic(rel(-0.9, 0), rel(-0.1, -0.5), rel(1.1, -0.9))
	case form == study.Saturating: // below its limit
		sketch.Move(rel(-1.1, -1))
		sketch.Line(rel(1.1, -1))
		sketch.Move(rel(-1, 1))
		sketch.Cubic(rel(-0.8, -0.6), rel(-0.3, -0.55), rel(1.1, -0.6))
	case form == "offset":
		// an arrow that passes its parent on unchanged, one for one
		b.list.Add(&draw.Text{At: draw.Point{X: at.X, Y: at.Y + draw.Drop(1.4*r)}, Text: "1", Face: draw.Bold, Size: 1.4 * r, Color: p.Ink, Anchor: draw.Middle})
		return
	default:
		sketch.Move(rel(-1, 0.8))
		sketch.Cubic(rel(-0.4, -1.6), rel(0.3, 1.8), rel(1, -0.8))
	}
	b.list.Add(&draw.Shape{Path: sketch, Stroke: p.Ink, Width: 1.2 * k})
}

// drawArcs draws unnamed common causes: dashed, a head at both ends.
func (b *builder) drawArcs() {
	for _, l := range b.arcs {
		b.drawArc(l)
	}
}

func (b *builder) drawArc(l *line) {
	p := &b.in.Palette
	k := min(max(b.zoom, 0.75), 1.8)
	ink := p.Muted
	switch {
	case b.picked(l):
		ink = p.Action
		b.list.Add(&draw.Shape{Path: l.run.path(), Stroke: draw.Alpha(p.Action, 0.28), Width: 10})
	case b.hovered(l):
		b.list.Add(&draw.Shape{Path: l.run.path(), Stroke: draw.Alpha(p.Ink, 0.10), Width: 9})
	}
	h := headFor(1.4*k, k)
	shaft, end := beforeHead(l.run, h.length*0.85)
	back, start := beforeHead(shaft.reverse(), h.length*0.85)
	start.at = l.run[0]
	b.list.Add(
		&draw.Shape{Path: back.path(), Stroke: ink, Width: 1.4 * k, Dash: []float64{5 * k, 3.5 * k}},
		&draw.Shape{Path: h.path(end), Fill: ink},
		&draw.Shape{Path: h.path(start), Fill: ink},
	)
}

// drawArrowFindings puts small marks on arrows and arcs that have something to
// say, off the middle, where marks of the form stand.
func (b *builder) drawArrowFindings() {
	if len(b.in.ArrowFindings) == 0 {
		return
	}
	for _, l := range append(b.arrows[:len(b.arrows):len(b.arrows)], b.arcs...) {
		if b.in.ArrowFindings[l.pair] != "" {
			b.findingMark(l.run.at(0.34), findingRadius(b.zoom))
		}
	}
}

// drawWords prints what the arrow and the node under the pointer, or picked
// alone, have to say.
func (b *builder) drawWords() {
	p := &b.in.Palette
	said := false
	say := func(l *line) {
		if said {
			return
		}
		m := l.run.at(0.5)
		if found := b.in.ArrowFindings[l.pair]; found != "" && b.hovered(l) {
			said = true
			b.note(draw.Rect{X: m.X, Y: m.Y - 6, H: 12}, found, p.Confounding)
			return
		}
		words := b.arrowWords(l)
		if words == "" {
			return
		}
		said = true
		n := l.run.at(0.52).Sub(l.run.at(0.48)).Unit().Left()
		if n.Y > 0 {
			n = n.Times(-1)
		}
		w := draw.Measure(words, draw.Regular, 11)
		away := 10 + math.Abs(n.X)*w/2*0.9
		b.label(m.Add(n.Times(away)), words, draw.Regular, 11, p.Ink)
	}
	for _, l := range append(b.arrows[:len(b.arrows):len(b.arrows)], b.arcs...) {
		if b.hovered(l) {
			say(l)
		}
	}
	if len(b.in.Selected.Arrows)+len(b.in.Selected.Arcs) == 1 {
		for _, l := range append(b.arrows[:len(b.arrows):len(b.arrows)], b.arcs...) {
			if b.picked(l) {
				say(l)
			}
		}
	}
	if b.in.Hover.Kind == OnNode || b.in.Hover.Kind == OnEdge {
		if i, ok := b.index[b.in.Hover.Node]; ok {
			b.nodeWords(b.nodes[i])
		}
	}
}

// arrowWords is what an arrow says when asked.
func (b *builder) arrowWords(l *line) string {
	if l.arc != nil {
		return "a common cause that nobody measured"
	}
	if b.in.Paint != nil {
		if paint, ok := b.in.Paint.Arrows[l.pair]; ok && paint.Words != "" {
			if paint.Association {
				return "association, not an effect: " + paint.Words
			}
			return paint.Words
		}
	}
	return formWords(l.arrow)
}

// formWords says in words what the marks on an arrow mean; "" for a plain slope.
func formWords(a *study.Arrow) string {
	words := ""
	if a.Form != "" && a.Form != "slope" {
		words = a.Form
	}
	add := func(s string) {
		if words != "" {
			words += ", "
		}
		words += s
	}
	for _, w := range a.With {
		add("together with " + w)
	}
	for _, plate := range a.VariesBy {
		add("differs between " + plate + "s")
	}
	return words
}

// nodeWords prints a node's paint and finding above it.
func (b *builder) nodeWords(n *body) {
	p := &b.in.Palette
	words := b.in.Findings[n.id]
	color := p.Confounding
	if words == "" && b.in.Paint != nil {
		words, color = b.in.Paint.Nodes[n.id].Words, p.Ink
	}
	if words != "" {
		b.note(n.rect(), words, color)
	}
}

// note prints words on a small card above a thing, or below it where there is
// no room above, in up to four lines.
func (b *builder) note(by draw.Rect, words string, ink draw.Color) {
	const size, leading, pad, widest = 11.0, 15.0, 8.0, 300.0
	lines := draw.Wrap(words, draw.Regular, size, widest, 4)
	w := 0.0
	for _, line := range lines {
		w = max(w, draw.Measure(line, draw.Regular, size))
	}
	box := draw.Rect{W: w + 2*pad, H: leading*float64(len(lines)) + pad}
	box.X = max(min(by.X+by.W/2-box.W/2, b.in.Width-box.W-4), 4)
	box.Y = by.Y - box.H - 10
	if box.Y < 4 {
		box.Y = by.Y + by.H + 10
	}
	p := &b.in.Palette
	b.list.Add(&draw.Shape{Path: draw.RoundRect(box, 5), Fill: p.Card, Stroke: p.Border, Width: 1, Crisp: true})
	for i, line := range lines {
		b.list.Add(&draw.Text{
			At:   draw.Point{X: box.X + pad, Y: box.Y + pad/2 + leading*float64(i) + 11.5},
			Text: line, Size: size, Color: ink,
		})
	}
}
