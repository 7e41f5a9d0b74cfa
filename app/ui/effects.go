package ui

import (
	"fmt"
	"slices"

	"fyne.io/fyne/v2"
	"fyne.io/fyne/v2/container"

	"arrowroot/app/fit"
	"arrowroot/app/words"
	"arrowroot/canvas"
	"arrowroot/canvas/draw"
	"arrowroot/compile/study"
)

// effectPage answers the question: crude, held and full model side by side,
// each with interval, level and trust; or the words of the refusal.
type effectPage struct {
	d     *desk
	pane  *pane
	seen  effectState
	asked bool
}

type effectState struct {
	result   any
	stale    bool
	question *study.Question
	running  bool
	ready    bool
	dark     bool
}

func newEffectPage(d *desk) *effectPage {
	return &effectPage{d: d, pane: newPane(16, 8, 8)}
}

func (p *effectPage) name() string               { return "Effect" }
func (p *effectPage) content() fyne.CanvasObject { return p.pane }

func (p *effectPage) update() {
	v := p.d.view
	state := effectState{v.Result, v.Stale, v.Question, v.Running, p.d.canFit(), p.d.dark()}
	if p.asked && state == p.seen {
		return
	}
	p.asked, p.seen = true, state
	r := v.Result
	if r == nil || r.Effect == nil {
		keys := make(map[string]fyne.Focusable)
		text := "Fit the rival, and the effect asked for stands here: the crude comparison, the one with what you hold held, and the full model's, side by side."
		if v.Question == nil || v.Question.Exposure == "" || v.Question.Outcome == "" {
			text = "Nothing is asked yet: name an exposure and an outcome."
		} else if v.Running {
			text = "The fit is going on."
		} else if r != nil && r.Unanswered != nil {
			text = words.Upper(r.Unanswered.Error())
		}
		objects := []fyne.CanvasObject{bold("No answer yet"), para(text, tokenMuted)}
		if !v.Running {
			b := p.d.primary("Fit", func() { p.d.commands.find("fit").run() })
			b.setDisabled(!p.d.commands.find("fit").ready())
			keys["fit"] = b
			objects = append(objects, row(0, b))
		}
		p.pane.fill(keys, objects...)
		return
	}
	e := r.Effect
	q := r.Question
	ratio := q.As == study.Ratio
	zero := 0.0
	if ratio {
		zero = 1
	}

	held := "holding " + orNone(e.Held)
	if e.HeldProposed {
		held += " (proposed)"
	}
	refusal := words.Upper(e.Refusal)
	if !e.Identified { // the headline has the reason
		refusal = "None: the effect is not identified."
	}
	cards := []card{
		{"Crude", "nothing held", e.Crude, words.Upper(e.CrudeRefusal)},
		{"Held", held, e.Adjusted, words.Upper(e.AdjustedRefusal)},
		{"Full model", "every law of the rival", e.Full, refusal},
	}
	cards = slices.DeleteFunc(cards, func(c card) bool { return c.number == nil && c.refusal == "" })
	low, high := zero, zero // all cards share one axis, so that they can be compared by eye
	for _, c := range cards {
		if n := c.number; n != nil {
			margin := 0.6 * (n.High - n.Low)
			low, high = min(low, n.Low-margin), max(high, n.High+margin)
		}
	}

	var objects []fyne.CanvasObject
	if v.Stale {
		objects = append(objects, para("This answers an earlier version of the study or of the question.", tokenConfound))
	}
	objects = append(objects, p.headline())
	for _, note := range e.Notes {
		objects = append(objects, para(note, tokenMuted))
	}
	grid := container.New(&evenLayout{gap: 12})
	for _, c := range cards {
		grid.Add(p.card(c, zero, low, high))
	}
	objects = append(objects, grid)
	objects = append(objects, p.howWrong()...)
	p.pane.fill(nil, objects...)
}

// A card is one of the three numbers, or why it is not there.
type card struct {
	title, under string
	number       *fit.Number
	refusal      string
}

func (p *effectPage) card(c card, zero, from, to float64) fyne.CanvasObject {
	objects := []fyne.CanvasObject{newProse(sizeBody, span{text: c.title, bold: true}, span{text: "  " + c.under, token: tokenMuted})}
	n := c.number
	if n == nil {
		objects = append(objects, para(c.refusal, tokenConfound))
		return stack(bordered(tokenSheet, tokenHairline, 6), padded(10, 6, 2, objects...))
	}
	style := p.d.style()
	if n.Association {
		style.Accent, style.Soft = style.Muted, draw.Alpha(style.Muted, 0.35)
	}
	curve := draw.KDE(n.Draws, 160)
	pic := canvas.NewPicture(100, 64, func(w, h float64) *draw.List {
		return draw.DensityPlot(w, h, draw.Density{Posterior: curve, Low: n.Low, High: n.High, Mark: &zero, From: from, To: to}, style)
	})
	objects = append(objects, pic, newProse(sizeBody,
		span{text: words.Number(n.Centre), bold: true},
		span{text: fmt.Sprintf("  %s: %s to %s", words.Percent(n.Level), words.Number(n.Low), words.Number(n.High))}))
	trust := n.Trust.Verdict.String()
	spans := []span{{text: words.Upper(trust), bold: true, token: verdictToken(trust)}, {text: " · " + n.Words, token: tokenMuted}}
	if n.Association {
		spans = append([]span{{text: "association, not an effect", bold: true, token: tokenConfound}, {text: " · "}}, spans...)
	}
	objects = append(objects, newProse(sizeSmall, spans...))
	return stack(bordered(tokenSheet, tokenHairline, 6), padded(10, 6, 2, objects...))
}

// verdictToken is the colour of a verdict on a computation.
func verdictToken(trust string) fyne.ThemeColorName {
	switch trust {
	case "caution":
		return tokenConfound
	case "unusable":
		return tokenFault
	}
	return tokenAction
}

// headline is the answer in one sentence, as the report says it.
func (p *effectPage) headline() fyne.CanvasObject {
	v := p.d.view
	lines := words.Effect(v.Study, v.Result)
	token := tokenInk
	if v.Result.Effect.Headline() == nil {
		token = tokenConfound
	}
	spans := []span{{text: lines[0], bold: true, token: token}}
	if v.Result.Effect.Headline() == nil {
		return newProse(sizeBody, spans...)
	}
	word, tone := p.d.trustWords()
	spans = append(spans, span{text: "  " + word + ".", bold: true, token: tone}, span{text: "  If the arrows drawn and not drawn are right.", token: tokenMuted})
	return newProse(sizeBody, spans...)
}

// evenLayout gives its objects equal widths side by side, or stacks them where
// they would be too narrow.
type evenLayout struct{ gap float32 }

const (
	evenLeast = 190
	evenMost  = 460
)

func (l *evenLayout) columns(n int, width float32) int {
	for n > 1 && (width-l.gap*float32(n-1))/float32(n) < evenLeast {
		n--
	}
	return n
}

func (l *evenLayout) each(objects []fyne.CanvasObject, width float32, f func(o fyne.CanvasObject, x, y, w, h float32)) float32 {
	n := l.columns(len(objects), width)
	if n == 0 {
		return 0
	}
	w := min((width-l.gap*float32(n-1))/float32(n), evenMost)
	y := float32(0)
	for i := 0; i < len(objects); i += n {
		line := objects[i:min(i+n, len(objects))]
		h := float32(0)
		for _, o := range line {
			h = max(h, stackHeight(o, w))
		}
		for j, o := range line {
			f(o, float32(j)*(w+l.gap), y, w, h)
		}
		y += h + l.gap
	}
	return y - l.gap
}

// stackHeight is the height of a stack for a width: that of its tallest part.
func stackHeight(o fyne.CanvasObject, w float32) float32 {
	c, ok := o.(*fyne.Container)
	if !ok {
		return heightFor(o, w)
	}
	h := float32(0)
	for _, part := range c.Objects {
		h = max(h, heightFor(part, w))
	}
	return h
}

func (l *evenLayout) heightFor(objects []fyne.CanvasObject, width float32) float32 {
	return l.each(objects, width, func(fyne.CanvasObject, float32, float32, float32, float32) {})
}

func (l *evenLayout) Layout(objects []fyne.CanvasObject, s fyne.Size) {
	l.each(objects, s.Width, place)
}

func (l *evenLayout) MinSize(objects []fyne.CanvasObject) fyne.Size {
	return fyne.NewSize(evenLeast, l.heightFor(objects, evenLeast))
}
