package scene

import "arrowroot/canvas/draw"

// Fit is the view that shows everything, at most at 100 %: a small diagram is
// not blown up.
func Fit(in Input) View {
	const margin = 20.0
	in.View, in.Preview = View{}, Preview{}
	in.At = in.layout()
	for range 3 { // names have a least size, so what is seen depends on the zoom
		b := measure(&in)
		r, ok := b.Bounds()
		if !ok || in.Width <= 2*margin || in.Height <= 2*margin {
			return View{}
		}
		z := in.View.Scale()
		from, to := in.View.In(draw.Point{X: r.X, Y: r.Y}), in.View.In(draw.Point{X: r.X + r.W, Y: r.Y + r.H})
		fit := min((in.Width-2*margin)/r.W*z, (in.Height-2*margin)/r.H*z)
		in.View.Zoom = min(max(fit, MinZoom), 1)
		in.View.Pan = draw.Point{
			X: in.Width/2 - (from.X+to.X)/2*in.View.Zoom,
			Y: in.Height/2 - (from.Y+to.Y)/2*in.View.Zoom,
		}
	}
	return in.View
}
