package draw

import (
	"io"
	"math"
	"testing"

	"arrowroot/canvas/internal/golden"
)

func profiles() map[string]Profile {
	return map[string]Profile{
		"profile-bars": {Kind: ProfileBars, Across: "bees", Up: "how often, as root", Labels: []string{"0", "1", "2", "3", "4", "5+"},
			Observed: []float64{5, 4, 4.5, 3, 1.5, 0}, Low: []float64{2, 4, 4, 2.5, 1, 0}, Middle: []float64{3, 5, 5, 3.3, 2, 0}, High: []float64{4, 6, 5.8, 4, 2.7, 1}},
		"profile-points": {Kind: ProfilePoints, Across: "predicted probability", Up: "share that happened", X: []float64{0.1, 0.25, 0.4, 0.7},
			Observed: []float64{0.12, 0.4, 0.41, 0.66}, Low: []float64{0.02, 0.15, 0.3, 0.6}, Middle: []float64{0.1, 0.25, 0.4, 0.7}, High: []float64{0.2, 0.36, 0.5, 0.8}},
		"profile-line": {Kind: ProfileLine, Across: "rank of a value among its replicates", Up: "share up to there, beyond even", X: []float64{0.2, 0.4, 0.6, 0.8},
			Observed: []float64{0.04, 0.09, 0.02, -0.03}, Low: []float64{-0.05, -0.07, -0.07, -0.05}, Middle: make([]float64, 4), High: []float64{0.05, 0.07, 0.07, 0.05}},
	}
}

func TestProfilePlot(t *testing.T) {
	for name, p := range profiles() {
		golden.Image(t, name, Raster(ProfilePlot(300, 150, p, light()), 1))
	}
	golden.Image(t, "heap", Raster(HeapPlot(300, 150, Heap{Across: "share of zeros", Values: []float64{0.1, 0.11, 0.11, 0.12, 0.12, 0.12, 0.13, 0.13, 0.14}, At: 0.21, Label: "data 0.21"}, light()), 1))
}

// Pictures of nothing, of one place and of what has no size are drawn without a
// panic.
func TestProfilesOfLittle(t *testing.T) {
	nan := math.NaN()
	for _, l := range []*List{
		ProfilePlot(100, 100, Profile{}, light()),
		ProfilePlot(100, 100, Profile{Kind: ProfilePoints, X: []float64{1}, Observed: []float64{0}, Low: []float64{0}, Middle: []float64{0}, High: []float64{0}}, light()),
		ProfilePlot(10, 10, profiles()["profile-bars"], light()),
		HeapPlot(100, 100, Heap{}, light()),
		HeapPlot(100, 100, Heap{Values: []float64{2, 2}, At: 2}, light()),
		HeapPlot(100, 100, Heap{Values: []float64{0, 0}, At: 0}, light()),
		HeapPlot(100, 100, Heap{Values: []float64{nan, 1}, At: nan}, light()),
	} {
		Raster(l, 1.5)
		if err := WriteSVG(io.Discard, l); err != nil {
			t.Error(err)
		}
	}
}
