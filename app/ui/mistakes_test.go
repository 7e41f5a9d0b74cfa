package ui

import (
	"strings"
	"testing"

	"fyne.io/fyne/v2/test"

	"arrowroot/compile/study"
)

// chip finds a button of the banner by its words; nil if there is none.
func (b *bench) chipOf(words string) *press {
	for _, p := range b.panels {
		if x, ok := p.(*banner); ok {
			for _, s := range x.says.spans {
				if c, ok := s.object.(*press); ok && c.content.(*label).text == words {
					return c
				}
			}
		}
	}
	return nil
}

// TestBannerTellsMistakes: a held mediator is told with its path, mended by one
// click, taken back by undo, set aside with a reason and brought back.
func TestBannerTellsMistakes(t *testing.T) {
	b := newBench(t)
	if !b.do(study.TypeArrows{Rival: b.rival(), Text: "? -> hedge, soil\nhedge -> flowers -> bees\nhedge -> bees"}) {
		t.Fatal("the arrows are refused")
	}
	b.setExposure("hedge")
	b.setOutcome("bees")
	b.wait("a reading", func() bool { return b.view.Reading != nil && b.view.Reading.Effect })
	if said := b.banner(); said != "" {
		t.Errorf("a sound study is told %q", said)
	}
	b.hold("flowers", true)
	told := func() bool { return strings.HasPrefix(b.banner(), "Holding flowers would hide part of the effect") }
	b.wait("the mediator", told)

	test.Tap(b.chipOf("Show"))
	if m := b.editor.Input().Mark; m == nil || len(m.Trails) != 1 || len(m.Trails[0].Legs) != 2 {
		t.Errorf("the path is marked as %+v", m)
	}
	test.Tap(b.chipOf("Show"))
	if b.editor.Input().Mark != nil {
		t.Error("the path stays lit")
	}

	test.Tap(b.chipOf("Leave flowers free"))
	b.wait("silence", func() bool { return b.banner() == "" && !b.held("flowers") })
	b.session.Undo()
	b.wait("it again", told)

	test.Tap(b.chipOf("Set aside …"))
	entry := b.win.Canvas().Focused().(*field)
	entry.SetText("asked for")
	entry.OnSubmitted("asked for")
	b.wait("silence", func() bool { return b.banner() == "" && len(b.view.Aside) == 1 })
	if d := b.view.Study.Dismissed; len(d) != 1 || d[0].Why != "asked for" || d[0].Key != "M1 hedge bees flowers" {
		t.Errorf("set aside: %+v", d)
	}
	b.do(study.Restore{Rival: b.rival(), Key: "M1 hedge bees flowers"})
	b.wait("it once more", told)
}

// TestCycleIsDrawnOverTime: the banner names the cycle and draws it over time.
func TestCycleIsDrawnOverTime(t *testing.T) {
	b := newBench(t)
	b.do(study.TypeArrows{Rival: b.rival(), Text: "hedge -> bees"})
	if b.do(study.AddArrow{Rival: b.rival(), Arrow: study.Arrow{From: "bees", To: "hedge"}}) {
		t.Fatal("the cycle is drawn")
	}
	if said := b.banner(); !strings.Contains(said, "hedge → bees → hedge") {
		t.Errorf("the banner says %q", said)
	}
	test.Tap(b.chipOf("Draw it over time"))
	for _, a := range [][2]string{{"bees_before", "hedge"}, {"hedge_before", "bees_before"}, {"hedge_before", "hedge"}, {"bees_before", "bees"}} {
		if b.view.Rival.Diagram.Arrow(a[0], a[1]) == nil {
			t.Errorf("%s → %s is not drawn", a[0], a[1])
		}
	}
	if b.complaint != "" {
		t.Errorf("it still complains: %s", b.complaint)
	}
}
