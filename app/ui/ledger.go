package ui

import (
	"fyne.io/fyne/v2"
	"fyne.io/fyne/v2/container"

	"arrowroot/canvas/scene"
	"arrowroot/compile/study"
)

// ledger lists the study's variables. A row picks its variable; dragged onto
// the sheet it puts the variable there.
type ledger struct {
	d      *desk
	object fyne.CanvasObject
	pane   *roll
	seen   ledgerState
	on     map[string]bool // on the sheet
}

// ledgerState is everything the ledger shows: it is rebuilt only when one of
// these is another.
type ledgerState struct {
	study *study.Study
	rival *study.Rival
	table any
	pick  string
}

func newLedger(d *desk) *ledger {
	l := &ledger{d: d, pane: newRoll(8, 2, 1)}
	add := d.quiet("+ variable", func() { d.commands.find("variable").run() })
	add.tip = d.commands.find("variable").tip()
	fold := d.foldButton(iconFoldL, "Fold the ledger away", func() { d.frame.fold("left") })
	head := padded(8, 6, 0, row(4, gapOf(2, 1), caption("Ledger"), space(), add, fold))
	l.object = container.NewBorder(head, nil, nil, nil, l.pane)
	return l
}

func (l *ledger) update() {
	v := l.d.view
	state := ledgerState{study: v.Study, rival: v.Rival, table: v.Table, pick: l.d.picked()}
	if state == l.seen {
		return
	}
	l.seen = state
	l.on = make(map[string]bool)
	for _, n := range v.Rival.Diagram.Nodes {
		l.on[n.Variable] = true
	}
	var rows []rollRow
	height := max(23, fyne.MeasureText("Mg", sizeBody, fyne.TextStyle{}).Height+4)
	missing := 0
	for _, x := range v.Study.Variables {
		rows = append(rows, rollRow{
			key:   "variable " + x.ID,
			guess: func(float32) float32 { return height },
			build: func() fyne.CanvasObject { return l.row(x) },
		})
		if !l.on[x.ID] {
			missing++
		}
	}
	switch {
	case len(v.Study.Variables) == 0:
		rows = append(rows, still(padded(4, 4, 0, para("No variables yet. Draw one with a double click on the sheet, or open data.", tokenMuted))))
	case missing > 0:
		all := l.d.quiet("place all", func() { l.d.commands.find("place-all").run() })
		all.tip = "Put every variable on the sheet"
		rows = append(rows, still(row(2, gapOf(14, 1), all, stretch(small(times(missing, "is off the sheet", "are off the sheet")).shrinkTo(20)))))
	}
	l.pane.fill(rows...)
}

func (l *ledger) row(x *study.Variable) *press {
	d := l.d
	on := l.on[x.ID]
	token := tokenInk
	if !on {
		token = tokenMuted
	}
	name := newLabel(x.ID, sizeBody, token, fyne.TextStyle{Italic: x.Unmeasured}).shrinkTo(40)
	right := l.state(x)
	line := row(6, dot(x), stretch(name), unitLabel(x.Unit), right)
	p := d.press(line, func(p *press) skin {
		if p.selected {
			return skin{fill: tokenTint, radius: 4}
		}
		return skin{radius: 4}
	}, func() { d.choose(scene.Selection{Nodes: []string{x.ID}}); d.editor.Reveal(x.ID) })
	p.padX, p.padY, p.minH = 6, 2, 23
	p.selected = d.picked() == x.ID
	p.tip = x.Label
	if p.tip == x.ID {
		p.tip = ""
	}
	if !on {
		p.tip = "Drag it onto the sheet"
		p.onDrag = func(at fyne.Position) { d.tips.follow(x.ID, at) }
		p.onDrop = func(at fyne.Position) {
			d.tips.hide()
			d.dropVariable(x.ID, at)
		}
	}
	p.onSecondary = func(at fyne.Position) { d.variableMenu(x.ID, at) }
	p.onKey = func(key fyne.KeyName) bool {
		switch key {
		case fyne.KeyUp:
			l.step(x.ID, -1)
		case fyne.KeyDown:
			l.step(x.ID, 1)
		default:
			return d.variableKey(x.ID, key)
		}
		return true
	}
	return p
}

// unitLabel shows a unit as far as it leaves room for the name.
func unitLabel(unit string) *label {
	const most = 60
	w := small(unit)
	if w.MinSize().Width > most {
		w.shrinkTo(most)
	}
	return w
}

// step picks the variable above or below and takes the focus along.
func (l *ledger) step(id string, by int) {
	all := l.d.view.Study.Variables
	for i, v := range all {
		if v.ID == id && i+by >= 0 && i+by < len(all) {
			next := all[i+by].ID
			l.d.choose(scene.Selection{Nodes: []string{next}})
			l.pane.focus("variable " + next)
			return
		}
	}
}

// state is what a row says at its right end: what is missing, else the scale.
func (l *ledger) state(x *study.Variable) *label {
	v := l.d.view
	switch {
	case x.Unmeasured:
		return small("unmeasured")
	case x.Computed != "":
		return small("computed")
	}
	if c := v.Table.Column(x.Column); c != nil && x.Column != "" {
		if c.Missing > 0 && v.Table.Rows > 0 {
			w := small(percent(float64(c.Missing)/float64(v.Table.Rows)) + " missing")
			w.token = tokenInk
			return w
		}
		return small(string(x.Scale))
	}
	if v.Table != nil {
		return small("no column")
	}
	return small(string(x.Scale))
}

// dot is solid for a measured variable and an open ring of dashes for an
// unmeasured one.
func dot(x *study.Variable) fyne.CanvasObject {
	if x.Unmeasured {
		return newIcon(iconRing, tokenMuted, 14).object
	}
	return newIcon(iconDisc, tokenMuted, 14).object
}
