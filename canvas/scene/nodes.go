package scene

import (
	"slices"
	"strings"

	"arrowroot/canvas/draw"
)

// drawNodes draws every node, those picked last so that nothing covers them.
func (b *builder) drawNodes() {
	var later []*body
	for _, n := range b.nodes {
		if b.in.Selected.HasNode(n.id) {
			later = append(later, n)
			continue
		}
		b.drawNode(n)
	}
	for _, n := range later {
		b.drawNode(n)
	}
}

func (b *builder) drawNode(n *body) {
	p := &b.in.Palette
	if b.in.Width > 0 && !n.rect().Grow(80*b.zoom).Meets(draw.Rect{W: b.in.Width, H: b.in.Height}) {
		return
	}
	fill, paint := b.nodeFill(n)
	outline := &draw.Shape{Path: draw.RoundRect(n.rect(), n.corner()), Fill: fill, Stroke: p.Ink, Width: 1.5, Crisp: n.square}
	if n.unmeasured {
		outline.Stroke, outline.Dash = p.Muted, []float64{5, 4}
	}
	b.ring(n)
	if b.in.Selected.HasNode(n.id) || b.in.Mark.boxes(n.id) {
		outline.Stroke = p.Action
		outline.Width = 2
	}
	b.list.Add(outline)
	lines, face := n.lines, nameFace(n.variable)
	if lines == nil {
		lines = []string{n.name}
	}
	if paint != nil && paint.Sign != "" {
		last := len(lines) - 1
		lines = append(slices.Clone(lines[:last]), draw.Shorten(lines[last], face, n.text, n.w-2.2*n.text)+" "+paint.Sign)
	}
	ink := readable(fill, p.Ink, p.Sheet)
	if n.unmeasured && paint == nil {
		ink = p.Ink
	}
	if paint != nil && paint.Hatched {
		b.hatch(n, lines, face, fill)
	}
	for i, line := range lines {
		y := n.at.Y + (float64(i)-float64(len(lines)-1)/2)*nameStep*n.text
		b.list.Add(&draw.Text{At: draw.Point{X: n.at.X, Y: y + draw.Drop(n.text)}, Text: line, Face: face, Size: n.text, Color: ink, Anchor: draw.Middle})
	}
	below := n.at.Y + n.h/2
	below = b.drawRoles(n, below)
	below = b.drawDots(n, below)
	b.drawFacts(n, below)
	b.drawFinding(n)
}

// nodeFill is the colour of a node's inside; paint is nil where there is none.
func (b *builder) nodeFill(n *body) (draw.Color, *NodePaint) {
	p := &b.in.Palette
	ground := p.Card
	if n.unmeasured {
		ground = p.Sheet // "no fill": arrows stop at the outline
	}
	if b.in.Paint == nil {
		return ground, nil
	}
	paint, ok := b.in.Paint.Nodes[n.id]
	if !ok || paint.Plain {
		return ground, nil
	}
	c := p.binColor(b.in.Paint.Kind, paint.Bin)
	if paint.Hatched {
		c = ground
	}
	if b.in.Paint.Stale {
		c = mix(ground, c, 0.45)
	}
	return c, &paint
}

// binColor is the colour of a bin of a paint.
func (p *Palette) binColor(kind PaintKind, bin int) draw.Color {
	if kind == EffectPaint {
		return p.Effect[min(max(bin, -2), 2)+2]
	}
	return p.Learned[min(max(bin, 0), 3)]
}

// ring marks the node that is picked or under the pointer.
func (b *builder) ring(n *body) {
	p := &b.in.Palette
	grow := func(d float64) draw.Path { return draw.RoundRect(n.rect().Grow(d), n.corner()+d) }
	hover := b.in.Hover.Node == n.id && (b.in.Hover.Kind == OnNode || b.in.Hover.Kind == OnEdge)
	aimed := b.in.Preview.Draw != nil && b.in.Preview.Draw.To == n.id && b.in.Preview.Draw.Refuse == ""
	switch {
	case b.markRing(n):
	case b.in.Selected.HasNode(n.id):
		b.list.Add(&draw.Shape{Path: grow(4), Fill: draw.Alpha(p.Action, 0.18)})
	case aimed:
		b.list.Add(&draw.Shape{Path: grow(4), Stroke: p.Action, Width: 1.5})
	case hover && b.in.Hover.Kind == OnEdge:
		b.list.Add(&draw.Shape{Path: grow(4), Stroke: draw.Alpha(p.Action, 0.8), Width: 1.5, Dash: []float64{2, 3}, Round: true})
	case hover:
		b.list.Add(&draw.Shape{Path: grow(3), Fill: draw.Alpha(p.Ink, 0.08)})
	}
}

// hatch fills a node with diagonal lines and clears the ground of its name.
func (b *builder) hatch(n *body, name []string, face draw.Face, ground draw.Color) {
	const gap = 5.0
	var lines draw.Path
	r := n.rect()
	for c := -r.H; c < r.W; c += gap {
		// Along this diagonal, walk from the lower to the upper edge and keep
		// the part inside the outline.
		var first, last draw.Point
		found := false
		for y := r.H; y >= 0; y -= 0.5 {
			at := draw.Point{X: r.X + c + (r.H - y), Y: r.Y + y}
			if n.depth(at) < -1 {
				if !found {
					first, found = at, true
				}
				last = at
			}
		}
		if found {
			lines.Move(first)
			lines.Line(last)
		}
	}
	b.list.Add(&draw.Shape{Path: lines, Stroke: draw.Alpha(b.in.Palette.Muted, 0.75), Width: 1})
	w := 0.0
	for _, line := range name {
		w = max(w, draw.Measure(line, face, n.text)+8)
	}
	h := n.text * (1.5 + float64(len(name)-1)*nameStep)
	b.list.Add(&draw.Shape{Path: draw.RoundRect(draw.Rect{X: n.at.X - w/2, Y: n.at.Y - h/2, W: w, H: h}, 3), Fill: ground})
}

// drawRoles prints the roles on a dark tab under the lower edge; it returns
// where the next thing below may begin.
func (b *builder) drawRoles(n *body, below float64) float64 {
	if n.roles == "" {
		return below + 4*b.zoom
	}
	p := &b.in.Palette
	size := roleSize(b.zoom)
	b.list.Add(
		&draw.Shape{Path: draw.RoundRect(n.tab, 4), Fill: p.Ink},
		&draw.Text{At: draw.Point{X: n.at.X, Y: n.tab.Centre().Y + draw.Drop(size)}, Text: n.roles, Face: draw.Bold, Size: size, Color: p.Sheet, Anchor: draw.Middle},
	)
	return n.tab.Y + n.tab.H + 3*b.zoom
}

// drawDots shows the data of a measured variable as a strip of quantile dots.
func (b *builder) drawDots(n *body, below float64) float64 {
	if !n.dots {
		return below
	}
	p := &b.in.Palette
	z := b.zoom
	st := draw.StackDots(b.in.Dots[n.id], 46*z, 17*z, 2.5*z)
	tall := 0.0
	for _, c := range st.Centres {
		tall = max(tall, -c.Y+st.Radius)
	}
	base := below + tall + 2*z
	left := n.at.X - st.Width/2
	d := &draw.Discs{Radius: st.Radius, Color: p.Muted}
	for _, c := range st.Centres {
		d.Centres = append(d.Centres, draw.Point{X: left + c.X, Y: base + c.Y})
	}
	b.list.Add(d, &draw.Shape{
		Path:   draw.Polyline(draw.Point{X: left - 3*z, Y: base + 0.5}, draw.Point{X: left + st.Width + 3*z, Y: base + 0.5}),
		Stroke: p.Muted, Width: 1, Crisp: true,
	})
	return base + 2*z
}

// drawFacts prints small words under the node that is picked or under the
// pointer: what is missing, and what its values belong to.
func (b *builder) drawFacts(n *body, below float64) {
	over := b.in.Hover.Node == n.id && (b.in.Hover.Kind == OnNode || b.in.Hover.Kind == OnEdge)
	if n.variable == nil || !over && !b.in.Selected.HasNode(n.id) {
		return
	}
	if share := b.in.Missing[n.id]; share > 0 {
		below = b.caption(n, below, percent(share)+" missing")
	}
	if plates := n.variable.Plates; len(plates) > 0 {
		b.caption(n, below, "one per "+strings.Join(plates, " × "))
	}
}

// caption prints small words under a node; it returns where the next may go.
func (b *builder) caption(n *body, below float64, words string) float64 {
	size := 10 * max(b.zoom, 1)
	b.label(draw.Point{X: n.at.X, Y: below + size}, words, draw.Regular, size, b.in.Palette.Muted)
	return below + 1.2*size
}

// drawFinding puts a small mark on a node that has something to say.
func (b *builder) drawFinding(n *body) {
	words := b.in.Findings[n.id]
	if words == "" {
		return
	}
	r := findingRadius(b.zoom)
	at := draw.Point{X: n.at.X + n.w/2 - r*0.4, Y: n.at.Y - n.h/2 + r*0.2}
	if n.square {
		at = at.Add(draw.Point{X: r * 0.4, Y: -r * 0.2})
	}
	b.findingMark(at, r)
}

func findingRadius(zoom float64) float64 { return 6.5 * min(max(zoom, 0.8), 1.4) }

// findingMark is the small mark of something to say.
func (b *builder) findingMark(at draw.Point, r float64) {
	p := &b.in.Palette
	b.list.Add(
		&draw.Shape{Path: draw.Circle(at, r), Fill: p.Sheet, Stroke: p.Confounding, Width: 1.4},
		&draw.Text{At: draw.Point{X: at.X, Y: at.Y + draw.Drop(1.6*r) + 0.3}, Text: "!", Face: draw.Bold, Size: 1.6 * r, Color: p.Confounding, Anchor: draw.Middle},
	)
}
