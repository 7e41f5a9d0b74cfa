// Package draw is the one painter of Arrowroot: the sheet, plots, previews and
// thumbnails are display lists made here, and a list looks the same on screen
// (Painter) and on paper (WriteSVG).
//
// Lengths are device-independent pixels (dips), x to the right, y down; the
// painter multiplies by the scale of the screen. Read list.go (what a list
// holds), path.go (curves), text.go and font.go (text and its measure), then
// paint.go with stroke.go, glyph.go and blend.go (the raster painter), svg.go
// (paper), and the pictures: axis.go with density.go, intervals.go, dots.go,
// strength.go and profile.go; thumb.go.
package draw

import "image/color"

// A Color is straight (not premultiplied) RGBA; alpha 0 means "do not paint".
type Color = color.NRGBA

// A List is a picture: a size, a background and the items painted over it in
// order. Whoever makes a list owns it; painters only read it.
type List struct {
	Width, Height float64
	Background    Color
	Items         []Item
}

// An Item is one of *Shape, *Text, *Grid and *Discs.
type Item interface{ item() }

// A Shape is a path that is filled, stroked or both; the fill comes first.
type Shape struct {
	Path   Path
	Fill   Color
	Stroke Color
	Width  float64   // of the stroke; 0 with a visible Stroke means one device pixel
	Dash   []float64 // lengths of dash, gap, dash, …; nil = solid
	Round  bool      // round line ends instead of butt ones
	Crisp  bool      // move horizontal and vertical lines onto whole device pixels
}

// Text is one line of text. At is a point of the baseline: its start, middle
// or end by Anchor.
type Text struct {
	At     Point
	Text   string
	Face   Face
	Size   float64
	Color  Color
	Anchor Anchor
}

// Anchor says which point of a line of text At is.
type Anchor uint8

// The anchors.
const (
	Start Anchor = iota
	Middle
	End
)

// A Grid is a lattice of faint points, for the ground of the sheet.
type Grid struct {
	Within Rect
	Origin Point // any point of the lattice
	Step   float64
	Size   float64 // side of a point
	Color  Color
}

// Discs are filled circles of one radius, for quantile dots.
type Discs struct {
	Centres []Point
	Radius  float64
	Color   Color
}

func (*Shape) item() {}
func (*Text) item()  {}
func (*Grid) item()  {}
func (*Discs) item() {}

// Add appends items.
func (l *List) Add(items ...Item) { l.Items = append(l.Items, items...) }

// Alpha gives the colour with its opacity set to a share from 0 to 1.
func Alpha(c Color, share float64) Color {
	c.A = uint8(255*min(max(share, 0), 1) + 0.5)
	return c
}

// Hex reads a colour of the form "#RRGGBB". It is for the tables of colours in
// code and panics on anything else.
func Hex(s string) Color {
	if len(s) != 7 || s[0] != '#' {
		panic("draw: a colour is #RRGGBB, not " + s)
	}
	digit := func(b byte) uint8 {
		switch {
		case '0' <= b && b <= '9':
			return b - '0'
		case 'A' <= b && b <= 'F':
			return b - 'A' + 10
		case 'a' <= b && b <= 'f':
			return b - 'a' + 10
		}
		panic("draw: a colour is #RRGGBB, not " + s)
	}
	at := func(i int) uint8 { return digit(s[i])<<4 | digit(s[i+1]) }
	return Color{R: at(1), G: at(3), B: at(5), A: 255}
}
