package draw

import (
	"testing"

	"arrowroot/canvas/internal/golden"
)

func strength() Strength {
	edge := func(f2 float64) func(float64) float64 {
		return func(across float64) float64 { return f2 * (1 - across) / across }
	}
	return Strength{
		Across: "share of hedge that it explains", Up: "share of bees that it explains",
		Edges:  []Edge{{"no effect left", edge(0.09)}, {"interval reaches none", edge(0.04)}},
		Trails: []Trail{{"soil", []Point{{0.05, 0.08}, {0.1, 0.16}, {0.15, 0.25}}}, {"pesticide", []Point{{0.3, 0.2}}}, {"slope", []Point{{0.85, 0.6}}}},
	}
}

func TestStrengthPlot(t *testing.T) {
	golden.Image(t, "strength", Raster(StrengthPlot(320, 220, strength(), light()), 1))
}

// A picture of any size stays within it.
func TestStrengthPlotKeepsItsSize(t *testing.T) {
	for _, size := range [][2]float64{{0, 0}, {61, 61}, {2000, 80}} {
		for _, item := range StrengthPlot(size[0], size[1], strength(), light()).Items {
			text, ok := item.(*Text)
			if !ok {
				continue
			}
			from := text.At.X
			if w := Measure(text.Text, text.Face, text.Size); text.Anchor == End {
				from -= w
			}
			if from < -1 && size[0] > 200 {
				t.Errorf("%v: %q begins at %.0f", size, text.Text, from)
			}
		}
	}
}

// Names of trails that end close together lie beside one another.
func TestStrengthNamesApart(t *testing.T) {
	d := strength()
	d.Trails = []Trail{
		{"pest_load", []Point{{0.32, 0.06}}}, {"soil_class", []Point{{0.4, 0.05}}}, {"arable", []Point{{0.36, 0.055}}},
	}
	var at []Rect
	for _, item := range StrengthPlot(390, 220, d, light()).Items {
		if x, ok := item.(*Text); ok && x.Face == Bold {
			r := Rect{X: x.At.X, Y: x.At.Y - x.Size*0.8, W: Measure(x.Text, Bold, x.Size), H: x.Size}
			for _, other := range at {
				if r.Meets(other) {
					t.Errorf("%s at %v lies on another name at %v", x.Text, r, other)
				}
			}
			at = append(at, r)
		}
	}
	if len(at) != 3 {
		t.Errorf("%d names", len(at))
	}
}
