package draw

import (
	"testing"

	"arrowroot/canvas/internal/golden"
)

func TestFormPlot(t *testing.T) {
	rise := FormBand{X: []float64{0, 50, 100, 180}, Low: []float64{-1.6, -0.7, 0, 0.3}, Middle: []float64{-1, -0.4, 0.1, 0.9}, High: []float64{-0.4, 0, 0.2, 1.5}}
	prior := FormBand{X: rise.X, Low: []float64{-2, -1, -0.2, -2}, Middle: make([]float64, 4), High: []float64{2, 1, 0.2, 2}}
	golden.Image(t, "form", Raster(FormPlot(320, 150, Form{Prior: prior, Posterior: rise, Across: "hedge, m/ha", Up: "adds to bees, log scale"}, light()), 1))
	levels := func(b FormBand) FormBand { b.X = []float64{0, 1, 2, 3}; return b }
	golden.Image(t, "form-levels", Raster(FormPlot(320, 150, Form{Prior: levels(prior), Posterior: levels(rise), Labels: []string{"none", "little", "some", "much"}, Across: "shade", Up: "adds to bees, log scale"}, light()), 1))
	if l := FormPlot(320, 150, Form{}, light()); len(l.Items) != 0 {
		t.Error("a picture of nothing")
	}
}
