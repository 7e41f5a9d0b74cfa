package draw

import (
	"image/png"
	"math"
	"os"
	"testing"
)

func light() Style {
	return Style{Ground: Hex("#FFFFFF"), Ink: Hex("#232730"), Muted: Hex("#656972"), Hairline: Hex("#DAD5C9"), Accent: Hex("#8A3A10"), Soft: Hex("#F6BF8B")}
}
func save(t *testing.T, name string, l *List, scale float64) {
	f, err := os.Create(name)
	if err != nil {
		t.Fatal(err)
	}
	defer f.Close()
	png.Encode(f, Raster(l, scale))
}
func TestLook(t *testing.T) {
	l := &List{Width: 520, Height: 300, Background: Hex("#FBFAF6")}
	ink := Hex("#232730")
	l.Add(&Grid{Within: Rect{0, 0, 520, 300}, Step: 24, Size: 1, Color: Hex("#DAD5C9")})
	for i, f := range []Face{Regular, Bold, Italic, BoldItalic} {
		l.Add(&Text{At: Point{10, 20 + float64(i)*18}, Text: "hedge → flowers ← bees ↔ β ≤ ≥ −0.5 × ½ attitude pesticide", Face: f, Size: 12.5, Color: ink})
	}
	l.Add(&Text{At: Point{10, 96}, Text: "direct, ×1.02 per 10 m/ha (90 %: 0.99 to 1.05)  each farm · 84", Size: 10.5, Color: Hex("#656972")})
	l.Add(&Text{At: Point{10, 116}, Text: "Heading of the selection 15", Face: Bold, Size: 15, Color: ink})
	l.Add(&Shape{Path: RoundRect(Rect{20, 130, 110, 34}, 17), Fill: Hex("#FFFFFF"), Stroke: ink, Width: 1.5})
	l.Add(&Text{At: Point{75, 147 + Drop(13.5)}, Text: "arable", Face: Bold, Size: 13.5, Color: ink, Anchor: Middle})
	l.Add(&Shape{Path: RoundRect(Rect{150, 130, 110, 34}, 17), Stroke: Hex("#656972"), Width: 1.5, Dash: []float64{5, 4}})
	l.Add(&Text{At: Point{205, 147 + Drop(13.5)}, Text: "attitude", Face: Italic, Size: 13.5, Color: ink, Anchor: Middle})
	l.Add(&Shape{Path: RoundRect(Rect{280, 130, 110, 34}, 3), Fill: Hex("#F6BF8B"), Stroke: ink, Width: 1.5, Crisp: true})
	var p Path
	p.Move(Point{20, 200})
	p.Cubic(Point{120, 150}, Point{220, 260}, Point{320, 200})
	l.Add(&Shape{Path: p, Stroke: Alpha(Hex("#C27A12"), .3), Width: 13})
	l.Add(&Shape{Path: p, Stroke: ink, Width: 1.6})
	l.Add(&Shape{Path: p, Stroke: ink, Width: 1.6, Dash: []float64{5, 4}})
	l.Add(&Shape{Path: Polyline(Point{350, 190}, Point{400, 250}, Point{360, 250}, Point{440, 190}), Stroke: ink, Width: 6, Round: true})
	save(t, "/tmp/arrowroot/look1.png", l, 1)
	save(t, "/tmp/arrowroot/look2.png", l, 2)
	prior, post := Curve{}, Curve{}
	for x := -0.15; x <= 0.15; x += 0.002 {
		prior.X, prior.Y = append(prior.X, x), append(prior.Y, math.Exp(-x*x/2/0.04/0.04)/0.04)
		post.X, post.Y = append(post.X, x), append(post.Y, math.Exp(-(x-.02)*(x-.02)/2/0.016/0.016)/0.016)
	}
	zero := 0.0
	save(t, "/tmp/arrowroot/density.png", DensityPlot(272, 96, Density{Prior: prior, Posterior: post, Low: -0.006, High: 0.046, Mark: &zero}, light()), 2)
	one := 1.0
	save(t, "/tmp/arrowroot/intervals.png", Intervals(460, IntervalsHeight(3), []Interval{{Label: "crude", Mid: 1.42, Low: 1.3, High: 1.6, InnerLow: 1.38, InnerHigh: 1.5, Words: "1.42 (1.30 to 1.60)", Faint: true}, {Label: "holding pesticide, soil", Mid: 1.19, Low: 1.05, High: 1.33, InnerLow: 1.12, InnerHigh: 1.25, Words: "1.19 (1.05 to 1.33)"}, {Label: "full model", Mid: 1.17, Low: 1.05, High: 1.31, InnerLow: 1.11, InnerHigh: 1.22, Words: "1.17 (1.05 to 1.31)"}}, &one, light()), 2)
	q := []float64{}
	for i := 0; i < 50; i++ {
		q = append(q, math.Pow(float64(i)/50, 2)*120)
	}
	save(t, "/tmp/arrowroot/dots.png", DotStrip(120, 40, q, light()), 2)
	th := Thumb{Nodes: []ThumbNode{{At: Point{0, 0}}, {At: Point{100, -60}, Unmeasured: true}, {At: Point{200, 0}}, {At: Point{100, 60}, Marked: true}}, Arrows: [][2]int{{0, 2}, {1, 0}, {1, 2}, {0, 3}, {3, 2}}, Arcs: [][2]int{{0, 1}}}
	save(t, "/tmp/arrowroot/thumb.png", Thumbnail(72, 48, th, light()), 2)
}
