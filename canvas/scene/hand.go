package scene

import (
	"errors"
	"maps"
	"math"
	"slices"

	"arrowroot/canvas/draw"
	"arrowroot/compile/study"
)

// A Hand turns events into answers. It remembers only the gesture in progress;
// what is on the sheet comes with every event, so nothing can go stale.
type Hand struct {
	tool    Tool
	grip    grip
	start   draw.Point // of the gesture
	dragged bool       // it has left the place where it began
	target  Target     // what was pressed
	shift   bool
	view    View                   // when a pan began
	places  map[string]study.Point // of the nodes that move, when the move began
	papers  map[int]study.Point    // of the notes that move with them
	before  Selection              // when a marquee began
	link    Draft
}

// grip is what the gesture in progress does.
type grip uint8

const (
	gripNone grip = iota
	gripPan
	gripMove
	gripLink    // an arrow or arc by pointer
	gripMarquee // picks nodes
	gripPlate
	gripKeys // an arrow or arc by keyboard: arrow keys aim, Return draws
)

// slack is how far the pointer may tremble before a press becomes a drag.
const slack = 4.0

// NewHand makes a hand with the select tool.
func NewHand() *Hand { return &Hand{tool: SelectTool} }

// Tool is the tool at hand.
func (h *Hand) Tool() Tool { return h.tool }

// Take takes another tool and drops the gesture in progress.
func (h *Hand) Take(t Tool) { h.tool, h.grip = t, gripNone }

// Busy reports whether a gesture is in progress.
func (h *Hand) Busy() bool { return h.grip != gripNone }

// Cursor is the shape of the pointer over a target.
func (h *Hand) Cursor(over Target) Cursor {
	switch {
	case h.grip == gripPan || h.grip == gripMove:
		return GrabCursor
	case h.grip == gripLink || h.tool == VariableTool || h.tool == PlateTool || h.tool == NoteTool && over.Kind != OnNote:
		return CrossCursor
	case over.Kind == OnEdge, over.Kind == OnNode && h.tool != SelectTool:
		return CrossCursor
	case over.Kind != Nothing && (h.tool == SelectTool || over.Kind == OnNote):
		return GrabCursor
	}
	return PlainCursor
}

// Handle answers one event.
func (h *Hand) Handle(in *Input, m *Map, e Event) Answer {
	switch e.Kind {
	case Press:
		return h.press(in, m, e)
	case Move:
		return h.move(in, m, e)
	case Release:
		return h.release(in, m, e)
	case DoubleClick:
		return h.double(in, m, e)
	case Wheel:
		v := in.View.ZoomAt(e.At, math.Pow(1.15, e.Turn))
		return Answer{View: &v}
	case Leave:
		if h.grip == gripNone {
			return Answer{Hover: &Target{}}
		}
	case Key:
		return h.key(in, m, e)
	}
	return Answer{}
}

func (h *Hand) press(in *Input, m *Map, e Event) Answer {
	if h.grip != gripNone && h.grip != gripKeys {
		return Answer{} // a second button during a gesture
	}
	h.start, h.dragged, h.shift = e.At, false, e.Shift
	h.target = m.Hit(e.At)
	switch {
	case e.Button == Middle, e.Button == Primary && e.Space:
		h.grip, h.view = gripPan, in.View
		return Answer{}
	case e.Button == Secondary:
		a := Answer{Menu: &h.target}
		if !in.Selected.covers(h.target) {
			s := only(h.target)
			a.Select = &s
		}
		return a
	}
	switch h.tool {
	case ArrowTool, CauseTool:
		if h.target.Node != "" {
			h.begin(h.target.Node, h.tool == CauseTool)
		} else {
			h.grip, h.before = gripMarquee, in.Selected
		}
		return Answer{}
	case PlateTool:
		h.grip = gripPlate
		return Answer{}
	case VariableTool:
		if h.target.Node == "" {
			return Answer{}
		}
	case NoteTool:
		if h.target.Kind != OnNote {
			return Answer{}
		}
	}
	return h.pick(in)
}

// pick begins what the select tool does with the thing pressed.
func (h *Hand) pick(in *Input) Answer {
	t := h.target
	switch t.Kind {
	case OnEdge:
		h.begin(t.Node, false)
		return Answer{}
	case Nothing:
		h.grip, h.before = gripMarquee, in.Selected
		return Answer{}
	}
	s := in.Selected
	switch {
	case h.shift:
		s = s.toggled(t)
	case !s.covers(t):
		s = only(t)
	}
	if t.Kind == OnNode || t.Kind == OnNote {
		h.grip = gripMove
		h.places, h.papers = make(map[string]study.Point), make(map[int]study.Point)
		for i, p := range in.notePlaces() {
			if s.HasNote(i) {
				h.papers[i] = p
			}
		}
		places := in.layout()
		for _, id := range s.Nodes {
			if p, ok := places[id]; ok {
				h.places[id] = p
			}
		}
	}
	return Answer{Select: &s}
}

func (h *Hand) begin(from string, arc bool) {
	h.grip = gripLink
	h.link = Draft{From: from, Arc: arc}
}

func (h *Hand) move(in *Input, m *Map, e Event) Answer {
	if h.grip == gripNone || h.grip == gripKeys {
		t := m.Hit(e.At)
		if t == in.Hover {
			return Answer{}
		}
		return Answer{Hover: &t}
	}
	if !h.dragged && e.At.Sub(h.start).Len() < slack {
		return Answer{}
	}
	h.dragged = true
	switch h.grip {
	case gripPan:
		v := h.view
		v.Pan = v.Pan.Add(e.At.Sub(h.start))
		return Answer{View: &v}
	case gripMove:
		nodes, notes := h.moved(in, e)
		return Answer{Preview: &Preview{Moved: nodes, MovedNotes: notes}}
	case gripLink:
		h.aim(in, m.nodeAt(e.At), in.View.In(e.At))
		d := h.link
		return Answer{Preview: &Preview{Draw: &d}, Hover: &Target{}}
	case gripMarquee, gripPlate:
		box := spanned(h.start, e.At)
		a := Answer{Preview: &Preview{Box: &box, Plate: h.grip == gripPlate}}
		if h.grip == gripMarquee {
			s := Selection{}
			if h.shift {
				s = h.before
			}
			for _, id := range m.Within(box) {
				if !s.HasNode(id) {
					s.Nodes = append(slices.Clone(s.Nodes), id)
				}
			}
			for _, i := range m.NotesWithin(box) {
				if !s.HasNote(i) {
					s.Notes = append(slices.Clone(s.Notes), i)
				}
			}
			a.Select = &s
		}
		return a
	}
	return Answer{}
}

// moved is where the nodes and notes in the hand stand: the one that was
// pressed snaps to the grid, the others keep their distance from it. Ctrl lets
// go of the grid.
func (h *Hand) moved(in *Input, e Event) (to map[string]study.Point, notes map[int]study.Point) {
	z := in.View.Scale()
	dx, dy := (e.At.X-h.start.X)/z, (e.At.Y-h.start.Y)/z
	if lead, ok := h.lead(); ok && !e.Ctrl {
		dx, dy = snap(lead.X+dx)-lead.X, snap(lead.Y+dy)-lead.Y
	}
	to, notes = make(map[string]study.Point, len(h.places)), make(map[int]study.Point, len(h.papers))
	now := in.notePlaces()
	for i, p := range h.papers {
		if _, there := now[i]; there {
			notes[i] = study.Point{X: p.X + dx, Y: p.Y + dy}
		}
	}
	for id, p := range h.places {
		if in.Rival == nil || in.Rival.Diagram.Node(id) == nil {
			continue // undone under the hand
		}
		to[id] = study.Point{X: p.X + dx, Y: p.Y + dy}
	}
	return to, notes
}

// lead is where the thing that was pressed stood.
func (h *Hand) lead() (p study.Point, ok bool) {
	if h.target.Kind == OnNote {
		p, ok = h.papers[h.target.Note]
		return p, ok
	}
	p, ok = h.places[h.target.Node]
	return p, ok
}

func snap(v float64) float64 { return math.Round(v/unit) * unit }

// aim points the arrow in the hand; the study itself says whether it may be
// drawn.
func (h *Hand) aim(in *Input, to string, end study.Point) {
	h.link.End = end
	if to == h.link.From {
		to = ""
	}
	if to == h.link.To {
		return
	}
	h.link.To, h.link.Refuse = to, ""
	if to == "" || in.Rival == nil {
		return
	}
	d := in.Rival.Diagram
	switch {
	case h.link.Arc && d.Arc(h.link.From, to) != nil, !h.link.Arc && d.Arrow(h.link.From, to) != nil:
		h.link.Refuse = "drawn already"
	case !h.link.Arc:
		if _, err := h.linkEdit(in).Apply(in.Study); err != nil {
			h.link.Refuse = "would close a cycle"
		}
	}
}

// linkEdit draws the arrow or arc in the hand.
func (h *Hand) linkEdit(in *Input) study.Edit { return h.link.draw(in.Rival.Name) }

func (d *Draft) draw(rival string) study.Edit {
	if d.Arc {
		return study.AddArc{Rival: rival, Arc: study.Arc{A: d.From, B: d.To}}
	}
	return study.AddArrow{Rival: rival, Arrow: study.Arrow{From: d.From, To: d.To}}
}

// Edit is what letting go of the draft here would draw between two variables;
// nil if it would draw nothing.
func (d *Draft) Edit(rival string) study.Edit {
	if d == nil || d.To == "" || d.Refuse != "" {
		return nil
	}
	return d.draw(rival)
}

func (h *Hand) release(in *Input, m *Map, e Event) Answer {
	g := h.grip
	if g == gripNone || g == gripKeys {
		if h.tool == VariableTool && e.Button == Primary && h.target.Kind == Nothing && in.Rival != nil {
			return Answer{Name: &Naming{At: Snapped(in.View.In(e.At))}}
		}
		if h.tool == NoteTool && e.Button == Primary && h.target.Kind != OnNote && in.Rival != nil {
			return Answer{Name: &Naming{At: Snapped(in.View.In(e.At)), Note: true, Which: -1}}
		}
		return Answer{}
	}
	h.grip = gripNone
	if !h.dragged {
		return h.click(in)
	}
	none := &Preview{}
	switch g {
	case gripMove:
		return Answer{Preview: none, Edit: h.moveEdit(in, e)}
	case gripLink:
		a := h.connect(in)
		a.Preview = none
		return a
	case gripPlate:
		ids := m.Within(spanned(h.start, e.At))
		if len(ids) == 0 {
			return Answer{Preview: none, Refuse: "A plate needs variables in it: draw the frame around some."}
		}
		return Answer{Preview: none, Name: &Naming{Members: ids, At: Snapped(in.View.In(h.start))}}
	}
	return Answer{Preview: none}
}

// moveEdit puts what is in the hand where it was let go; nil if that is where
// it was.
func (h *Hand) moveEdit(in *Input, e Event) study.Edit {
	nodes, notes := h.moved(in, e)
	var edits []study.Edit
	if len(nodes) > 0 {
		edits = append(edits, nailed(in, study.MoveNodes{Rival: in.Rival.Name, To: nodes}))
	}
	if len(notes) > 0 {
		edits = append(edits, study.MoveNotes{Rival: in.Rival.Name, To: notes})
	}
	lead, _ := h.lead()
	switch {
	case len(edits) == 0 || h.target.Kind == OnNote && notes[h.target.Note] == lead || h.target.Kind == OnNode && nodes[h.target.Node] == lead:
		return nil
	case len(edits) == 1:
		return edits[0]
	}
	return study.Several{Name: "Move the selection", Edits: edits}
}

// click is a press that never became a drag.
func (h *Hand) click(in *Input) Answer {
	t := h.target
	s := only(t)
	switch {
	case t.Kind == OnNode && h.tool == SelectTool && (h.shift || !in.Selected.HasNode(t.Node) || len(in.Selected.Nodes) == 1),
		t.Kind == OnNote && (h.shift || !in.Selected.HasNote(t.Note)):
		return Answer{} // done on press
	case h.shift && t.Kind == Nothing:
		return Answer{}
	case h.shift:
		s = in.Selected.toggled(t)
	}
	return Answer{Select: &s}
}

// connect finishes an arrow or arc: onto a node it is drawn, onto the empty
// sheet it gets a new variable at its end.
func (h *Hand) connect(in *Input) Answer {
	if in.Rival == nil {
		return Answer{}
	}
	l := h.link
	h.link = Draft{}
	switch {
	case l.To == "" && l.Arc:
		return Answer{Refuse: "A common cause joins two variables: let go of it on the other one."}
	case l.To == "":
		return Answer{Name: &Naming{At: Snapped(l.End), From: l.From}}
	}
	h.link = l
	edit := h.linkEdit(in)
	h.link = Draft{}
	if _, err := edit.Apply(in.Study); err != nil {
		a := Answer{Refuse: err.Error()}
		errors.As(err, &a.Cycle)
		return a
	}
	s := Selection{Arrows: [][2]string{{l.From, l.To}}}
	if l.Arc {
		s = Selection{Arcs: [][2]string{{l.From, l.To}}}
	}
	return Answer{Edit: nailed(in, edit), Select: &s}
}

func (h *Hand) double(in *Input, m *Map, e Event) Answer {
	h.grip = gripNone
	if e.Button != Primary {
		return Answer{}
	}
	t := m.Hit(e.At)
	switch t.Kind {
	case Nothing:
		if in.Rival == nil || h.tool == PlateTool || h.tool == NoteTool {
			return Answer{}
		}
		return Answer{Name: &Naming{At: Snapped(in.View.In(e.At))}}
	case OnNode, OnEdge:
		return Answer{Name: &Naming{Variable: t.Node}}
	case OnNote:
		return Answer{Name: NoteNaming(in, t.Note)}
	}
	return Answer{Open: &t}
}

// Snapped is the point of the grid next to a point of the sheet.
func Snapped(p study.Point) study.Point { return study.Point{X: snap(p.X), Y: snap(p.Y)} }

// spanned is the rectangle between two corners.
func spanned(a, b draw.Point) draw.Rect {
	return draw.Rect{X: a.X, Y: a.Y}.Union(draw.Rect{X: b.X, Y: b.Y})
}

// nailed adds to an edit the places of nodes that stand where the automatic
// layout put them, so that no edit by hand makes the rest of the sheet jump.
func nailed(in *Input, edit study.Edit) study.Edit {
	places := in.loose()
	if len(places) == 0 {
		return edit
	}
	if move, ok := edit.(study.MoveNodes); ok {
		maps.Copy(places, move.To)
		return study.MoveNodes{Rival: move.Rival, To: places}
	}
	return study.Several{Name: edit.Label(), Edits: []study.Edit{study.MoveNodes{Rival: in.Rival.Name, To: places}, edit}}
}

// loose gives the places of nodes that have none in the rival's layout.
func (in *Input) loose() map[string]study.Point {
	if in.Rival == nil {
		return nil
	}
	places := make(map[string]study.Point)
	for id, p := range in.layout() {
		if in.Rival.Layout == nil {
			places[id] = p
		} else if _, ok := in.Rival.Layout.At[id]; !ok {
			places[id] = p
		}
	}
	return places
}
