package ui

import (
	"testing"

	"fyne.io/fyne/v2/test"

	"arrowroot/compile/study"
)

// A parent is offered the forms it can take; a chosen one has its band before
// any data, and one that its range forbids says why and is mended by a button.
func TestFormsOfAnArrow(t *testing.T) {
	b := newBench(t)
	b.say("rain -> crop")
	b.say("frost -> crop")
	for _, v := range []study.Variable{
		{ID: "rain", Scale: study.Real, Range: &study.Range{Low: -5, High: 50}},
		{ID: "frost", Scale: study.Ordered, Levels: []string{"none", "some", "hard"}},
		{ID: "crop", Scale: study.Real, Range: &study.Range{Low: 0, High: 10}},
	} {
		b.do(study.ChangeVariable{ID: v.ID, To: v})
	}
	b.queue.drain()
	b.chooseArrow("rain", "crop")
	b.tabOf("arrow", "Form")
	keys := b.details().pane.keys
	for form, want := range map[string]bool{study.Slope: true, study.Log: true, study.Threshold: true, study.Saturating: true, study.Offset: true, study.Steps: false, study.OneWay: false} {
		if (keys["form "+form] != nil) != want {
			t.Errorf("rain, a number, is offered %q: %v", form, !want)
		}
	}
	test.Tap(keys["form "+study.Threshold].(*press))
	b.queue.drain()
	if a := b.view.Rival.Diagram.Arrow("rain", "crop"); a.Form != study.Threshold {
		t.Fatalf("the form is %q", a.Form)
	}
	if m := b.view.Model; m == nil {
		t.Fatalf("no model: %v", b.view.Problems)
	} else if _, ok := m.TermOf("rain", "crop"); !ok {
		t.Error("no term to draw a band of")
	}
	test.Tap(b.details().pane.keys["form "+study.Log].(*press))
	b.queue.drain()
	mend, ok := b.details().pane.keys["mend Use a slope"].(*press)
	if !ok {
		t.Fatalf("nothing mends a log of what can be negative: %v", b.view.Problems)
	}
	test.Tap(mend)
	b.queue.drain()
	if a := b.view.Rival.Diagram.Arrow("rain", "crop"); a.Form != study.Slope {
		t.Errorf("mended to %q", a.Form)
	}
	b.chooseArrow("frost", "crop")
	if b.details().pane.keys["form "+study.OneWay] == nil || b.details().pane.keys["form "+study.Log] != nil {
		t.Error("frost, with ordered levels, is offered other forms")
	}
}
