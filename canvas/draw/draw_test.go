package draw

import (
	"bytes"
	"encoding/xml"
	"errors"
	"image"
	"io"
	"math"
	"math/rand/v2"
	"runtime"
	"slices"
	"strings"
	"testing"

	"arrowroot/canvas/internal/golden"
)

func light() Style {
	return Style{
		Ground: Hex("#FFFFFF"), Ink: Hex("#232730"), Muted: Hex("#656972"), Hairline: Hex("#DAD5C9"),
		Accent: Hex("#8A3A10"), Soft: Hex("#F6BF8B"),
	}
}

// sampler shows everything a list can hold.
func sampler() *List {
	ink := Hex("#232730")
	l := &List{Width: 420, Height: 240, Background: Hex("#FBFAF6")}
	l.Add(&Grid{Within: Rect{0, 0, 420, 240}, Step: 24, Size: 1, Color: Hex("#DAD5C9")})
	for i, f := range []Face{Regular, Bold, Italic, BoldItalic} {
		l.Add(&Text{At: Point{10, 20 + float64(i)*18}, Text: "hedge → flowers ← bees ↔ β ≤ ≥ −0.5 × ½ pesticide", Face: f, Size: 12.5, Color: ink})
	}
	l.Add(
		&Text{At: Point{410, 92}, Text: "end", Size: 10.5, Color: ink, Anchor: End},
		&Shape{Path: RoundRect(Rect{10, 100, 110, 34}, 17), Fill: Hex("#FFFFFF"), Stroke: ink, Width: 1.5},
		&Shape{Path: RoundRect(Rect{130, 100, 110, 34}, 17), Stroke: Hex("#656972"), Width: 1.5, Dash: []float64{5, 4}},
		&Shape{Path: RoundRect(Rect{250, 100, 110, 34}, 3), Fill: Hex("#F6BF8B"), Stroke: ink, Width: 1.5, Crisp: true},
		&Text{At: Point{65, 117 + Drop(12.5)}, Text: "arable", Face: Bold, Size: 12.5, Color: ink, Anchor: Middle},
	)
	var wave Path
	wave.Move(Point{20, 170})
	wave.Cubic(Point{120, 120}, Point{180, 230}, Point{260, 170})
	l.Add(
		&Shape{Path: wave, Stroke: Alpha(Hex("#C27A12"), 0.3), Width: 13},
		&Shape{Path: wave, Stroke: ink, Width: 1.6},
		&Shape{Path: Polyline(Point{290, 150}, Point{340, 210}, Point{300, 210}, Point{380, 150}), Stroke: ink, Width: 6, Round: true},
		&Discs{Centres: []Point{{30, 220}, {40, 220}, {50.5, 220.5}}, Radius: 3.5, Color: ink},
	)
	return l
}

func TestSampler(t *testing.T) {
	golden.Image(t, "sampler", Raster(sampler(), 1))
	golden.Image(t, "sampler2x", Raster(sampler(), 2))
	var b bytes.Buffer
	if err := WriteSVG(&b, sampler()); err != nil {
		t.Fatal(err)
	}
	golden.Text(t, "sampler.svg", b.Bytes())
}

func normal(mean, sd float64) Curve {
	var c Curve
	for i := range 201 {
		z := -4 + 8*float64(i)/200
		c.X = append(c.X, mean+sd*z)
		c.Y = append(c.Y, math.Exp(-z*z/2)/(sd*math.Sqrt(2*math.Pi)))
	}
	return c
}

func TestPictures(t *testing.T) {
	zero, one := 0.0, 1.0
	golden.Image(t, "density", Raster(DensityPlot(272, 96, Density{
		Prior: normal(0, 0.04), Posterior: normal(0.02, 0.016), Low: -0.006, High: 0.046, Mark: &zero,
	}, light()), 2))
	golden.Image(t, "intervals", Raster(Intervals(460, IntervalsHeight(3), []Interval{
		{Label: "crude", Mid: 1.42, Low: 1.3, High: 1.6, InnerLow: 1.38, InnerHigh: 1.5, Words: "1.42 (1.30 to 1.60)", Faint: true},
		{Label: "holding pesticide, soil", Mid: 1.19, Low: 1.05, High: 1.33, InnerLow: 1.12, InnerHigh: 1.25, Words: "1.19 (1.05 to 1.33)"},
		{Label: "full model", Mid: 1.17, Low: 1.05, High: 1.31, InnerLow: 1.11, InnerHigh: 1.22, Words: "1.17 (1.05 to 1.31)"},
	}, &one, light()), 2))
	skewed := make([]float64, 20)
	for i := range skewed {
		skewed[i] = math.Pow(float64(i)/20, 2)
	}
	golden.Image(t, "dots", Raster(DotStrip(80, 28, skewed, light()), 2))
	golden.Image(t, "thumb", Raster(Thumbnail(72, 48, Thumb{
		Nodes:  []ThumbNode{{At: Point{0, 0}}, {At: Point{100, -60}, Unmeasured: true}, {At: Point{200, 0}}, {At: Point{100, 60}, Marked: true}},
		Arrows: [][2]int{{0, 2}, {1, 0}, {1, 2}, {0, 3}, {3, 2}}, Arcs: [][2]int{{0, 1}},
	}, light()), 2))
}

// Pictures of nothing, of one value and of values that are not finite are
// drawn without a panic.
func TestPicturesOfLittle(t *testing.T) {
	nan, inf := math.NaN(), math.Inf(1)
	for _, l := range []*List{
		DensityPlot(100, 40, Density{}, light()),
		DensityPlot(100, 40, Density{Posterior: Curve{X: []float64{1}, Y: []float64{1}}}, light()),
		DensityPlot(4, 4, Density{Prior: normal(0, 1)}, light()),
		DensityPlot(100, 40, Density{Prior: Curve{X: []float64{0, 1}, Y: []float64{inf, 1}}}, light()),
		Intervals(100, 40, nil, nil, light()),
		Intervals(100, 40, []Interval{{Mid: 1, Low: 1, High: 1}}, nil, light()),
		Intervals(30, 40, []Interval{{Label: "long words", Mid: 1, Low: nan, High: inf, Words: "long words"}}, nil, light()),
		DotStrip(40, 20, nil, light()),
		DotStrip(40, 20, []float64{3, 3, 3}, light()),
		Thumbnail(40, 30, Thumb{}, light()),
		Thumbnail(40, 30, Thumb{Nodes: []ThumbNode{{}, {}}, Arrows: [][2]int{{0, 1}}}, light()),
	} {
		Raster(l, 1.5)
		if err := WriteSVG(io.Discard, l); err != nil {
			t.Error(err)
		}
	}
}

// The two bands of a large picture give the same pixels as one.
func TestBandsAgree(t *testing.T) {
	l := sampler()
	l.Width, l.Height = 840, 480
	two := Raster(l, 1.37)
	old := runtime.GOMAXPROCS(1)
	one := Raster(l, 1.37)
	runtime.GOMAXPROCS(old)
	if !slices.Equal(one.Pix, two.Pix) {
		t.Error("two bands differ from one")
	}
}

// What lies outside of the image, however far, is left out without harm.
func TestOutside(t *testing.T) {
	l := &List{Width: 50, Height: 50, Background: Hex("#FFFFFF")}
	red := Hex("#FF0000")
	l.Add(
		&Shape{Path: Polyline(Point{-3000, -5000}, Point{4000, 6000}), Stroke: red, Width: 3},
		&Shape{Path: RoundRect(Rect{-20000, -20000, 40000, 40000}, 9), Stroke: red, Width: 3},
		&Shape{Path: Circle(Point{900, 25}, 30), Fill: red},
		&Text{At: Point{-30, 25}, Text: "far away to the left", Size: 12, Color: red},
		&Text{At: Point{20, 5000}, Text: "below", Size: 12, Color: red},
		&Text{At: Point{20, 20}, Text: "huge", Size: 4000, Color: red},
		&Discs{Centres: []Point{{-40, -40}, {50, 50}, {1e300, 2}, {math.NaN(), 2}}, Radius: 5, Color: red},
		&Shape{Path: Polyline(Point{0, 0}, Point{1e300, 2}, Point{math.Inf(1), math.NaN()}), Stroke: red, Width: 3},
		&Text{At: Point{math.NaN(), 1e300}, Text: "nowhere", Size: 12, Color: red},
	)
	Raster(l, 1)
	Raster(l, 4)
}

// A half-covered pixel gets half of the colour: area coverage is exact for
// edges on quarter pixels.
func TestCoverage(t *testing.T) {
	l := &List{Width: 4, Height: 4, Background: Hex("#FFFFFF")}
	l.Add(&Shape{Path: RoundRect(Rect{1, 1, 1.5, 1.25}, 0), Fill: Hex("#000000")})
	m := Raster(l, 1)
	for _, c := range []struct {
		at   image.Point
		want float64 // share of black
	}{{image.Pt(1, 1), 1}, {image.Pt(2, 1), 0.5}, {image.Pt(1, 2), 0.25}, {image.Pt(2, 2), 0.125}, {image.Pt(3, 3), 0}, {image.Pt(0, 0), 0}} {
		got := 1 - float64(m.RGBAAt(c.at.X, c.at.Y).R)/255
		if math.Abs(got-c.want) > 2./255 {
			t.Errorf("pixel %v is %.3f black, want %.3f", c.at, got, c.want)
		}
	}
}

// Where strokes of one shape overlap the colour is laid on once.
func TestOverlapOnce(t *testing.T) {
	l := &List{Width: 40, Height: 40, Background: Hex("#FFFFFF")}
	var cross Path
	cross.Append(Polyline(Point{0, 20}, Point{40, 20}))
	cross.Append(Polyline(Point{20, 0}, Point{20, 40}))
	l.Add(&Shape{Path: cross, Stroke: Alpha(Hex("#000000"), 0.3), Width: 10})
	m := Raster(l, 1)
	if a, b := m.RGBAAt(20, 20), m.RGBAAt(20, 5); a != b {
		t.Errorf("crossing %v, arm %v", a, b)
	}
}

// A crisp line one unit wide covers exactly one row of pixels at any scale.
func TestCrisp(t *testing.T) {
	for _, scale := range []float64{1, 1.25, 1.5} {
		l := &List{Width: 20, Height: 20, Background: Hex("#FFFFFF")}
		l.Add(&Shape{Path: Polyline(Point{0, 9.3}, Point{20, 9.3}), Stroke: Hex("#000000"), Width: 1, Crisp: true})
		m := Raster(l, scale)
		black, grey := 0, 0
		for y := range m.Bounds().Dy() {
			switch v := m.RGBAAt(8, y).R; {
			case v == 0:
				black++
			case v != 255:
				grey++
			}
		}
		if grey != 0 || black != max(1, int(math.Round(scale))) {
			t.Errorf("scale %g: %d black and %d grey rows", scale, black, grey)
		}
	}
}

// The dashes of a line are as long as asked for.
func TestDashes(t *testing.T) {
	got := dashes([]Point{{0, 0}, {10, 0}, {10, 10}}, false, []float64{4, 3})
	want := [][]Point{{{0, 0}, {4, 0}}, {{7, 0}, {10, 0}, {10, 1}}, {{10, 4}, {10, 8}}}
	if len(got) != len(want) {
		t.Fatalf("%v, want %v", got, want)
	}
	for i := range want {
		if !slices.EqualFunc(got[i], want[i], func(a, b Point) bool { return a.Sub(b).Len() < 1e-9 }) {
			t.Errorf("dash %d: %v, want %v", i, got[i], want[i])
		}
	}
}

// Widths are those of the font's own tables: DejaVu Sans Condensed is drawn on
// 2048 units; the widths below were read from the cmap and hmtx tables of the
// file by a few lines of Python, apart from x/image.
func TestMeasure(t *testing.T) {
	for text, units := range map[string]float64{"n": 1168, " ": 585, "→": 1544, "β": 1176, "nn n": 3*1168 + 585} {
		if got, want := Measure(text, Regular, 2048), units; math.Abs(got-want) > 1.5 {
			t.Errorf("%q is %.1f units wide, want %.0f", text, got, want)
		}
	}
	if got := Shorten("pesticide", Bold, 12, 40); Measure(got, Bold, 12) > 40 || got == "…" {
		t.Errorf("shortened to %q", got)
	}
	if got := Shorten("soil", Bold, 12, 40); got != "soil" {
		t.Errorf("what fits became %q", got)
	}
	if got := Shorten("soil", Bold, 12, 0); got != "…" {
		t.Errorf("no room gives %q", got)
	}
}

// Wrapped lines fit, keep every word in order, and say where they were cut.
func TestWrap(t *testing.T) {
	text := "honey is not bound to a column of hedgerows.csv"
	for width := 20.0; width < 400; width += 7 {
		for most := 1; most < 8; most++ {
			lines := Wrap(text, Regular, 12, width, most)
			if len(lines) == 0 || len(lines) > most {
				t.Fatalf("%g wide: %d lines, at most %d", width, len(lines), most)
			}
			whole := strings.Join(lines, " ")
			if whole != text && !strings.Contains(whole, "…") {
				t.Errorf("%g wide, %d lines: %q lost words without a sign", width, most, whole)
			}
			for _, line := range lines {
				if w := Measure(line, Regular, 12); w > width {
					t.Errorf("%q is %.1f wide, more than %g", line, w, width)
				}
			}
		}
	}
	if got := Wrap(text, Regular, 12, 400, 3); !slices.Equal(got, []string{text}) {
		t.Errorf("what fits became %q", got)
	}
	if got := Wrap(" ", Regular, 12, 50, 3); len(got) != 0 {
		t.Errorf("no words give %q", got)
	}
}

// Every character that our words use has a picture of its own.
func TestGlyphs(t *testing.T) {
	for f := range faces {
		face := typefaces[f]()
		for _, r := range "abcxyzÀéßαβγδεκλμρστω→←↔≤≥−×÷±½²·–—…≈∼≠∑√⊥°₀₁₂ᵢ✓▸▾▢“”" {
			if face.glyph(r).id == 0 {
				t.Errorf("face %d lacks %c", f, r)
			}
		}
	}
}

// KDE integrates to one and finds the centre of normal draws; Monte Carlo error
// of a mean of 4,000 draws is 0.016, bound at four of them.
func TestKDE(t *testing.T) {
	rng := rand.New(rand.NewPCG(3, 3))
	draws := make([]float64, 4000)
	for i := range draws {
		draws[i] = 2 + rng.NormFloat64()
	}
	c := KDE(draws, 400)
	area, mean := 0.0, 0.0
	for i := 1; i < len(c.X); i++ {
		w := (c.X[i] - c.X[i-1]) * (c.Y[i] + c.Y[i-1]) / 2
		area += w
		mean += w * (c.X[i] + c.X[i-1]) / 2
	}
	if math.Abs(area-1) > 0.01 || math.Abs(mean-2) > 0.064 {
		t.Errorf("area %.4f, mean %.4f", area, mean)
	}
	if c := KDE([]float64{1, 1, 1}, 50); len(c.X) != 0 {
		t.Error("a constant has no density")
	}
}

// Every quantile is one dot, or one of two where dots stand for two.
func TestStackDots(t *testing.T) {
	rng := rand.New(rand.NewPCG(4, 4))
	for range 200 {
		q := make([]float64, 1+rng.IntN(40))
		for i := range q {
			q[i] = math.Pow(rng.Float64(), 4)
			if rng.IntN(3) == 0 {
				q[i] = float64(rng.IntN(3))
			}
		}
		slices.Sort(q)
		s := StackDots(q, 46, 17, 2.5)
		if n := len(s.Centres); n != len(q) && n != len(q)/2 {
			t.Fatalf("%d dots for %d quantiles", n, len(q))
		}
		for _, c := range s.Centres {
			if c.X < 0 || c.X > 46.01 || c.Y > 0 || c.Y < -17.01 || s.Radius <= 0 {
				t.Fatalf("dot at %v, radius %g, for %v", c, s.Radius, q)
			}
		}
	}
}

func TestTicks(t *testing.T) {
	for _, c := range []struct {
		from, to float64
		n        int
		want     []float64
	}{
		{0, 1, 5, []float64{0, 0.2, 0.4, 0.6, 0.8, 1}},
		{-0.12, 0.12, 3, []float64{-0.1, 0, 0.1}},
		{3, 970, 4, []float64{500}},
		{1, 1, 4, nil},
	} {
		got := axis{from: c.from, to: c.to}.ticks(c.n)
		if !slices.EqualFunc(got, c.want, func(a, b float64) bool { return math.Abs(a-b) < 1e-12 }) {
			t.Errorf("%g to %g: %v, want %v", c.from, c.to, got, c.want)
		}
	}
	for v, want := range map[float64]string{0: "0", -0.05: "−0.05", 1234.5: "1234", 0.02: "0.02", 1.5: "1.5", 1e9: "1e+09", 12.345: "12.3"} {
		if got := Number(v); got != want {
			t.Errorf("%g is written %s, want %s", v, got, want)
		}
	}
}

// The SVG is well-formed whatever the words.
func TestSVGWords(t *testing.T) {
	l := &List{Width: 10, Height: 10}
	l.Add(&Text{Text: `<&"soil">`, Size: 10, Color: Hex("#000000")})
	var b bytes.Buffer
	if err := WriteSVG(&b, l); err != nil {
		t.Fatal(err)
	}
	d := xml.NewDecoder(&b)
	words := ""
	for {
		token, err := d.Token()
		if err == io.EOF {
			break
		}
		if err != nil {
			t.Fatal(err)
		}
		if c, ok := token.(xml.CharData); ok {
			words += string(bytes.TrimSpace(c))
		}
	}
	if words != `<&"soil">` {
		t.Errorf("words %q", words)
	}
	if err := WriteSVG(failing{}, sampler()); err == nil {
		t.Error("a writer's error is lost")
	}
}

type failing struct{}

func (failing) Write([]byte) (int, error) { return 0, errors.New("disk full") }
