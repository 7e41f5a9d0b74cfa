package ui

import (
	"fmt"
	"math"
	"strings"

	"fyne.io/fyne/v2"
	"fyne.io/fyne/v2/container"

	"arrowroot/app/paint"
	"arrowroot/app/session"
	"arrowroot/app/words"
	"arrowroot/canvas/draw"
	"arrowroot/canvas/scene"
	"arrowroot/compile/study"
)

// status is the line below the sheet: zoom, what just happened, and the
// legends of the paint in words.
type status struct {
	d       *desk
	object  *fyne.Container
	zoom    *press
	zoomed  *label
	says    *label
	legend  *fyne.Container
	refused string // why a gesture could not be done; goes with the next one
	notice  string
	told    string       // the session's last notice
	toldOf  *study.Study // what it was about
	hint    string       // what the pointer is over
}

func newStatus(d *desk) *status {
	s := &status{d: d}
	s.zoomed = small("100 %")
	s.zoom = d.press(s.zoomed, func(*press) skin { return skin{radius: 4} }, func() { d.commands.find("zoom-fit").run() })
	s.zoom.padX, s.zoom.padY, s.zoom.tip = 4, 2, "Show the whole sheet"
	s.says = small("").shrinkTo(20)
	s.legend = row(6)
	s.object = container.New(&statusLayout{s}, s.zoom, s.says, s.legend)
	return s
}

func (s *status) update() {
	s.zoomed.set(fmt.Sprintf("%.0f %%", math.Round(100*s.d.editor.View().Scale())), tokenMuted)
	s.says.set(s.text(), tokenMuted)
	if s.refused != "" {
		s.says.set(s.refused, tokenConfound)
	}
	s.legend.Objects = s.legends()
	s.object.Layout.Layout(s.object.Objects, s.object.Size())
	s.object.Refresh()
}

// statusLayout sets the zoom, the words and the legend in a line. Words that
// would be cut short beside the legend take its place, unless they only name
// what the pointer is over: then they stay away.
type statusLayout struct{ s *status }

func (l *statusLayout) Layout(_ []fyne.CanvasObject, size fyne.Size) {
	s := l.s
	const pad, gap = 12, 8
	zoom, says, legend := s.zoom.MinSize(), fyne.MeasureText(s.says.text, s.says.size, s.says.style), s.legend.MinSize()
	centred := func(o fyne.CanvasObject, x, w float32, m fyne.Size) {
		place(o, x, (size.Height-m.Height)/2, w, m.Height)
	}
	x := pad + zoom.Width + gap
	centred(s.zoom, pad, zoom.Width, zoom)
	centred(s.legend, size.Width-pad-legend.Width, legend.Width, legend)
	tight := len(s.legend.Objects) > 0 && x+says.Width+gap+legend.Width+pad > size.Width
	show(!tight || s.idle(), s.legend)
	show(!tight || !s.idle(), s.says)
	centred(s.says, x, size.Width-pad-x, says)
}

func (l *statusLayout) MinSize([]fyne.CanvasObject) fyne.Size { return fyne.NewSize(80, statusHeight) }

// idle reports whether nothing has happened: the words, if any, only name what
// the pointer is over.
func (s *status) idle() bool {
	return s.refused == "" && s.notice == "" && !s.d.view.Running && !s.news(s.d.view)
}

// text is what the line says in the middle.
func (s *status) text() string {
	v := s.d.view
	switch {
	case s.notice != "":
		return s.notice
	case v.Running:
		return "Fitting: " + progressWords(v.Progress.Done, v.Progress.Total, v.Progress.Left, v.Progress.Cancelling)
	case s.news(v):
		return v.Notice
	case s.hint != "":
		return s.hint
	}
	return ""
}

// news reports whether the session's notice is about what is still there: it
// goes with the next edit.
func (s *status) news(v *session.View) bool {
	if v.Notice != s.told {
		s.told, s.toldOf = v.Notice, v.Study
	}
	return v.Notice != "" && s.toldOf == v.Study && v.Result == nil
}

// legends are those of the paint, in words, one for nodes and one for arrows.
func (s *status) legends() []fyne.CanvasObject {
	d := s.d
	r := d.view.Result
	if r == nil || d.paint == "" {
		return nil
	}
	p := d.palette()
	var out []fyne.CanvasObject
	say := func(text string) { out = append(out, small(text)) }
	switch d.paint {
	case scene.EffectPaint:
		what := "effect"
		if r.Question != nil {
			what = strings.TrimSpace("total effect of " + r.Question.Exposure + " " + words.Change(d.view.Study, r.Question))
		}
		say("nodes: " + what + ", in plausible widths")
		say("−")
		out = append(out, swatches(p.Effect[:], p))
		say("+")
		out = append(out, hatch(p))
		say("unsure")
		say("  arrows: direct, width = size")
	case scene.LearnedPaint:
		say("nodes and arrows: what the data taught beyond the prior")
		say("little")
		out = append(out, swatches(p.Learned[:], p))
		say("much")
	case scene.FitPaint:
		say("nodes: can the model reproduce the data?")
		if d.view.Checks == nil {
			say("not checked yet")
			break
		}
		for i, w := range paint.FitWords {
			out = append(out, swatches(p.Learned[i:i+1], p))
			say(paint.FitSigns[i] + " " + w)
		}
	case scene.TrustPaint:
		say("nodes and arrows: can the computation be trusted?")
		for i, w := range []string{"✓ sound", "! caution", "× unusable"} {
			out = append(out, swatches(p.Learned[i:i+1], p))
			say(w)
		}
	}
	if d.view.Stale {
		out = append(out, newLabel("  of an earlier version", sizeSmall, tokenConfound, fyne.TextStyle{}))
	}
	return out
}

// swatches are the bins of a paint side by side.
func swatches(colors []draw.Color, p scene.Palette) fyne.CanvasObject {
	return picture(float32(len(colors))*20, 11, func(w, h float64) *draw.List {
		l := &draw.List{Width: w, Height: h}
		step := w / float64(len(colors))
		for i, c := range colors {
			l.Add(&draw.Shape{Path: draw.RoundRect(draw.Rect{X: step * float64(i), W: step - 1, H: h}, 1), Fill: c})
		}
		return l
	})
}

// hatch is the mark of what is too unsure to say.
func hatch(p scene.Palette) fyne.CanvasObject {
	return picture(20, 11, func(w, h float64) *draw.List {
		l := &draw.List{Width: w, Height: h}
		for x := -h; x < w; x += 4 {
			a, b := draw.Point{X: x, Y: h}, draw.Point{X: x + h, Y: 0}
			if a.X < 0 {
				a = draw.Point{X: 0, Y: h + x}
			}
			if b.X > w {
				b = draw.Point{X: w, Y: b.X - w}
			}
			l.Add(&draw.Shape{Path: draw.Polyline(a, b), Stroke: p.Muted, Width: 1})
		}
		l.Add(&draw.Shape{Path: draw.RoundRect(draw.Rect{X: 0.5, Y: 0.5, W: w - 1, H: h - 1}, 1), Stroke: p.Muted, Width: 1})
		return l
	})
}

// refuse says why a gesture could not be done.
func (s *status) refuse(why string) {
	s.refused = strings.TrimSpace(why)
	s.update()
}
