package ui

import (
	"fmt"
	"strings"

	"fyne.io/fyne/v2"

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
	actions  []*press
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
	s.object = row(10, gapOf(2, 1), s.capsule, s.icon.object, stretch(s.says), s.rows, s.trust, s.fit, s.paint, gapOf(2, 1))
	return s
}

func (s *strip) update() {
	v := s.d.view
	s.capsule.minW = 0
	s.question.set(s.ask(v.Question)...)
	s.capsule.minW = s.width(s.question.spans) + 2*s.capsule.padX + 2

	mark, token, tone := iconAsk, tokenMuted, tokenMuted
	sentence := "Nothing is asked yet: name an exposure and an outcome."
	s.actions = nil
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
		case causal.NoEffect:
			token = tokenInk
		default:
			mark, token, tone = iconWarn, tokenInk, tokenConfound
		}
		if r.Verdict.HasProposal {
			ids := s.d.names(r.Verdict.Propose)
			label := proposal(ids)
			if r.Verdict.Kind == causal.Confounded && len(ids) > 0 { // the sentence has the names
				label = "Hold them"
				if len(ids) == 1 {
					label = "Hold it"
				}
			}
			chip := s.d.chip(label, r.Verdict.Kind != causal.Readable, func() { s.d.holdAll(ids) })
			chip.key, chip.tip = "hold them", "Hold "+orNone(ids)
			s.actions = append(s.actions, chip)
		}
	}
	s.icon.set(mark, tone)
	first, rest, more := strings.Cut(strings.ReplaceAll(sentence, "*", ""), ". ")
	spans := []span{{text: first, bold: true, token: token}}
	if more {
		spans[0].text += "."
		spans = append(spans, span{text: " " + rest, token: token})
	}
	for _, a := range s.actions {
		spans = append(spans, span{text: "  "}, span{object: a})
	}
	s.says.set(spans...)

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
	s.object.Refresh()
	s.object.Layout.Layout(s.object.Objects, s.object.Size())
}

// width is that of spans in one line.
func (s *strip) width(spans []span) float32 {
	w := float32(0)
	for _, x := range spans {
		w += fyne.MeasureText(x.text, sizeBody, x.style()).Width
	}
	return w + 1
}

// ask is the question in words; empty places show as boxes.
func (s *strip) ask(q *study.Question) []span {
	if q == nil {
		q = &study.Question{}
	}
	box := func(id string) span {
		if id == "" {
			return span{text: "▢", token: tokenMuted}
		}
		return span{text: id, bold: true}
	}
	spans := []span{{text: "Effect of ", token: tokenMuted}, box(q.Exposure), {text: " on ", token: tokenMuted}, box(q.Outcome)}
	tail := words.Change(s.d.view.Study, q)
	if tail != "" && s.object.Size().Width > 1000 {
		spans = append(spans, span{text: "   " + tail, token: tokenMuted})
	}
	return append(spans, span{text: "  ▾", token: tokenMuted})
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
	word, token := "Sound", tokenAction
	switch v.Result.Trust().Verdict.String() {
	case "caution":
		word, token = "Caution", tokenConfound
	case "unusable":
		word, token = "Unusable", tokenFault
	}
	if v.Stale {
		return word + " · stale", tokenMuted
	}
	return word, token
}
