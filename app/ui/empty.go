package ui

import (
	"fyne.io/fyne/v2"
)

// empty stands on an empty sheet and shows ways to begin: three for an empty
// study, two where the ledger has variables already.
type empty struct {
	d      *desk
	object *fyne.Container
	first  bool // whether the ways shown are those of an empty study
}

func newEmpty(d *desk) *empty {
	e := &empty{d: d, object: column(10)}
	e.fill(true)
	return e
}

func (e *empty) fill(first bool) {
	e.first = first
	find := func(id string) func() { return func() { e.d.commands.find(id).run() } }
	draw := e.way("Draw", "Double-click the sheet and type a name; drag from a variable's edge to draw an arrow. Or press Ctrl+K and type: hedge -> flowers -> bees", find("finder"))
	title := newLabel("Put down what you think causes what", sizeTitle, tokenInk, fyne.TextStyle{Bold: true})
	if first {
		e.object.Objects = []fyne.CanvasObject{title, draw,
			e.way("Open data", "A CSV or TSV file. Its columns become variables to draw with.", find("data")),
			e.way("Open the example", "Hedgerows and wild bees: two explanations, 252 trap rounds on invented farms.", find("example")),
		}
		return
	}
	e.object.Objects = []fyne.CanvasObject{title, draw,
		e.way("Place all variables", "Put every variable of the ledger on the sheet. Or drag the ones you want from the left.", find("place-all")),
	}
}

func (e *empty) way(title, text string, run func()) *press {
	p := e.d.press(column(3, bold(title), para(text, tokenMuted)), func(*press) skin {
		return skin{fill: tokenCard, edge: tokenBorder, width: 1, radius: 6}
	}, run)
	p.padX, p.padY = 14, 10
	return p
}

func (e *empty) update() {
	show(len(e.d.view.Rival.Diagram.Nodes) == 0, e.object)
	if first := len(e.d.view.Study.Variables) == 0; first != e.first {
		e.fill(first)
		e.object.Refresh()
	}
}
