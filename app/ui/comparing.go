package ui

import (
	"fmt"

	"fyne.io/fyne/v2"
	"fyne.io/fyne/v2/container"

	"arrowroot/app/words"
	"arrowroot/canvas/scene"
	"arrowroot/compile/causal"
	"arrowroot/compile/study"
)

// rivalsPage sets the rivals side by side: which arrows differ from the one on
// the sheet, what each of them answers, and which predicts better.
type rivalsPage struct {
	d     *desk
	pane  *pane
	seen  comparingState
	asked bool
}

type comparingState struct {
	study   *study.Study
	rival   *study.Rival
	asked   *study.Question
	results int
	result  any
	stale   string
	predict predictionState
}

func newRivalsPage(d *desk) *rivalsPage { return &rivalsPage{d: d, pane: newPane(16, 8, 8)} }

func (p *rivalsPage) name() string               { return "Rivals" }
func (p *rivalsPage) content() fyne.CanvasObject { return p.pane }

func (p *rivalsPage) update() {
	v := p.d.view
	state := comparingState{v.Study, v.Rival, v.Question, len(v.Results), v.Result, fmt.Sprint(v.StaleResults), p.predictionState()}
	if p.asked && state == p.seen {
		return
	}
	p.asked, p.seen = true, state
	keys := make(map[string]fyne.Focusable)
	if len(v.Study.Rivals) < 2 {
		b := p.d.plain("Copy this rival", func() { p.d.commands.find("copy-rival").run() })
		keys["copy"] = b
		p.pane.fill(keys, bold("Only one explanation so far"),
			para("Copy it, change what another explanation would draw differently, and both stand here side by side: which arrows differ, and what each answers.", tokenMuted), row(0, b))
		return
	}
	grid := container.New(&evenLayout{gap: 12})
	for _, r := range v.Study.Rivals {
		grid.Add(p.card(r, keys))
	}
	p.pane.fill(keys, append([]fyne.CanvasObject{grid}, p.prediction(keys)...)...)
}

func (p *rivalsPage) card(r *study.Rival, keys map[string]fyne.Focusable) fyne.CanvasObject {
	d, v := p.d, p.d.view
	here := r == v.Rival
	title := row(8, stretch(bold(r.Name).shrinkTo(40)))
	if here {
		title.Add(small("on the sheet"))
	} else {
		b := d.quiet("Show", func() { d.session.ShowRival(r.Name) })
		keys["show "+r.Name] = b
		title.Add(b)
	}
	objects := []fyne.CanvasObject{title}
	if r.Note != "" {
		objects = append(objects, para(r.Note, tokenMuted))
	}
	if !here {
		objects = append(objects, p.differences(r)...)
	}
	objects = append(objects, p.verdict(r)...)
	edge := tokenHairline
	if here {
		edge = tokenAction
	}
	return stack(bordered(tokenSheet, edge, 6), padded(10, 8, 4, objects...))
}

func (p *rivalsPage) differences(r *study.Rival) []fyne.CanvasObject {
	v := p.d.view
	diff, ok := compare(v.Study, v.Rival, r)
	if !ok {
		return []fyne.CanvasObject{para("Its arrows close a cycle.", tokenFault)}
	}
	turned := make(map[[2]string]bool)
	var objects []fyne.CanvasObject
	say := func(sign, text string) {
		objects = append(objects, newProse(sizeBody, span{text: sign + " ", bold: true}, span{text: text}))
	}
	for _, a := range diff.Reversed {
		turned[a], turned[[2]string{a[1], a[0]}] = true, true
		say("⇄", a[0]+" → "+a[1]+" is turned round")
	}
	for _, a := range diff.OnlyB {
		if !turned[a] {
			say("+", a[0]+" → "+a[1])
		}
	}
	for _, a := range diff.OnlyA {
		if !turned[a] {
			say("−", a[0]+" → "+a[1])
		}
	}
	for _, a := range diff.ArcsOnlyB {
		say("+", a[0]+" ↔ "+a[1])
	}
	for _, a := range diff.ArcsOnlyA {
		say("−", a[0]+" ↔ "+a[1])
	}
	for _, id := range diff.NodesOnlyB {
		say("+", id)
	}
	for _, id := range diff.NodesOnlyA {
		say("−", id)
	}
	if len(objects) == 0 {
		objects = append(objects, para("The same arrows as "+v.Rival.Name+"; only laws can differ.", tokenMuted))
	}
	return objects
}

// verdict is what a rival's reading and last result say.
func (p *rivalsPage) verdict(r *study.Rival) []fyne.CanvasObject {
	v := p.d.view
	var objects []fyne.CanvasObject
	if reading := readRival(v.Study, r, v.Question); reading != nil && reading.Verdict.Sentence != "" {
		objects = append(objects, gapOf(1, 2), markedProse(reading.Verdict.Sentence, tokenInk))
	}
	result := v.Results[r.Name]
	if result == nil || result.Effect == nil {
		return append(objects, small("not fitted yet"))
	}
	stale := ""
	if v.StaleResults[r.Name] {
		stale = " · of an earlier version"
	}
	n := result.Effect.Headline()
	if n == nil {
		text := result.Effect.Refusal
		if text == "" {
			text = "laws disagree: no number is headlined"
		}
		return append(objects, para(words.Upper(text)+stale, tokenConfound))
	}
	trust := n.Trust.Verdict.String()
	return append(objects, newProse(sizeBody,
		span{text: words.Number(n.Centre), bold: true},
		span{text: fmt.Sprintf("  %s: %s to %s", words.Percent(n.Level), words.Number(n.Low), words.Number(n.High))},
		span{text: " · "}, span{text: trust, bold: true, token: verdictToken(trust)},
		span{text: stale, token: tokenConfound}))
}

// readRival reads the question on a rival's arrows; nil where there is no graph
// or nothing is asked.
func readRival(s *study.Study, r *study.Rival, q *study.Question) *causal.Reading {
	g, err := s.Graph(r.Name)
	if err != nil || q == nil {
		return nil
	}
	query := causal.Query{Exposure: g.Index(q.Exposure), Outcome: g.Index(q.Outcome)}
	for _, id := range q.Held {
		if v := g.Index(id); v >= 0 {
			query.Held = append(query.Held, v)
		} else if p := g.Plate(id); p >= 0 {
			query.Within = append(query.Within, p)
		}
	}
	return causal.Read(g, query)
}

// chooseArrow picks one arrow.
func (d *desk) chooseArrow(from, to string) {
	d.choose(scene.Selection{Arrows: [][2]string{{from, to}}})
}
