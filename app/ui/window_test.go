package ui

import (
	"encoding/json"
	"image/color"
	"os"
	"path/filepath"
	"slices"
	"strings"
	"sync"
	"testing"
	"time"

	"fyne.io/fyne/v2"
	"fyne.io/fyne/v2/test"

	"arrowroot/app/session"
	"arrowroot/canvas/scene"
	"arrowroot/compile/study"
)

// A queue stands in for the window's goroutine: the test drains it.
type queue struct {
	mu   sync.Mutex
	jobs []func()
}

func (q *queue) post(f func()) {
	q.mu.Lock()
	defer q.mu.Unlock()
	q.jobs = append(q.jobs, f)
}

func (q *queue) drain() {
	for {
		q.mu.Lock()
		if len(q.jobs) == 0 {
			q.mu.Unlock()
			return
		}
		f := q.jobs[0]
		q.jobs = q.jobs[1:]
		q.mu.Unlock()
		f()
	}
}

// A bench is a window in the test driver.
type bench struct {
	testing.TB
	*desk
	queue  *queue
	window *Window
}

func newBench(t testing.TB) *bench {
	t.Helper()
	folder := t.TempDir()
	t.Setenv("HOME", folder)
	t.Setenv("XDG_CACHE_HOME", filepath.Join(folder, "cache"))
	q := &queue{}
	app := test.NewTempApp(t)
	w := New(app, session.New(q.post), q.post)
	b := &bench{TB: t, desk: w.desk, queue: q, window: w}
	b.win.Resize(fyne.NewSize(1366, 740))
	b.refresh()
	b.queue.drain()
	t.Cleanup(b.session.Close)
	return b
}

// wait drains the queue until something holds.
func (b *bench) wait(what string, holds func() bool) {
	b.Helper()
	for end := time.Now().Add(30 * time.Second); time.Now().Before(end); time.Sleep(5 * time.Millisecond) {
		b.queue.drain()
		if holds() {
			return
		}
	}
	b.Fatalf("waited in vain: %s; the banner says %q", what, b.banner())
}

// say types a line into the finder and presses Return.
func (b *bench) say(line string) {
	b.Helper()
	b.commands.find("finder").run()
	entry, ok := b.win.Canvas().Focused().(*field)
	if !ok {
		b.Fatal("the finder has no entry in focus")
	}
	test.Type(entry, line)
	entry.TypedKey(&fyne.KeyEvent{Name: fyne.KeyReturn})
	b.queue.drain()
}

func (b *bench) banner() string {
	for _, p := range b.panels {
		if x, ok := p.(*banner); ok {
			return x.text
		}
	}
	return ""
}

func (b *bench) strip() *strip { return b.panels[0].(*strip) }

func (b *bench) verdict() string { return b.strip().says.Text() }

func (b *bench) key(name string) {
	b.Helper()
	if !b.desk.key(name) {
		b.Fatalf("nothing listens to %s", name)
	}
	b.queue.drain()
}

const fields = "rain,growth,yield_t,soil\n" +
	"12,3.1,5.2,clay\n15,3.9,5.9,loam\n18,4.2,6.6,sand\n22,5.5,7.4,clay\n25,,8.0,loam\n" +
	"14,3.4,5.5,sand\n19,4.6,6.9,clay\n27,6.1,8.5,loam\n11,2.7,4.8,sand\n23,5.2,7.6,clay\n" +
	"16,4.0,6.0,loam\n21,4.9,7.0,sand\n13,3.3,5.3,clay\n26,6.2,8.1,loam\n20,4.7,6.8,sand\n"

func (b *bench) csv() string {
	path := filepath.Join(b.TempDir(), "fields.csv")
	if err := os.WriteFile(path, []byte(fields), 0o600); err != nil {
		b.Fatal(err)
	}
	return path
}

// The job of the proof, through commands, keys and buttons: draw, ask,
// hold what the verdict says, bind data, undo, save, reopen.
func TestDrawReadHoldSaveReopen(t *testing.T) {
	b := newBench(t)
	if !strings.Contains(b.verdict(), "Nothing is asked yet") {
		t.Fatalf("an empty study says %q", b.verdict())
	}
	b.say("rain -> growth -> yield; soil -> rain, yield")
	b.choose(pickNode("rain"))
	b.key("X")
	b.choose(pickNode("yield"))
	b.key("Y")
	if v := b.verdict(); !strings.Contains(v, "confounded") || !strings.Contains(v, "soil") {
		t.Fatalf("the verdict says %q", v)
	}
	test.Tap(b.strip().action)
	if !slices.Equal(b.view.Question.Held, []string{"soil"}) {
		t.Fatalf("held %v after the verdict's button", b.view.Question.Held)
	}
	if v := b.verdict(); !strings.Contains(v, "can be read") {
		t.Fatalf("holding soil, the verdict says %q", v)
	}

	b.say("data " + b.csv())
	b.wait("the table", func() bool { return b.view.Table != nil })
	b.wait("the table of bindings", func() bool { return b.win.Canvas().Overlays().Top() != nil })
	b.closeTop()
	if v := b.view.Study.Variable("rain"); v.Column != "rain" || v.Scale == "" {
		t.Fatalf("rain was not bound by its name: %+v", v)
	}
	b.say("bind yield yield_t")
	if v := b.view.Study.Variable("yield"); v.Column != "yield_t" {
		t.Fatalf("yield is bound to %q", v.Column)
	}
	b.commands.find("undo").run()
	if v := b.view.Study.Variable("yield"); v.Column != "" {
		t.Fatal("undo left yield bound")
	}
	b.commands.find("redo").run()

	path := filepath.Join(t.TempDir(), "fields.arrowroot")
	b.say("save " + path)
	if b.view.Dirty || b.view.Path != path {
		t.Fatalf("after saving: dirty %v, path %q", b.view.Dirty, b.view.Path)
	}
	text, err := os.ReadFile(path)
	if err != nil {
		t.Fatal(err)
	}
	for _, want := range []string{`"from": "soil", "to": "rain"`, `"column": "yield_t"`, `"held": ["soil"]`} {
		if !strings.Contains(string(text), want) {
			t.Errorf("the file lacks %s:\n%s", want, text)
		}
	}
	b.commands.find("new").run()
	if len(b.view.Study.Variables) != 0 {
		t.Fatal("New left variables behind")
	}
	b.say("open " + path)
	b.wait("the data", func() bool { return b.view.Table != nil })
	if len(b.view.Rival.Diagram.Arrows) != 4 || !b.held("soil") {
		t.Fatalf("reopened with %d arrows, holding %v", len(b.view.Rival.Diagram.Arrows), b.view.Question.Held)
	}
}

// A fit asks before it leaves rows out, then paints and answers.
func TestFitAsksThenPaints(t *testing.T) {
	b := newBench(t)
	b.say("soil -> rain, yield; rain -> growth -> yield")
	b.say("data " + b.csv())
	b.wait("the table", func() bool { return b.view.Table != nil && b.win.Canvas().Overlays().Top() != nil })
	b.closeTop()
	b.say("bind yield yield_t")
	b.say("exposure rain")
	b.say("outcome yield")
	if q := b.view.Question; q.From == nil || q.To == nil || q.From.Number >= q.To.Number {
		t.Fatalf("no two values were offered for rain: %+v", q)
	}
	b.say("hold soil")
	b.wait("a model", b.canFit)
	b.commands.find("fit").run()
	if b.view.Running || !strings.Contains(b.banner(), "14 of 15 rows") {
		t.Fatalf("a row would be lost; the banner says %q", b.banner())
	}
	b.fit(true)
	b.wait("a result", func() bool { return b.view.Result != nil && !b.view.Running })
	if b.paint != scene.EffectPaint || b.drawer.page() != "Effect" {
		t.Fatalf("after the fit: paint %q, page %q", b.paint, b.drawer.page())
	}
	if in := b.editor.Input(); in.Paint == nil || len(in.Paint.Nodes) == 0 {
		t.Fatal("the sheet is not painted")
	}
	if word, _ := b.trustWords(); word == "" {
		t.Fatal("no verdict on the computation is shown")
	}
	for _, page := range []string{"Fit", "Statement", "Reading", "Rivals", "Checks", "Effect"} {
		b.drawer.show(page)
	}
	for _, p := range paintNames() {
		b.setPaint(p)
	}
	b.say("soil -> growth")
	b.wait("the new model", b.canFit)
	if !b.view.Stale {
		t.Fatal("another arrow does not make the result one of an earlier version")
	}
}

func paintNames() []scene.PaintKind {
	return []scene.PaintKind{scene.LearnedPaint, scene.FitPaint, scene.TrustPaint, scene.EffectPaint, ""}
}

func TestExampleOpens(t *testing.T) {
	b := newBench(t)
	b.window.OpenExample()
	b.wait("the model of the example", func() bool { return b.view.Model != nil })
	if len(b.view.Study.Rivals) < 2 || b.view.Table == nil {
		t.Fatalf("the example has %d rivals", len(b.view.Study.Rivals))
	}
	for _, v := range b.view.Study.Variables {
		b.choose(pickNode(v.ID))
		for _, tab := range []string{"Law", "Prior", "Data", "Why"} {
			b.tabOf("variable", tab)
		}
	}
	for _, a := range b.view.Rival.Diagram.Arrows {
		b.chooseArrow(a.From, a.To)
		for _, tab := range []string{"Form", "Prior", "Why"} {
			b.tabOf("arrow", tab)
		}
	}
	b.commands.find("next-rival").run()
	b.drawer.show("Rivals")
	b.commands.find("shade").run()
	if !b.dark() {
		t.Fatal("the shade did not turn")
	}
}

func (b *bench) details() *details {
	for _, p := range b.panels {
		if x, ok := p.(*details); ok {
			return x
		}
	}
	return nil
}

func (b *bench) tabOf(kind, tab string) { b.details().showTab(kind, tab) }

// Every keyed control of the details works on the study, and the focus stays
// with the control of the same key when the panel is built anew.
func TestDetailsChangeTheStudy(t *testing.T) {
	b := newBench(t)
	b.say("hedge -> bees")
	b.choose(pickNode("bees"))
	b.tabOf("variable", "Data")
	unit := b.details().pane.keys["unit"].(*field)
	b.win.Canvas().Focus(unit)
	test.Type(unit, "per trap")
	unit.TypedKey(&fyne.KeyEvent{Name: fyne.KeyReturn})
	b.queue.drain()
	if u := b.view.Study.Variable("bees").Unit; u != "per trap" {
		t.Fatalf("the unit is %q", u)
	}
	again := b.details().pane.keys["unit"].(*field)
	if again == unit || b.win.Canvas().Focused() != fyne.Focusable(again) {
		t.Fatal("the focus did not stay with the unit")
	}

	b.details().pane.keys["scale"].(*chooser).SetSelected("count")
	b.queue.drain()
	if s := b.view.Study.Variable("bees").Scale; s != study.Count {
		t.Fatalf("the scale is %q", s)
	}
	b.tabOf("variable", "Law")
	b.details().pane.keys["family"].(*chooser).SetSelected("negative binomial")
	b.queue.drain()
	if l := b.view.Rival.Diagram.Node("bees").Law; l == nil || l.Family != "negative binomial" {
		t.Fatalf("the law is %+v", l)
	}
	f := b.details().pane.keys["formula"].(*field)
	test.Type(f, "alpha + beta * (hedge")
	f.FocusLost()
	b.queue.drain()
	if l := b.view.Rival.Diagram.Node("bees").Law; l.Formula != "alpha + beta * (hedge" {
		t.Fatalf("a formula that does not parse was not kept: %q", l.Formula)
	}
	if spans := caret("alpha + beta * (hedge"); len(spans) == 0 {
		t.Fatal("nothing is said about the open bracket")
	}
	test.Tap(b.details().pane.keys["untype"].(*press))
	b.queue.drain()
	if l := b.view.Rival.Diagram.Node("bees").Law; l.Formula != "" {
		t.Fatalf("back to the arrows left %q", l.Formula)
	}

	b.chooseArrow("hedge", "bees")
	b.tabOf("arrow", "Form")
	test.Tap(b.details().pane.keys["form steps"].(*press))
	if a := b.view.Rival.Diagram.Arrow("hedge", "bees"); a.Form != "steps" {
		t.Fatalf("the form is %q", a.Form)
	}
	test.Tap(b.details().pane.keys["turn"].(*press))
	if b.view.Rival.Diagram.Arrow("bees", "hedge") == nil || len(b.pick.Arrows) != 1 || b.pick.Arrows[0] != [2]string{"bees", "hedge"} {
		t.Fatalf("turned round: picked %v", b.pick.Arrows)
	}
}

// A refused edit stands in the banner, changes nothing, and goes with the next
// thing done.
func TestRefusalStandsInTheBanner(t *testing.T) {
	b := newBench(t)
	b.say("a -> b -> c")
	before := b.view.Study
	b.say("c -> a")
	if b.view.Study != before || !strings.Contains(b.banner(), "cycle") {
		t.Fatalf("the banner says %q", b.banner())
	}
	b.say("a -> d")
	if strings.Contains(b.banner(), "cycle") {
		t.Fatal("the complaint stays after something else was done")
	}
	b.say("open " + filepath.Join(t.TempDir(), "nowhere.arrowroot"))
	if !b.closeTop() {
		t.Fatal("opening another file does not ask about unsaved work")
	}
	b.open(filepath.Join(t.TempDir(), "nowhere.arrowroot"))
	if !strings.Contains(b.banner(), "not opened and not changed") || len(b.view.Study.Variables) != 4 {
		t.Fatalf("the banner says %q", b.banner())
	}
}

// The window paints in both shades and at the size of a small screen, the same
// each time.
func TestPaints(t *testing.T) {
	b := newBench(t)
	b.window.OpenExample()
	b.wait("the model of the example", func() bool { return b.view.Model != nil })
	seen := make(map[color.RGBA]bool)
	for range 2 {
		for _, size := range []fyne.Size{{Width: 1366, Height: 740}, {Width: 683, Height: 370}} {
			b.win.Resize(size)
			b.refresh()
			one, two := b.win.Canvas().Capture(), b.win.Canvas().Capture()
			r := one.Bounds()
			for y := r.Min.Y; y < r.Max.Y; y += 7 {
				for x := r.Min.X; x < r.Max.X; x += 7 {
					if one.At(x, y) != two.At(x, y) {
						t.Fatalf("two pictures of the same window differ at %d, %d", x, y)
					}
				}
			}
			seen[color.RGBAModel.Convert(one.At(r.Max.X-3, r.Max.Y-3)).(color.RGBA)] = true
		}
		b.commands.find("shade").run()
		b.queue.drain()
	}
	if len(seen) < 2 {
		t.Fatal("light and dark look alike")
	}
}

func TestPastedLinesDraw(t *testing.T) {
	b := newBench(t)
	b.app.Clipboard().SetContent("hedge -> flowers\nflowers -> bees\n? -> hedge, bees\n")
	b.commands.find("finder").run()
	b.commands.find("paste").run() // the menu hands it to the entry in focus
	b.win.Canvas().Focused().TypedKey(&fyne.KeyEvent{Name: fyne.KeyReturn})
	b.queue.drain()
	d := b.view.Rival.Diagram
	if len(d.Arrows) != 2 || len(d.Arcs) != 1 {
		t.Fatalf("%d arrows and %d arcs were drawn", len(d.Arrows), len(d.Arcs))
	}
}

func TestFinderSaysWhyArrowsAreWrong(t *testing.T) {
	b := newBench(t)
	if s := b.sentenceOf("a -> -> b"); s.run != nil || s.wrong == "" {
		t.Fatalf("%+v", s)
	}
	if s := b.sentenceOf("hold nobody"); s.run != nil {
		t.Fatalf("%+v", s)
	}
}

// In a small window rails and drawer open over the sheet, one rail at a time.
func TestFrameInASmallWindow(t *testing.T) {
	b := newBench(t)
	f := b.frame
	f.Resize(fyne.NewSize(1366, 720))
	if !f.open("left") || !f.open("right") || !f.open("drawer") {
		t.Fatal("a roomy window hides a part")
	}
	wide := b.editor.Size().Width
	f.fold("left")
	if f.open("left") || b.editor.Size().Width <= wide {
		t.Fatal("folding the ledger gives the sheet no room")
	}
	f.fold("left")
	f.Resize(fyne.NewSize(683, 380))
	if f.open("left") || f.open("right") || f.open("drawer") {
		t.Fatal("a small window starts with parts over the sheet")
	}
	small := b.editor.Size()
	f.fold("left")
	f.fold("right")
	if f.open("left") || !f.open("right") {
		t.Fatal("two rails lie over the sheet at once")
	}
	if b.editor.Size() != small {
		t.Fatal("a rail over the sheet changes its size")
	}
}

func TestTraceTellsWhatTheWindowSays(t *testing.T) {
	path := filepath.Join(t.TempDir(), "trace.jsonl")
	t.Setenv(TraceVariable, path)
	b := newBench(t)
	b.say("soil -> rain, yield; rain -> yield")
	b.say("exposure rain")
	b.say("outcome yield")
	var last said
	b.wait("the trace", func() bool {
		text, _ := os.ReadFile(path)
		lines := strings.Split(strings.TrimSpace(string(text)), "\n")
		return json.Unmarshal([]byte(lines[len(lines)-1]), &last) == nil && last.Kind == "confounded"
	})
	if !slices.Equal(last.Propose, []string{"soil"}) || len(last.Nodes) != 3 || last.Buttons["hold them"] == [2]int{} {
		t.Fatalf("%+v", last)
	}
}

// Arrow keys walk the ledger and the list of paths; a path in focus is lit.
func TestListsWalkByKeyboard(t *testing.T) {
	b := newBench(t)
	b.say("soil -> rain, yield; rain -> growth -> yield")
	b.say("exposure rain")
	b.say("outcome yield")
	b.wait("the reading", func() bool { return b.view.Reading != nil && len(b.view.Reading.Paths) == 2 })
	var l *ledger
	for _, p := range b.panels {
		if x, ok := p.(*ledger); ok {
			l = x
		}
	}
	l.pane.focus("variable soil")
	down := &fyne.KeyEvent{Name: fyne.KeyDown}
	b.win.Canvas().Focused().TypedKey(down)
	b.win.Canvas().Focused().TypedKey(down)
	if got := b.picked(); got != b.view.Study.Variables[2].ID {
		t.Errorf("two steps down from the first pick %q", got)
	}
	reading := b.drawer.pages[0].(*readingPage)
	reading.rows.focus("")
	b.win.Canvas().Focused().TypedKey(down)
	if m := b.editor.Input().Mark; m == nil || len(m.Trails) != 1 || m.Trails[0].Legs[1].To != "yield" || m.Trails[0].Legs[1].From != "growth" {
		t.Errorf("the second path down is marked as %+v", m)
	}
}

// The question's popover puts a question together and asks it.
func TestAskPopover(t *testing.T) {
	b := newBench(t)
	b.say("soil -> rain, yield; rain -> yield")
	a := b.askQuestion(b.capsule)
	pick := func(key, word string) {
		t.Helper()
		a.keys[key].(*chooser).SetSelected(word)
		b.queue.drain()
	}
	pick("exposure", "rain")
	pick("outcome", "yield")
	pick("as", study.Ratio)
	pick("level", "95 %")
	a.from.SetText("40")
	a.to.SetText("90,5")
	test.Tap(a.keys["held soil"].(*press))
	b.queue.drain()
	a.ask()
	b.queue.drain()
	q := b.view.Question
	if q == nil || q.Exposure != "rain" || q.Outcome != "yield" || q.As != study.Ratio || q.Level != 0.95 ||
		q.From == nil || q.From.Number != 40 || q.To.Number != 90.5 || !slices.Equal(q.Held, []string{"soil"}) {
		t.Fatalf("asked %+v", q)
	}
	if b.closeTop() {
		t.Error("the popover stays after asking")
	}
}
