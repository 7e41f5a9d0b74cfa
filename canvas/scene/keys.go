package scene

import (
	"math"

	"arrowroot/canvas/draw"
	"arrowroot/compile/study"
)

// The sheet's own keys: Escape, Delete, F2 and the arrow keys, which walk along
// the arrows of the diagram and with Ctrl move the selection. With the arrow
// or the common cause tool they aim at another variable, and Return draws; with
// the variable tool Return makes one. Every other key is a command of the
// window's.

var directions = map[string]draw.Point{
	"Left": {X: -1}, "Right": {X: 1}, "Up": {Y: -1}, "Down": {Y: 1},
}

func (h *Hand) key(in *Input, m *Map, e Event) Answer {
	if d, ok := directions[e.Key]; ok {
		return h.arrowKey(in, m, e, d)
	}
	switch {
	case e.Key == "Escape":
		return h.escape(in)
	case h.grip != gripNone && h.grip != gripKeys:
		return Answer{} // a drag is not disturbed by other keys
	case e.Key == "Delete" || e.Key == "BackSpace":
		if edit := remove(in.Rival, in.Selected); edit != nil {
			return Answer{Edit: nailed(in, edit), Select: &Selection{}}
		}
		return Answer{}
	case h.grip == gripKeys && e.Key == "Return":
		h.grip = gripNone
		to := h.link.To
		a := h.connect(in)
		a.Preview = &Preview{}
		if a.Edit != nil { // the next arrow goes on from here
			a.Select = &Selection{Nodes: []string{to}}
		}
		return a
	case e.Key == "F2":
		if len(in.Selected.Nodes) == 1 {
			return Answer{Name: &Naming{Variable: in.Selected.Nodes[0]}}
		}
		if len(in.Selected.Nodes) == 0 && len(in.Selected.Notes) == 1 {
			return Answer{Name: NoteNaming(in, in.Selected.Notes[0])}
		}
		return Answer{}
	case h.tool == VariableTool && e.Key == "Return" && in.Rival != nil:
		return Answer{Name: &Naming{At: Free(in)}}
	case h.tool == NoteTool && e.Key == "Return" && in.Rival != nil:
		return Answer{Name: &Naming{At: Free(in), Note: true, Which: -1}}
	}
	return Answer{Command: command(e)}
}

// command writes a key with its modifiers: "Ctrl+A", "X".
func command(e Event) string {
	name := e.Key
	if e.Shift {
		name = "Shift+" + name
	}
	if e.Ctrl {
		name = "Ctrl+" + name
	}
	return name
}

// escape leaves the innermost thing: a gesture, a tool, a selection.
func (h *Hand) escape(in *Input) Answer {
	switch {
	case h.grip != gripNone:
		a := Answer{Preview: &Preview{}}
		if h.grip == gripPan {
			a.View = &h.view
		}
		if h.grip == gripMarquee {
			a.Select = &h.before
		}
		h.grip, h.link = gripNone, Draft{}
		return a
	case h.tool != SelectTool:
		h.tool = SelectTool
		t := SelectTool
		return Answer{Tool: &t}
	case !in.Selected.Empty():
		return Answer{Select: &Selection{}}
	}
	return Answer{Command: "Escape"}
}

func (h *Hand) arrowKey(in *Input, m *Map, e Event, d draw.Point) Answer {
	drawing := h.tool == ArrowTool || h.tool == CauseTool
	switch {
	case h.grip == gripNone && drawing && !e.Ctrl && !e.Shift && len(in.Selected.Nodes) == 1:
		h.grip = gripKeys
		h.link = Draft{From: in.Selected.Nodes[0], Arc: h.tool == CauseTool, End: in.layout()[in.Selected.Nodes[0]]}
		return h.arrowKey(in, m, e, d)
	case h.grip == gripKeys:
		at := h.link.To
		if at == "" {
			at = h.link.From
		}
		if next := m.beyond(at, d, func(id string) bool { return id != h.link.From }); next != "" {
			h.aim(in, next, in.layout()[next])
		}
		draft := h.link
		return Answer{Preview: &Preview{Draw: &draft}}
	case h.grip != gripNone:
		return Answer{}
	case e.Ctrl:
		return nudge(in, d)
	}
	at := ""
	if n := len(in.Selected.Nodes); n > 0 {
		at = in.Selected.Nodes[n-1]
	}
	next := in.first()
	if at != "" {
		next = m.beyond(at, d, func(id string) bool { return m.joined(at, id) })
		if next == "" {
			next = m.beyond(at, d, nil)
		}
	}
	if next == "" {
		return Answer{}
	}
	s := Selection{Nodes: []string{next}}
	if e.Shift && !in.Selected.HasNode(next) {
		s = in.Selected.toggled(Target{Kind: OnNode, Node: next})
	}
	return Answer{Select: &s}
}

// nudge moves the selected nodes by one step of the grid.
func nudge(in *Input, d draw.Point) Answer {
	places := in.layout()
	to := make(map[string]study.Point)
	for _, id := range in.Selected.Nodes {
		if p, ok := places[id]; ok {
			to[id] = study.Point{X: p.X + d.X*unit, Y: p.Y + d.Y*unit}
		}
	}
	notes := make(map[int]study.Point)
	for i, p := range in.notePlaces() {
		if in.Selected.HasNote(i) {
			notes[i] = study.Point{X: p.X + d.X*unit, Y: p.Y + d.Y*unit}
		}
	}
	if len(to)+len(notes) == 0 || in.Rival == nil {
		return Answer{}
	}
	move := nailed(in, study.MoveNodes{Rival: in.Rival.Name, To: to})
	switch {
	case len(notes) == 0:
		return Answer{Edit: move}
	case len(to) == 0:
		return Answer{Edit: study.MoveNotes{Rival: in.Rival.Name, To: notes}}
	}
	return Answer{Edit: study.Several{Name: "Move the selection", Edits: []study.Edit{move, study.MoveNotes{Rival: in.Rival.Name, To: notes}}}}
}

// first is the node that the keyboard begins at: the exposure or the first.
func (in *Input) first() string {
	if in.Rival == nil || in.Rival.Diagram == nil || len(in.Rival.Diagram.Nodes) == 0 {
		return ""
	}
	if in.Question != nil && in.Rival.Diagram.Node(in.Question.Exposure) != nil {
		return in.Question.Exposure
	}
	return in.Rival.Diagram.Nodes[0].Variable
}

// beyond finds the nearest node in a direction from another; sideways counts
// double. may, if not nil, says which nodes count. "" = none.
func (m *Map) beyond(from string, d draw.Point, may func(id string) bool) string {
	i, ok := m.index[from]
	if !ok {
		return ""
	}
	best, found := math.Inf(1), ""
	for k, n := range m.nodes {
		if k == i || (may != nil && !may(n.id)) {
			continue
		}
		v := n.at.Sub(m.nodes[i].at)
		along := v.X*d.X + v.Y*d.Y
		across := math.Abs(v.X*d.Y) + math.Abs(v.Y*d.X)
		if along < 1 || across > 3*along {
			continue
		}
		if cost := along + 2*across; cost < best {
			best, found = cost, n.id
		}
	}
	return found
}

// joined reports whether an arrow or arc joins two nodes.
func (m *Map) joined(a, b string) bool {
	for _, lines := range [][]*line{m.arrows, m.arcs} {
		for _, l := range lines {
			if l.pair == [2]string{a, b} || l.pair == [2]string{b, a} {
				return true
			}
		}
	}
	return false
}

// nodeAt is the node under the pointer or just beside it.
func (m *Map) nodeAt(p draw.Point) string {
	best, found := 10.0, ""
	for _, n := range m.nodes {
		if d := n.depth(p); d < best {
			best, found = d, n.id
		}
	}
	return found
}
