package ui

import (
	"strings"

	"fyne.io/fyne/v2"
	"fyne.io/fyne/v2/canvas"
	"fyne.io/fyne/v2/widget"
)

// label is one line of text in a token's colour; it shortens itself with an
// ellipsis when there is no room.
type label struct {
	widget.BaseWidget
	text   string
	size   float32
	style  fyne.TextStyle
	token  fyne.ThemeColorName
	right  bool // flush right
	center bool
	least  float32 // the width it can shrink to; 0 = never shrinks
	spread bool    // letter-spaced, for captions
}

func newLabel(text string, size float32, token fyne.ThemeColorName, style fyne.TextStyle) *label {
	w := &label{text: text, size: size, token: token, style: style}
	w.ExtendBaseWidget(w)
	return w
}

func body(text string) *label  { return newLabel(text, sizeBody, tokenInk, fyne.TextStyle{}) }
func muted(text string) *label { return newLabel(text, sizeBody, tokenMuted, fyne.TextStyle{}) }
func small(text string) *label { return newLabel(text, sizeSmall, tokenMuted, fyne.TextStyle{}) }
func bold(text string) *label {
	return newLabel(text, sizeBody, tokenInk, fyne.TextStyle{Bold: true})
}

// caption is a section heading: small capitals, spaced.
func caption(text string) *label {
	w := newLabel(strings.ToUpper(text), sizeCaption, tokenMuted, fyne.TextStyle{Bold: true})
	w.spread = true
	return w
}

func (w *label) set(text string, token fyne.ThemeColorName) {
	if w.text == text && w.token == token {
		return
	}
	w.text, w.token = text, token
	w.Refresh()
}

func (w *label) shrinkTo(least float32) *label { w.least = least; return w }
func (w *label) flushRight() *label            { w.right = true; return w }
func (w *label) centered() *label              { w.center = true; return w }

func (w *label) shown() string {
	if !w.spread {
		return w.text
	}
	// Fyne draws no letter spacing; a hair space between letters does.
	return strings.Join(strings.Split(w.text, ""), "\u200a")
}

func (w *label) MinSize() fyne.Size {
	m := fyne.MeasureText(w.shown(), w.size, w.style)
	if w.least > 0 && w.least < m.Width {
		m.Width = w.least
	}
	return m
}

func (w *label) CreateRenderer() fyne.WidgetRenderer {
	r := &labelRenderer{w: w, text: canvas.NewText("", nil)}
	r.Refresh()
	return r
}

type labelRenderer struct {
	w    *label
	text *canvas.Text
}

func (r *labelRenderer) Layout(s fyne.Size) {
	shown := r.w.shown()
	if r.w.least > 0 {
		shown = shorten(shown, s.Width, r.w.size, r.w.style)
	}
	r.text.Text = shown
	m := r.text.MinSize()
	x := float32(0)
	if r.w.right {
		x = s.Width - m.Width
	} else if r.w.center {
		x = (s.Width - m.Width) / 2
	}
	r.text.Move(fyne.NewPos(x, (s.Height-m.Height)/2))
	r.text.Resize(m)
}

func (r *labelRenderer) MinSize() fyne.Size { return r.w.MinSize() }

func (r *labelRenderer) Refresh() {
	r.text.Color = ink(r.w.token)
	r.text.TextSize = r.w.size
	r.text.TextStyle = r.w.style
	r.Layout(r.w.Size())
	r.text.Refresh()
}

func (r *labelRenderer) Objects() []fyne.CanvasObject { return []fyne.CanvasObject{r.text} }
func (r *labelRenderer) Destroy()                     {}

// shorten cuts text so that it fits width, with an ellipsis at the end.
func shorten(text string, width, size float32, style fyne.TextStyle) string {
	if fyne.MeasureText(text, size, style).Width <= width+0.5 {
		return text
	}
	runes := []rune(text)
	low, high := 0, len(runes)
	for low < high {
		mid := (low + high + 1) / 2
		if fyne.MeasureText(string(runes[:mid])+"…", size, style).Width <= width {
			low = mid
		} else {
			high = mid - 1
		}
	}
	if low == 0 {
		return ""
	}
	return strings.TrimRight(string(runes[:low]), " ") + "…"
}
