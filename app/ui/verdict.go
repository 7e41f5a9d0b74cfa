package ui

import (
	"fmt"
	"strings"

	"fyne.io/fyne/v2"
	"fyne.io/fyne/v2/container"

	"arrowroot/app/findings"
	"arrowroot/app/words"
	"arrowroot/compile/causal"
	"arrowroot/compile/study"
)

// strip is the verdict strip: the question as a capsule, the answer to "can I
// read this off my data?" with its action, rows used, trust, Fit and Paint.
type strip struct {
	d        *desk
	object   *fyne.Container
	capsule  *press
	question *prose
	icon     *icon
	says     *prose
	action   *press // what the sentence proposes
	propose  func() // what it does; nil = nothing is proposed
	label    *label // of the action
	amber    bool   // the action mends a confounded comparison
	rows     *label
	trust    *label
	fit      *press
	fitWords *label
	paint    *press
}

func newStrip(d *desk) *strip {
	s := &strip{d: d}
	s.question = newProse(sizeBody)
	s.capsule = d.press(s.question, func(p *press) skin {
		return skin{fill: tokenSheet, edge: tokenBorder, width: 1, radius: 15}
	}, func() { d.commands.find("question").run() })
	s.capsule.padX, s.capsule.padY = 14, 5
	s.capsule.tip = "Ask for another effect   Ctrl+E"
	s.capsule.key = "question"
	d.capsule = s.capsule
	s.icon = newIcon(iconAsk, tokenMuted, 18)
	s.says = newProse(sizeBody)
	s.rows = small("")
	s.trust = newLabel("", sizeBody, tokenAction, fyne.TextStyle{Bold: true})
	s.fit = d.primary("Fit", func() { d.commands.find("fit").run() })
	s.fit.minW = 78
	s.fitWords = s.fit.content.(*label)
	s.paint = d.plain("Paint ▾", func() { d.commands.find("paint").run() })
	d.painter = s.paint
	s.says.lines = 2
	s.label = newLabel("", sizeBody, tokenConfound, fyne.TextStyle{Bold: true})
	s.action = d.press(s.label, func(p *press) skin {
		text, fill := tokenAction, tokenTint
		if s.amber {
			text, fill = tokenConfound, tokenAmberTint
		}
		s.label.token = text
		return skin{fill: fill, edge: text, width: 1, radius: 11}
	}, func() { s.propose() })
	s.action.padX, s.action.padY = 10, 2
	s.action.key = "hold them"
	s.object = container.New(stripLayout{s}, s.capsule, s.icon.object, s.says, s.action, s.rows, s.trust, s.fit, s.paint)
	return s
}

func (s *strip) update() {
	v := s.d.view
	mark, token, tone := iconAsk, tokenMuted, tokenMuted
	sentence := "Nothing is asked yet: name an exposure and an outcome."
	s.propose = nil
	switch r := v.Reading; {
	case v.GraphError != nil:
		mark, token, tone, sentence = iconWarn, tokenFault, tokenFault, v.GraphError.Error()
	case r == nil:
	default:
		sentence = r.Verdict.Sentence
		switch r.Verdict.Kind {
		case causal.Readable:
			mark, token, tone = iconGood, tokenInk, tokenAction
		case causal.Incomplete:
			q := v.Question
			switch off := s.d.askedOffSheet(); {
			case len(off) > 0:
				sentence = "The question cannot be read here: " + words.List(off) + " must stand on the sheet."
			case q != nil && q.Exposure != "" && q.Outcome == "":
				sentence = "What does " + q.Exposure + " act on? Pick the outcome and press Y."
			case q != nil && q.Outcome != "" && q.Exposure == "":
				sentence = "What acts on " + q.Outcome + "? Pick the exposure and press X."
			}
		case causal.NoEffect:
			token = tokenInk
		default:
			mark, token, tone = iconWarn, tokenInk, tokenConfound
		}
		if r.Verdict.HasProposal {
			ids := r.Proposed()
			s.label.text = proposal(ids)
			if r.Verdict.Kind == causal.Confounded && len(ids) > 0 && len(r.Query.Held) == 0 { // the sentence has the names
				s.label.text = "Hold them"
				if len(ids) == 1 {
					s.label.text = "Hold it"
				}
			}
			s.amber = r.Verdict.Kind != causal.Readable
			s.propose = func() { s.d.holdAll(ids) }
			s.action.tip = "Hold " + orNone(ids)
		} else if r.Verdict.Kind == causal.NoSet {
			s.label.text, s.amber = "Other ways", true
			s.propose = func() { s.d.drawer.read(findings.BeyondSection) }
			s.action.tip = "Look for what gives the effect without holding enough"
		}
	}
	s.icon.set(mark, tone)
	first, rest, more := strings.Cut(strings.ReplaceAll(sentence, "*", ""), ". ")
	spans := []span{{text: first, bold: true, token: token}}
	if more {
		spans[0].text += "."
		spans = append(spans, span{text: " " + rest, token: token})
	}
	s.says.spans = spans
	show(s.propose != nil, s.action)
	s.action.Refresh()

	s.rows.set("", tokenMuted)
	if m := v.Model; m != nil && m.Rows.Read > 0 {
		s.rows.set(fmt.Sprintf("%s of %s rows", count(m.Rows.Used), count(m.Rows.Read)), tokenMuted)
	}
	s.trust.set(s.d.trustWords())
	switch {
	case v.Running:
		s.fitWords.text = "Stop"
	case v.Result != nil:
		s.fitWords.text = "Fit again"
	default:
		s.fitWords.text = "Fit"
	}
	s.fit.tip = s.d.commands.find("fit").tip()
	s.fit.setDisabled(!s.d.commands.find("fit").ready())
	s.fit.Refresh()
	s.paint.setDisabled(v.Result == nil)
	s.object.Layout.Layout(s.object.Objects, s.object.Size())
	s.object.Refresh()
}

// askedOffSheet are the ends of the question that this rival does not show.
func (d *desk) askedOffSheet() []string {
	q := d.view.Question
	if q == nil {
		return nil
	}
	var off []string
	for _, id := range []string{q.Exposure, q.Outcome} {
		if id != "" && !d.onSheet(id) {
			off = append(off, id)
		}
	}
	return off
}

// stripLayout sets the strip in one line, or in a narrow window in two: the
// question with the buttons, then the verdict.
type stripLayout struct{ s *strip }

const stripLine float32 = 46

// stripHeight is the height of the strip in a window of a given width.
func stripHeight(width float32) float32 {
	if width < roomyWidth {
		return stripLine + 38
	}
	return stripLine
}

func (l stripLayout) Layout(_ []fyne.CanvasObject, size fyne.Size) {
	s := l.s
	const gap, edge = 10, 12
	narrow := size.Width < roomyWidth
	for _, most := range []int{1000, 32, 20, 12} { // names give way to the verdict
		s.question.spans = s.ask(s.d.view.Question, size.Width > 760, most)
		if s.width(s.question.spans) < 0.45*size.Width {
			break
		}
	}
	s.question.Refresh()

	// The right end, from the edge inwards.
	x := size.Width - edge
	for _, o := range []fyne.CanvasObject{s.paint, s.fit, s.trust, s.rows} {
		m := o.MinSize()
		if m.Width < 1 {
			continue
		}
		x -= m.Width
		place(o, x, (stripLine-m.Height)/2, m.Width, m.Height)
		x -= gap
	}
	w := min(s.width(s.question.spans)+2*s.capsule.padX+2, x-edge)
	h := s.capsule.HeightFor(w)
	place(s.capsule, edge, (stripLine-h)/2, w, h)

	// The sentence with its action behind it, or at the end if it needs the room.
	left, right, middle := edge+w+gap, x, stripLine/2
	if narrow {
		left, right, middle = edge, size.Width-edge, stripLine+16
	}
	place(s.icon.object, left, middle-9, 18, 18)
	left += 18 + 8
	if s.propose != nil {
		m := s.action.MinSize()
		right -= m.Width + gap
		place(s.action, min(left+s.width(s.says.spans)+gap, right+gap), middle-m.Height/2, m.Width, m.Height)
	}
	s.says.size = sizeBody
	if !narrow && s.width(s.says.spans) > 1.9*(right-left) {
		s.says.size = sizeSmall
	}
	h = s.says.HeightFor(right - left)
	place(s.says, left, middle-h/2, right-left, h)
	s.says.Refresh()
}

func (l stripLayout) MinSize([]fyne.CanvasObject) fyne.Size { return fyne.NewSize(400, stripLine) }

// width is that of spans in one line.
func (s *strip) width(spans []span) float32 {
	w := float32(0)
	for _, x := range spans {
		w += fyne.MeasureText(x.text, sizeBody, x.style()).Width
	}
	return w + 1
}

// ask is the question in words; empty places show as boxes.
func (s *strip) ask(q *study.Question, all bool, most int) []span {
	if q == nil {
		q = &study.Question{}
	}
	box := func(id string) span {
		if id == "" {
			return span{text: "▢", token: tokenMuted}
		}
		return span{text: shortened(id, most), bold: true}
	}
	spans := []span{{text: "Effect of ", token: tokenMuted}, box(q.Exposure), {text: " on ", token: tokenMuted}, box(q.Outcome)}
	tail := words.Change(s.d.view.Study, q)
	if asides := words.Asides(s.d.view.Study, q); len(asides) > 0 && all {
		tail = strings.TrimPrefix(tail+" · "+shortened(strings.Join(asides, " · "), 44), " · ")
	}
	if tail != "" && all {
		spans = append(spans, span{text: "   " + tail, token: tokenMuted})
	}
	return append(spans, span{text: "  ▾", token: tokenMuted})
}

// shortened cuts a text after so many letters.
func shortened(text string, most int) string {
	if r := []rune(text); len(r) > most {
		return strings.TrimRight(string(r[:most]), " ") + "…"
	}
	return text
}

func settingWords(s *study.Setting) string {
	if s.Word != "" {
		return s.Word
	}
	return words.Given(s.Number)
}

// proposal is the words of the action: long sets are shortened.
func proposal(ids []string) string {
	switch {
	case len(ids) == 0:
		return "Hold nothing"
	case len(ids) <= 2:
		return "Hold " + words.List(ids)
	}
	return fmt.Sprintf("Hold %s, %s +%d", ids[0], ids[1], len(ids)-2)
}

// trustWords is the verdict on the computation that is shown, and its colour.
func (d *desk) trustWords() (string, fyne.ThemeColorName) {
	v := d.view
	if v.Result == nil {
		return "", tokenMuted
	}
	trust := v.Result.Trust().Verdict.String()
	if v.Stale {
		return words.Upper(trust) + " · stale", tokenMuted
	}
	return words.Upper(trust), verdictToken(trust)
}
