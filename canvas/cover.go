package canvas

import (
	"arrowroot/canvas/draw"
	"arrowroot/canvas/scene"
)

// A cover is what lies over the upper edge of the sheet, and how the view made
// room for it.
type cover struct {
	height      float64 // in dips; 0 = nothing
	before, now scene.View
	moved       bool // the view changed from before to now to make room
}

// SetCover tells that something of a height, in dips, lies over the upper edge
// of the sheet. If it would hide part of what is drawn the view makes room; once
// it has gone, and nobody panned or zoomed meanwhile, the view is as it was.
func (e *Editor) SetCover(height float32) {
	h := float64(height)
	if h == e.cover.height {
		return
	}
	e.cover.height = h
	switch {
	case e.cover.moved && e.in.View == e.cover.now:
		e.in.View = e.cover.before
	case e.adrift:
		e.fit()
	}
	e.cover.moved = false
	if h > 0 {
		e.makeRoom()
	}
	e.viewed()
}

// makeRoom moves the sheet down as far as something is hidden, and shows it
// smaller if that pushes anything out at the other end. Of a sheet that goes on
// beyond the window only a picked node is brought out.
func (e *Editor) makeRoom() {
	const margin = 12
	v := e.in.View
	top := e.cover.height + margin // of what is to be seen
	whole, ok := e.surface.mapNow().Bounds()
	switch {
	case !ok || whole.Y >= top:
		return
	case whole.Y < 0 || whole.Y+whole.H > e.in.Height:
		ids := e.in.Selected.Nodes
		if len(ids) != 1 {
			return
		}
		r, ok := e.surface.mapNow().NodeRect(ids[0])
		if !ok || r.Y >= top || r.Y+r.H < 0 {
			return
		}
		v.Pan.Y += top - r.Y
	case top+whole.H > e.in.Height:
		v = e.all()
	default:
		v.Pan.Y += top - whole.Y
	}
	e.cover.before, e.cover.now, e.cover.moved = e.in.View, v, true
	e.in.View = v
}

// all is the view that shows the whole rival below the cover.
func (e *Editor) all() scene.View {
	in := e.in
	in.Height -= e.cover.height
	v := scene.Fit(in)
	v.Pan = v.Pan.Add(draw.Point{Y: e.cover.height})
	return v
}
