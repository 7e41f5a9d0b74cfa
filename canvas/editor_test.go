package canvas

import (
	"reflect"
	"testing"

	"fyne.io/fyne/v2"
	"fyne.io/fyne/v2/driver/desktop"
	"fyne.io/fyne/v2/test"

	"arrowroot/canvas/draw"
	"arrowroot/canvas/scene"
	"arrowroot/compile/study"
)

// A bench is an editor in a window of the test driver, with a document that
// does every edit it emits, as the session does.
type bench struct {
	*Editor
	t      *testing.T
	window fyne.Window
	study  *study.Study
	edits  []study.Edit
	picked scene.Selection
	keys   []string
	menus  []scene.Target
	why    []string
	queue  []func()
}

func newBench(t *testing.T, s *study.Study) *bench {
	test.NewTempApp(t)
	b := &bench{t: t, study: s}
	b.Editor = NewEditor(func(f func()) { b.queue = append(b.queue, f) })
	b.OnEdit = func(e study.Edit) {
		next, err := e.Apply(b.study)
		if err != nil {
			t.Errorf("%s: %v", e.Label(), err)
			return
		}
		b.edits = append(b.edits, e)
		b.study = next
		b.show()
	}
	b.OnSelect = func(s scene.Selection) { b.picked = s }
	b.OnKey = func(k string) bool { b.keys = append(b.keys, k); return true }
	b.OnMenu = func(at scene.Target, _ fyne.Position) { b.menus = append(b.menus, at) }
	b.OnRefuse = func(why string) { b.why = append(b.why, why) }
	b.window = test.NewTempWindow(t, b.Editor)
	b.window.SetPadded(false)
	b.window.Resize(fyne.NewSize(800, 500))
	b.show()
	b.SetView(scene.View{})
	return b
}

func (b *bench) show() {
	b.SetInput(scene.Input{Study: b.study, Rival: b.study.Rivals[0], Palette: scene.Light()})
}

func (b *bench) drain() {
	for len(b.queue) > 0 {
		f := b.queue[0]
		b.queue = b.queue[1:]
		f()
	}
}

func at(x, y float32) fyne.PointEvent {
	return fyne.PointEvent{Position: fyne.NewPos(x, y), AbsolutePosition: fyne.NewPos(x, y)}
}

// drag is what the GLFW driver does: press, drag events, release, drag end.
func (b *bench) drag(x0, y0, x1, y1 float32, button desktop.MouseButton, mod fyne.KeyModifier) {
	b.MouseMoved(&desktop.MouseEvent{PointEvent: at(x0, y0)})
	b.MouseDown(&desktop.MouseEvent{PointEvent: at(x0, y0), Button: button, Modifier: mod})
	for k := float32(1); k <= 4; k++ {
		b.Dragged(&fyne.DragEvent{PointEvent: at(x0+(x1-x0)*k/4, y0+(y1-y0)*k/4)})
	}
	b.MouseUp(&desktop.MouseEvent{PointEvent: at(x1, y1), Button: button, Modifier: mod})
	b.DragEnd()
	b.drain()
	b.MouseMoved(&desktop.MouseEvent{PointEvent: at(x1, y1)})
}

func (b *bench) click(x, y float32, button desktop.MouseButton, mod fyne.KeyModifier) {
	b.MouseMoved(&desktop.MouseEvent{PointEvent: at(x, y)})
	b.MouseDown(&desktop.MouseEvent{PointEvent: at(x, y), Button: button, Modifier: mod})
	b.MouseUp(&desktop.MouseEvent{PointEvent: at(x, y), Button: button, Modifier: mod})
}

func (b *bench) doubleClick(x, y float32) {
	b.click(x, y, desktop.MouseButtonPrimary, 0)
	b.click(x, y, desktop.MouseButtonPrimary, 0)
	b.drain()
}

// Two quick clicks at different places are no double click, nor is a third.
func TestDoubleClickNeedsOnePlace(t *testing.T) {
	b := newBench(t, pair())
	b.click(300, 400, desktop.MouseButtonPrimary, 0)
	b.click(400, 400, desktop.MouseButtonPrimary, 0)
	b.drain()
	if b.entry.naming != nil {
		t.Error("two clicks far apart opened the name entry")
	}
	b.doubleClick(500, 400)
	b.entry.TypedKey(&fyne.KeyEvent{Name: fyne.KeyEscape})
	b.click(500, 400, desktop.MouseButtonPrimary, 0)
	b.drain()
	if b.entry.naming != nil {
		t.Error("the third click opened the name entry again")
	}
}

func (b *bench) typeName(name string) {
	b.t.Helper()
	if b.entry.naming == nil || !b.entry.Visible() {
		b.t.Fatal("the name entry is not open")
	}
	test.Type(b.entry, name)
	b.entry.TypedKey(&fyne.KeyEvent{Name: fyne.KeyReturn})
}

func (b *bench) key(name fyne.KeyName) { b.TypedKey(&fyne.KeyEvent{Name: name}) }

func (b *bench) diagram() *study.Diagram { return b.study.Rivals[0].Diagram }

// pair is two variables, a at (200, 200) and b at (500, 200).
func pair() *study.Study {
	return &study.Study{
		Variables: []*study.Variable{{ID: "hedge"}, {ID: "bees"}},
		Rivals: []*study.Rival{{
			Name:    "one",
			Layout:  &study.Layout{At: map[string]study.Point{"hedge": {X: 200, Y: 200}, "bees": {X: 496, Y: 200}}},
			Diagram: &study.Diagram{Nodes: []*study.Node{{Variable: "hedge"}, {Variable: "bees"}}},
		}},
	}
}

func TestDoubleClickMakesVariable(t *testing.T) {
	b := newBench(t, study.New())
	b.doubleClick(300, 241)
	b.typeName("farm size")
	v := b.study.Variable("farm_size")
	if v == nil || v.Label != "farm size" {
		t.Fatalf("variables %v", b.study.Variables)
	}
	if p := b.study.Rivals[0].Layout.At["farm_size"]; p != (study.Point{X: 304, Y: 240}) {
		t.Errorf("placed at %v, want the nearest point of the grid", p)
	}
	if len(b.edits) != 1 {
		t.Errorf("%d edits, want one step of undo", len(b.edits))
	}
	if !reflect.DeepEqual(b.picked.Nodes, []string{"farm_size"}) {
		t.Errorf("picked %v", b.picked)
	}
	if c := b.window.Canvas().Focused(); c != fyne.Focusable(b.Editor) {
		t.Errorf("the keyboard is with %T, want the sheet", c)
	}
}

func TestDragFromRimDrawsArrow(t *testing.T) {
	b := newBench(t, pair())
	b.drag(247, 200, 496, 200, desktop.MouseButtonPrimary, 0)
	if b.diagram().Arrow("hedge", "bees") == nil {
		t.Fatalf("no arrow; edits %v, refusals %v", b.edits, b.why)
	}
	if !reflect.DeepEqual(b.picked.Arrows, [][2]string{{"hedge", "bees"}}) {
		t.Errorf("picked %v", b.picked)
	}
	b.drag(543, 200, 200, 200, desktop.MouseButtonPrimary, 0)
	if len(b.edits) != 1 || len(b.why) != 1 {
		t.Errorf("an arrow back: %d edits, reasons %q", len(b.edits), b.why)
	}
}

func TestDragFromRimToEmptyMakesChild(t *testing.T) {
	b := newBench(t, pair())
	b.drag(247, 200, 333, 330, desktop.MouseButtonPrimary, 0)
	b.typeName("flowers")
	if b.diagram().Arrow("hedge", "flowers") == nil || len(b.edits) != 1 {
		t.Fatalf("edits %v", b.edits)
	}
	if p := b.study.Rivals[0].Layout.At["flowers"]; p != (study.Point{X: 336, Y: 328}) {
		t.Errorf("placed at %v", p)
	}
}

func TestDragMovesSelection(t *testing.T) {
	b := newBench(t, pair())
	b.click(200, 200, desktop.MouseButtonPrimary, 0)
	b.click(496, 200, desktop.MouseButtonPrimary, fyne.KeyModifierShift)
	if len(b.picked.Nodes) != 2 {
		t.Fatalf("picked %v", b.picked)
	}
	b.drag(200, 200, 230, 263, desktop.MouseButtonPrimary, 0)
	l := b.study.Rivals[0].Layout.At
	if l["hedge"] != (study.Point{X: 232, Y: 264}) || l["bees"] != (study.Point{X: 528, Y: 264}) {
		t.Errorf("places %v", l)
	}
	if len(b.edits) != 1 {
		t.Errorf("%d edits for one drag", len(b.edits))
	}
}

func TestMarqueePanZoom(t *testing.T) {
	b := newBench(t, pair())
	b.drag(100, 100, 620, 300, desktop.MouseButtonPrimary, 0)
	if len(b.picked.Nodes) != 2 {
		t.Errorf("marquee picked %v", b.picked)
	}
	b.drag(300, 300, 340, 280, desktop.MouseButtonTertiary, 0)
	if v := b.View(); v.Pan != (draw.Point{X: 40, Y: -20}) {
		t.Errorf("middle drag: view %v", v)
	}
	b.KeyDown(&fyne.KeyEvent{Name: fyne.KeySpace})
	b.drag(300, 300, 260, 320, desktop.MouseButtonPrimary, 0)
	b.KeyUp(&fyne.KeyEvent{Name: fyne.KeySpace})
	if v := b.View(); v.Pan != (draw.Point{}) {
		t.Errorf("space and drag: view %v", v)
	}
	before := b.View().In(draw.Point{X: 500, Y: 210})
	b.Scrolled(&fyne.ScrollEvent{PointEvent: at(500, 210), Scrolled: fyne.NewDelta(0, 50)})
	after := b.View().In(draw.Point{X: 500, Y: 210})
	if b.View().Zoom <= 1 || before.X-after.X > 1e-9 || after.X-before.X > 1e-9 {
		t.Errorf("wheel: %v, point under the pointer %v → %v", b.View(), before, after)
	}
	if len(b.edits) != 0 {
		t.Errorf("looking around made edits %v", b.edits)
	}
}

func TestKeys(t *testing.T) {
	s := pair()
	s.Rivals[0].Diagram.Arrows = []*study.Arrow{{From: "hedge", To: "bees"}}
	b := newBench(t, s)
	b.click(200, 200, desktop.MouseButtonPrimary, 0)
	b.key(fyne.KeyRight)
	if !reflect.DeepEqual(b.picked.Nodes, []string{"bees"}) {
		t.Fatalf("→ picked %v", b.picked)
	}
	b.key(fyne.KeyX)
	b.key(fyne.KeyH)
	if !reflect.DeepEqual(b.keys, []string{"X", "H"}) {
		t.Errorf("commands %v", b.keys)
	}
	b.KeyDown(&fyne.KeyEvent{Name: desktop.KeyControlLeft})
	b.KeyDown(&fyne.KeyEvent{Name: fyne.KeyDown})
	b.KeyUp(&fyne.KeyEvent{Name: desktop.KeyControlLeft})
	if p := b.study.Rivals[0].Layout.At["bees"]; p != (study.Point{X: 496, Y: 208}) {
		t.Errorf("Ctrl+↓ moved to %v", p)
	}
	b.key(fyne.KeyF2)
	b.typeName("wild bees")
	if v := b.study.Variable("wild_bees"); v == nil || v.Label != "wild bees" {
		t.Fatalf("F2: edits %v, reasons %q, variables %v", b.edits, b.why, *b.study.Variables[1])
	}
	if b.diagram().Arrow("hedge", "wild_bees") == nil {
		t.Error("the arrow did not follow the new name")
	}
	b.key(fyne.KeyDelete)
	if b.diagram().Node("wild_bees") != nil || b.study.Variable("wild_bees") == nil {
		t.Error("Delete must take the node off the sheet and leave the variable in the ledger")
	}
	b.SetTool(scene.ArrowTool)
	b.key(fyne.KeyEscape)
	if b.Tool() != scene.SelectTool {
		t.Errorf("Escape left the tool %s", b.Tool())
	}
}

func TestDrawByKeyboard(t *testing.T) {
	b := newBench(t, pair())
	b.Select(scene.Selection{Nodes: []string{"hedge"}})
	b.SetTool(scene.ArrowTool)
	b.key(fyne.KeyRight)
	b.key(fyne.KeyReturn)
	if b.diagram().Arrow("hedge", "bees") == nil {
		t.Fatal("→, Return with the arrow tool drew no arrow")
	}
	b.SetTool(scene.CauseTool) // from bees, where the arrow went
	b.key(fyne.KeyLeft)
	b.key(fyne.KeyReturn)
	if b.diagram().Arc("hedge", "bees") == nil {
		t.Fatal("←, Return with the common cause tool drew no arc")
	}
	b.SetTool(scene.VariableTool)
	b.key(fyne.KeyReturn)
	b.typeName("soil")
	if b.diagram().Node("soil") == nil {
		t.Error("Return with the variable tool made no variable")
	}
}

func TestNameEntry(t *testing.T) {
	b := newBench(t, pair())
	b.doubleClick(300, 350)
	b.typeName("hedge")
	if len(b.why) != 1 || b.entry.naming == nil {
		t.Errorf("a name that is taken: reasons %q, open %v", b.why, b.entry.naming != nil)
	}
	b.entry.TypedKey(&fyne.KeyEvent{Name: fyne.KeyEscape})
	if b.entry.Visible() || len(b.edits) != 0 {
		t.Error("Escape must drop the name")
	}
	b.doubleClick(300, 350)
	test.Type(b.entry, "soil")
	b.click(600, 400, desktop.MouseButtonPrimary, 0)
	b.drain()
	if b.diagram().Node("soil") == nil || len(b.edits) != 1 {
		t.Errorf("a click elsewhere takes the name once: edits %v", b.edits)
	}
	b.doubleClick(200, 200)
	if b.entry.naming == nil || b.entry.naming.Variable != "hedge" {
		t.Error("a double click on a node renames it")
	}
	b.window.Canvas().Unfocus()
	b.drain()
	if b.entry.Visible() || len(b.edits) != 1 {
		t.Error("an unchanged name must be dropped with the focus")
	}
}

func TestRightClick(t *testing.T) {
	b := newBench(t, pair())
	b.click(496, 200, desktop.MouseButtonSecondary, 0)
	if len(b.menus) != 1 || b.menus[0].Node != "bees" || !b.picked.HasNode("bees") {
		t.Errorf("menus %v, picked %v", b.menus, b.picked)
	}
}

func TestPlateTool(t *testing.T) {
	b := newBench(t, pair())
	b.SetTool(scene.PlateTool)
	b.drag(100, 100, 300, 300, desktop.MouseButtonPrimary, 0)
	b.typeName("farm")
	if b.study.Plate("farm") == nil || !reflect.DeepEqual(b.study.Variable("hedge").Plates, []string{"farm"}) || len(b.study.Variable("bees").Plates) != 0 {
		t.Errorf("edits %v", b.edits)
	}
}

// The picture on the driver's canvas is the painter's own, at device pixels.
func TestPaintsDevicePixels(t *testing.T) {
	b := newBench(t, pair())
	img := b.surface.paint(1600, 1000)
	if img.Bounds().Dx() != 1600 {
		t.Fatal(img.Bounds())
	}
	// The middle of a node is card white; beside it the sheet.
	r, g, bl, _ := img.At(2*200, 2*(200-12)).RGBA()
	if r>>8 != 255 || g>>8 != 255 || bl>>8 != 255 {
		t.Errorf("inside of hedge is %x %x %x at twice the pixels", r>>8, g>>8, bl>>8)
	}
	if c := b.window.Canvas().Capture(); c.Bounds().Dx() < 800 {
		t.Error(c.Bounds())
	}
}

// Flipping between rivals that stand alike keeps the view; another study is
// shown whole; what is drawn stays where it was drawn.
func TestViewOfRivals(t *testing.T) {
	s := pair()
	other := *s.Rivals[0]
	other.Name = "two"
	s.Rivals = append(s.Rivals, &other)
	b := newBench(t, s)
	b.SetView(scene.View{Zoom: 2, Pan: draw.Point{X: 5, Y: 6}})
	was := b.View()
	b.SetInput(scene.Input{Study: s, Rival: s.Rivals[1]})
	if b.View() != was {
		t.Errorf("a rival that stands alike: view %v, was %v", b.View(), was)
	}
	far := &study.Rival{Name: "three", Diagram: s.Rivals[0].Diagram, Layout: &study.Layout{At: map[string]study.Point{"hedge": {X: 5000, Y: 0}, "bees": {X: 5400, Y: 0}}}}
	b.SetInput(scene.Input{Study: s, Rival: far})
	r, ok := b.surface.mapNow().NodeRect("bees")
	if !ok || r.X < 0 || r.X+r.W > 800 {
		t.Errorf("a rival that stands elsewhere: bees at %v", r)
	}
	b = newBench(t, study.New())
	b.adrift = true // as a new window has it
	b.doubleClick(600, 401)
	b.typeName("soil")
	b.window.Resize(fyne.NewSize(820, 520))
	if r, _ := b.surface.mapNow().NodeRect("soil"); r.Centre() != (draw.Point{X: 600, Y: 400}) {
		t.Errorf("soil went to %v", r.Centre())
	}
}
