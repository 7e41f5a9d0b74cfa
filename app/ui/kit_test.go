package ui

import (
	"image/color"
	"math"
	"strings"
	"testing"

	"fyne.io/fyne/v2"
	"fyne.io/fyne/v2/test"
)

// contrast is the contrast ratio of WCAG 2.2 (definition of relative
// luminance and contrast ratio).
func contrast(a, b color.NRGBA) float64 {
	la, lb := luminance(a), luminance(b)
	return (math.Max(la, lb) + 0.05) / (math.Min(la, lb) + 0.05)
}

func luminance(c color.NRGBA) float64 {
	lin := func(v uint8) float64 {
		x := float64(v) / 255
		if x <= 0.04045 {
			return x / 12.92
		}
		return math.Pow((x+0.055)/1.055, 2.4)
	}
	return 0.2126*lin(c.R) + 0.7152*lin(c.G) + 0.0722*lin(c.B)
}

func TestContrast(t *testing.T) {
	for name, set := range map[string]tokens{"light": lightTokens, "dark": darkTokens} {
		for _, pair := range []struct {
			front, back fyne.ThemeColorName
			least       float64
		}{
			{tokenInk, tokenPanel, 4.5}, {tokenInk, tokenCard, 4.5}, {tokenInk, tokenSheet, 4.5}, {tokenInk, tokenTint, 4.5},
			{tokenMuted, tokenPanel, 4.5}, {tokenMuted, tokenCard, 4.5}, {tokenMuted, tokenSheet, 4.5}, {tokenMuted, tokenTint, 4.5},
			{tokenAction, tokenPanel, 4.5}, {tokenAction, tokenCard, 4.5}, {tokenAction, tokenSheet, 4.5}, {tokenAction, tokenTint, 4.5},
			{tokenOnAction, tokenAction, 4.5},
			{tokenConfound, tokenPanel, 4.5}, {tokenConfound, tokenCard, 4.5}, {tokenConfound, tokenSheet, 4.5}, {tokenConfound, tokenAmberTint, 4.5},
			{tokenFault, tokenPanel, 4.5}, {tokenFault, tokenCard, 4.5}, {tokenFault, tokenSheet, 4.5},
			{tokenBorder, tokenCard, 3}, {tokenBorder, tokenPanel, 3},
		} {
			if c := contrast(set[pair.front], set[pair.back]); c < pair.least {
				t.Errorf("%s: %s on %s has a contrast of %.2f, want %.1f", name, pair.front, pair.back, c, pair.least)
			}
		}
	}
}

func TestProseWraps(t *testing.T) {
	test.NewTempApp(t).Settings().SetTheme(Theme{})
	p := para("Pick a variable on the sheet and press X to make it the exposure.", tokenInk)
	narrow, wide := p.HeightFor(120), p.HeightFor(2000)
	if narrow < 3*wide {
		t.Errorf("heights %.0f at 120 and %.0f at 2000", narrow, wide)
	}
	pieces, _ := p.wrap(120)
	var back strings.Builder
	for _, x := range pieces {
		if x.x+fyne.MeasureText(strings.TrimRight(x.text, " "), p.size, fyne.TextStyle{}).Width > 120.5 {
			t.Errorf("%q is wider than the paragraph", x.text)
		}
		back.WriteString(x.text)
	}
	if back.String() != p.Text() {
		t.Errorf("wrapping lost text: %q", back.String())
	}
	p.lines = 2
	if h := p.HeightFor(120); h > 2*wide+1 {
		t.Errorf("two lines are %.0f high, one is %.0f", h, wide)
	}
}

func TestShorten(t *testing.T) {
	test.NewTempApp(t).Settings().SetTheme(Theme{})
	for _, width := range []float32{5, 40, 80, 400} {
		s := shorten("hedge ← soil → flowers → bees", width, sizeBody, fyne.TextStyle{})
		if w := fyne.MeasureText(s, sizeBody, fyne.TextStyle{}).Width; w > width+1 {
			t.Errorf("%q is %.0f wide, want at most %.0f", s, w, width)
		}
	}
}

func TestPressAnswersKeyboardAndIsQuietWhenDisabled(t *testing.T) {
	app := test.NewTempApp(t)
	app.Settings().SetTheme(Theme{})
	k := newKit(func(f func()) { f() })
	n := 0
	p := k.plain("Copy", func() { n++ })
	w := app.NewWindow("")
	w.SetContent(p)
	w.Canvas().Focus(p)
	p.TypedKey(&fyne.KeyEvent{Name: fyne.KeySpace})
	p.TypedKey(&fyne.KeyEvent{Name: fyne.KeyReturn})
	test.Tap(p)
	if n != 3 {
		t.Errorf("%d of 3 presses arrived", n)
	}
	p.Disable()
	test.Tap(p)
	p.TypedKey(&fyne.KeyEvent{Name: fyne.KeySpace})
	if n != 3 {
		t.Error("a disabled button answers")
	}
}

func TestFieldCommitsOnceAndEscapes(t *testing.T) {
	app := test.NewTempApp(t)
	app.Settings().SetTheme(Theme{})
	var got []string
	k := newKit(func(f func()) { f() })
	f := k.field("old", "", func(s string) { got = append(got, s) })
	w := app.NewWindow("")
	w.SetContent(f)
	w.Canvas().Focus(f)
	f.SetText("new")
	f.TypedKey(&fyne.KeyEvent{Name: fyne.KeyReturn})
	f.FocusLost()
	if len(got) != 1 || got[0] != "new" {
		t.Fatalf("committed %q", got)
	}
	f.SetText("other")
	f.TypedKey(&fyne.KeyEvent{Name: fyne.KeyEscape})
	f.FocusLost()
	if len(got) != 1 || f.Text != "new" {
		t.Fatalf("Escape left %q and committed %q", f.Text, got)
	}
}

func TestTabsWalk(t *testing.T) {
	app := test.NewTempApp(t)
	app.Settings().SetTheme(Theme{})
	k := newKit(func(f func()) { f() })
	picked := -1
	tabs := k.tabs([]string{"Law", "Prior", "Data"}, 28, func(i int) { picked = i })
	w := app.NewWindow("")
	w.SetContent(tabs.row)
	w.Canvas().Focus(tabs.items[0])
	tabs.items[0].TypedKey(&fyne.KeyEvent{Name: fyne.KeyRight})
	if picked != 1 || w.Canvas().Focused() != fyne.Focusable(tabs.items[1]) {
		t.Errorf("picked %d", picked)
	}
	tabs.items[1].TypedKey(&fyne.KeyEvent{Name: fyne.KeyLeft})
	tabs.items[0].TypedKey(&fyne.KeyEvent{Name: fyne.KeyLeft})
	if picked != 0 {
		t.Errorf("picked %d", picked)
	}
}

func TestNumber(t *testing.T) {
	for text, want := range map[string]float64{"40": 40, " 0,5 ": 0.5, "−3": -3, "1e3": 1000, "12 000": 12000} {
		if x, ok := number(text); !ok || x != want {
			t.Errorf("%q is %v, %v", text, x, ok)
		}
	}
	for _, text := range []string{"", "six", "nan", "inf", "1,2,3"} {
		if x, ok := number(text); ok {
			t.Errorf("%q is a number: %v", text, x)
		}
	}
}

func TestRounded(t *testing.T) {
	for _, c := range []struct{ x, size, want float64 }{{43.71, 20, 44}, {0.3046, 0.2, 0.3}, {18234, 9000, 18200}} {
		if got := rounded(c.x, c.size); got != c.want {
			t.Errorf("rounded(%v, %v) = %v, want %v", c.x, c.size, got, c.want)
		}
	}
}
