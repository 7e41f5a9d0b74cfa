package ui

import (
	"errors"
	"fmt"
	"math"

	"fyne.io/fyne/v2"

	"arrowroot/app/fit"
	"arrowroot/app/paint"
	"arrowroot/app/session"
	"arrowroot/app/words"
	"arrowroot/canvas"
	"arrowroot/canvas/draw"
)

// predictionState is what the part of the Rivals page about prediction shows.
type predictionState struct {
	comparison *fit.Comparison
	err        error
	stale      bool
	running    bool
	doing      string
	able       bool
}

func (p *rivalsPage) predictionState() predictionState {
	x := p.d.view.Prediction
	s := predictionState{comparison: x.Comparison, err: x.Error, stale: x.Stale, running: x.Running, able: p.d.canCompare()}
	if x.Running {
		s.doing = comparingWords(x)
	}
	return s
}

// canCompare reports whether rivals can be asked to predict.
func (d *desk) canCompare() bool {
	v := d.view
	return v.Table != nil && v.Question != nil && v.Question.Outcome != "" && len(v.Study.Rivals) > 1
}

// comparingShare is how much of a comparison is done.
func comparingShare(x session.Prediction) float64 {
	within := 0.0
	if x.Progress.Within.Total > 0 {
		within = float64(x.Progress.Within.Done) / float64(x.Progress.Within.Total)
	}
	return (float64(x.Progress.Done) + within) / math.Max(1, float64(x.Progress.Of))
}

func comparingWords(x session.Prediction) string {
	if x.Progress.Doing == "" {
		return "Looking at the rivals"
	}
	return fmt.Sprintf("%s, rival %d of %d, %d %%", words.Upper(x.Progress.Doing), x.Progress.Done+1, x.Progress.Of, int(100*comparingShare(x)))
}

// prediction sets the rivals against each other by how well they predict the
// question's outcome.
func (p *rivalsPage) prediction(keys map[string]fyne.Focusable) []fyne.CanvasObject {
	d, x := p.d, p.d.view.Prediction
	objects := []fyne.CanvasObject{gapOf(1, 6), bold("Which of them predicts better?")}
	says := "Compare by prediction"
	if x.Comparison != nil {
		says = "Compare again"
	}
	button := d.plain(says, func() { d.session.Compare() })
	button.tip = "Fit every rival and score how well it predicts what it has not seen"
	if x.Running {
		button = d.plain("Stop comparing", d.session.StopCompare)
		button.tip = "The last comparison stays"
	}
	keys["compare"] = button
	switch {
	case x.Running:
		objects = append(objects, row(10, button, stretch(column(4, small(comparingWords(x)).shrinkTo(80), newGauge(float32(comparingShare(x)))))))
	case p.d.canCompare():
		objects = append(objects, row(0, button))
	default:
		return append(objects, para("That takes data and a question: its outcome is what every rival then predicts for rows that it has not seen.", tokenMuted))
	}
	if x.Stale {
		objects = append(objects, para("What follows belongs to an earlier version of the study or of the question.", tokenConfound))
	}
	var no *fit.Incomparable
	switch {
	case errors.As(x.Error, &no):
		objects = append(objects, para("They cannot be compared.", tokenConfound))
		for _, reason := range no.Reasons {
			objects = append(objects, para(reason, tokenInk))
		}
		if len(d.view.Study.Rivals) > 2 && !x.Running {
			objects = append(objects, p.oneByOne(keys))
		}
	case x.Error != nil:
		objects = append(objects, para(words.Upper(x.Error.Error()), tokenFault))
	case x.Comparison != nil:
		objects = append(objects, p.scores(x.Comparison)...)
	case !x.Running:
		objects = append(objects, para(words.NotCause, tokenMuted))
	}
	return objects
}

// oneByOne offers to compare the rival on the sheet with one other, where all
// of them cannot be.
func (p *rivalsPage) oneByOne(keys map[string]fyne.Focusable) fyne.CanvasObject {
	d, here := p.d, p.d.view.Rival.Name
	line := row(8, muted(here+" alone with"))
	for _, r := range d.view.Study.Rivals {
		if r.Name != here {
			b := d.quiet(r.Name, func() { d.session.Compare(here, r.Name) })
			keys["compare with "+r.Name] = b
			line.Add(b)
		}
	}
	return line
}

// Widths of the columns of scores: score, its error, effective parameters, the
// largest tail.
var scoreColumns = []float32{72, 92, 128, 84}

func scoreRow(name fyne.CanvasObject, cells [4]string, standing fyne.CanvasObject, token fyne.ThemeColorName) fyne.CanvasObject {
	objects := []fyne.CanvasObject{fixed(170, 19, name)}
	for i, c := range cells {
		objects = append(objects, fixed(scoreColumns[i], 19, newLabel(c, sizeBody, token, fyne.TextStyle{}).flushRight()))
	}
	return row(6, append(objects, gapOf(14, 1), stretch(standing))...)
}

func (p *rivalsPage) scores(c *fit.Comparison) []fyne.CanvasObject {
	tone := tokenInk
	if c.Better == "" {
		tone = tokenConfound
	}
	objects := []fyne.CanvasObject{
		newProse(sizeBody, span{text: words.BetterPredictor(c), bold: true, token: tone}, span{text: "  " + words.NotCause}),
		para(words.Task(c), tokenMuted),
		gapOf(1, 2),
		scoreRow(small("rival"), [4]string{"score", "standard error", "effective parameters", "largest tail"}, small("as for the question"), tokenMuted),
		hairline(),
	}
	for _, s := range c.Rivals {
		token := tokenInk
		cells := [4]string{words.Score(s.Score), words.Score(s.Error), words.Score(s.Parameters), words.Number(largest(s.K))}
		if s.Withheld != "" {
			token, cells[0], cells[1], cells[2] = tokenMuted, "withheld", "", ""
		}
		standing := tokenConfound
		if s.Identified && !s.None && (len(c.Question.Held) == 0 || s.HeldEnough) {
			standing = tokenAction
		}
		objects = append(objects, scoreRow(newLabel(s.Rival, sizeBody, token, fyne.TextStyle{Bold: s.Rival == c.Better}).shrinkTo(60), cells,
			newLabel(words.Standing(c, s), sizeBody, standing, fyne.TextStyle{}).shrinkTo(80), token))
		for _, note := range notesOn(c, s) {
			objects = append(objects, newProse(sizeSmall, span{text: note, token: tokenMuted}))
		}
	}
	if len(c.Pairs) > 0 {
		objects = append(objects, gapOf(1, 4), small("Differences in score, with two standard errors to each side"), p.differencePicture(c))
	}
	for _, pair := range c.Pairs {
		objects = append(objects, para(words.Difference(pair), tokenInk))
	}
	return append(objects, para(words.PredictionWeights(c), tokenMuted))
}

// notesOn is what must be said beside a rival's score.
func notesOn(c *fit.Comparison, s *fit.Scored) []string {
	var notes []string
	if s.Withheld != "" {
		notes = append(notes, words.Upper(s.Withheld)+".")
	}
	if t := s.Trust.Verdict.String(); t != "sound" {
		text := "Trust in the fit: " + t
		for i, r := range s.Trust.Reasons {
			text += map[bool]string{true: ": ", false: "; "}[i == 0] + r
		}
		notes = append(notes, text+".")
	}
	if exactly := words.Exactly(c, s); exactly != "" {
		notes = append(notes, exactly[1:])
	}
	if s.Withheld == "" {
		notes = append(notes, words.Wide(s))
	}
	return notes
}

func (p *rivalsPage) differencePicture(c *fit.Comparison) fyne.CanvasObject {
	style := p.d.style()
	return canvas.NewPicture(100, float32(paint.DifferencesHeight(c)), func(w, h float64) *draw.List { return paint.Differences(min(w, 760), h, c, style) })
}

func largest(x []float64) float64 {
	most := math.Inf(-1)
	for _, v := range x {
		most = max(most, v)
	}
	return most
}

// predictionSaid is what the trace tells of a comparison.
func (d *desk) predictionSaid() []string {
	x := d.view.Prediction
	var no *fit.Incomparable
	switch {
	case x.Running:
		return nil
	case errors.As(x.Error, &no):
		return no.Reasons
	case x.Error != nil:
		return []string{x.Error.Error()}
	case x.Comparison != nil:
		return words.Comparison(x.Comparison)
	}
	return nil
}
