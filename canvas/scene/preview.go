package scene

import "arrowroot/canvas/draw"

// drawPreview shows the gesture in progress.
func (b *builder) drawPreview() {
	p := &b.in.Palette
	pre := &b.in.Preview
	if b.in.Focused {
		ring := draw.Rect{X: 1, Y: 1, W: b.in.Width - 2, H: b.in.Height - 2}
		b.list.Add(&draw.Shape{Path: draw.RoundRect(ring, 2), Stroke: draw.Alpha(p.Action, 0.55), Width: 1, Crisp: true})
	}
	if pre.Draw != nil {
		b.drawDraft(pre.Draw)
	}
	if pre.Box != nil {
		if pre.Plate {
			b.list.Add(&draw.Shape{Path: draw.RoundRect(*pre.Box, 8), Stroke: p.Action, Width: 1.5, Crisp: true})
		} else {
			b.list.Add(&draw.Shape{Path: draw.RoundRect(*pre.Box, 2), Fill: draw.Alpha(p.Action, 0.10), Stroke: p.Action, Width: 1, Crisp: true})
		}
	}
	if pre.Ghost != nil {
		at := b.in.View.Out(*pre.Ghost)
		w, h, _ := nodeSize("", draw.Bold, b.zoom)
		b.list.Add(&draw.Shape{
			Path: draw.RoundRect(draw.Rect{X: at.X - w/2, Y: at.Y - h/2, W: w, H: h}, h/2),
			Fill: p.Card, Stroke: p.Action, Width: 1.5,
		})
	}
}

func (b *builder) drawDraft(d *Draft) {
	i, ok := b.index[d.From]
	if !ok {
		return
	}
	p := &b.in.Palette
	from := b.nodes[i]
	target := &body{at: b.in.View.Out(d.End)}
	if j, ok := b.index[d.To]; ok && d.To != d.From {
		target = b.nodes[j]
	}
	l := &line{from: from, to: target}
	if d.Arc {
		l.bend = b.arcBend(from, target)
	}
	if !l.lay(0, 1.5) {
		return
	}
	ink := p.Action
	if d.Refuse != "" {
		ink = p.Confounding
	}
	h := headFor(1.8, 1)
	shaft, end := beforeHead(l.run, h.length*0.85)
	var dash []float64
	if d.Arc {
		dash = []float64{5, 3.5}
	}
	b.list.Add(
		&draw.Shape{Path: shaft.path(), Stroke: ink, Width: 1.8, Dash: dash},
		&draw.Shape{Path: h.path(end), Fill: ink},
	)
	if d.Refuse != "" {
		b.label(target.at.Add(draw.Point{Y: -target.h/2 - 10}), d.Refuse, draw.Regular, 11, p.Confounding)
	}
}
