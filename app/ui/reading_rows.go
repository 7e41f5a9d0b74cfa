package ui

import (
	"fyne.io/fyne/v2"
	"fyne.io/fyne/v2/container"

	"arrowroot/canvas/scene"
)

// A readingLine is one finding as a row of the Reading page.
type readingLine struct {
	key    string
	kind   string
	text   string
	why    string
	tone   tone
	set    *heldSet // what a click or Return holds; nil = nothing
	does   string   // words of another action; "" = none
	act    func()
	marks  func() *scene.Mark
	aside  string // why the user set it aside; "" = it stands
	strong bool   // the sentence is about a name or a set: bold
}

// A heldSet is a set of variables that a row offers to hold.
type heldSet struct {
	ids []string
	now bool // held already
}

// tone says at a glance what a finding means for the comparison.
type tone uint8

const (
	plainTone tone = iota
	goodTone
	badTone
	quietTone
)

// token is the colour of the words that carry a tone; the words themselves say
// it too.
func (t tone) token() fyne.ThemeColorName {
	switch t {
	case goodTone:
		return tokenAction
	case badTone:
		return tokenConfound
	case quietTone:
		return tokenMuted
	}
	return tokenInk
}

func (l *readingLine) mark() *scene.Mark {
	if l.marks == nil {
		return nil
	}
	return l.marks()
}

// action is the words and the deed of a row's button; none without words.
func (l *readingLine) action(d *desk) (string, func()) {
	switch {
	case l.set != nil && l.set.now:
		return "held now", nil
	case l.set != nil:
		ids := l.set.ids
		return "Hold", func() { d.holdAll(ids) }
	}
	return l.does, l.act
}

const kindColumn = 122 // width of the column of kinds

// columns is the room for the kind, the sentence and the action at a width.
func (l *readingLine) columns(width float32, action string) (kind, text, button float32) {
	width -= 2*rowPad + 8 + 8
	if l.kind != "" && width > 360 {
		kind = kindColumn
		width -= kind + 8
	}
	if action != "" {
		button = fyne.MeasureText(action, sizeBody, fyne.TextStyle{Bold: true}).Width + 20
		width -= button + 8
	}
	return kind, width, button
}

const rowPad = 6

// longSentence is how many letters a sentence has when its reason begins a
// line of its own.
const longSentence = 180

func (l *readingLine) spans() []span {
	token := tokenInk
	if l.tone == quietTone || l.aside != "" {
		token = tokenMuted
	}
	out := []span{{text: l.text, token: token, bold: l.strong}}
	if l.why != "" {
		gap := " "
		if len(l.text) > longSentence {
			gap = "\n"
		}
		out = append(out, span{text: gap + l.why, token: tokenMuted})
	}
	if l.aside != "" {
		out = append(out, span{text: " Set aside: " + l.aside, token: tokenMuted, italic: true})
	}
	return out
}

// row is a line before it is made.
func (p *readingPage) row(i int) rollRow {
	l := &p.lines[i]
	action, act := l.action(p.d)
	return rollRow{
		key: l.key,
		guess: func(width float32) float32 {
			_, text, _ := l.columns(width, action)
			letters := float32(len(l.text) + len(l.why) + len(l.aside))
			lines := 1 + int(letters*0.52*sizeBody/max(text, 1))
			return float32(lines)*p.line + 6
		},
		build: func() fyne.CanvasObject { return p.press(l, action, act) },
	}
}

func (p *readingPage) press(l *readingLine, action string, act func()) *press {
	d := p.d
	dot := filled(l.tone.token())
	dot.radius, dot.least = 4, fyne.NewSize(8, 8)
	kind := newProse(sizeBody, span{text: l.kind, token: l.tone.token()})
	text := newProse(sizeBody, l.spans()...)
	objects := []fyne.CanvasObject{dot, kind, text}
	var button *press
	switch {
	case action != "" && act != nil:
		button = d.chip(action, l.tone == badTone, act)
		objects = append(objects, button)
	case action != "":
		objects = append(objects, newLabel(action, sizeBody, tokenAction, fyne.TextStyle{}))
	}
	x := d.press(container.New(&lineLayout{l, action}, objects...), func(x *press) skin {
		switch {
		case x.focused || x.hovered:
			return skin{fill: tokenAmberTint, radius: 4}
		case p.pinned == l.key:
			return skin{fill: tokenTint, radius: 4}
		}
		return skin{radius: 4}
	}, func() { p.pin(l) })
	x.padX, x.padY = rowPad, 3
	x.key = "finding " + l.key
	x.onHover = func(in bool) {
		p.light(l, in)
		x.Refresh()
	}
	x.onKey = func(key fyne.KeyName) bool {
		if act != nil && (key == fyne.KeyReturn || key == fyne.KeyEnter) {
			act()
			return true
		}
		return false
	}
	return x
}

// lineLayout sets a row: a dot, the kind, the sentence, the action.
type lineLayout struct {
	line   *readingLine
	action string
}

func (l *lineLayout) Layout(o []fyne.CanvasObject, s fyne.Size) {
	first := fyne.MeasureText("Mg", sizeBody, fyne.TextStyle{}).Height + 2
	kind, text, button := l.line.columns(s.Width+2*rowPad, l.action)
	place(o[0], 0, (first-8)/2, 8, 8)
	x := float32(16)
	show(kind > 0, o[1])
	if kind > 0 {
		place(o[1], x, 0, kind, s.Height)
		x += kind + 8
	}
	place(o[2], x, 0, text, s.Height)
	if len(o) > 3 {
		place(o[3], s.Width-button, 0, button, first+2)
	}
}

func (l *lineLayout) heightFor(o []fyne.CanvasObject, width float32) float32 {
	kind, text, button := l.line.columns(width+2*rowPad, l.action)
	h := heightFor(o[2], text)
	if kind > 0 {
		h = max(h, heightFor(o[1], kind))
	}
	if button > 0 {
		h = max(h, heightFor(o[3], button))
	}
	return h
}

func (l *lineLayout) MinSize([]fyne.CanvasObject) fyne.Size { return fyne.NewSize(40, 20) }
