package ui

import (
	"fyne.io/fyne/v2"
)

// empty stands on an empty sheet and shows three ways to begin.
type empty struct {
	d      *desk
	object *fyne.Container
}

func newEmpty(d *desk) *empty {
	way := func(title, text, key string, run func()) *press {
		content := column(3, bold(title), para(text, tokenMuted))
		p := d.press(content, func(*press) skin {
			return skin{fill: tokenCard, edge: tokenBorder, width: 1, radius: 6}
		}, run)
		p.padX, p.padY = 14, 10
		p.key = key
		return p
	}
	ways := column(10,
		newLabel("Put down what you think causes what", sizeTitle, tokenInk, fyne.TextStyle{Bold: true}),
		way("Draw", "Double-click the sheet and type a name; drag from a variable's edge to draw an arrow. Or press Ctrl+K and type: hedge -> flowers -> bees", "draw", func() { d.commands.find("finder").run() }),
		way("Open data", "A CSV or TSV file. Its columns become variables to draw with.", "data", func() { d.commands.find("data").run() }),
		way("Open the example", "Hedgerows and wild bees: two explanations, 252 trap rounds on invented farms.", "example", func() { d.commands.find("example").run() }),
	)
	return &empty{d: d, object: ways}
}

func (e *empty) update() {
	show(len(e.d.view.Rival.Diagram.Nodes) == 0, e.object)
}
