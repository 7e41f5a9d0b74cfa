package ui

import (
	"slices"
	"strings"

	"fyne.io/fyne/v2"

	"arrowroot/canvas/scene"
	"arrowroot/compile/causal"
	"arrowroot/compile/mistake"
	"arrowroot/compile/study"
)

// mistake is the one to show; nil if there is none that was not put away.
func (d *desk) mistake() *mistake.Mistake {
	for i := range d.view.Mistakes {
		m := &d.view.Mistakes[i]
		if !d.dismissed[d.mistakeKey(m)] && !d.tooEarly(m) {
			return m
		}
	}
	return nil
}

// tooEarly reports whether a mistake is only that the work has just begun: no
// contrast before there are data, and no doubt about what was never measured
// until somebody is about to believe the arrows.
func (d *desk) tooEarly(m *mistake.Mistake) bool {
	switch m.Code {
	case mistake.NoContrast:
		return d.view.Table == nil
	case mistake.NothingHidden:
		return d.view.Reading == nil || d.view.Reading.Verdict.Kind != causal.Readable
	}
	return false
}

func (d *desk) mistakeKey(m *mistake.Mistake) string { return d.rival() + "\x00" + m.Key }

// mistakeMessage is a mistake for the banner.
func (d *desk) mistakeMessage(m *mistake.Mistake) *message {
	key := m.Key
	b := &message{text: m.Sentence, why: m.Why, icon: iconWarn, token: tokenConfound, mark: d.mistakeMark(m)}
	switch m.Severity {
	case mistake.StopAndAsk:
		b.token = tokenFault
	case mistake.Note:
		b.icon, b.token = iconAsk, tokenBorder
	}
	for _, r := range m.Repairs {
		b.actions = append(b.actions, action{r.Words, m.Severity == mistake.StopAndAsk, func() { d.do(r.Edit) }})
	}
	if d.doubt == key {
		b.actions = append(b.actions, action{"Fit all the same", false, func() {
			d.agreedTo[d.mistakeKey(m)] = true
			d.doubt = ""
			d.fit(false)
		}})
	}
	aside := func() { d.askAside(m) }
	b.aside = aside
	b.hide = func() {
		d.dismissed[d.mistakeKey(m)] = true
		d.refresh()
	}
	if m.Severity == mistake.StopAndAsk {
		b.hide = aside // what is grave is not put away without a reason
	}
	return b
}

// doubts reports whether a mistake forbids a fit until the user has agreed to
// it, and asks.
func (d *desk) doubts() bool {
	for i := range d.view.Mistakes {
		m := &d.view.Mistakes[i]
		if m.Severity == mistake.StopAndAsk && !d.agreedTo[d.mistakeKey(m)] {
			d.doubt = m.Key
			d.refresh()
			return true
		}
	}
	d.doubt = ""
	return false
}

// markMistakes puts a small mark on what each mistake is about: on the arrow or
// arc where it is about the two ends of one, else on its first variable.
func (d *desk) markMistakes(in *scene.Input) {
	diagram := d.view.Rival.Diagram
	for i := range d.view.Mistakes {
		m := &d.view.Mistakes[i]
		if d.tooEarly(m) {
			continue
		}
		ids := slices.DeleteFunc(slices.Clone(m.Nodes), func(id string) bool { return !d.onSheet(id) })
		var pair [2]string
		if len(ids) == 2 {
			for _, a := range [][2]string{{ids[0], ids[1]}, {ids[1], ids[0]}} {
				if arc := diagram.Arc(a[0], a[1]); diagram.Arrow(a[0], a[1]) != nil {
					pair = a
				} else if arc != nil && pair[0] == "" {
					pair = [2]string{arc.A, arc.B}
				}
			}
		}
		switch {
		case pair[0] != "" && in.ArrowFindings[pair] == "":
			in.ArrowFindings[pair] = m.Sentence
		case pair[0] == "" && len(ids) > 0 && in.Findings[ids[0]] == "":
			in.Findings[ids[0]] = m.Sentence
		}
	}
}

// mistakeMark is what a mistake is about, on the sheet; nil = nothing.
func (d *desk) mistakeMark(m *mistake.Mistake) *scene.Mark {
	k := &scene.Mark{}
	for _, id := range m.Nodes {
		if d.onSheet(id) {
			k.Ring = append(k.Ring, id)
		}
	}
	if len(m.Path) > 1 {
		look := scene.BiasTrail
		switch m.Code {
		case mistake.HeldMediator, mistake.AfterExposure:
			look = scene.EffectTrail
		}
		k.Trails = []scene.Trail{d.trail(m.Path, look)}
	}
	for _, r := range m.Repairs {
		switch e := r.Edit.(type) {
		case study.AddArc:
			k.Apart = append(k.Apart, [2]string{e.Arc.A, e.Arc.B})
		case study.AddArrow:
			k.Offer = append(k.Offer, [2]string{e.Arrow.From, e.Arrow.To})
		}
	}
	if len(k.Ring)+len(k.Trails) == 0 {
		return nil
	}
	return k
}

// trail marks a path through these variables. Steps that the sheet does not
// show, such as one to a row filter, are left out.
func (d *desk) trail(path []string, look scene.TrailLook) scene.Trail {
	t := scene.Trail{Look: look}
	diagram := d.view.Rival.Diagram
	for i := 1; i < len(path); i++ {
		a, b := path[i-1], path[i]
		arc := diagram.Arrow(a, b) == nil && diagram.Arrow(b, a) == nil
		if !arc || diagram.Arc(a, b) != nil {
			t.Legs = append(t.Legs, scene.Leg{From: a, To: b, Arc: arc})
		}
	}
	return t
}

const asideWidth = 420

// askAside asks for the reason for which a mistake is set aside, in one line,
// and saves it with the study.
func (d *desk) askAside(m *mistake.Mistake) {
	key, rival := m.Key, d.rival()
	var pop *popover
	entry := d.field("", "one line; the report will show it", nil)
	save := d.primary("Set aside", nil)
	done := func() {
		why := strings.TrimSpace(entry.Text)
		if why == "" {
			return
		}
		pop.close()
		d.do(study.Dismiss{Dismissal: study.Dismissal{Rival: rival, Key: key, Why: why}})
	}
	save.onTap = done
	save.setDisabled(true)
	entry.typing = func(text string) { save.setDisabled(strings.TrimSpace(text) == "") }
	entry.OnSubmitted = func(string) { done() }
	entry.escape = func() { pop.close() }
	content := column(8, bold("Why does this not apply?"), para(m.Sentence, tokenMuted), entry, row(8, space(), save))
	at := fyne.CurrentApp().Driver().AbsolutePositionForObject(d.editor).AddXY(d.editor.Size().Width/2-asideWidth/2, 12)
	pop = d.pop(d.win.Canvas(), content, at, asideWidth)
	d.win.Canvas().Focus(entry)
}

// leftAside are the keys of what was set aside on this rival and is not found
// any more: its mistake was mended, or belongs to another question.
func (d *desk) leftAside() []*study.Dismissal {
	var rest []*study.Dismissal
	for _, x := range d.view.Study.Dismissed {
		if x.Rival == d.rival() && !slices.ContainsFunc(d.view.Aside, func(m mistake.Mistake) bool { return m.Key == x.Key }) {
			rest = append(rest, x)
		}
	}
	return rest
}

// hasAside reports whether anything was set aside on this rival.
func (d *desk) hasAside() bool { return len(d.view.Aside)+len(d.leftAside()) > 0 }

// showAside lists what was set aside on this rival, with the reasons; each can
// be brought back.
func (d *desk) showAside() {
	var pop *popover
	objects := []fyne.CanvasObject{bold("Findings set aside")}
	list := func(key, sentence, why string) {
		back := d.quiet("Bring it back", func() {
			pop.close()
			d.do(study.Restore{Rival: d.rival(), Key: key})
		})
		objects = append(objects, gapOf(1, 2), para(sentence, tokenInk), topRow(8, stretch(para("Because: "+why, tokenMuted)), back))
	}
	for _, m := range d.view.Aside {
		list(m.Key, m.Sentence, m.Aside)
	}
	for _, x := range d.leftAside() {
		list(x.Key, "Not found in this question ("+x.Key+").", x.Why)
	}
	at := fyne.CurrentApp().Driver().AbsolutePositionForObject(d.editor).AddXY(d.editor.Size().Width/2-asideWidth/2, 12)
	pop = d.pop(d.win.Canvas(), column(6, objects...), at, asideWidth)
}
