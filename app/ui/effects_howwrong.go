package ui

import (
	"fyne.io/fyne/v2"
	"fyne.io/fyne/v2/container"

	"arrowroot/app/paint"
	"arrowroot/app/words"
	"arrowroot/canvas"
	"arrowroot/canvas/draw"
)

// howWrong says how strong an unmeasured cause would have to be to explain the
// effect away, with what is held marked in the picture.
func (p *effectPage) howWrong() []fyne.CanvasObject {
	e := p.d.view.Result.Effect
	lines := words.HowWrong(e)
	if len(lines) == 0 {
		return nil
	}
	objects := []fyne.CanvasObject{bold("How wrong could it be?")}
	var said []fyne.CanvasObject
	for i, line := range lines {
		token := tokenInk
		if i > 1 {
			token = tokenMuted
		}
		said = append(said, para(line, token))
	}
	r := e.Sensitivity
	if r == nil || r.Robustness == nil {
		return append(objects, said...)
	}
	strength, style := paint.Strength(r), p.d.style()
	pic := canvas.NewPicture(100, 190, func(w, h float64) *draw.List { return draw.StrengthPlot(w, h, strength, style) })
	grid := container.New(&evenLayout{gap: 12})
	grid.Add(stack(bordered(tokenSheet, tokenHairline, 6), padded(10, 6, 2, pic)))
	grid.Add(stack(bordered(tokenSheet, tokenHairline, 6), padded(10, 6, 6, said...)))
	return append(objects, grid)
}
