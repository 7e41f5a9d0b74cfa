package ui

import (
	"slices"
	"strings"
	"testing"

	"fyne.io/fyne/v2"

	"arrowroot/canvas/scene"
	"arrowroot/compile/study"
)

// fieldStudy draws three variables over the data of csv.
func fieldStudy(t *testing.T) *bench {
	t.Helper()
	b := newBench(t)
	b.say("soil -> rain; rain -> growth; growth -> yield_t; rain -> yield_t; soil -> yield_t")
	b.loadData(b.csv())
	b.wait("the table", func() bool { return b.view.Table != nil && b.view.Model != nil })
	b.closeTop()
	b.setExposure("rain")
	b.setOutcome("yield_t")
	b.queue.drain()
	return b
}

// undone asserts that something was one step, and takes it back.
func (b *bench) undone(what string) {
	b.Helper()
	before := b.view.Study
	b.session.Undo()
	b.queue.drain()
	b.session.Redo()
	b.queue.drain()
	if b.view.Study != before {
		b.Errorf("%s: redo gives another study", what)
	}
	b.session.Undo()
	b.queue.drain()
}

func TestMeasuredWithErrorIsOneStep(t *testing.T) {
	b := fieldStudy(t)
	was := b.view.Study
	b.choose(pickNode("growth"))
	b.commands.find("truth").run()
	b.queue.drain()
	v, d := b.view.Study.Variable("growth"), b.view.Rival.Diagram
	if v.Records != "true_growth" || d.Arrow("true_growth", "growth") == nil || d.Arrow("rain", "true_growth") == nil || d.Arrow("growth", "yield_t") != nil {
		t.Fatalf("growth records %q", v.Records)
	}
	if b.picked() != "true_growth" || b.commands.find("truth").ready() {
		t.Errorf("picked %q; an unmeasured variable cannot be a record", b.picked())
	}
	b.undone("measured with error")
	if b.view.Study != was {
		t.Error("it took more than one step")
	}
}

func TestResponseIndicatorOfAnIncompleteColumn(t *testing.T) {
	b := fieldStudy(t)
	b.choose(pickNode("yield_t"))
	if b.commands.find("indicator").ready() {
		t.Error("a complete column has nothing to indicate")
	}
	b.choose(pickNode("growth"))
	b.commands.find("indicator").run()
	b.queue.drain()
	v := b.view.Study.Variable("growth_recorded")
	if v == nil || v.Answers != "growth" || v.Scale != study.Binary || !b.onSheet("growth_recorded") {
		t.Fatalf("the indicator is %+v", v)
	}
	if slices.ContainsFunc(b.unbound(), func(v *study.Variable) bool { return v.ID == "growth_recorded" }) {
		t.Error("an indicator is asked for a column")
	}
	b.choose(pickNode("growth"))
	if b.commands.find("indicator").ready() {
		t.Error("a second indicator is offered")
	}
	b.undone("the indicator")
	if b.view.Study.Variable("growth_recorded") != nil {
		t.Error("it took more than one step")
	}
}

func TestLimitingRowsIsMarkedOnTheSheet(t *testing.T) {
	b := fieldStudy(t)
	b.choose(pickNode("soil"))
	b.key("L")
	if !b.view.Rival.Diagram.Node("soil").Limits {
		t.Fatal("L does not mark")
	}
	b.key("L")
	if b.view.Rival.Diagram.Node("soil").Limits {
		t.Error("L does not take the mark away")
	}
}

// The popover offers only what the study has: no groups without plates, no
// direct effect without something between.
func TestAsidesOfAQuestion(t *testing.T) {
	b := fieldStudy(t)
	a := b.askQuestion(b.capsule)
	more, ok := a.keys["more"].(*press)
	if !ok || strings.Contains(labelOf(more), "groups") || !strings.Contains(labelOf(more), "direct effect") {
		t.Fatalf("more is %v", a.keys["more"])
	}
	more.Tapped(nil)
	if a.keys["groups"] != nil || a.keys["effect"] == nil {
		t.Error("groups are asked for without plates, or no direct effect is offered")
	}
	a.keys["effect"].(*chooser).SetSelected("direct, with others fixed")
	b.queue.drain()
	at, ok := a.keys["at growth"].(*field)
	if !ok || at.Text == "" || len(a.draft.Fixed) != 1 {
		t.Fatalf("growth is fixed at %+v", a.draft.Fixed)
	}
	at.SetText("4,5")
	a.where.put("soil")
	a.where.flip("soil", "loam", true)
	if got := a.subset(); slices.Contains(got, "growth") || slices.Contains(got, "rain") || !slices.Contains(got, "soil") {
		t.Errorf("rows can be chosen by %q", got)
	}
	a.keys["at growth"].(*field).SetText("much")
	a.ask()
	if a.wrong == "" || b.view.Question.Effect != "" {
		t.Fatal("a value that is no number was asked for")
	}
	a.keys["at growth"].(*field).SetText("4,5")
	a.ask()
	b.queue.drain()
	q := b.view.Question
	if q.Effect != study.DirectEffect || q.Fixed[0] != (study.Fix{Variable: "growth", At: study.Setting{Number: 4.5}}) {
		t.Errorf("asked with %+v", q.Fixed)
	}
	if len(q.Where) != 1 || !slices.Equal(q.Where[0].Words, []string{"clay", "loam"}) {
		t.Errorf("among %+v", q.Where)
	}
	b.undone("the question")

	if !b.do(study.AddPlate{Plate: study.Plate{Name: "soil_type", Column: "soil"}}) {
		t.Fatal("no plate")
	}
	b.queue.drain()
	a = b.askQuestion(b.capsule)
	a.more = true
	a.again()
	a.keys["groups"].(*chooser).SetSelected("new ones of the same kind")
	a.keys["weigh"].(*chooser).SetSelected("every soil_type the same")
	b.queue.drain()
	a.ask()
	b.queue.drain()
	if q := b.view.Question; q.Groups != study.NewGroups || q.Weigh != study.ByGroups {
		t.Errorf("asked over groups %q, weighed %q", q.Groups, q.Weigh)
	}
}

func TestRowsThatAreUsed(t *testing.T) {
	b := fieldStudy(t)
	low := 15.0
	b.keepRows(b.view.Study.Data[0].Name, []study.Condition{{Variable: "rain", Low: &low}})
	b.queue.drain()
	if k := b.view.Study.Data[0].Keep; len(k) != 1 || *k[0].Low != 15 {
		t.Fatalf("kept %+v", k)
	}
	b.undone("the filter")
	if b.view.Study.Data[0].Keep != nil {
		t.Error("it took more than one step")
	}
	p := b.pickRows(nil, func() {})
	p.again = func() { s := &sheaf{d: b.desk, keys: map[string]fyne.Focusable{}}; p.add(s, "k") }
	p.put("rain")
	f := p.bounds["rain"]
	f[0].SetText("20")
	f[1].SetText("15")
	if _, wrong := p.conditions(); wrong == "" {
		t.Error("bounds from high to low are taken")
	}
	f[1].SetText("")
	if list, wrong := p.conditions(); wrong != "" || len(list) != 1 || *list[0].Low != 20 || list[0].High != nil {
		t.Errorf("conditions %+v, %q", list, wrong)
	}
}

// Each arrow, arc and pair without an arrow has its reason and its references.
func TestReasonsHaveReferences(t *testing.T) {
	b := fieldStudy(t)
	x := b.details()
	b.choose(scene.Selection{Nodes: []string{"soil", "growth"}})
	why, ok := x.pane.keys["absent soil growth"].(*field)
	if !ok {
		t.Fatal("nobody asks why soil does not act on growth")
	}
	if x.pane.keys["absent growth soil"] != nil {
		t.Error("an arrow that would close a cycle needs no reason")
	}
	why.SetText("sown by hand")
	why.done()
	b.queue.drain()
	b.choose(scene.Selection{Nodes: []string{"soil", "growth"}})
	refs, ok := x.pane.keys["references"].(*field)
	if !ok {
		t.Fatal("no place for references")
	}
	refs.SetText("Field book, p. 3\n\n  Second source ")
	refs.done()
	b.queue.drain()
	a := b.view.Rival.Diagram.AbsentArrow("soil", "growth")
	if a == nil || a.Why != "sown by hand" || !slices.Equal(a.References, []string{"Field book, p. 3", "Second source"}) {
		t.Errorf("absent %+v", a)
	}
}

// Words that are longer than a line are broken, and a long text in a field
// scrolls instead of running over its edge.
func TestLongNamesStayInside(t *testing.T) {
	newBench(t)
	long := strings.Repeat("mean_number_of_bees_", 6)
	for _, text := range []string{long, strings.Repeat("x", 120), "short " + long + " short"} {
		p := newProse(sizeBody, span{text: text})
		pieces, _ := p.wrap(180)
		var all strings.Builder
		for _, piece := range pieces {
			if piece.x+piece.width > 181 {
				t.Errorf("a piece of %q ends at %g", text, piece.x+piece.width)
			}
			all.WriteString(piece.text)
		}
		if got := strings.ReplaceAll(all.String(), " ", ""); got != strings.ReplaceAll(text, " ", "") {
			t.Errorf("%q became %q", text, got)
		}
	}
	k := newKit(func(f func()) { f() })
	f := k.field("short", "", nil)
	f.Resize(fyne.NewSize(120, 30))
	if f.Scroll != fyne.ScrollNone {
		t.Error("a short text takes the wheel from the pane")
	}
	f.SetText(long)
	if f.Scroll != fyne.ScrollHorizontalOnly {
		t.Error("a long text runs over the edge")
	}
}

func labelOf(p *press) string {
	if l, ok := p.content.(*label); ok {
		return l.text
	}
	return ""
}
