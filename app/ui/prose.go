package ui

import (
	"strings"

	"fyne.io/fyne/v2"
	"fyne.io/fyne/v2/canvas"
	"fyne.io/fyne/v2/widget"
)

// A span is a stretch of prose in one style, or a control that stands in it.
type span struct {
	text         string
	bold, italic bool
	mono         bool
	token        fyne.ThemeColorName // "" = ink
	object       fyne.CanvasObject   // stands in the line instead of text
}

// prose is a paragraph that wraps at the width it is given, with styles and
// buttons inside the line.
type prose struct {
	widget.BaseWidget
	spans []span
	size  float32
	lines int // shows at most so many lines; 0 = all
	hang  float32
}

func newProse(size float32, spans ...span) *prose {
	p := &prose{spans: spans, size: size}
	p.ExtendBaseWidget(p)
	return p
}

// para is a paragraph of body text in one colour.
func para(text string, token fyne.ThemeColorName) *prose {
	return newProse(sizeBody, span{text: text, token: token})
}

// marked turns **bold** and *names* in a sentence into spans: names are set
// bold, as names are everywhere.
func marked(text string, token fyne.ThemeColorName) []span {
	var spans []span
	for i, part := range strings.Split(text, "*") {
		if part == "" {
			continue
		}
		spans = append(spans, span{text: part, bold: i%2 == 1, token: token})
	}
	return spans
}

// markedProse is a paragraph of a sentence with marks.
func markedProse(text string, token fyne.ThemeColorName) *prose {
	return newProse(sizeBody, marked(strings.ReplaceAll(text, "**", "*"), token)...)
}

func (p *prose) set(spans ...span) {
	p.spans = spans
	p.Refresh()
}

// A piece is a word or an object at its place.
type piece struct {
	span  *span
	text  string
	x, y  float32
	width float32
}

// wrap lays the spans out and gives the pieces, merged per line and span, with
// the total height.
func (p *prose) wrap(width float32) ([]piece, float32) {
	lineHeight := fyne.MeasureText("Mg", p.size, fyne.TextStyle{}).Height + 2
	var pieces []piece
	x, y, tallest := float32(0), float32(0), lineHeight
	lineStart := 0
	newLine := func() {
		for i := lineStart; i < len(pieces); i++ { // centre on the line's height
			h := lineHeight
			if o := pieces[i].span.object; o != nil {
				h = o.MinSize().Height
			}
			pieces[i].y = y + (tallest-h)/2
		}
		lineStart = len(pieces)
		y += tallest
		x, tallest = p.hang, lineHeight
	}
	for i := range p.spans {
		s := &p.spans[i]
		if s.object != nil {
			m := s.object.MinSize()
			if x > 0 && x+m.Width > width {
				newLine()
			}
			tallest = max(tallest, m.Height+4)
			pieces = append(pieces, piece{span: s, x: x, width: m.Width})
			x += m.Width
			continue
		}
		style := s.style()
		for j, paragraph := range strings.Split(s.text, "\n") {
			if j > 0 {
				newLine()
				x = 0
			}
			for _, w := range p.fitting(splitWords(paragraph), width-p.hang, style) {
				m := fyne.MeasureText(w, p.size, style).Width
				if x > p.hang && x+fyne.MeasureText(strings.TrimRight(w, " "), p.size, style).Width > width {
					newLine()
					if w = strings.TrimLeft(w, " "); w == "" {
						continue
					}
					m = fyne.MeasureText(w, p.size, style).Width
				}
				if n := len(pieces); n > lineStart && pieces[n-1].span == s {
					last := &pieces[n-1]
					last.text += w
					last.width = fyne.MeasureText(last.text, p.size, style).Width
					x = last.x + last.width
					continue
				}
				pieces = append(pieces, piece{span: s, text: w, x: x, width: m})
				x += m
			}
		}
	}
	if len(pieces) == 0 {
		return nil, 0
	}
	newLine()
	return p.limit(pieces, y, width)
}

// fitting breaks words that are wider than a line, after an underscore where
// there is one.
func (p *prose) fitting(words []string, width float32, style fyne.TextStyle) []string {
	var out []string
	for _, w := range words {
		for len(w) > 1 && width > 40 && fyne.MeasureText(strings.TrimRight(w, " "), p.size, style).Width > width {
			end, soft, used := len(w), 0, float32(0)
			for i, r := range w {
				used += fyne.MeasureText(string(r), p.size, style).Width
				if used > width && i > 0 {
					end = i
					break
				}
				if r == '_' {
					soft = i + 1
				}
			}
			if soft > 0 {
				end = soft
			}
			if end == len(w) {
				break
			}
			out, w = append(out, w[:end]), w[end:]
		}
		out = append(out, w)
	}
	return out
}

// limit drops what lies below the last line that may be shown, and ends that
// line with an ellipsis.
func (p *prose) limit(pieces []piece, height, width float32) ([]piece, float32) {
	if p.lines == 0 {
		return pieces, height
	}
	line := fyne.MeasureText("Mg", p.size, fyne.TextStyle{}).Height + 2
	bottom := line * float32(p.lines)
	if height <= bottom+1 {
		return pieces, height
	}
	n := 0
	for n < len(pieces) && pieces[n].y < bottom-1 {
		n++
	}
	pieces = pieces[:n]
	if n > 0 {
		last := &pieces[n-1]
		last.text = shorten(last.text+" …", width-last.x, p.size, last.span.style())
		if !strings.HasSuffix(last.text, "…") {
			last.text += "…"
		}
	}
	return pieces, bottom
}

// splitWords cuts text after spaces, keeping them; a number keeps its percent
// sign.
func splitWords(text string) []string {
	var out []string
	start := 0
	for i := 1; i < len(text); i++ {
		if text[i-1] == ' ' && text[i] != ' ' && text[i] != '%' {
			out = append(out, text[start:i])
			start = i
		}
	}
	if start < len(text) {
		out = append(out, text[start:])
	}
	return out
}

func (s *span) style() fyne.TextStyle {
	return fyne.TextStyle{Bold: s.bold, Italic: s.italic, Monospace: s.mono}
}

// HeightFor is the height at a given width.
func (p *prose) HeightFor(width float32) float32 {
	_, h := p.wrap(width)
	return h
}

func (p *prose) MinSize() fyne.Size {
	if w := p.Size().Width; w > 0 {
		return fyne.NewSize(40, p.HeightFor(w))
	}
	return fyne.NewSize(40, p.HeightFor(240))
}

// Text is the paragraph as plain text.
func (p *prose) Text() string {
	var b strings.Builder
	for _, s := range p.spans {
		b.WriteString(s.text)
	}
	return b.String()
}

func (p *prose) CreateRenderer() fyne.WidgetRenderer {
	r := &proseRenderer{p: p}
	r.Layout(p.Size())
	return r
}

type proseRenderer struct {
	p       *prose
	objects []fyne.CanvasObject
}

func (r *proseRenderer) Layout(s fyne.Size) {
	if s.Width <= 0 {
		return
	}
	pieces, _ := r.p.wrap(s.Width)
	r.objects = r.objects[:0]
	for _, c := range pieces {
		if o := c.span.object; o != nil {
			o.Resize(o.MinSize())
			o.Move(fyne.NewPos(c.x, c.y))
			r.objects = append(r.objects, o)
			continue
		}
		t := canvas.NewText(c.text, ink(or(c.span.token, tokenInk)))
		t.TextSize = r.p.size
		t.TextStyle = c.span.style()
		t.Move(fyne.NewPos(c.x, c.y+1))
		t.Resize(t.MinSize())
		r.objects = append(r.objects, t)
	}
}

func (r *proseRenderer) MinSize() fyne.Size { return r.p.MinSize() }

func (r *proseRenderer) Refresh() {
	r.Layout(r.p.Size())
	fyne.CurrentApp().Driver().CanvasForObject(r.p)
	for _, o := range r.objects {
		o.Refresh()
	}
}

func (r *proseRenderer) Objects() []fyne.CanvasObject { return r.objects }
func (r *proseRenderer) Destroy()                     {}
