package scene

import (
	"testing"

	"arrowroot/canvas/draw"
	"arrowroot/compile/study"
)

func TestHit(t *testing.T) {
	in := hedgeInput(Light())
	in.Rival.Diagram.Arcs = []*study.Arc{{A: "arable", B: "soil"}}
	for _, zoom := range []float64{0.5, 1, 2} {
		in.View = View{Zoom: zoom, Pan: draw.Point{X: 30, Y: -20}}
		_, m := Build(in)
		for id, p := range in.Rival.Layout.At {
			at := in.View.Out(p)
			if got := m.Hit(at); got != (Target{Kind: OnNode, Node: id}) {
				t.Errorf("zoom %g, middle of %s: %+v", zoom, id, got)
			}
			r, _ := m.NodeRect(id)
			for _, d := range []float64{-3, 0, 5} {
				rim := draw.Point{X: at.X, Y: at.Y - r.H/2 - d}
				if got := m.Hit(rim); got != (Target{Kind: OnEdge, Node: id}) {
					t.Errorf("zoom %g, %g beyond the rim of %s: %+v", zoom, d, id, got)
				}
			}
			corner := draw.Point{X: r.X - 4, Y: r.Y - 4}
			if got := m.Hit(corner); got.Kind == OnNode {
				t.Errorf("zoom %g, outside the round corner of %s: %+v", zoom, id, got)
			}
		}
	}
	in.View = View{}
	_, m := Build(in)
	// An arrow answers in a band of 24 dips.
	mid, ok := m.LineMiddle([2]string{"hedge", "bees"})
	if !ok {
		t.Fatal("no arrow hedge → bees")
	}
	for _, d := range []float64{-11.5, 0, 11.5} {
		if got := m.Hit(mid.Add(draw.Point{Y: d})); got != (Target{Kind: OnArrow, Pair: [2]string{"hedge", "bees"}}) {
			t.Errorf("%g beside the arrow: %+v", d, got)
		}
	}
	if got := m.Hit(mid.Add(draw.Point{Y: -13})); got.Kind == OnArrow && got.Pair == [2]string{"hedge", "bees"} {
		t.Errorf("13 beside the arrow: %+v", got)
	}
	arc, _ := m.LineMiddle([2]string{"arable", "soil"})
	if got := m.Hit(arc); got != (Target{Kind: OnArc, Pair: [2]string{"arable", "soil"}}) {
		t.Errorf("middle of the arc: %+v", got)
	}
	f := m.plates[0]
	if got := m.Hit(f.tab.Centre()); got != (Target{Kind: OnPlate, Plate: "farm"}) {
		t.Errorf("tab of the plate: %+v", got)
	}
	if got := m.Hit(draw.Point{X: f.box.X + f.box.W, Y: f.box.Y + 100}); got != (Target{Kind: OnPlate, Plate: "farm"}) {
		t.Errorf("frame of the plate: %+v", got)
	}
	if got := m.Hit(draw.Point{X: 620, Y: 290}); got != (Target{}) {
		t.Errorf("empty sheet: %+v", got)
	}
}
