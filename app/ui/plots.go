package ui

import (
	"image/color"
	"math"

	"fyne.io/fyne/v2"
	"fyne.io/fyne/v2/theme"

	"arrowroot/app/words"
	"arrowroot/canvas"
	"arrowroot/canvas/draw"
	"arrowroot/canvas/scene"
	"arrowroot/compile/catalog"
	"arrowroot/compile/formula"
	"arrowroot/compile/model"
)

// dark reports whether the dark set of colours is shown.
func (d *desk) dark() bool {
	t, ok := d.app.Settings().Theme().(Theme)
	return ok && t.Dark(d.app.Settings().ThemeVariant())
}

// palette is the sheet's colours for the present shade.
func (d *desk) palette() scene.Palette {
	if d.dark() {
		return scene.Dark()
	}
	return scene.Light()
}

// style is the colours of plots and thumbnails for the present shade.
func (d *desk) style() draw.Style {
	p := d.palette()
	return draw.Style{
		Ground: draw.Color{}, Ink: p.Ink, Muted: p.Muted, Hairline: p.Hairline,
		Accent: p.Effect[4], Soft: p.Effect[3], Size: float64(sizeCaption),
	}
}

func nrgba(name fyne.ThemeColorName) draw.Color {
	return color.NRGBAModel.Convert(theme.Color(name)).(color.NRGBA)
}

// priorCurve is the density of a parameter's prior on its own scale, from
// differences of the distribution function, over the middle 99 % of it.
func priorCurve(p *model.Parameter) draw.Curve {
	f := p.Prior.Family
	args, ok := constants(p.Prior.Arguments)
	if !ok || f == nil || f.CDF == nil || f.Quantile == nil {
		return draw.Curve{}
	}
	low, high := f.Quantile(0.004, args), f.Quantile(0.996, args)
	cdf := func(x float64) float64 { return f.CDF(x, args) }
	switch p.Prior.On {
	case model.InverseRoot: // P(k ≤ t) = P(1/√k ≥ 1/√t)
		low, high = 1/(high*high), 1/(low*low)
		cdf = func(t float64) float64 { return 1 - f.CDF(1/math.Sqrt(t), args) }
	case model.InverseRootPlus:
		low, high = 1/(high*high)-1, 1/(low*low)-1
		cdf = func(t float64) float64 { return 1 - f.CDF(1/math.Sqrt(1+t), args) }
	}
	if p.Prior.On != model.Itself { // a long right tail: show where most of it lies
		high = min(high, 40*max(low, 1e-3)+60)
	}
	if !(low < high) || math.IsInf(high-low, 0) {
		return draw.Curve{}
	}
	const n = 160
	step := (high - low) / n
	var c draw.Curve
	for i := range n {
		x := low + step*(float64(i)+0.5)
		y := (cdf(x+step/2) - cdf(x-step/2)) / step
		if math.IsNaN(y) || math.IsInf(y, 0) {
			y = 0
		}
		c.X, c.Y = append(c.X, x), append(c.Y, y)
	}
	return c
}

// constants are arguments that lean on no other parameter.
func constants(exprs []formula.Expr) ([]float64, bool) {
	out := make([]float64, len(exprs))
	for i, e := range exprs {
		out[i] = model.Evaluate(e, func(formula.Expr) float64 { return math.NaN() })
		if math.IsNaN(out[i]) {
			return nil, false
		}
	}
	return out, true
}

// posterior is the draws of one quantity of the result that is shown, by typed
// name; nil without a result.
func (d *desk) posterior(name string) []float64 {
	if d.view.Result == nil || d.view.Result.Full == nil {
		return nil
	}
	return d.view.Result.Full.Draws(name)
}

// posteriorWords is what the fit says of a quantity: "0.020 (−0.006 to 0.046), 90 %".
func (d *desk) posteriorWords(name string) (text, trust string) {
	if d.view.Result == nil || d.view.Result.Full == nil {
		return "", ""
	}
	for i, q := range d.view.Result.Full.Density.Quantities {
		if q.Name == name && i < len(d.view.Result.Full.Quantities) {
			s := d.view.Result.Full.Quantities[i]
			return words.Number(s.Centre) + " (" + words.Number(s.Low) + " to " + words.Number(s.High) + "), " + words.Percent(s.Level), s.Trust.Verdict.String()
		}
	}
	return "", ""
}

// priorPicture draws a parameter's prior, and its posterior once fitted.
func (d *desk) priorPicture(p *model.Parameter, draws []float64, low, high, level float64) *canvas.Picture {
	prior := priorCurve(p)
	return canvas.NewPicture(120, 104, func(w, h float64) *draw.List {
		pic := draw.Density{Prior: prior, Low: low, High: high}
		if len(draws) > 0 {
			pic.Posterior = draw.KDE(draws, 160)
		}
		if p.Support == catalog.Reals && p.Prior.On == model.Itself {
			zero := 0.0
			pic.Mark = &zero
		}
		return draw.DensityPlot(w, h, pic, d.style())
	})
}

// picture is a small drawing of a fixed size.
func picture(w, h float32, make func(w, h float64) *draw.List) fyne.CanvasObject {
	return fixed(w, h, canvas.NewPicture(w, h, make))
}
