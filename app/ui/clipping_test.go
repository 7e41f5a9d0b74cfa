package ui

import (
	"arrowroot/app/words"
	"testing"
	"time"

	"fyne.io/fyne/v2"
	"fyne.io/fyne/v2/test"
)

// No subject of the Reading page is cut short beside the loudest count.
func TestReadingSubjectsFit(t *testing.T) {
	b := newBench(t)
	alarm := fyne.MeasureText("88 fail", sizeSmall, fyne.TextStyle{}).Width
	for _, s := range subjects(b.desk) {
		const pads = 2*8 + 6 + 2*6 // of the row, between its words, of the list
		name := words.Upper(s.name)
		if w := fyne.MeasureText(name, sizeBody, fyne.TextStyle{}).Width + alarm + pads; w > navWidth {
			t.Errorf("%q needs %.0f of %d", name, w, int(navWidth))
		}
	}
}

// The kind of a finding wraps when it is longer than its column.
func TestLongKindOfFindingWraps(t *testing.T) {
	b := newBench(t)
	b.say("u -> x")
	b.read()
	p := b.drawer.pages[0].(*readingPage)
	height := func(kind string) float32 {
		l := &readingLine{key: "k", kind: kind, text: "One line."}
		return heightFor(p.press(l, "", nil), 600)
	}
	if short, long := height("law"), height("law with carried terms of many"); long < 1.5*short {
		t.Errorf("a long kind is %.0f high, a short one %.0f", long, short)
	}
}

// A note breaks at words while it is read.
func TestNoteBreaksAtWordsWhenLeft(t *testing.T) {
	test.NewTempApp(t).Settings().SetTheme(Theme{})
	b := newBench(t)
	f := b.note("Hedges give bees nest sites as well as flowers.", "", nil)
	if f.Wrapping != fyne.TextWrapWord {
		t.Error("a note that nobody types in breaks within words")
	}
	f.FocusGained()
	if f.Wrapping != fyne.TextWrapBreak {
		t.Error("a note that is typed in can lose a space at the end of a line")
	}
	f.FocusLost()
	if f.Wrapping != fyne.TextWrapWord {
		t.Error("left, a note breaks within words")
	}
}

// What happened takes the place of the legend where both find no room; what
// the pointer is over gives way to it.
func TestStatusYieldsToWhatHappened(t *testing.T) {
	b := newBench(t)
	s := b.desk.status
	legend := small("nodes: total effect of hedge 40 → 90 m/ha, in plausible widths")
	s.legend.Objects = []fyne.CanvasObject{legend}
	lay := func(text string) {
		s.says.set(text, tokenMuted)
		s.object.Layout.Layout(s.object.Objects, fyne.NewSize(legend.MinSize().Width+120, statusHeight))
	}
	s.hint = "hedgerow density"
	lay(s.hint)
	if !s.legend.Visible() || s.says.Visible() {
		t.Error("a name that the pointer is over pushes the legend away or is cut short")
	}
	s.refused = "That arrow would close a cycle."
	lay(s.refused)
	if s.legend.Visible() || !s.says.Visible() {
		t.Error("a refusal is cut short beside the legend")
	}
	s.refused = ""
	lay("")
	if !s.legend.Visible() {
		t.Error("the legend stays away")
	}
}

func TestOneSecondLeft(t *testing.T) {
	if got := progressWords(1, 2, time.Second, false); got != "about 1 second left" {
		t.Error(got)
	}
}
