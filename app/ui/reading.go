package ui

import (
	"arrowroot/app/words"
	"fmt"
	"strconv"

	"fyne.io/fyne/v2"
	"fyne.io/fyne/v2/container"
)

// readingPage shows everything that the arrows tell: the subjects on the left,
// the findings of one of them on the right. A row that the pointer or the
// keyboard is on shows on the sheet what it is about; clicked, it stays lit. It
// computes nothing: the session reads behind the window, and what is ready is
// shown while the rest is looked for.
type readingPage struct {
	d       *desk
	split   *fyne.Container
	nav     *roll
	rows    *roll
	chosen  string // name of a section
	pinned  string // key of the row that stays lit; "" = none
	open    bool   // list open paths only
	through bool   // list paths through what is picked only
	lines   []readingLine
	line    float32 // height of a line of prose
	seen    readingState
	asked   bool
}

// readingState is everything the page shows: it is filled again only when one
// of these is another.
type readingState struct {
	findings, evidence any
	failed             error
	considered, held   string
	picked             string
	chosen             string
	open, through      bool
	testing            bool
}

func newReadingPage(d *desk) *readingPage {
	p := &readingPage{d: d, nav: newRoll(6, 6, 0), rows: newRoll(10, 6, 1), chosen: firstSubject}
	p.rows.onLeft = func() { p.nav.focus(p.chosen) }
	p.split = container.New(navLayout{}, p.nav, hairline(), p.rows)
	return p
}

func (p *readingPage) name() string               { return "Reading" }
func (p *readingPage) content() fyne.CanvasObject { return p.split }

func (p *readingPage) update() {
	v := p.d.view
	state := readingState{
		findings: v.Findings, evidence: v.Evidence, failed: v.GraphError, considered: v.Considered,
		picked: p.d.picked(), chosen: p.chosen, open: p.open, through: p.through, testing: v.Table != nil,
	}
	if v.Question != nil {
		state.held = fmt.Sprint(v.Question.Held == nil, v.Question.Held)
	}
	if p.asked && state == p.seen {
		return
	}
	p.asked, p.seen = true, state
	p.fill()
}

func (p *readingPage) fill() {
	v := p.d.view
	p.lines, p.line = nil, fyne.MeasureText("Mg", sizeBody, fyne.TextStyle{}).Height+2
	var rows []rollRow
	switch {
	case v.GraphError != nil:
		rows = append(rows, still(para(v.GraphError.Error(), tokenFault)))
	case v.Findings == nil:
		rows = append(rows, still(para("Reading the arrows …", tokenMuted)))
	default:
		if v.Considered != "" {
			rows = append(rows, still(newProse(sizeBody, span{text: "If you let go here: ", token: tokenConfound}, span{text: v.Considered, bold: true, token: tokenConfound})))
		}
		s := subjectOf(p.d, p.chosen)
		p.lines = s.lines(p)
		rows = append(rows, p.head(s)...)
		for i := range p.lines {
			rows = append(rows, p.row(i))
		}
		rows = append(rows, p.tail(s)...)
	}
	p.fillNav()
	p.rows.fill(rows...)
	p.relight()
}

// head is what stands above the rows: the subject, and what it comes to.
func (p *readingPage) head(s *subject) []rollRow {
	title := row(10, bold(words.Upper(s.name)), space())
	if s.name == firstSubject && len(p.lines)+s.hidden > 0 {
		title.Add(p.d.toggle("open only", p.open, func(on bool) { p.open = on; p.update() }))
		if id := p.d.picked(); id != "" {
			title.Add(p.d.toggle("through "+id, p.through, func(on bool) { p.through = on; p.update() }))
		}
	}
	out := []rollRow{still(title)}
	for _, text := range s.says {
		out = append(out, still(para(text, tokenMuted)))
	}
	return out
}

// tail says what is not there.
func (p *readingPage) tail(s *subject) (out []rollRow) {
	for _, text := range s.left {
		out = append(out, still(para(text, tokenMuted)))
	}
	if s.hidden > 0 {
		out = append(out, still(para(times(s.hidden, "path is", "paths are")+" not shown here.", tokenMuted)))
	}
	if s.waiting {
		out = append(out, still(para("Still looking …", tokenMuted)))
	}
	return out
}

// fillNav lists the subjects with how much there is of each.
func (p *readingPage) fillNav() {
	var rows []rollRow
	for _, s := range subjects(p.d) {
		rows = append(rows, rollRow{
			key:   s.name,
			guess: func(float32) float32 { return p.line + 5 },
			build: func() fyne.CanvasObject { return p.subject(s) },
		})
	}
	p.nav.fill(rows...)
}

func (p *readingPage) subject(s *subject) *press {
	token := tokenInk
	count := strconv.Itoa(s.count)
	switch {
	case s.waiting && s.count == 0:
		count, token = "…", tokenMuted
	case s.count == 0:
		count, token = "–", tokenMuted
	}
	name := newLabel(words.Upper(s.name), sizeBody, token, fyne.TextStyle{}).shrinkTo(30)
	number := newLabel(count, sizeSmall, tokenMuted, fyne.TextStyle{})
	if s.alarm != "" {
		number.set(s.alarm, tokenConfound)
	}
	x := p.d.press(row(6, stretch(name), number), func(x *press) skin {
		if x.selected {
			return skin{fill: tokenTint, radius: 4}
		}
		return skin{radius: 4}
	}, func() { p.turn(s.name) })
	x.padX, x.padY, x.minH = 8, 1, p.line+5
	x.selected = s.name == p.chosen
	x.key = "read " + s.name
	x.onKey = func(key fyne.KeyName) bool {
		switch key {
		case fyne.KeyRight, fyne.KeyReturn, fyne.KeyEnter:
			p.turn(s.name)
			p.rows.focus("")
			return true
		}
		return false
	}
	x.onHover = func(in bool) {
		if in && x.focused && !x.byMouse && p.chosen != s.name {
			p.turn(s.name)
		}
	}
	return x
}

// turn shows another subject.
func (p *readingPage) turn(name string) {
	if p.chosen == name {
		return
	}
	p.chosen, p.pinned = name, ""
	p.d.editor.Point(nil)
	p.rows.scroll.ScrollToTop()
	p.update()
	p.d.trace.note(p.d)
}

// relight marks on the sheet the row that stays lit, if it is still there.
func (p *readingPage) relight() {
	if p.pinned == "" {
		return
	}
	for i := range p.lines {
		if p.lines[i].key == p.pinned {
			p.d.editor.Point(p.lines[i].mark())
			return
		}
	}
	p.pinned = ""
	p.d.editor.Point(nil)
}

// light shows on the sheet what a row is about, for as long as the pointer or
// the keyboard is on it.
func (p *readingPage) light(l *readingLine, on bool) {
	if on {
		p.d.editor.Point(l.mark())
		return
	}
	p.d.editor.Point(nil)
	p.relight()
}

// pin keeps a row lit, or lets go of it.
func (p *readingPage) pin(l *readingLine) {
	if p.pinned == l.key {
		p.pinned = ""
	} else {
		p.pinned = l.key
	}
	p.light(l, true)
	p.rows.content.Refresh()
	p.d.trace.note(p.d)
}

// navWidth is room for the longest subject beside "14 fail".
const navWidth = 256

// navLayout sets a narrow list beside a wide one.
type navLayout struct{}

func (navLayout) Layout(o []fyne.CanvasObject, s fyne.Size) {
	w := min(navWidth, 0.36*s.Width)
	place(o[0], 0, 0, w, s.Height)
	place(o[1], w, 8, 1, s.Height-16)
	place(o[2], w+1, 0, s.Width-w-1, s.Height)
}

func (navLayout) MinSize([]fyne.CanvasObject) fyne.Size { return fyne.NewSize(80, 24) }
