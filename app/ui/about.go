package ui

import (
	"fyne.io/fyne/v2"

	"arrowroot/app/words"
)

// about says what the program is and how far to trust it.
func (d *desk) about() {
	const width = 460
	var p *popover
	done := d.primary("Close", func() { p.close() })
	body := column(8,
		newLabel("Arrowroot", sizeTitle, tokenInk, fyne.TextStyle{Bold: true}),
		para("Draw what you think causes what, read what follows, fit it to data, and see the effect with its interval on the same diagram.", tokenInk),
		bold("Caution"),
		para(words.Caution, tokenConfound),
		para("Nothing leaves this machine: the program uses no network.", tokenMuted),
		para("Free software under the BSD 3-clause licence. Set in DejaVu Sans; the window is made with Fyne.", tokenMuted),
		row(8, space(), done))
	area := d.win.Canvas().Size()
	p = d.kit.pop(d.win.Canvas(), body, fyne.NewPos((area.Width-width)/2, 90), width)
	d.win.Canvas().Focus(done)
}

// showKeys lists every key there is.
func (d *desk) showKeys() {
	const width = 600
	var p *popover
	left, right := column(3), column(3)
	n := 0
	for _, c := range d.commands {
		if c.keys != "" {
			n++
		}
	}
	i := 0
	for _, c := range d.commands {
		if c.keys == "" {
			continue
		}
		side := left
		if i >= (n+1)/2 {
			side = right
		}
		side.Add(row(8, fixed(104, 0, newLabel(c.keys, sizeSmall, tokenAction, fyne.TextStyle{Bold: true})), stretch(newLabel(c.label, sizeSmall, tokenInk, fyne.TextStyle{}).shrinkTo(20))))
		i++
	}
	done := d.primary("Close", func() { p.close() })
	body := column(10,
		bold("Keys"),
		para("Letters alone work on the sheet. There: double-click for a new variable, drag from a variable's edge for an arrow, space and drag to pan, wheel to zoom, Escape to leave a tool.", tokenMuted),
		topRow(16, stretch(left), stretch(right)),
		row(8, space(), done))
	area := d.win.Canvas().Size()
	p = d.kit.pop(d.win.Canvas(), body, fyne.NewPos((area.Width-width)/2, 50), width)
	d.win.Canvas().Focus(done)
}

// turnShade changes between light and dark, and remembers it.
func (d *desk) turnShade() {
	shade := Dark
	if d.dark() {
		shade = Light
	}
	d.app.Preferences().SetString(prefShade, string(shade))
	d.app.Settings().SetTheme(Theme{Shade: shade})
	d.repaint()
}

// copyStatement puts the model statement on the clipboard.
func (d *desk) copyStatement() {
	d.app.Clipboard().SetContent(statementText(d.view.Statement, false))
	d.notice("The statement is on the clipboard")
}
