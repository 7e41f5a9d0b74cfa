package canvas

import (
	"image"

	fcanvas "fyne.io/fyne/v2/canvas"

	"arrowroot/canvas/draw"
	"arrowroot/canvas/scene"
)

// A surface is the raster of an editor. Events only mark it as out of date;
// the picture is built when the next event or frame needs it, so that a burst
// of events costs one picture.
type surface struct {
	editor  *Editor
	raster  *fcanvas.Raster
	painter *draw.Painter
	image   *image.RGBA
	list    *draw.List
	where   *scene.Map
	stale   bool
}

func newSurface(e *Editor) *surface {
	s := &surface{editor: e, painter: draw.NewPainter(), stale: true}
	s.raster = fcanvas.NewRaster(s.paint)
	return s
}

func (s *surface) changed() {
	s.stale = true
	s.raster.Refresh()
}

func (s *surface) build() {
	if s.stale {
		s.list, s.where = scene.Build(s.editor.shown())
		s.stale = false
	}
}

// mapNow is the map of what stands where at this moment.
func (s *surface) mapNow() *scene.Map {
	s.build()
	return s.where
}

// paint fills an image of w × h device pixels.
func (s *surface) paint(w, h int) image.Image {
	s.build()
	if s.image == nil || s.image.Bounds().Dx() != w || s.image.Bounds().Dy() != h {
		s.image = image.NewRGBA(image.Rect(0, 0, w, h))
	}
	scale := 1.0
	if width := s.raster.Size().Width; width > 0 {
		scale = float64(w) / float64(width)
	}
	s.painter.Paint(s.image, s.list, scale)
	return s.image
}

// shown is the input of the picture: while a name is typed, its place is kept
// free by a ghost.
func (e *Editor) shown() scene.Input {
	in := e.in
	in.Focused = e.focused
	if n := e.entry.naming; n != nil && n.Variable == "" && len(n.Members) == 0 && !n.Note {
		in.Preview.Ghost = &n.At
		if n.From != "" {
			in.Preview.Draw = &scene.Draft{From: n.From, End: n.At}
		}
	}
	return in
}
