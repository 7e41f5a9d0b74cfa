package ui

import (
	"fmt"

	"fyne.io/fyne/v2"
	"fyne.io/fyne/v2/container"

	"arrowroot/app/fit"
	"arrowroot/app/paint"
	"arrowroot/app/words"
	"arrowroot/canvas"
	"arrowroot/canvas/draw"
	"arrowroot/canvas/scene"
	"arrowroot/compile/replicate"
)

// checksPage tells whether the fit can reproduce its data: every variable with
// its checks, the worst first, and the picture of what is chosen.
type checksPage struct {
	d      *desk
	list   *roll
	shows  *pane
	split  *fyne.Container
	seen   checksState
	opened bool
	at     checked // what is chosen
	line   float32
}

// checksShare is the list's share of the width.
const checksShare = 0.44

// checked is a variable, or one check of it: its place from 1, 0 is the
// variable as a whole.
type checked struct {
	variable string
	check    int
}

func (c checked) key() string { return fmt.Sprintf("check %s %d", c.variable, c.check) }

type checksState struct {
	result            *fit.Result
	checks            *replicate.Checks
	checking          bool
	share             float64
	err               error
	stale, run, ready bool
	dark              bool
	picked            string
	at                checked
	paint             scene.PaintKind
}

func newChecksPage(d *desk) *checksPage {
	p := &checksPage{d: d, list: newRoll(8, 8, 0), shows: newPane(16, 8, 5)}
	p.line = fyne.MeasureText("M", sizeBody, fyne.TextStyle{}).Height
	p.split = container.New(&splitLayout{share: checksShare}, p.list, hairline(), p.shows)
	return p
}

func (p *checksPage) name() string               { return "Checks" }
func (p *checksPage) content() fyne.CanvasObject { return p.split }

func (p *checksPage) update() {
	v := p.d.view
	state := checksState{
		v.Result, v.Checks, v.Checking, v.ChecksDone, v.ChecksError, v.Stale, v.Running, p.d.canFit(), p.d.dark(), p.d.picked(), p.at, p.d.paint,
	}
	if p.opened && state == p.seen {
		return
	}
	p.follow(state)
	state.at = p.at
	p.opened, p.seen = true, state
	p.fill()
}

// follow turns to the variable that was picked on the sheet, and to the worst
// one where there are other checks.
func (p *checksPage) follow(state checksState) {
	c := state.checks
	if c == nil || len(c.Variables) == 0 {
		p.at = checked{}
		return
	}
	if state.checks != p.seen.checks {
		p.at = checked{c.Variables[0].ID, 0}
	}
	if id := state.picked; id != "" && id != p.at.variable && (id != p.seen.picked || state.checks != p.seen.checks) && variableOf(c, id) != nil {
		p.at = checked{id, 0}
	}
}

func variableOf(c *replicate.Checks, id string) *replicate.Variable {
	for _, v := range c.Variables {
		if v.ID == id {
			return v
		}
	}
	return nil
}

// turn chooses a variable or check, and its node on the sheet.
func (p *checksPage) turn(to checked) {
	p.at = to
	if p.d.onSheet(to.variable) && p.d.picked() != to.variable {
		p.d.choose(scene.Selection{Nodes: []string{to.variable}})
	}
	p.update()
}

func (p *checksPage) fill() {
	c := p.d.view.Checks
	var rows []rollRow
	if c != nil {
		rows = append(rows, still(padded(8, 0, 2, p.summary(c))), still(gapOf(1, 4)))
		for _, v := range c.Variables {
			rows = append(rows, p.row(checked{v.ID, 0}, v))
			for i, k := range v.Checks {
				if k.Failed || v.ID == p.at.variable {
					rows = append(rows, p.row(checked{v.ID, i + 1}, v))
				}
			}
		}
	}
	p.list.fill(rows...)
	share := float32(checksShare)
	if len(rows) == 0 { // nothing to list: the words have all the room
		share = 0
	}
	p.split.Layout = &splitLayout{share: share}
	if line := p.split.Objects[1]; share == 0 {
		line.Hide()
	} else {
		line.Show()
	}
	p.split.Refresh()
	keys := make(map[string]fyne.Focusable)
	p.shows.fill(keys, append(p.chosen(keys), p.said(keys)...)...)
}

func (p *checksPage) row(at checked, v *replicate.Variable) rollRow {
	return rollRow{
		key:   at.key(),
		guess: func(float32) float32 { return p.line + 5 },
		build: func() fyne.CanvasObject { return p.entry(at, v) },
	}
}

// entry is one line of the list.
func (p *checksPage) entry(at checked, v *replicate.Variable) *press {
	name, verdict := bold(v.ID), small("")
	if at.check == 0 {
		switch {
		case v.Refusal != "":
			verdict.set("no check", tokenMuted)
		case v.Failed():
			bin := paint.FitBin(v)
			verdict.set(paint.FitSigns[bin]+" "+paint.FitWords[bin], tokenConfound)
		default:
			bin := paint.FitBin(v)
			verdict.set(paint.FitSigns[bin]+" "+paint.FitWords[bin]+" in "+times(len(v.Checks), "check", "checks"), tokenMuted)
		}
	} else {
		k := v.Checks[at.check-1]
		name = body(words.CheckName(k))
		verdict.set("reproduced", tokenMuted)
		if k.Failed {
			verdict.set("not reproduced", tokenConfound)
		}
	}
	line := row(6, stretch(name.shrinkTo(40)), verdict)
	if at.check > 0 {
		line = row(6, gapOf(10, 1), stretch(name), verdict)
	}
	x := p.d.press(line, func(x *press) skin {
		if x.selected {
			return skin{fill: tokenTint, radius: 4}
		}
		return skin{radius: 4}
	}, func() { p.turn(at) })
	x.padX, x.padY, x.minH = 8, 1, p.line+5
	x.selected = at == p.at
	x.key = at.key()
	x.onHover = func(in bool) {
		if in && x.focused && !x.byMouse && p.at != at {
			p.turn(at)
		}
	}
	return x
}

// summary is the answer in a line.
func (p *checksPage) summary(c *replicate.Checks) fyne.CanvasObject {
	failed, made := 0, 0
	for _, v := range c.Variables {
		if len(v.Checks) > 0 {
			made++
		}
		if v.Failed() {
			failed++
		}
	}
	switch {
	case made == 0:
		return para(words.NoCheck, tokenMuted)
	case failed == 0:
		return para("The model reproduces the data.", tokenInk)
	case failed == 1:
		return para(fmt.Sprintf("1 of %s is not reproduced.", times(made, "variable", "variables")), tokenConfound)
	}
	return para(fmt.Sprintf("%d of %s are not reproduced.", failed, times(made, "variable", "variables")), tokenConfound)
}

// said is what there is to say of all checks, or of their absence.
func (p *checksPage) said(keys map[string]fyne.Focusable) []fyne.CanvasObject {
	d, v := p.d, p.d.view
	var objects []fyne.CanvasObject
	switch {
	case v.Result == nil && v.Running:
		return []fyne.CanvasObject{bold("Can the model reproduce the data?"), para("The fit is going on; it is checked as soon as it is done.", tokenMuted)}
	case v.Result == nil:
		b := d.primary("Fit", func() { d.commands.find("fit").run() })
		b.setDisabled(!d.commands.find("fit").ready())
		keys["fit"] = b
		return []fyne.CanvasObject{bold("Can the model reproduce the data?"),
			para("Fit the rival, and each modelled variable is held against values drawn from its own law: how many zeros, how widely it spreads, whether it changes with its parents as the law says, and with what the law leaves out.", tokenMuted), row(0, b)}
	case v.Checking:
		b := d.plain("Stop", d.session.StopChecks)
		keys["stop"] = b
		return []fyne.CanvasObject{row(8, bold("Drawing replicates"), space(), b), newGauge(float32(v.ChecksDone)),
			para("Each modelled variable is drawn once more from its own law, at the rows' own parent values.", tokenMuted)}
	case v.Checks == nil:
		b := d.primary("Check", d.session.Check)
		keys["check"] = b
		text, token := words.NoCheck, tokenMuted
		if v.ChecksError != nil {
			text, token = words.Upper(v.ChecksError.Error()), tokenFault
		}
		return []fyne.CanvasObject{bold("Can the model reproduce the data?"), para(text, token), row(0, b)}
	}
	objects = append(objects, gapOf(1, 4), hairline())
	if v.Stale {
		objects = append(objects, para("The study has changed since: this belongs to an earlier version.", tokenConfound))
	}
	for i, line := range words.Checks(v.Checks) {
		token := tokenMuted
		if i == 0 {
			token = tokenInk
			if len(v.Checks.Failed()) > 0 {
				token = tokenConfound
			}
		}
		objects = append(objects, para(line, token))
	}
	return objects
}

// chosen is the picture of the variable or check.
func (p *checksPage) chosen(keys map[string]fyne.Focusable) []fyne.CanvasObject {
	d, c := p.d, p.d.view.Checks
	if c == nil {
		return nil
	}
	v := variableOf(c, p.at.variable)
	if v == nil {
		return nil
	}
	if v.Refusal != "" {
		return []fyne.CanvasObject{bold(v.ID), para(words.Upper(v.Refusal)+".", tokenMuted)}
	}
	pic, title, under := &v.Figure, v.ID, ""
	if p.at.check > 0 && p.at.check <= len(v.Checks) {
		k := v.Checks[p.at.check-1]
		pic, title = &k.Picture, v.ID+": "+words.CheckName(k)
		under = words.Upper(words.CheckNumbers(k)) + ". " + words.Upper(k.Words) + "."
	}
	legend := "Ink: the data. Soft: where 95 % of the replicates lie."
	if pic.Kind == replicate.Tally {
		legend = "Line: the data. Bars: the replicates."
	}
	if pic.LeftOut > 0 {
		legend += fmt.Sprintf(" %s more that lie closer.", words.Plural(pic.LeftOut, "group"))
	}
	if v.Units < v.Observed {
		legend += fmt.Sprintf(" %s of %s values, evenly chosen.", words.Whole(float64(v.Units)), words.Whole(float64(v.Observed)))
	}
	style := d.style()
	style.Ground = nrgba(tokenCard)
	head := row(8, stretch(bold(title).shrinkTo(80)))
	if d.paint != scene.FitPaint {
		b := d.quiet("Paint the sheet by this", func() { d.setPaint(scene.FitPaint) })
		keys["paint"] = b
		head.Add(b)
	}
	objects := []fyne.CanvasObject{
		head,
		canvas.NewPicture(100, 150, func(w, h float64) *draw.List { return paint.Replicates(min(w, 560), h, pic, style) }),
	}
	if under != "" {
		objects = append(objects, para(under, tokenInk))
	}
	objects = append(objects, newProse(sizeSmall, span{text: legend, token: tokenMuted}))
	return objects
}
