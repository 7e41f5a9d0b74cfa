package ui

import (
	"fmt"
	"slices"
	"strings"
	"testing"

	"fyne.io/fyne/v2"
	"fyne.io/fyne/v2/test"

	"arrowroot/app/findings"
	"arrowroot/compile/causal"
	"arrowroot/compile/study"
)

// coverCrop is our story of a cover crop: no set of measured variables gives
// its effect on the yield.
const coverCrop = "cover -> nitrogen -> crop; cover -> water -> crop; rain -> water, crop; slope -> cover, water; ? -> cover, crop; subsidy -> cover"

func (b *bench) ask(arrows, exposure, outcome string) *readingPage {
	b.Helper()
	b.say(arrows)
	b.say("exposure " + exposure)
	b.say("outcome " + outcome)
	b.read()
	return b.drawer.pages[0].(*readingPage)
}

// read waits until the arrows are read to the end.
func (b *bench) read() {
	b.Helper()
	b.wait("all findings", func() bool { return b.view.Findings != nil && b.view.Findings.Done })
}

// find gives the first line of a subject whose sentence has some words.
func (p *readingPage) find(subject, words string) *readingLine {
	p.turn(subject)
	for i := range p.lines {
		if strings.Contains(p.lines[i].text, words) {
			return &p.lines[i]
		}
	}
	return nil
}

// stand gives the keyboard to a line.
func (b *bench) stand(p *readingPage, l *readingLine) {
	b.Helper()
	if l == nil || !p.rows.focus(l.key) {
		b.Fatalf("no line to stand on among %d", len(p.lines))
	}
}

func (b *bench) press(key fyne.KeyName) {
	b.win.Canvas().Focused().TypedKey(&fyne.KeyEvent{Name: key})
	b.queue.drain()
}

func TestReadingShowsEverySubject(t *testing.T) {
	b := newBench(t)
	p := b.ask(coverCrop, "cover", "crop")
	if k := b.view.Reading.Verdict.Kind; k != causal.NoSet {
		t.Fatalf("the verdict is %v", k)
	}
	for _, name := range subjectNames {
		p.turn(name)
		if s := subjectOf(b.desk, name); s.waiting || s.section == nil || len(s.says)+len(p.lines) == 0 {
			t.Errorf("%s says nothing", name)
		}
	}
	door := p.find(findings.BeyondSection, "nitrogen and water")
	b.stand(p, door)
	for _, kind := range []string{"front door", "instrument"} {
		if !slices.ContainsFunc(p.lines, func(l readingLine) bool { return l.kind == kind }) {
			t.Errorf("no %s among %d lines", kind, len(p.lines))
		}
	}
	// The sentences are those of the findings, so that report and batch say the same.
	for i, x := range b.view.Findings.Beyond.Findings {
		if p.lines[i].text != x.Sentence {
			t.Errorf("%q is shown for %q", p.lines[i].text, x.Sentence)
		}
	}
}

// What cannot be identified shows the two parts that stand in the way.
func TestReadingShowsWhatStandsInTheWay(t *testing.T) {
	b := newBench(t)
	p := b.ask("sun -> ripe; ? -> sun, ripe", "sun", "ripe")
	b.stand(p, p.find(findings.BeyondSection, "not"))
	m := b.editor.Input().Mark
	if m == nil || !slices.Equal(m.Outer, []string{"sun", "ripe"}) || !slices.Equal(m.Inner, []string{"ripe"}) {
		t.Errorf("the sheet shows %+v", m)
	}
}

// A set is shown boxed, held by Return, and freed by undo.
func TestReadingHoldsASet(t *testing.T) {
	b := newBench(t)
	p := b.ask("soil -> rain, yield; rain -> growth -> yield", "rain", "yield")
	b.stand(p, p.find(findings.AdjustmentSection, "soil"))
	if m := b.editor.Input().Mark; m == nil || !slices.Equal(m.Box, []string{"soil"}) {
		t.Fatalf("the sheet shows %+v", m)
	}
	b.press(fyne.KeyReturn)
	if !b.held("soil") {
		t.Fatal("Return on a set does not hold it")
	}
	b.read()
	if l := p.find(findings.AdjustmentSection, "soil"); l == nil || l.set == nil || !l.set.now {
		t.Error("the set does not say that it is held now")
	}
	b.commands.find("undo").run()
	if b.held("soil") {
		t.Error("undo keeps the set")
	}
	b.choose(pickNode("soil"))
	b.key("H")
	b.key("H")
	if b.held("soil") {
		t.Error("H twice on the sheet holds")
	}
}

// A bad control is shown with its path and can be left free from its line.
func TestReadingFreesABadControl(t *testing.T) {
	b := newBench(t)
	p := b.ask("soil -> rain, yield; rain -> growth -> yield", "rain", "yield")
	b.say("hold growth")
	b.read()
	l := p.find(findings.ControlSection, "growth")
	b.stand(p, l)
	if m := b.editor.Input().Mark; m == nil || len(m.Trails) != 1 || len(m.Trails[0].Legs) != 2 {
		t.Errorf("the sheet shows %+v", m)
	}
	b.press(fyne.KeyReturn)
	if b.held("growth") {
		t.Error("Return does not leave the control free")
	}
}

// The keyboard walks from the tab to the subjects, along them and into the rows.
func TestReadingByKeyboard(t *testing.T) {
	b := newBench(t)
	p := b.ask(coverCrop, "cover", "crop")
	p.nav.focus(findings.PathSection)
	b.press(fyne.KeyDown)
	b.press(fyne.KeyDown)
	if p.chosen != findings.ControlSection {
		t.Fatalf("two steps down show %q", p.chosen)
	}
	b.press(fyne.KeyRight)
	if f := b.focus(); f != "finding "+p.lines[0].key {
		t.Fatalf("Right goes to %q", f)
	}
	b.press(fyne.KeyEnd)
	if f := b.focus(); f != "finding "+p.lines[len(p.lines)-1].key {
		t.Errorf("End goes to %q", f)
	}
	b.press(fyne.KeyLeft)
	if f := b.focus(); f != "read "+p.chosen {
		t.Errorf("Left goes to %q", f)
	}
	if b.editor.Input().Mark != nil {
		t.Error("what the keyboard left stays lit")
	}
}

// A click keeps a line lit while the pointer is elsewhere.
func TestReadingPins(t *testing.T) {
	b := newBench(t)
	p := b.ask(coverCrop, "cover", "crop")
	l := &p.lines[0]
	row := p.rows.make(p.rows.find(l.key)).(*press)
	test.Tap(row)
	row.MouseOut()
	if b.editor.Input().Mark == nil {
		t.Fatal("the path is not lit once the pointer is gone")
	}
	p.turn(findings.ControlSection)
	if b.editor.Input().Mark != nil {
		t.Error("the path stays lit beside another subject")
	}
}

// An arrow in the hand is read before it is let go, and forgotten if it is not.
func TestReadingFollowsAnArrowInTheHand(t *testing.T) {
	b := newBench(t)
	b.ask("rain -> yield; soil", "rain", "yield")
	b.editor.OnDraft(study.AddArrow{Rival: b.rival(), Arrow: study.Arrow{From: "soil", To: "rain"}})
	b.wait("the arrow in the hand", func() bool { return b.view.Considered != "" && b.view.Findings.Done })
	if n := len(b.view.Graph.Arrows); n != 2 {
		t.Errorf("%d arrows were read", n)
	}
	b.editor.OnDraft(study.AddArrow{Rival: b.rival(), Arrow: study.Arrow{From: "yield", To: "rain"}}) // refused: a cycle
	if b.view.Considered != "" || len(b.view.Graph.Arrows) != 1 {
		t.Error("an arrow that would be refused is read")
	}
	b.editor.OnDraft(study.AddArrow{Rival: b.rival(), Arrow: study.Arrow{From: "soil", To: "yield"}})
	b.wait("the other arrow", func() bool { return b.view.Considered != "" })
	b.editor.OnDraft(nil)
	if b.view.Considered != "" || len(b.view.Rival.Diagram.Arrows) != 1 {
		t.Error("an arrow that was not drawn stays")
	}
}

// What the data say stands in place of what they could contradict, the worst
// first, and the arrow that would repair it is a Return away.
func TestReadingTestsPromises(t *testing.T) {
	b := newBench(t)
	b.say("growth -> rain; yield") // in the file all three go up together
	b.say("data " + b.csv())
	b.wait("the table", func() bool { return b.view.Table != nil && b.win.Canvas().Overlays().Top() != nil })
	b.closeTop()
	b.say("bind yield yield_t")
	p := b.ask("growth -> rain; yield", "growth", "yield")
	b.wait("the evidence", func() bool { return b.view.Evidence != nil })
	p.turn(findings.ContradictionSection)
	if len(p.lines) == 0 || p.lines[0].tone != badTone {
		t.Fatalf("the first of %d lines is no contradiction: %+v", len(p.lines), p.lines)
	}
	if p.lines[0].text != b.view.Evidence.Findings[0].Sentence || p.lines[0].act == nil {
		t.Fatalf("it says %q and offers %q", p.lines[0].text, p.lines[0].does)
	}
	before := len(b.view.Rival.Diagram.Arrows)
	b.stand(p, &p.lines[0])
	b.press(fyne.KeyReturn)
	if len(b.view.Rival.Diagram.Arrows) != before+1 {
		t.Error("Return does not draw the arrow")
	}
}

// However many rows there are, a screenful of them is made; those below are
// reached by key.
func TestRollMakesAScreenful(t *testing.T) {
	b := newBench(t)
	var lines []string
	for i := range 400 {
		lines = append(lines, fmt.Sprintf("v%d -> v%d", i/3, i+1))
	}
	b.do(study.TypeArrows{Rival: b.rival(), Text: strings.Join(lines, "\n")})
	var l *ledger
	for _, x := range b.panels {
		if x, ok := x.(*ledger); ok {
			l = x
		}
	}
	if n := len(l.pane.live); n == 0 || n > 100 {
		t.Errorf("%d of 401 rows are made", n)
	}
	l.pane.focus("variable v3")
	b.press(fyne.KeyEnd)
	if y := l.pane.scroll.Offset.Y; y < 1000 {
		t.Errorf("End leaves the last row out of view: %v", y)
	}
}
