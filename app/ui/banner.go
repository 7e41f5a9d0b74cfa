package ui

import (
	"fmt"

	"fyne.io/fyne/v2"
	"fyne.io/fyne/v2/container"

	"arrowroot/app/words"
	"arrowroot/compile/causal"
	"arrowroot/compile/model"
)

// banner is the one message at a time above the sheet: what, why, what to do.
// Complaints about the last action come first, then what an earlier session
// left behind, then the study's problems, those that stop a fit first.
type banner struct {
	d      *desk
	object *fyne.Container
	box    *fillBox
	icon   *icon
	says   *prose
	close  *press
	inner  *fyne.Container
	text   string // for tests and the trace
	onHide func()
}

func newBanner(d *desk) *banner {
	b := &banner{d: d, box: bordered(tokenCard, tokenBorder, 6), icon: newIcon(iconWarn, tokenConfound, 18), says: newProse(sizeBody)}
	b.close = d.foldButton(iconClose, "Put this away", func() {
		if b.onHide != nil {
			b.onHide()
		}
	})
	b.inner = container.New(&columnLayout{padX: 10, padY: 7}, topRow(8, b.icon.object, stretch(b.says), b.close))
	b.object = stack(b.box, b.inner)
	b.object.Hide()
	return b
}

func (b *banner) update() {
	d, v := b.d, b.d.view
	switch {
	case d.complaint != "":
		b.put(d.complaint, tokenFault, nil, func() { d.complaint = ""; d.refresh() })
		return
	case d.loss != "" && v.Model != nil:
		r := v.Model.Rows
		b.put(fmt.Sprintf("A fit would use %s.", words.Rows(r)), tokenConfound, []fyne.CanvasObject{
			d.chip("Fit on "+times(r.Used, "row", "rows"), false, func() { d.fit(true) }),
		}, func() { d.loss = ""; d.refresh() })
		return
	case v.Recovered != nil:
		b.put("There is unsaved work from before, newer than this file.", tokenConfound, []fyne.CanvasObject{
			d.chip("Take it up", false, d.session.Recover),
			d.chip("Drop it", false, d.session.Forget),
		}, d.session.Forget)
		return
	case v.DataError != nil:
		b.put(v.DataError.Error(), tokenFault, []fyne.CanvasObject{
			d.chip("Open data …", false, func() { d.commands.find("data").run() }),
		}, nil)
		return
	}
	p := d.problem()
	if p == nil {
		b.hide()
		return
	}
	var actions []fyne.CanvasObject
	for _, r := range p.Repairs {
		actions = append(actions, d.chip(r.Label, !p.Stops, func() { d.do(r.Edit) }))
	}
	if p.Variable != "" && d.picked() != p.Variable {
		actions = append(actions, d.chip("Show "+p.Variable, false, func() { d.goTo(p) }))
	}
	key := problemKey(p)
	b.put(p.Message, problemToken(*p), actions, func() {
		d.dismissed[key] = true
		d.refresh()
	})
}

// problem is the one to show; nil if there is none that was not put away.
func (d *desk) problem() *model.Problem {
	var first *model.Problem
	for i := range d.view.Problems {
		p := &d.view.Problems[i]
		if d.dismissed[problemKey(p)] || d.early(p) {
			continue
		}
		if p.Stops {
			return p
		}
		if first == nil {
			first = p
		}
	}
	return first
}

// early reports whether a problem is only that the work has just begun: no
// data yet, or nothing drawn. The verdict strip and the Fit page say that.
func (d *desk) early(p *model.Problem) bool {
	switch p.Place {
	case "question":
		return p.Code == "question" && d.view.Reading != nil && d.view.Reading.Verdict.Kind == causal.Incomplete
	case "sheet":
		return p.Code == "nothing"
	case "data", "range", "levels", "scale":
		return len(d.view.Study.Data) == 0
	}
	return false
}

func problemKey(p *model.Problem) string { return p.Code + "\x00" + p.Variable + "\x00" + p.Message }

// goTo picks the variable of a problem and opens the tab it is about.
func (d *desk) goTo(p *model.Problem) {
	if d.view.Study.Variable(p.Variable) == nil {
		return
	}
	d.frame.unfold("right")
	for _, x := range d.panels {
		if x, ok := x.(*details); ok {
			switch p.Place {
			case "data", "range", "level", "scale":
				x.tab["variable"] = "Data"
			case "prior":
				x.tab["variable"] = "Prior"
			default:
				x.tab["variable"] = "Law"
			}
		}
	}
	d.choose(pickNode(p.Variable))
	d.editor.Reveal(p.Variable)
}

func (b *banner) put(text string, token fyne.ThemeColorName, actions []fyne.CanvasObject, hide func()) {
	if text == b.text && b.object.Visible() {
		b.onHide = hide
		return
	}
	b.text, b.onHide = text, hide
	show(hide != nil, b.close)
	spans := []span{{text: text, token: tokenInk}}
	for _, a := range actions {
		spans = append(spans, span{text: "  "}, span{object: a})
	}
	b.says.set(spans...)
	b.box.edge = token
	b.icon.set(iconWarn, token)
	b.object.Show()
	b.object.Refresh()
}

func (b *banner) hide() {
	b.text, b.onHide = "", nil
	b.object.Hide()
}
