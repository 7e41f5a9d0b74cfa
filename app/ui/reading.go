package ui

import (
	"fmt"

	"fyne.io/fyne/v2"
	"fyne.io/fyne/v2/container"

	"arrowroot/app/words"
	"arrowroot/canvas/scene"
	"arrowroot/compile/causal"
	"arrowroot/compile/graph"
)

// readingPage shows what follows from the arrows: every path on the left, what
// to hold and what not to on the right.
type readingPage struct {
	d      *desk
	split  fyne.CanvasObject
	paths  *pane
	advice *pane
	seen   *causal.Reading
	failed error
	open   bool // list open paths only
	asked  bool
}

func newReadingPage(d *desk) *readingPage {
	p := &readingPage{d: d, paths: newPane(14, 8, 1), advice: newPane(16, 8, 5)}
	p.split = container.New(&splitLayout{share: 0.6}, p.paths, hairline(), p.advice)
	return p
}

func (p *readingPage) name() string               { return "Reading" }
func (p *readingPage) content() fyne.CanvasObject { return p.split }

func (p *readingPage) update() {
	v := p.d.view
	if p.asked && v.Reading == p.seen && v.GraphError == p.failed {
		return
	}
	p.asked, p.seen, p.failed = true, v.Reading, v.GraphError
	p.fill()
}

func (p *readingPage) fill() {
	v := p.d.view
	r := v.Reading
	keys := make(map[string]fyne.Focusable)
	switch {
	case v.GraphError != nil:
		p.paths.fill(nil, para(v.GraphError.Error(), tokenFault))
		p.advice.fill(nil)
		return
	case r == nil && v.Question != nil && v.Graph != nil:
		p.paths.fill(nil, para("Reading the arrows …", tokenMuted))
		p.advice.fill(nil)
		return
	case r == nil || r.Verdict.Kind == causal.Incomplete:
		p.paths.fill(nil,
			bold("Nothing is asked yet"),
			para("Pick a variable on the sheet and press X to make it the exposure; pick another and press Y to make it the outcome. Every path between them then stands here, with what closes it.", tokenMuted))
		p.advice.fill(nil)
		return
	}
	g := v.Graph
	q := r.Query
	kinds := map[causal.PathKind]int{}
	open := 0
	for i := range r.Paths {
		kinds[r.Paths[i].Kind]++
		if r.Paths[i].Open && r.Paths[i].Kind != causal.Causal {
			open++
		}
	}
	about := times(kinds[causal.Causal], "causal", "causal")
	if n := kinds[causal.BackDoor]; n > 0 {
		about += fmt.Sprintf(" · %d back-door", n)
	}
	if n := kinds[causal.NonCausal]; n > 0 {
		about += fmt.Sprintf(" · %d other", n)
	}
	if open > 0 {
		about += fmt.Sprintf(" · %d open that should not be", open)
	}
	only := p.d.toggle("open only", p.open, func(on bool) { p.open = on; p.fill() })
	keys["open"] = only
	objects := []fyne.CanvasObject{row(8, bold("Paths from "+g.Names[q.Exposure]+" to "+g.Names[q.Outcome]), stretch(small(about).shrinkTo(30)), only), gapOf(1, 2)}
	shown := 0
	column := p.column(g, r)
	for i := range r.Paths {
		path := &r.Paths[i]
		if p.open && !path.Open {
			continue
		}
		line := p.path(g, i, path, column)
		keys[fmt.Sprint("path ", i)] = line
		objects = append(objects, line)
		if shown++; shown == 200 {
			break
		}
	}
	if shown == 0 {
		objects = append(objects, para("No path is drawn between them.", tokenMuted))
	}
	if more := len(r.Paths) - shown; !p.open && more > 0 || r.MorePaths {
		objects = append(objects, small("and more paths than are listed here"))
	}
	p.paths.fill(keys, objects...)
	p.advise(g, r)
}

// path is one line of the list; hovered or reached by keyboard it is lit on
// the sheet alone.
func (p *readingPage) path(g *graph.Graph, i int, path *causal.Path, column float32) *press {
	kind, token := "back-door", tokenConfound
	switch path.Kind {
	case causal.Causal:
		kind, token = "causal", tokenInk
	case causal.NonCausal:
		kind = "other"
	}
	if !path.Open && path.Kind != causal.Causal {
		token = tokenMuted
	}
	state := pathState(g, path)
	mark := filled(token)
	mark.radius, mark.least = 4, fyne.NewSize(8, 8)
	line := row(8,
		fixed(8, 8, mark),
		fixed(64, 0, newLabel(kind, sizeBody, token, fyne.TextStyle{})),
		fixed(column, 0, body(path.Text(g)).shrinkTo(60)),
		stretch(small(state).shrinkTo(40)))
	x := p.d.press(line, func(x *press) skin {
		if x.focused || x.hovered {
			return skin{fill: tokenAmberTint, radius: 4}
		}
		return skin{radius: 4}
	}, func() {
		p.d.choose(scene.Selection{Nodes: nodesOf(g, path)})
	})
	x.padX, x.padY, x.minH = 6, 2, 23
	x.tip = path.Text(g) + ": " + state
	x.onKey = func(key fyne.KeyName) bool {
		switch key {
		case fyne.KeyUp:
			p.paths.focus(fmt.Sprint("path ", i-1))
		case fyne.KeyDown:
			p.paths.focus(fmt.Sprint("path ", i+1))
		default:
			return false
		}
		return true
	}
	x.onHover = func(in bool) {
		if in {
			p.d.editor.Highlight(i)
		} else {
			p.d.editor.Highlight(scene.NoPath)
		}
		x.Refresh()
	}
	return x
}

// column is the width of the paths' own column: as wide as the widest, within
// a share of the page.
func (p *readingPage) column(g *graph.Graph, r *causal.Reading) float32 {
	w := float32(120)
	for i := range r.Paths {
		if i == 60 {
			break
		}
		w = max(w, fyne.MeasureText(r.Paths[i].Text(g), sizeBody, fyne.TextStyle{}).Width+4)
	}
	return min(w, max(120, 0.52*p.paths.Size().Width))
}

func nodesOf(g *graph.Graph, p *causal.Path) []string {
	var out []string
	for _, v := range p.Nodes {
		out = append(out, g.Names[v])
	}
	return out
}

// pathState says whether a path is open, and what opens or closes it.
func pathState(g *graph.Graph, p *causal.Path) string {
	if p.Open {
		if len(p.OpenedAt) == 0 {
			return "open"
		}
		o := p.OpenedAt[0]
		if o.Node == o.By {
			return "open: holding " + g.Names[o.By] + " opens it"
		}
		return "open: holding " + g.Names[o.By] + " opens it at " + g.Names[o.Node]
	}
	if len(p.ClosedAt) == 0 {
		return "closed"
	}
	return "closed: " + p.ClosedAt[0].Reason
}

// advise fills the right side.
func (p *readingPage) advise(g *graph.Graph, r *causal.Reading) {
	d := p.d
	keys := make(map[string]fyne.Focusable)
	objects := []fyne.CanvasObject{bold("What to hold")}
	switch {
	case len(r.Sets) == 0:
		text := "No set of measured variables closes every back-door path."
		if r.Identifiable {
			text += " The effect still follows from what was measured, by another way."
		}
		objects = append(objects, para(text, tokenConfound))
	default:
		for i, set := range r.Sets {
			ids := d.names(set)
			label := orNone(ids)
			note := ""
			switch {
			case len(r.Sets) == 1:
				note = "only minimal set"
			case i == r.Precise:
				note = "most precise"
			}
			if sameSet(ids, d.view.Question.Held) && (len(ids) > 0 || d.view.Question.Held != nil) {
				if note != "" {
					note += " · "
				}
				note += "held now"
			}
			b := p.set(label, note, func() { d.holdAll(ids) })
			keys[fmt.Sprint("set ", i)] = b
			objects = append(objects, b)
			if i == 24 {
				objects = append(objects, small(fmt.Sprintf("and %d more", len(r.Sets)-i-1)))
				break
			}
		}
	}
	for _, f := range r.HeldFaults {
		b := d.quiet("Leave it free", func() { d.hold(g.Names[f.Node], false) })
		keys["free "+g.Names[f.Node]] = b
		objects = append(objects, newProse(sizeBody, span{text: g.Names[f.Node], bold: true}, span{text: ": " + f.Reason + " ", token: tokenConfound}, span{object: b}))
	}
	if len(r.Forbidden) > 0 {
		objects = append(objects, gapOf(1, 3), bold("Not to be held"))
		for _, f := range r.Forbidden {
			objects = append(objects, newProse(sizeBody, span{text: g.Names[f.Node], bold: true}, span{text: " · " + f.Reason, token: tokenMuted}))
		}
	}
	if len(r.Culprits) > 0 {
		objects = append(objects, gapOf(1, 3), bold("What was not measured"))
		names := words.List(d.names(r.Culprits))
		text := "Measuring any one of " + names + " would give a set to hold."
		if len(r.Culprits) == 1 {
			text = "Measuring " + names + " would give a set to hold."
		} else if r.CulpritsAll {
			text = "Measuring all of " + names + " together would give a set to hold."
		}
		objects = append(objects, para(text, tokenMuted))
	}
	if r.Verdict.Way != "" {
		objects = append(objects, gapOf(1, 3), bold("What else could be done"), markedProse(r.Verdict.Way, tokenMuted))
	}
	p.advice.fill(keys, objects...)
}

// set is a clickable set of variables to hold.
func (p *readingPage) set(label, note string, tap func()) *press {
	w := newLabel(label, sizeBody, tokenAction, fyne.TextStyle{Bold: true}).shrinkTo(40)
	n := small(note)
	n.token = tokenAction
	b := p.d.press(row(8, stretch(w), n), func(*press) skin { return skin{fill: tokenTint, radius: 5} }, tap)
	b.padX, b.padY, b.minH = 10, 3, 25
	b.tip = "Hold " + label
	return b
}

func sameSet(a, b []string) bool {
	if len(a) != len(b) {
		return false
	}
	in := make(map[string]bool, len(a))
	for _, x := range a {
		in[x] = true
	}
	for _, x := range b {
		if !in[x] {
			return false
		}
	}
	return true
}

// splitLayout sets two panes side by side with a line between them.
type splitLayout struct{ share float32 }

func (l *splitLayout) Layout(o []fyne.CanvasObject, s fyne.Size) {
	w := s.Width * l.share
	place(o[0], 0, 0, w, s.Height)
	place(o[1], w, 8, 1, s.Height-16)
	place(o[2], w+1, 0, s.Width-w-1, s.Height)
}

func (l *splitLayout) MinSize([]fyne.CanvasObject) fyne.Size { return fyne.NewSize(80, 24) }
