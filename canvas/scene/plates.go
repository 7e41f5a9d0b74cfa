package scene

import (
	"slices"
	"strconv"

	"arrowroot/canvas/draw"
	"arrowroot/compile/study"
)

// A frame is a plate as it stands on the sheet.
type frame struct {
	plate *study.Plate
	box   draw.Rect
	tab   draw.Rect
	words string
}

// holds reports whether a plate repeats a variable: the variable's level is
// the plate, one nested in it, or the row.
func holds(s *study.Study, plate string, v *study.Variable) bool {
	if len(v.Plates) == 0 {
		return true
	}
	for _, level := range v.Plates {
		for range len(s.Plates) + 1 { // a damaged file may nest plates in a ring
			if level == plate {
				return true
			}
			i := slices.IndexFunc(s.Plates, func(p *study.Plate) bool { return p.Name == level })
			if i < 0 {
				break
			}
			level = s.Plates[i].Within
		}
	}
	return false
}

// frames places the plates round what they hold, outer ones with more room.
func (b *builder) frames() {
	s := b.in.Study
	if s == nil {
		return
	}
	for i, plate := range s.Plates {
		var box draw.Rect
		found := false
		for _, n := range b.nodes {
			if n.variable == nil || !holds(s, plate.Name, n.variable) {
				continue
			}
			r := n.rect()
			r.H += 30 * b.zoom // the tab and the dots below
			if found {
				r = r.Union(box)
			}
			box, found = r, true
		}
		if !found {
			continue
		}
		crossed := 0.0 // frames of plates side by side do not coincide
		for _, other := range s.Plates[:i] {
			if other.Within == plate.Within {
				crossed += 7
			}
		}
		box = box.Grow((26 + 20*float64(inside(s, plate.Name)) + crossed) * b.zoom)
		words := "each " + plate.Name
		if n := b.in.PlateCounts[plate.Name]; n > 0 {
			words += " · " + strconv.Itoa(n)
		}
		if q := b.in.Question; q != nil && s.HoldsPlate(plate.Name) && slices.Contains(q.Held, plate.Name) {
			words += " · held"
		}
		size := max(tabSize*b.zoom, 10)
		box.Y, box.H = box.Y-10*b.zoom, box.H+4*b.zoom // room for the tab; the dots gave some below
		tab := draw.Rect{X: box.X, Y: box.Y, W: draw.Measure(words, draw.Regular, size) + 20, H: size + 8}
		b.plates = append(b.plates, &frame{plate: plate, box: box, tab: tab, words: words})
	}
}

// inside counts the plates nested in a plate, one within the other.
func inside(s *study.Study, plate string) int {
	deepest := 0
	for _, p := range s.Plates {
		level, depth := p.Name, 0
		for level != "" && level != plate && depth <= len(s.Plates) {
			i := slices.IndexFunc(s.Plates, func(p *study.Plate) bool { return p.Name == level })
			if i < 0 {
				level = ""
				break
			}
			level = s.Plates[i].Within
			depth++
		}
		if level == plate {
			deepest = max(deepest, depth)
		}
	}
	return deepest
}

func (b *builder) drawFrames() {
	p := &b.in.Palette
	// Outer frames first, so that the tabs of inner ones stay readable.
	order := slices.Clone(b.plates)
	slices.SortStableFunc(order, func(x, y *frame) int {
		return inside(b.in.Study, y.plate.Name) - inside(b.in.Study, x.plate.Name)
	})
	for _, f := range order {
		ink, width := p.Border, 1.0
		if b.in.Selected.Plate == f.plate.Name {
			ink, width = p.Action, 2
		} else if b.in.Hover.Kind == OnPlate && b.in.Hover.Plate == f.plate.Name {
			ink = p.Ink
		}
		size := max(tabSize*b.zoom, 10)
		b.list.Add(
			&draw.Shape{Path: tabPath(f.tab, 8), Fill: mix(p.Sheet, p.Hairline, 0.7)},
			&draw.Shape{Path: draw.RoundRect(f.box, 8), Stroke: ink, Width: width, Crisp: true},
			&draw.Text{At: draw.Point{X: f.tab.X + 10, Y: f.tab.Centre().Y + draw.Drop(size)}, Text: f.words, Size: size, Color: p.Ink},
		)
	}
}

// tabPath is a tab in the upper left corner of a frame: round where the frame
// is, and at its free corner.
func tabPath(r draw.Rect, radius float64) draw.Path {
	const k = 0.45
	x0, y0, x1, y1 := r.X, r.Y, r.X+r.W, r.Y+r.H
	var p draw.Path
	p.Move(draw.Point{X: x0, Y: y0 + radius})
	p.Cubic(draw.Point{X: x0, Y: y0 + k*radius}, draw.Point{X: x0 + k*radius, Y: y0}, draw.Point{X: x0 + radius, Y: y0})
	p.Line(draw.Point{X: x1, Y: y0})
	p.Line(draw.Point{X: x1, Y: y1 - radius})
	p.Cubic(draw.Point{X: x1, Y: y1 - k*radius}, draw.Point{X: x1 - k*radius, Y: y1}, draw.Point{X: x1 - radius, Y: y1})
	p.Line(draw.Point{X: x0, Y: y1})
	p.Close()
	return p
}
