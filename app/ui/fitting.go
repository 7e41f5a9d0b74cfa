package ui

import (
	"fmt"
	"math"
	"time"

	"fyne.io/fyne/v2"
	"fyne.io/fyne/v2/container"

	"arrowroot/app/words"
)

// fitPage shows a fit as it goes on, and what it gave: a line for each
// quantity, the trust verdict with its reasons, the rows used.
type fitPage struct {
	d        *desk
	pane     *pane
	notes    *pane
	split    fyne.CanvasObject
	seen     fitState
	opened   bool
	controls bool // the coefficients that the question does not ask about are unfolded
}

type fitState struct {
	running   bool
	step      int
	result    any
	stale     bool
	err       error
	model     any
	problems  int
	canceling bool
	ready     bool
}

func newFitPage(d *desk) *fitPage {
	p := &fitPage{d: d, pane: newPane(14, 8, 0), notes: newPane(16, 8, 5)}
	p.split = container.New(&splitLayout{share: 0.66}, p.pane, hairline(), p.notes)
	return p
}

func (p *fitPage) name() string               { return "Fit" }
func (p *fitPage) content() fyne.CanvasObject { return p.split }

func (p *fitPage) update() {
	v := p.d.view
	state := fitState{running: v.Running, step: v.Progress.Done, result: v.Result, stale: v.Stale, err: v.FitError, model: v.Model, problems: len(v.Problems), canceling: v.Progress.Cancelling, ready: p.d.canFit()}
	if p.opened && state == p.seen {
		return
	}
	tableStands := p.opened && state.result == p.seen.result && state.stale == p.seen.stale && v.Result != nil
	p.opened, p.seen = true, state
	if !tableStands {
		p.table()
	}
	p.report()
}

// Widths of the table's columns: centre, spread, interval, R-hat, ESS.
var quantityColumns = []float32{54, 54, 116, 44, 92}

func quantityRow(name fyne.CanvasObject, cells [5]string, token fyne.ThemeColorName) fyne.CanvasObject {
	objects := []fyne.CanvasObject{stretch(name)}
	for i, c := range cells {
		objects = append(objects, fixed(quantityColumns[i], 19, newLabel(c, sizeBody, token, fyne.TextStyle{}).flushRight()))
	}
	return row(6, objects...)
}

func (p *fitPage) table() {
	v := p.d.view
	if v.Result == nil || v.Result.Full == nil {
		p.pane.fill(nil, bold("Not fitted yet"),
			para("A fit draws from the posterior of every quantity of this rival, and answers the question with its interval. It goes on behind the window; you can keep drawing.", tokenMuted))
		return
	}
	level := 0.9
	var asked, controls, rows []fyne.CanvasObject // what the question is about comes first
	hidden := 0
	labels := p.d.coefficients(v.Result.Full.Model)
	for _, q := range v.Result.Full.Quantities {
		level = q.Level
		if q.Constant {
			continue
		}
		if len(asked)+len(controls)+len(rows) >= 300 {
			hidden++
			continue
		}
		token := tokenInk
		if trust := q.Trust.Verdict.String(); trust != "sound" {
			token = verdictToken(trust)
		}
		label := labels[q.Parameter]
		name := newLabel(q.Symbol, sizeBody, token, fyne.TextStyle{}).shrinkTo(40)
		line := quantityRow(name, [5]string{
			words.Number(q.Centre), words.Number(q.Spread), words.Number(q.Low) + " to " + words.Number(q.High),
			rhat(q.RHat), words.Number(math.Round(q.BulkESS)) + " · " + words.Number(math.Round(q.TailESS)),
		}, token)
		if label.Words != "" {
			line = column(0, line, newProse(sizeSmall, span{text: label.Words, token: tokenMuted}))
		}
		switch {
		case label.Control:
			controls = append(controls, line)
		case label.Words != "":
			asked = append(asked, line)
		default:
			rows = append(rows, line)
		}
	}
	head := quantityRow(small("quantity"), [5]string{"centre", "spread", words.Percent(level) + " interval", "R-hat", "ESS bulk · tail"}, tokenMuted)
	objects := append([]fyne.CanvasObject{head, hairline(), gapOf(1, 2)}, asked...)
	keys := make(map[string]fyne.Focusable)
	if len(controls) > 0 {
		says := "Show " + times(len(controls), "coefficient", "coefficients") + " that the question does not ask about"
		if p.controls {
			says = "Fold away what the question does not ask about"
		}
		fold := p.d.quiet(says, func() { p.controls = !p.controls; p.table() })
		keys["controls"] = fold
		objects = append(objects, row(0, fold))
		if p.controls {
			objects = append(objects, controls...)
		}
		objects = append(objects, gapOf(1, 4))
	}
	objects = append(objects, rows...)
	if hidden > 0 {
		objects = append(objects, small(fmt.Sprintf("and %d more", hidden)))
	}
	p.pane.fill(keys, objects...)
}

func rhat(x float64) string {
	if math.IsNaN(x) {
		return "–"
	}
	return fmt.Sprintf("%.3f", x)
}

// report is the right side: progress while it runs, the verdict afterwards.
func (p *fitPage) report() {
	d, v := p.d, p.d.view
	keys := make(map[string]fyne.Focusable)
	var objects []fyne.CanvasObject
	if v.Running {
		g := v.Progress
		stage := "Drawing"
		if g.Warming {
			stage = "Warming up"
		}
		stop := d.plain("Stop", func() { d.commands.find("stop").run() })
		stop.setDisabled(g.Cancelling)
		keys["stop"] = stop
		share := float32(0)
		if g.Total > 0 {
			share = float32(g.Done) / float32(g.Total)
		}
		objects = append(objects,
			row(8, bold(stage), space(), stop),
			newGauge(share),
			para(progressWords(g.Done, g.Total, g.Left, g.Cancelling), tokenMuted))
		if g.Worst != "" {
			objects = append(objects, para(fmt.Sprintf("Least precise so far: %s, %s of %s effective draws.", g.Worst, words.Number(math.Round(g.WorstESS)), words.Number(g.TargetESS)), tokenMuted))
		}
		if g.Divergent > 0 {
			objects = append(objects, para(times(g.Divergent, "draw has", "draws have")+" diverged.", tokenConfound))
		}
		objects = append(objects, para("Stop keeps the draws made so far.", tokenMuted))
	} else if v.FitError != nil {
		objects = append(objects, bold("The fit did not finish"), para(v.FitError.Error(), tokenFault))
	}
	if r := v.Result; r != nil && r.Full != nil {
		if len(objects) > 0 {
			objects = append(objects, gapOf(1, 4))
		}
		word, token := d.trustWords()
		objects = append(objects, newLabel(word, sizeTitle, token, fyne.TextStyle{Bold: true}))
		trust := r.Trust()
		if len(trust.Reasons) == 0 {
			objects = append(objects, para("The chains agree, there are draws enough for every number shown, and none diverged.", tokenMuted))
		}
		for _, reason := range trust.Reasons {
			objects = append(objects, newProse(sizeBody, span{text: "· " + reason}))
		}
		if v.Stale {
			objects = append(objects, para("The study has changed since: this belongs to an earlier version.", tokenConfound))
		}
		if r.Cut {
			objects = append(objects, para("The run was stopped; its draws were kept.", tokenMuted))
		}
		objects = append(objects, para(fmt.Sprintf("%s × %s draws, seed %d, %s.", times(len(r.Full.Chains), "chain", "chains"), count(r.Full.Steps()), r.Seed, r.Took.Round(time.Second/10)), tokenMuted))
	}
	if m := v.Model; m != nil && m.Rows.Read > 0 {
		objects = append(objects, gapOf(1, 3), para("Rows used: "+words.Rows(m.Rows)+".", tokenMuted))
	}
	if !v.Running && v.Result == nil {
		b := d.primary("Fit", func() { d.commands.find("fit").run() })
		b.setDisabled(!d.commands.find("fit").ready())
		keys["fit"] = b
		objects = append(objects, row(0, b))
		for _, x := range v.Problems {
			if x.Stops {
				objects = append(objects, para(x.Message, tokenFault))
				break
			}
		}
	}
	p.notes.fill(keys, objects...)
}

func progressWords(done, total int, left time.Duration, stopping bool) string {
	switch {
	case stopping:
		return "Stopping …"
	case left > 90*time.Second:
		return fmt.Sprintf("about %.0f minutes left", math.Ceil(left.Minutes()))
	case left > 0:
		return "about " + times(int(math.Ceil(left.Seconds())), "second", "seconds") + " left"
	case total > 0:
		return percent(float64(done)/float64(total)) + " done"
	}
	return "starting"
}
