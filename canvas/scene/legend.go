package scene

import (
	"arrowroot/canvas/draw"
	"arrowroot/compile/study"
)

// Bounds of the effect bins, in plausible widths of the variable (SEMANTICS G):
// beyond the first a change counts, beyond the second it is large.
const (
	SomeEffect  = 0.05
	LargeEffect = 0.25
)

// EffectBin is the bin of a change, from −2 to 2.
func EffectBin(change float64) int {
	switch {
	case change <= -LargeEffect:
		return -2
	case change <= -SomeEffect:
		return -1
	case change >= LargeEffect:
		return 2
	case change >= SomeEffect:
		return 1
	}
	return 0
}

// Sign is what is printed beside a name in a bin of the effect paint.
func Sign(bin int) string {
	switch {
	case bin < 0:
		return "−"
	case bin > 0:
		return "+"
	}
	return ""
}

// LearnedBin is the bin of a share learned, from 0 to 1: quarters.
func LearnedBin(share float64) int { return min(max(int(share*4), 0), 3) }

// LegendHeight is the height of a Legend.
const LegendHeight = 16.0

// Legend draws the bins of a paint in a row, with what stands at both ends and
// the hatching.
func Legend(kind PaintKind, p Palette) *draw.List {
	l := &draw.List{Height: LegendHeight}
	const w, h, size, base = 20.0, 11.0, 11.0, 12.0
	x := 0.0
	word := func(s string, ink draw.Color) {
		l.Add(&draw.Text{At: draw.Point{X: x, Y: base}, Text: s, Size: size, Color: ink})
		x += draw.Measure(s, draw.Regular, size)
	}
	low, high, bins := "little", "much", p.Learned[:]
	switch kind {
	case EffectPaint:
		low, high, bins = "−", "+", p.Effect[:]
	case FitPaint:
		low, high = "well", "badly"
	case TrustPaint:
		return &draw.List{Height: LegendHeight} // trust is a word and a glyph, no ramp
	}
	word(low, p.Muted)
	x += 6
	for _, c := range bins {
		l.Add(&draw.Shape{Path: draw.RoundRect(draw.Rect{X: x, Y: 2.5, W: w, H: h}, 0), Fill: c, Stroke: p.Border, Width: 1, Crisp: true})
		x += w
	}
	x += 6
	word(high, p.Muted)
	if kind == EffectPaint {
		x += 12
		l.Add(hatched(draw.Rect{X: x, Y: 2.5, W: w, H: h}, p)...)
		x += w + 6
		word("unsure", p.Muted)
	}
	l.Width = x + 1
	return l
}

// hatched is the sample of "too unsure to say".
func hatched(r draw.Rect, p Palette) []draw.Item {
	var lines draw.Path
	for c := -r.H + 3; c < r.W; c += 5 {
		from, to := max(c, 0), min(c+r.H, r.W)
		lines.Move(draw.Point{X: r.X + from, Y: r.Y + r.H - (from - c)})
		lines.Line(draw.Point{X: r.X + to, Y: r.Y + r.H - (to - c)})
	}
	return []draw.Item{
		&draw.Shape{Path: draw.RoundRect(r, 0), Fill: p.Card, Stroke: p.Border, Width: 1, Crisp: true},
		&draw.Shape{Path: lines, Stroke: p.Muted, Width: 1},
	}
}

// Plot is the style of plots in a palette.
func (p Palette) Plot() draw.Style {
	s := draw.Style{Ground: p.Card, Ink: p.Ink, Muted: p.Muted, Hairline: p.Hairline, Accent: p.Confounding, Soft: p.Effect[3]}
	if Contrast(p.Effect[4], p.Card) > Contrast(p.Confounding, p.Card) {
		s.Accent = p.Effect[4]
	}
	return s
}

// Thumb reduces a rival to a thumbnail; the exposure and the outcome of the
// question, if any, are filled.
func Thumb(s *study.Study, r *study.Rival, q *study.Question) draw.Thumb {
	var t draw.Thumb
	if r == nil || r.Diagram == nil {
		return t
	}
	places := Places(s, r, q)
	variables := ledger(s)
	index := make(map[string]int)
	for _, n := range r.Diagram.Nodes {
		p, ok := places[n.Variable]
		if !ok {
			continue
		}
		index[n.Variable] = len(t.Nodes)
		v := variables[n.Variable]
		t.Nodes = append(t.Nodes, draw.ThumbNode{
			At:         draw.Point{X: p.X, Y: p.Y},
			Unmeasured: v != nil && v.Unmeasured,
			Marked:     q != nil && (q.Exposure == n.Variable || q.Outcome == n.Variable),
		})
	}
	pair := func(a, b string) ([2]int, bool) {
		i, ok := index[a]
		j, ok2 := index[b]
		return [2]int{i, j}, ok && ok2
	}
	for _, a := range r.Diagram.Arrows {
		if ends, ok := pair(a.From, a.To); ok {
			t.Arrows = append(t.Arrows, ends)
		}
	}
	for _, a := range r.Diagram.Arcs {
		if ends, ok := pair(a.A, a.B); ok {
			t.Arcs = append(t.Arcs, ends)
		}
	}
	return t
}
