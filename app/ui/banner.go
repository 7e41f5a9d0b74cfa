package ui

import (
	"fmt"
	"slices"

	"fyne.io/fyne/v2"
	"fyne.io/fyne/v2/container"
	"fyne.io/fyne/v2/driver/desktop"

	"arrowroot/app/words"
	"arrowroot/canvas/scene"
	"arrowroot/compile/causal"
	"arrowroot/compile/mistake"
	"arrowroot/compile/model"
	"arrowroot/compile/study"
)

// banner is the one message at a time above the sheet: what, why, what to do.
// Complaints about the last action come first, then what an earlier session
// left behind; then by severity what is wrong with the study: what stops a
// fit, mistakes that would make the answer wrong, other problems and mistakes,
// notes.
type banner struct {
	d      *desk
	object *fyne.Container
	box    *fillBox
	area   *hoverArea
	icon   *icon
	says   *prose
	close  *press
	inner  *fyne.Container
	text   string // for tests and the trace
	acts   string // the words of the actions
	onHide func()
	mark   *scene.Mark // what the message is about, on the sheet; nil = nothing to show
	pinned bool        // the mark stays when the pointer leaves
	lit    bool        // it is on the sheet
}

// A message is what the banner says.
type message struct {
	text    string // what
	why     string // set after it, muted
	icon    glyph
	token   fyne.ThemeColorName
	actions []action
	mark    *scene.Mark
	aside   func() // sets it aside with a reason; nil = it cannot be
	hide    func() // puts it away; nil = it cannot be
}

// An action is a button in a message.
type action struct {
	words string
	amber bool
	run   func()
}

func newBanner(d *desk) *banner {
	b := &banner{d: d, box: bordered(tokenCard, tokenBorder, 6), icon: newIcon(iconWarn, tokenConfound, 18), says: newProse(sizeBody)}
	b.close = d.foldButton(iconClose, "Put this away", func() {
		if b.onHide != nil {
			b.onHide()
		}
	})
	b.area = newHoverArea(func(in bool) {
		if !b.pinned {
			b.point(in)
		}
	})
	b.inner = container.New(&columnLayout{padX: 10, padY: 7}, topRow(8, b.icon.object, stretch(b.says), b.close))
	b.object = stack(b.box, b.area, b.inner)
	b.object.Hide()
	return b
}

func (b *banner) update() {
	if m := b.d.message(); m != nil {
		b.put(m)
		return
	}
	b.hide()
}

// message is what the banner has to say; nil = nothing.
func (d *desk) message() *message {
	v := d.view
	switch {
	case d.complaint != "":
		m := &message{text: d.complaint, icon: iconWarn, token: tokenFault, hide: func() { d.complaint, d.cycle = "", nil; d.refresh() }}
		if c := d.cycle; c != nil {
			m.mark = &scene.Mark{Trails: []scene.Trail{d.trail(c.Cycle[:len(c.Cycle)-1], scene.BiasTrail)}, Offer: [][2]string{{c.From, c.To}}}
			if edit, err := mistake.Unroll(v.Study, d.rival(), c.From, c.To); err == nil {
				m.actions = []action{{"Draw it over time", false, func() { d.do(edit) }}}
			}
		}
		return m
	case d.loss != "" && v.Model != nil:
		r := v.Model.Rows
		m := &message{text: fmt.Sprintf("A fit would use %s.", words.Rows(r)), icon: iconWarn, token: tokenConfound,
			actions: []action{{"Fit on " + times(r.Used, "row", "rows"), false, func() { d.fit(true) }}},
			hide:    func() { d.loss = ""; d.refresh() }}
		if ids := d.imputable(); len(ids) > 0 {
			m.actions = append(m.actions, action{"Impute " + words.List(ids), false, func() { d.impute(ids) }})
		}
		return m
	case v.Recovered != nil:
		return &message{text: "There is unsaved work from before, newer than this file.", icon: iconWarn, token: tokenConfound,
			actions: []action{{"Take it up", false, d.session.Recover}, {"Drop it", false, d.session.Forget}},
			hide:    d.session.Forget}
	case v.DataError != nil:
		return &message{text: v.DataError.Error(), icon: iconWarn, token: tokenFault,
			actions: []action{{"Open data …", false, func() { d.commands.find("data").run() }}}}
	}
	p, m := d.problem(), d.mistake()
	switch {
	case p != nil && (p.Stops || m == nil || m.Severity == mistake.Note):
		return d.problemMessage(p)
	case m != nil:
		return d.mistakeMessage(m)
	}
	return nil
}

// imputable lists what lost rows and nobody has said yet is to be imputed.
func (d *desk) imputable() []string {
	return slices.DeleteFunc(d.view.Model.Imputable(), func(id string) bool {
		n := d.view.Rival.Diagram.Node(id)
		return n == nil || n.Law != nil && n.Law.Treat == study.Imputed
	})
}

// impute has missing entries drawn with the rest instead of losing their rows.
func (d *desk) impute(ids []string) {
	d.loss = ""
	for _, id := range ids {
		d.changeLaw(id, func(l *study.Law) { l.Treat = study.Imputed })
	}
	d.refresh()
}

func (d *desk) problemMessage(p *model.Problem) *message {
	m := &message{text: p.Message, icon: iconWarn, token: problemToken(*p)}
	for _, r := range p.Repairs {
		m.actions = append(m.actions, action{r.Label, !p.Stops, func() { d.do(r.Edit) }})
	}
	if p.Variable != "" && d.picked() != p.Variable {
		m.actions = append(m.actions, action{"Show " + p.Variable, false, func() { d.goTo(p) }})
	}
	key := problemKey(p)
	m.hide = func() {
		d.dismissed[key] = true
		d.refresh()
	}
	return m
}

// problem is the one to show; nil if there is none that was not put away.
func (d *desk) problem() *model.Problem {
	var first *model.Problem
	for i := range d.view.Problems {
		p := &d.view.Problems[i]
		if d.dismissed[problemKey(p)] || d.early(p) || d.told(p) {
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

// told reports whether a mistake says the same as a problem.
func (d *desk) told(p *model.Problem) bool {
	if p.Code != "question-values" {
		return false
	}
	for _, m := range d.view.Mistakes {
		if m.Code == mistake.NoContrast {
			return true
		}
	}
	return false
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

// put shows a message. The same words keep their buttons, so that the keyboard
// stays where it is; what a button does is always that of the newest message.
func (b *banner) put(m *message) {
	acts, show := slices.Clone(m.actions), -1
	if m.mark != nil {
		show = len(acts)
		acts = append(acts, action{"Show", false, func() { b.pin(!b.pinned) }})
	}
	if m.aside != nil {
		acts = append(acts, action{"Set aside …", false, m.aside})
	}
	key := m.why
	for _, a := range acts {
		key += "\x00" + a.words
	}
	same := m.text == b.text && key == b.acts && b.object.Visible()
	b.onHide, b.mark = m.hide, m.mark
	if b.close.Hide(); m.hide != nil {
		b.close.Show()
	}
	spans := []span{{text: m.text, token: tokenInk}}
	if m.why != "" {
		spans = append(spans, span{text: " " + m.why, token: tokenMuted})
	}
	for i, a := range acts {
		spans = append(spans, span{text: "  "})
		if same {
			old := b.says.spans[len(spans)].object.(*press)
			old.onTap = a.run
			spans = append(spans, span{object: old})
			continue
		}
		chip := b.d.chip(a.words, a.amber, a.run)
		if i == show {
			chip.onHover = b.area.over
		}
		spans = append(spans, span{object: chip})
	}
	if same {
		b.says.spans = spans
		if b.lit { // another reading took it off the sheet
			b.d.post(func() { b.point(b.lit) })
		}
		return
	}
	b.pin(false)
	b.text, b.acts = m.text, key
	b.says.set(spans...)
	b.box.edge = m.token
	b.icon.set(m.icon, m.token)
	b.object.Show()
	b.object.Refresh()
}

func (b *banner) hide() {
	b.pin(false)
	b.text, b.acts, b.onHide, b.mark = "", "", nil, nil
	b.object.Hide()
}

// pin keeps what the message is about lit on the sheet, or lets it go dark.
func (b *banner) pin(on bool) {
	b.pinned = on
	b.point(on)
	if on {
		b.uncover()
	}
}

// uncover moves the sheet down if the banner lies over what it is about.
func (b *banner) uncover() {
	if b.mark == nil {
		return
	}
	const margin = 34 // of a node's middle from the banner
	d := b.d
	driver := fyne.CurrentApp().Driver()
	low := driver.AbsolutePositionForObject(b.object).Y + b.object.Size().Height - driver.AbsolutePositionForObject(d.editor).Y + margin
	ids := slices.Clone(b.mark.Ring)
	for _, t := range b.mark.Trails {
		for _, l := range t.Legs {
			ids = append(ids, l.From, l.To)
		}
	}
	move := 0.0
	for _, id := range ids {
		if at, ok := d.editor.Input().At[id]; ok {
			move = max(move, float64(low)-d.editor.View().Out(at).Y)
		}
	}
	if move > 0 {
		v := d.editor.View()
		v.Pan.Y += move
		d.editor.SetView(v)
	}
}

// point lights what the message is about.
func (b *banner) point(on bool) {
	was := b.lit
	b.lit = on && b.mark != nil
	switch {
	case b.lit:
		b.d.editor.Point(b.mark)
	case was: // what another list points at stays
		b.d.editor.Point(nil)
	}
}

// A hoverArea lies behind other things and tells when the pointer is over it.
type hoverArea struct {
	fillBox
	over func(in bool)
}

var _ desktop.Hoverable = (*hoverArea)(nil)

func newHoverArea(over func(in bool)) *hoverArea {
	a := &hoverArea{fillBox: fillBox{token: tokenNone}, over: over}
	a.ExtendBaseWidget(a)
	return a
}

// MouseIn implements desktop.Hoverable.
func (a *hoverArea) MouseIn(*desktop.MouseEvent) { a.over(true) }

// MouseMoved implements desktop.Hoverable.
func (a *hoverArea) MouseMoved(*desktop.MouseEvent) {}

// MouseOut implements desktop.Hoverable.
func (a *hoverArea) MouseOut() { a.over(false) }
