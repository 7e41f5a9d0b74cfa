package scene

import (
	"fmt"
	"reflect"
	"strings"
	"testing"

	"arrowroot/canvas/draw"
	"arrowroot/compile/study"
)

// A script plays events to a hand and applies what it answers, as the Editor
// and the session do; what happens is told in lines.
type script struct {
	t    *testing.T
	in   Input
	hand *Hand
	told []string
	name *Naming
}

func newScript(t *testing.T, s *study.Study) *script {
	return &script{t: t, hand: NewHand(), in: Input{
		Study: s, Rival: s.Rivals[0], Palette: Light(), Width: 900, Height: 600, LitPath: NoPath,
	}}
}

func (s *script) play(e Event) {
	s.t.Helper()
	_, m := Build(s.in)
	a := s.hand.Handle(&s.in, m, e)
	if a.Preview != nil {
		s.in.Preview = *a.Preview
	}
	if a.Hover != nil {
		s.in.Hover = *a.Hover
	}
	if a.View != nil {
		s.in.View = *a.View
	}
	s.do(a.Edit)
	if a.Select != nil {
		s.in.Selected = a.Select.Kept(s.in.Study, s.in.Rival)
	}
	if a.Refuse != "" {
		s.tell("refused: " + a.Refuse)
	}
	if a.Command != "" {
		s.tell("command " + a.Command)
	}
	if a.Menu != nil {
		s.tell(fmt.Sprintf("menu %v", *a.Menu))
	}
	if a.Open != nil {
		s.tell(fmt.Sprintf("open %v", a.Open.Pair))
	}
	if a.Name != nil {
		s.name = a.Name
	}
}

func (s *script) do(e study.Edit) {
	if e == nil {
		return
	}
	next, err := e.Apply(s.in.Study)
	if err != nil {
		s.t.Fatalf("%s: %v", e.Label(), err)
	}
	s.tell(e.Label())
	s.in.Study, s.in.Rival = next, next.Rivals[0]
	s.in.Selected = s.in.Selected.Kept(s.in.Study, s.in.Rival)
}

func (s *script) tell(line string) { s.told = append(s.told, line) }

func (s *script) enter(text string) {
	s.t.Helper()
	if s.name == nil {
		s.t.Fatal("no name is asked for")
	}
	e, err := s.name.Edit(&s.in, text)
	if err != nil {
		s.tell("refused: " + err.Error())
		return
	}
	s.name = nil
	s.do(e)
}

func (s *script) drag(button Button, shift bool, pts ...draw.Point) {
	s.play(Event{Kind: Press, At: pts[0], Button: button, Shift: shift})
	for i := 1; i < len(pts); i++ {
		mid := pts[i-1].Add(pts[i]).Times(0.5)
		s.play(Event{Kind: Move, At: mid, Button: button, Shift: shift})
		s.play(Event{Kind: Move, At: pts[i], Button: button, Shift: shift})
	}
	s.play(Event{Kind: Release, At: pts[len(pts)-1], Button: button, Shift: shift})
}

func (s *script) click(at draw.Point, shift bool) {
	s.play(Event{Kind: Press, At: at, Shift: shift})
	s.play(Event{Kind: Release, At: at, Shift: shift})
}

func (s *script) key(k string) { s.play(Event{Kind: Key, Key: k}) }

// node is the middle of a node, rim a point on its left rim.
func (s *script) node(id string) draw.Point {
	return s.in.View.Out(s.in.layout()[id])
}

func (s *script) rim(id string) draw.Point {
	_, m := Build(s.in)
	r, _ := m.NodeRect(id)
	return draw.Point{X: r.X + 1, Y: r.Y + r.H/2}
}

func (s *script) expect(lines ...string) {
	s.t.Helper()
	if !reflect.DeepEqual(s.told, lines) {
		s.t.Errorf("told\n  %s\nwant\n  %s", strings.Join(s.told, "\n  "), strings.Join(lines, "\n  "))
	}
	s.told = nil
}

// From an empty sheet, by hand alone: three variables, two arrows, an arc.
func TestSketch(t *testing.T) {
	s := newScript(t, study.New())
	s.play(Event{Kind: DoubleClick, At: draw.Point{X: 200, Y: 200}})
	s.enter("hedge")
	s.drag(Primary, false, s.rim("hedge"), draw.Point{X: 420, Y: 200})
	s.enter("flowers")
	s.drag(Primary, false, s.rim("flowers"), draw.Point{X: 640, Y: 200})
	s.enter("bees")
	s.hand.Take(CauseTool)
	s.drag(Primary, false, s.node("hedge"), s.node("bees"))
	s.expect("Add hedge", "Draw hedge → flowers", "Draw flowers → bees", "Draw hedge ↔ bees")
	if d := s.in.Rival.Diagram; len(d.Nodes) != 3 || len(d.Arrows) != 2 || len(d.Arcs) != 1 {
		t.Errorf("%d nodes, %d arrows, %d arcs", len(d.Nodes), len(d.Arrows), len(d.Arcs))
	}
	s.drag(Primary, false, s.node("bees"), draw.Point{X: 400, Y: 420})
	s.expect("refused: A common cause joins two variables: let go of it on the other one.")
	s.hand.Take(SelectTool)
	s.drag(Primary, false, s.rim("bees"), s.node("hedge"))
	if len(s.told) != 1 || !strings.Contains(s.told[0], "cycle") {
		t.Errorf("an arrow back: %q", s.told)
	}
}

// A press that trembles is a click, not a drag.
func TestTremble(t *testing.T) {
	s := newScript(t, hedgerows())
	at := s.node("hedge")
	s.drag(Primary, false, at, at.Add(draw.Point{X: 2, Y: 2}))
	s.expect()
	if !s.in.Selected.HasNode("hedge") {
		t.Error("not picked")
	}
}

// Escape in the middle of a drag leaves everything as it was.
func TestEscapeDrag(t *testing.T) {
	s := newScript(t, hedgerows())
	at := s.node("hedge")
	s.play(Event{Kind: Press, At: at})
	s.play(Event{Kind: Move, At: at.Add(draw.Point{X: 80, Y: 40})})
	if s.in.Preview.Moved == nil {
		t.Fatal("the drag shows nothing")
	}
	s.key("Escape")
	s.play(Event{Kind: Release, At: at.Add(draw.Point{X: 80, Y: 40})})
	s.expect()
	if s.in.Preview.Moved != nil || s.hand.Busy() {
		t.Error("the drag goes on after Escape")
	}
}

func TestSelect(t *testing.T) {
	s := newScript(t, hedgerows())
	s.click(s.node("hedge"), false)
	s.click(s.node("bees"), true)
	s.click(s.rim("flowers"), true)
	if want := []string{"hedge", "bees", "flowers"}; !reflect.DeepEqual(s.in.Selected.Nodes, want) {
		t.Errorf("picked %v", s.in.Selected.Nodes)
	}
	s.click(s.node("bees"), true)
	if want := []string{"hedge", "flowers"}; !reflect.DeepEqual(s.in.Selected.Nodes, want) {
		t.Errorf("shift and click again: picked %v", s.in.Selected.Nodes)
	}
	s.click(s.node("hedge"), false)
	if want := []string{"hedge"}; !reflect.DeepEqual(s.in.Selected.Nodes, want) {
		t.Errorf("a plain click on one of two: picked %v", s.in.Selected.Nodes)
	}
	s.click(draw.Point{X: 860, Y: 560}, false)
	if !s.in.Selected.Empty() {
		t.Errorf("a click on nothing: picked %v", s.in.Selected)
	}
	_, m := Build(s.in)
	mid, _ := m.LineMiddle([2]string{"soil", "flowers"})
	s.click(mid, false)
	s.key("Delete")
	s.expect("Delete soil → flowers")
	s.drag(Primary, false, draw.Point{X: 20, Y: 20}, draw.Point{X: 420, Y: 400})
	if want := []string{"hedge", "soil", "arable", "attitude"}; !reflect.DeepEqual(s.in.Selected.Nodes, want) {
		t.Errorf("marquee picked %v", s.in.Selected.Nodes)
	}
	s.key("Delete")
	if len(s.told) != 1 || len(s.in.Rival.Diagram.Nodes) != 3 || len(s.in.Study.Variables) != 7 {
		t.Errorf("told %q, %d nodes", s.told, len(s.in.Rival.Diagram.Nodes))
	}
}

// Arrow keys follow the arrows of the diagram, so every node can be reached.
func TestWalk(t *testing.T) {
	s := newScript(t, hedgerows())
	s.in.Question = s.in.Study.Questions[0]
	s.key("Right")
	walk := []string{s.in.Selected.Nodes[0]}
	for _, k := range []string{"Right", "Left", "Left", "Right", "Right"} {
		s.key(k)
		walk = append(walk, s.in.Selected.Nodes[0])
	}
	if want := []string{"hedge", "bees", "hedge", "soil", "flowers", "bees"}; !reflect.DeepEqual(walk, want) {
		t.Errorf("walked %v, want %v", walk, want)
	}
	reached := map[string]bool{"hedge": true}
	for todo := []string{"hedge"}; len(todo) > 0; todo = todo[1:] {
		for k := range directions {
			s.in.Selected = Selection{Nodes: []string{todo[0]}}
			s.key(k)
			if id := s.in.Selected.Nodes[0]; !reached[id] {
				reached[id] = true
				todo = append(todo, id)
			}
		}
	}
	if len(reached) != 7 {
		t.Errorf("the arrow keys reach only %v", reached)
	}
	s.key("X")
	s.play(Event{Kind: Key, Key: "A", Ctrl: true})
	s.expect("command X", "command Ctrl+A")
}

func TestMenuAndOpen(t *testing.T) {
	s := newScript(t, hedgerows())
	s.play(Event{Kind: Press, At: s.node("soil"), Button: Secondary})
	s.play(Event{Kind: Release, At: s.node("soil"), Button: Secondary})
	_, m := Build(s.in)
	mid, _ := m.LineMiddle([2]string{"hedge", "bees"})
	s.play(Event{Kind: DoubleClick, At: mid})
	s.expect(fmt.Sprintf("menu %v", Target{Kind: OnNode, Node: "soil"}), "open [hedge bees]")
	if !s.in.Selected.HasNode("soil") {
		t.Error("a right click must pick what it is on")
	}
}

// No edit by hand on a sheet that was arranged automatically moves anything
// but what is in the hand.
func TestNailed(t *testing.T) {
	for name, edit := range map[string]func(s *script){
		"new variable": func(s *script) {
			s.play(Event{Kind: DoubleClick, At: draw.Point{X: 850, Y: 560}})
			s.enter("rain")
		},
		"move": func(s *script) {
			s.drag(Primary, false, s.node("soil"), draw.Point{X: 850, Y: 560})
		},
		"nudge": func(s *script) {
			s.in.Selected.Nodes = []string{"soil"}
			s.play(Event{Kind: Key, Key: "Down", Ctrl: true})
		},
		"delete": func(s *script) {
			s.in.Selected.Nodes = []string{"soil"}
			s.key("Delete")
		},
		"arrow": func(s *script) {
			s.drag(Primary, false, s.rim("soil"), s.node("bees"))
		},
	} {
		st := hedgerows()
		st.Rivals[0].Layout = &study.Layout{}
		s := newScript(t, st)
		before := s.in.layout()
		edit(s)
		if len(s.told) != 1 {
			t.Errorf("%s: told %q", name, s.told)
		}
		for id, q := range s.in.layout() {
			if p, was := before[id]; was && id != "soil" && q != p {
				t.Errorf("%s: %s jumped from %v to %v", name, id, p, q)
			}
		}
	}
}

func TestZoomAt(t *testing.T) {
	v := View{Zoom: 1, Pan: draw.Point{X: 13, Y: -7}}
	at := draw.Point{X: 310, Y: 120}
	for _, f := range []float64{1.15, 3, 100, 0.5, 1e-9} {
		w := v.ZoomAt(at, f)
		p, q := v.In(at), w.In(at)
		if d := (draw.Point{X: p.X - q.X, Y: p.Y - q.Y}).Len(); d > 1e-9 {
			t.Errorf("factor %g moves the point under the pointer by %g", f, d)
		}
		if w.Zoom < MinZoom || w.Zoom > MaxZoom {
			t.Errorf("zoom %g", w.Zoom)
		}
		v = w
	}
}

func TestIdentifier(t *testing.T) {
	for text, want := range map[string][2]string{
		"hedge": {"hedge", ""}, " farm  size ": {"farm_size", "farm size"}, "pH": {"pH", ""}, "2nd visit": {"v2nd_visit", "2nd visit"},
		"größe": {"größe", ""}, "cost (€)": {"cost", "cost (€)"}, "": {"", ""}, "—": {"", ""}, "a-b/c.d": {"a_b_c_d", "a-b/c.d"}, "__x__": {"x", "__x__"},
		"log": {"log_1", "log"}, "by": {"by_1", "by"}, "σ": {"sigma", "σ"}, // words of formulas, and Greek in its typed form
	} {
		if id, label := Identifier(text); id != want[0] || label != want[1] {
			t.Errorf("%q: %q, %q, want %q", text, id, label, want)
		}
	}
}

func TestNaming(t *testing.T) {
	s := newScript(t, hedgerows())
	st := s.in.Study
	next, err := study.RemoveNodes{Rival: s.in.Rival.Name, Variables: []string{"soil"}}.Apply(st)
	if err != nil {
		t.Fatal(err)
	}
	s.in.Study, s.in.Rival = next, next.Rivals[0]
	s.name = &Naming{At: study.Point{X: 8, Y: 8}}
	s.enter("soil") // of the ledger, back on the sheet
	s.name = &Naming{At: study.Point{X: 8, Y: 8}}
	s.enter("soil")
	s.name = &Naming{From: "soil"}
	s.enter("bees")
	s.name = &Naming{Variable: "soil"}
	s.enter("bees")
	s.name = &Naming{Variable: "soil"}
	s.enter("soil")
	s.name = &Naming{}
	s.enter("?")
	s.expect("Add soil", "refused: soil is on the sheet already", "Draw soil → bees", "refused: there is a variable bees already", "refused: a name needs at least one letter or digit")
	if n := len(s.in.Study.Variables); n != 7 {
		t.Errorf("%d variables in the ledger", n)
	}
}
