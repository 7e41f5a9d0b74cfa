package ui

import (
	"fmt"
	"math/rand/v2"
	"slices"

	"fyne.io/fyne/v2"

	"arrowroot/app/words"
	"arrowroot/canvas"
	"arrowroot/canvas/draw"
	"arrowroot/compile/catalog"
	"arrowroot/compile/model"
	"arrowroot/compile/study"
)

// A formChoice is a form that an arrow can take, with its picture.
type formChoice struct {
	name string
	line [][2]float64 // in a box of 1 × 1, y up
	says string       // of parent and child
}

// forms are all forms, in the order in which they are offered.
var forms = []formChoice{
	{study.Slope, [][2]float64{{0.08, 0.12}, {0.92, 0.88}}, "Each step of %[1]s moves the predictor of %[2]s by the same amount."},
	{study.Log, [][2]float64{{0.08, 0.08}, {0.12, 0.34}, {0.2, 0.5}, {0.34, 0.63}, {0.55, 0.75}, {0.92, 0.88}}, "Each doubling of %[1]s moves the predictor of %[2]s by the same amount."},
	{study.Threshold, [][2]float64{{0.08, 0.18}, {0.5, 0.18}, {0.92, 0.88}}, "Below a point that is estimated %[1]s does nothing; above it each step moves the predictor of %[2]s by the same amount."},
	{study.Saturating, [][2]float64{{0.08, 0.08}, {0.16, 0.42}, {0.26, 0.62}, {0.4, 0.75}, {0.6, 0.82}, {0.92, 0.86}}, "More %[1]s does less and less to %[2]s, up to a limit; half of the limit is reached at a value that is estimated."},
	{study.Steps, [][2]float64{{0.08, 0.45}, {0.36, 0.45}, {0.36, 0.85}, {0.64, 0.85}, {0.64, 0.15}, {0.92, 0.15}}, "Each level of %[1]s has an effect of its own on %[2]s."},
	{study.OneWay, [][2]float64{{0.08, 0.12}, {0.3, 0.12}, {0.3, 0.3}, {0.5, 0.3}, {0.5, 0.75}, {0.72, 0.75}, {0.72, 0.88}, {0.92, 0.88}}, "From level to level %[1]s moves %[2]s the same way, up or down, by steps of any size."},
	{study.Offset, [][2]float64{{0.08, 0.3}, {0.92, 0.3}, {0.92, 0.7}, {0.08, 0.7}, {0.08, 0.3}}, "%[1]s enters %[2]s as it is, on the log scale, with no coefficient: twice the %[1]s, twice the expected %[2]s."},
}

// offered reports whether a parent of some scale can take a form at all; what
// its values say against it is said once it is chosen.
func offered(form string, scale study.Scale) bool {
	switch scale {
	case "":
		return true
	case study.Category:
		return form == study.Steps
	case study.Ordered:
		return form == study.Steps || form == study.OneWay || form == study.Slope
	case study.Binary:
		return form == study.Slope
	}
	return form != study.Steps && form != study.OneWay
}

// formOf is an arrow's form, with the default spelled out.
func (d *desk) formOf(a *study.Arrow) string {
	if a.Form != "" {
		return a.Form
	}
	if v := d.view.Study.Variable(a.From); v != nil && (v.Scale == study.Category || v.Scale == study.Ordered) {
		return study.Steps
	}
	return study.Slope
}

// tilesInRow is how many forms stand beside each other.
const tilesInRow = 3

// formTiles are the forms to choose from, and what the chosen one means.
func (x *details) formTiles(s *sheaf, a *study.Arrow) {
	d := x.d
	form := d.formOf(a)
	var scale study.Scale
	if v := d.view.Study.Variable(a.From); v != nil {
		scale = v.Scale
	}
	var tiles []fyne.CanvasObject
	for _, f := range forms {
		if !offered(f.name, scale) && f.name != form {
			continue
		}
		pic := canvas.NewPicture(76, 36, func(w, h float64) *draw.List { return formPicture(w, h, f.line, nrgba(tokenInk)) })
		t := d.tile(pic, f.name, f.name == form, func() {
			d.changeArrow(a.From, a.To, func(a *study.Arrow) { a.Form = f.name })
		})
		s.keys["form "+f.name] = t
		tiles = append(tiles, t)
	}
	for part := range slices.Chunk(tiles, tilesInRow) {
		s.add(row(8, part...))
	}
	for _, f := range forms {
		if f.name == form {
			s.add(newProse(sizeSmall, span{text: fmt.Sprintf(f.says, a.From, a.To), token: tokenMuted}))
		}
	}
	x.formFault(s, a)
}

// formFault says why the arrow cannot have its form, with what mends it.
func (x *details) formFault(s *sheaf, a *study.Arrow) {
	d := x.d
	for _, p := range d.view.Problems {
		if p.From != a.From || p.Variable != a.To {
			continue
		}
		s.text(p.Message, problemToken(p))
		buttons := row(8)
		for _, r := range p.Repairs {
			mend := d.plain(r.Label, func() { d.do(r.Edit) })
			s.keys["mend "+r.Label] = mend
			buttons.Add(mend)
		}
		s.add(buttons)
		return
	}
}

func formPicture(w, h float64, line [][2]float64, ink draw.Color) *draw.List {
	l := &draw.List{Width: w, Height: h}
	var points []draw.Point
	for _, p := range line {
		points = append(points, draw.Point{X: p[0] * w, Y: (1 - p[1]) * h})
	}
	l.Add(&draw.Shape{Path: draw.Polyline(points...), Stroke: ink, Width: 1.6})
	return l
}

// Of a band's picture: values of the parent, and draws of the prior.
const (
	bandPlaces = 41
	bandDraws  = 600
)

// formBand shows what the arrow adds to its child over the parent's plausible
// range: the band of the prior, and of the posterior once fitted.
func (x *details) formBand(s *sheaf, a *study.Arrow) {
	d := x.d
	m := d.view.Model
	if m == nil {
		return
	}
	t, ok := m.TermOf(a.From, a.To)
	if !ok {
		return
	}
	level := 0.9
	if q := d.view.Question; q != nil {
		level = orLevel(q.Level)
	}
	parent, _ := m.Name(a.From)
	child, _ := m.Name(a.To)
	pic := draw.Form{Labels: m.Variables[parent].Levels, Across: axisWords(m.Variables[parent].ID, m.Variables[parent].Unit), Up: addsTo(m, child)}
	if values, ok := m.PriorValues(t, bandDraws, rand.New(rand.NewPCG(1, 1))); ok {
		if b, ok := m.Band(t, m.Places(t, bandPlaces), level, bandDraws, values); ok {
			pic.Prior = draw.FormBand(b)
		}
	}
	fitted := false
	if r := d.view.Result; r != nil && r.Full != nil {
		if b, ok := r.Full.Band(a.From, a.To, bandPlaces, level); ok {
			pic.Posterior, fitted = draw.FormBand(b), true
		}
	}
	if len(pic.Prior.X) == 0 && !fitted {
		return
	}
	spans := []span{{text: "prior ┄  ", token: tokenMuted}}
	if fitted {
		spans = append(spans, span{text: "posterior  ", token: tokenConfound})
		if trust := d.view.Result.Full.Trust.Verdict.String(); trust != "sound" {
			spans = append(spans, span{text: trust + "  ", token: tokenConfound})
		}
	}
	says := words.Percent(level) + ": what " + a.From + " adds to " + a.To
	if t.Kind == model.Slope || t.Kind == model.Log || t.Kind == model.Threshold || t.Kind == model.Saturating {
		says += ", 0 at " + a.From + " " + draw.Number(t.Center)
	}
	if len(a.VariesBy) > 0 {
		says += ", in an average " + words.List(a.VariesBy)
	}
	spans = append(spans, span{text: says, token: tokenMuted})
	if fitted && d.view.Stale {
		spans = append(spans, span{text: " · of an earlier version", token: tokenMuted})
	}
	s.add(
		stack(bordered(tokenCard, tokenHairline, 5), canvas.NewPicture(120, 150, func(w, h float64) *draw.List { return draw.FormPlot(w, h, pic, d.style()) })),
		newProse(sizeSmall, spans...),
	)
}

func axisWords(id, unit string) string {
	if unit == "" {
		return id
	}
	return id + ", " + unit
}

// addsTo says on which scale an arrow adds to a child.
func addsTo(m *model.Model, child int) string {
	v := m.Variables[child]
	for _, l := range m.Laws {
		if l.Variable != child {
			continue
		}
		switch l.Family.Link {
		case catalog.Log:
			return "adds to the log of " + v.ID
		case catalog.Logit, catalog.Softmax, catalog.Cumulate:
			return "adds to the log-odds of " + v.ID
		case catalog.Probit:
			return "adds to the probit of " + v.ID
		}
	}
	return "adds to " + axisWords(v.ID, v.Unit)
}
