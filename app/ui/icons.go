package ui

import (
	"fyne.io/fyne/v2"

	"arrowroot/canvas"
	"arrowroot/canvas/draw"
)

// A glyph is a small drawing in a box of 24 × 24: of the thing a tool makes,
// or of what a button does. The painter of the sheet draws it too, so that it
// is as crisp and as dark as everything else.
type glyph struct {
	lines []draw.Path // stroked
	areas []draw.Path // filled
	dash  []float64   // of the lines
}

func points(xy ...float64) []draw.Point {
	var out []draw.Point
	for i := 0; i+1 < len(xy); i += 2 {
		out = append(out, draw.Point{X: xy[i], Y: xy[i+1]})
	}
	return out
}

func open(xy ...float64) draw.Path   { return draw.Polyline(points(xy...)...) }
func closed(xy ...float64) draw.Path { return draw.Polygon(points(xy...)...) }

var (
	iconSelect   = glyph{areas: []draw.Path{closed(6, 3, 18.5, 13.2, 12.6, 13.9, 16, 20.4, 13.4, 21.6, 10.2, 15, 6, 19)}}
	iconVariable = glyph{lines: []draw.Path{draw.RoundRect(draw.Rect{X: 2.5, Y: 7, W: 19, H: 10}, 5)}}
	iconArrow    = glyph{lines: []draw.Path{open(4, 19.5, 15, 9)}, areas: []draw.Path{closed(20, 4.5, 17.6, 12, 12.4, 6.6)}}
	iconArc      = glyph{lines: []draw.Path{bow()}, dash: []float64{3, 2.4}, areas: []draw.Path{closed(4.4, 19.4, 2.2, 13.8, 7.8, 14.2), closed(19.6, 19.4, 16.2, 14.2, 21.8, 13.8)}}
	iconPlate    = glyph{lines: []draw.Path{closed(4, 4, 17, 4, 17, 17, 4, 17), open(7.5, 20.5, 20.5, 20.5, 20.5, 7.5)}}
	iconNote     = glyph{lines: []draw.Path{open(5, 4, 5, 20), open(9.5, 6.5, 20, 6.5), open(9.5, 12, 20, 12), open(9.5, 17.5, 15.5, 17.5)}}
	iconFoldL    = glyph{lines: []draw.Path{open(14.5, 6, 8.5, 12, 14.5, 18)}}
	iconFoldR    = glyph{lines: []draw.Path{open(9.5, 6, 15.5, 12, 9.5, 18)}}
	iconFoldD    = glyph{lines: []draw.Path{open(6, 9.5, 12, 15.5, 18, 9.5)}}
	iconFoldU    = glyph{lines: []draw.Path{open(6, 14.5, 12, 8.5, 18, 14.5)}}
	iconClose    = glyph{lines: []draw.Path{open(7, 7, 17, 17), open(17, 7, 7, 17)}}
	iconWarn     = glyph{lines: []draw.Path{closed(12, 3.6, 21, 19.6, 3, 19.6), open(12, 9.4, 12, 14)}, areas: []draw.Path{draw.Circle(draw.Point{X: 12, Y: 16.8}, 1.1)}}
	iconGood     = glyph{lines: []draw.Path{open(5, 12.5, 10, 17.5, 19, 7)}}
	iconAsk      = glyph{lines: []draw.Path{open(4, 12, 13, 12)}, areas: []draw.Path{closed(20, 12, 13, 8.4, 13, 15.6)}}
	iconRing     = glyph{lines: []draw.Path{draw.Circle(draw.Point{X: 12, Y: 12}, 7.5)}, dash: []float64{3.4, 2.5}}
	iconDisc     = glyph{areas: []draw.Path{draw.Circle(draw.Point{X: 12, Y: 12}, 7.5)}}
)

func bow() draw.Path {
	var p draw.Path
	p.Move(draw.Point{X: 5, Y: 14.5})
	p.Cubic(draw.Point{X: 7, Y: 4}, draw.Point{X: 17, Y: 4}, draw.Point{X: 19, Y: 14.5})
	return p
}

// An icon shows a glyph in a token's colour.
type icon struct {
	object *canvas.Picture
	of     glyph
	token  fyne.ThemeColorName
}

func newIcon(of glyph, token fyne.ThemeColorName, size float32) *icon {
	i := &icon{of: of, token: token}
	i.object = canvas.NewPicture(size, size, i.draw)
	return i
}

func (i *icon) set(of glyph, token fyne.ThemeColorName) {
	i.of, i.token = of, token
	i.object.Refresh()
}

func (i *icon) draw(w, h float64) *draw.List {
	k := min(w, h) / 24
	l := &draw.List{Width: w, Height: h}
	c := nrgba(i.token)
	var dash []float64
	for _, d := range i.of.dash {
		dash = append(dash, d*k)
	}
	for _, p := range i.of.lines {
		l.Add(&draw.Shape{Path: scaled(p, k), Stroke: c, Width: 1.7 * k, Dash: dash, Round: len(dash) == 0})
	}
	for _, p := range i.of.areas {
		l.Add(&draw.Shape{Path: scaled(p, k), Fill: c})
	}
	return l
}

// scaled is a path k times as large, its curves as short lines.
func scaled(p draw.Path, k float64) draw.Path {
	var out draw.Path
	pieces, shut := p.Flatten(4 * k)
	for i, piece := range pieces {
		for j := range piece {
			piece[j] = piece[j].Times(k)
		}
		if shut[i] {
			out.Append(draw.Polygon(piece...))
		} else {
			out.Append(draw.Polyline(piece...))
		}
	}
	return out
}
