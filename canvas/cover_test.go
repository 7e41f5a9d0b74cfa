package canvas

import (
	"testing"

	"arrowroot/canvas/draw"
	"arrowroot/canvas/scene"
)

// What lies over the sheet hides nothing that is drawn, and the view is as it
// was when it has gone.
func TestCoverMakesRoom(t *testing.T) {
	top := func(b *bench) float64 {
		r, _ := b.surface.mapNow().Bounds()
		return r.Y
	}
	b := newBench(t, pair())
	b.SetView(scene.View{Zoom: 1, Pan: draw.Point{X: 0, Y: 20 - top(b)}})
	was := b.View()
	if y := top(b); y < 15 || y > 25 {
		t.Fatalf("the nodes begin at %v", y)
	}
	b.SetCover(8)
	if b.View() != was {
		t.Error("the view moved though nothing was hidden")
	}
	b.SetCover(70)
	if y := top(b); y < 70 || y > 90 || b.View().Zoom != was.Zoom {
		t.Errorf("under a cover of 70 the nodes begin at %v, zoom %v", y, b.View().Zoom)
	}
	b.SetCover(0)
	if b.View() != was {
		t.Errorf("afterwards the view is %v, was %v", b.View(), was)
	}

	// All of it stays in view, smaller if need be.
	b.SetView(scene.View{Zoom: 2, Pan: draw.Point{Y: 2 * (20 - top(b))}})
	was = b.View()
	high := float32(0.44 * b.in.Height)
	b.SetCover(high)
	if r, _ := b.surface.mapNow().Bounds(); r.Y < float64(high) && r.Y+r.H <= b.in.Height {
		t.Errorf("under a cover of %v of %v the nodes lie in %v", high, b.in.Height, r)
	}
	b.SetView(was)
	b.SetCover(float32(0.6 * b.in.Height))
	if b.View() != was {
		t.Error("a cover of most of the sheet crowds the nodes into what is left")
	}
	b.SetCover(0)
	b.SetView(scene.View{Zoom: 1, Pan: draw.Point{Y: 20}})

	// Whoever pans keeps the view.
	b.SetCover(70)
	panned := scene.View{Zoom: 1, Pan: draw.Point{X: 3, Y: 100}}
	b.SetView(panned)
	b.SetCover(0)
	if b.View() != panned {
		t.Errorf("the view is %v, was panned to %v", b.View(), panned)
	}

	// To show all of it leaves the cover out.
	b.SetCover(100)
	b.ZoomFit()
	if y := top(b); y < 100 {
		t.Errorf("all of it begins at %v, under the cover of 100", y)
	}
}
