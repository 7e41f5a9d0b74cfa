package ui

import (
	"strings"

	"fyne.io/fyne/v2"

	"arrowroot/compile/model"
	"arrowroot/compile/study"
)

// statementPage prints the model as a methods section would.
type statementPage struct {
	d     *desk
	pane  *pane
	typed bool // the form that can be typed instead of the mathematical one
	seen  *model.Statement
	rival *study.Rival
	asked bool
	shown bool
}

func newStatementPage(d *desk) *statementPage {
	return &statementPage{d: d, pane: newPane(18, 10, 3)}
}

func (p *statementPage) name() string               { return "Statement" }
func (p *statementPage) content() fyne.CanvasObject { return p.pane }

func (p *statementPage) update() {
	v := p.d.view
	if p.asked && v.Statement == p.seen && v.Rival == p.rival && p.shown == p.typed {
		return
	}
	p.asked, p.seen, p.rival, p.shown = true, v.Statement, v.Rival, p.typed
	if v.Statement == nil {
		p.pane.fill(nil, bold("No statement yet"), para(p.why(), tokenMuted))
		return
	}
	keys := make(map[string]fyne.Focusable)
	maths := p.d.toggle("in symbols", !p.typed, func(bool) { p.typed = false; p.update() })
	typed := p.d.toggle("as typed", p.typed, func(bool) { p.typed = true; p.update() })
	copied := p.d.plain("Copy", func() {
		p.d.app.Clipboard().SetContent(statementText(v.Statement, p.typed))
		p.d.notice("The statement is on the clipboard")
	})
	keys["maths"], keys["typed"], keys["copy"] = maths, typed, copied
	objects := []fyne.CanvasObject{row(8, stretch(bold("The model of “"+v.Rival.Name+"”").shrinkTo(60)), maths, typed, copied), gapOf(1, 4)}
	if p.typed {
		for _, line := range v.Statement.Typed {
			t := newProse(sizeBody, span{text: line, mono: true})
			t.hang = 24
			objects = append(objects, t)
		}
		p.pane.fill(keys, objects...)
		return
	}
	left := p.column()
	for _, line := range v.Statement.Lines {
		objects = append(objects, p.line(line, left)...)
	}
	p.pane.fill(keys, objects...)
}

func (p *statementPage) why() string {
	for _, x := range p.d.view.Problems {
		if x.Stops {
			return x.Message
		}
	}
	return "It shows as soon as the sheet has variables with their arrows."
}

// column is the width that the left sides take, so that the signs line up.
func (p *statementPage) column() float32 {
	w := float32(0)
	for _, l := range p.d.view.Statement.Lines {
		if l.Sign != "" {
			w = max(w, fyne.MeasureText(l.Left, sizeBody, fyne.TextStyle{}).Width)
		}
	}
	return min(w+6, 240)
}

func (p *statementPage) line(l model.Line, left float32) []fyne.CanvasObject {
	switch {
	case l.Kind == model.Heading:
		return []fyne.CanvasObject{gapOf(1, 5), newLabel(l.Right, sizeBody, tokenMuted, fyne.TextStyle{})}
	case l.Sign == "":
		text := l.Right
		if l.Left != "" {
			text = l.Left + " " + l.Right
		}
		return []fyne.CanvasObject{gapOf(1, 2), para(text, tokenMuted)}
	}
	bolded := l.Kind == model.LawLine
	right := newProse(sizeBody, span{text: l.Right})
	if l.Reason != "" {
		right = newProse(sizeBody, span{text: l.Right}, span{text: "    " + l.Reason, token: tokenMuted})
	}
	right.hang = 18
	name := newLabel(l.Left, sizeBody, tokenInk, fyne.TextStyle{Bold: bolded}).shrinkTo(20)
	return []fyne.CanvasObject{topRow(6, gapOf(12, 1), fixed(left, 19, name), fixed(12, 19, newLabel(l.Sign, sizeBody, tokenMuted, fyne.TextStyle{}).centered()), stretch(right))}
}

// statementText is the statement for the clipboard.
func statementText(s *model.Statement, typed bool) string {
	if typed {
		return strings.Join(s.Typed, "\n") + "\n"
	}
	var b strings.Builder
	for _, l := range s.Lines {
		switch {
		case l.Kind == model.Heading:
			b.WriteString(l.Right)
		case l.Sign == "":
			b.WriteString(strings.TrimSpace(l.Left + " " + l.Right))
		default:
			b.WriteString("  " + l.Left + " " + l.Sign + " " + l.Right)
		}
		if l.Reason != "" {
			b.WriteString("    (" + l.Reason + ")")
		}
		b.WriteString("\n")
	}
	return b.String()
}
