package ui

import (
	"fmt"

	"fyne.io/fyne/v2"

	"arrowroot/canvas"
	"arrowroot/canvas/draw"
	"arrowroot/canvas/scene"
	"arrowroot/compile/causal"
	"arrowroot/compile/study"
)

// rivals shows every explanation as a small drawing and turns between them.
type rivals struct {
	d    *desk
	pane *pane
	seen rivalsState
}

type rivalsState struct {
	study    *study.Study
	rival    *study.Rival
	question *study.Question
	dark     bool
}

func newRivals(d *desk) *rivals { return &rivals{d: d, pane: newPane(8, 6, 8)} }

func (r *rivals) update() {
	v := r.d.view
	state := rivalsState{v.Study, v.Rival, v.Question, r.d.dark()}
	if state == r.seen {
		return
	}
	r.seen = state
	keys := make(map[string]fyne.Focusable)
	add := r.d.quiet("+ rival", func() { r.d.commands.find("copy-rival").run() })
	add.tip = "A copy of this rival, to change"
	keys["add"] = add
	objects := []fyne.CanvasObject{row(4, gapOf(2, 1), caption("Rivals"), space(), add)}
	for _, x := range v.Study.Rivals {
		c := r.card(x)
		keys["rival "+x.Name] = c
		objects = append(objects, c)
	}
	r.pane.fill(keys, objects...)
}

func (r *rivals) card(x *study.Rival) *press {
	d := r.d
	thumb := canvas.NewPicture(76, 50, func(w, h float64) *draw.List {
		return draw.Thumbnail(w, h, thumbOf(d.view.Study, x, d.view.Question), d.style())
	})
	name := bold(x.Name).shrinkTo(40)
	about := small(difference(d.view.Study, d.view.Rival, x)).shrinkTo(40)
	lines := column(2, name, about)
	if x.Note != "" {
		n := small(x.Note).shrinkTo(40)
		lines = column(2, name, n, about)
	}
	p := d.press(row(8, thumb, stretch(lines)), func(p *press) skin {
		if p.selected {
			return skin{fill: tokenCard, edge: tokenAction, width: 2, radius: 6}
		}
		return skin{fill: tokenSheet, edge: tokenHairline, width: 1, radius: 6}
	}, func() { d.session.ShowRival(x.Name) })
	p.padX, p.padY, p.minH = 8, 7, 64
	p.selected = x.Name == d.view.Rival.Name
	p.onSecondary = func(at fyne.Position) { d.rivalMenu(x.Name, at) }
	return p
}

// thumbOf reduces a rival to boxes and lines.
func thumbOf(s *study.Study, r *study.Rival, q *study.Question) draw.Thumb {
	at := scene.Arrange(s, r, true)
	var t draw.Thumb
	place := make(map[string]int)
	for i, n := range r.Diagram.Nodes {
		place[n.Variable] = i
		v := s.Variable(n.Variable)
		t.Nodes = append(t.Nodes, draw.ThumbNode{
			At:         draw.Point{X: at[n.Variable].X, Y: at[n.Variable].Y},
			Unmeasured: v != nil && v.Unmeasured,
			Marked:     q != nil && (q.Exposure == n.Variable || q.Outcome == n.Variable),
		})
	}
	for _, a := range r.Diagram.Arrows {
		t.Arrows = append(t.Arrows, [2]int{place[a.From], place[a.To]})
	}
	for _, a := range r.Diagram.Arcs {
		t.Arcs = append(t.Arcs, [2]int{place[a.A], place[a.B]})
	}
	return t
}

// compare lists what two rivals draw differently; ok is false where one of
// them has no graph.
func compare(s *study.Study, a, b *study.Rival) (diff causal.Difference, ok bool) {
	ga, errA := s.Graph(a.Name)
	gb, errB := s.Graph(b.Name)
	if errA != nil || errB != nil {
		return diff, false
	}
	return causal.Compare(ga, gb), true
}

// difference says how far a rival is from the one on the sheet.
func difference(s *study.Study, shown, x *study.Rival) string {
	if shown == x {
		return times(len(x.Diagram.Arrows)+len(x.Diagram.Arcs), "arrow", "arrows")
	}
	diff, ok := compare(s, shown, x)
	if !ok {
		return "its arrows close a cycle"
	}
	n := len(diff.OnlyA) + len(diff.OnlyB) + len(diff.ArcsOnlyA) + len(diff.ArcsOnlyB) - len(diff.Reversed)
	switch {
	case n == 0:
		return "the same arrows"
	case n == 1:
		return "1 arrow differs"
	}
	return fmt.Sprintf("%d arrows differ", n)
}
