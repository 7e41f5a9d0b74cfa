package scene

import (
	"math"
	"slices"
	"strings"

	"arrowroot/canvas/draw"
	"arrowroot/compile/study"
)

// Sizes at zoom 1, in dips. Everything stands on a grid of 8.
const (
	unit       = 8.0
	nodeHeight = 34.0
	nodeMin    = 88.0  // width of a node with a short name
	nodeMax    = 216.0 // names that are longer are wrapped
	nameLines  = 4     // and cut after so many lines
	nameSize   = 12.5
	nameLeast  = 11.0 // names are never smaller
	tabSize    = 10.5
	dotsBelow  = 0.7 // zoom from which the dot strips are shown
)

// A body is a node as it stands on the sheet, in dips of the widget.
type body struct {
	id         string
	variable   *study.Variable
	node       *study.Node
	name       string // as printed, with "=" and sign
	at         draw.Point
	w, h       float64
	text       float64  // size of the name
	lines      []string // the name as it is wrapped; nil = in one line
	square     bool     // held, or limits the rows
	unmeasured bool
	roles      string
	tab        draw.Rect // of the roles; empty without
	dots       bool
}

func (b *body) rect() draw.Rect {
	return draw.Rect{X: b.at.X - b.w/2, Y: b.at.Y - b.h/2, W: b.w, H: b.h}
}

// corner is the radius of the corners: a free variable is a capsule.
func (b *body) corner() float64 {
	if b.square {
		return min(3, b.h/8)
	}
	return min(b.h, b.text*nodeHeight/nameSize) / 2 // a wrapped name needs the corners
}

// depth is how far outside of the outline a point lies; negative inside.
func (b *body) depth(p draw.Point) float64 {
	r := b.corner()
	x := math.Abs(p.X-b.at.X) - (b.w/2 - r)
	y := math.Abs(p.Y-b.at.Y) - (b.h/2 - r)
	return math.Hypot(max(x, 0), max(y, 0)) + min(max(x, y), 0) - r
}

// edge is depth with the tab of the roles taken as part of the node: where
// arrows end.
func (b *body) edge(p draw.Point) float64 {
	d := b.depth(p)
	if b.tab.W == 0 {
		return d
	}
	c := b.tab.Centre()
	x, y := math.Abs(p.X-c.X)-b.tab.W/2, math.Abs(p.Y-c.Y)-b.tab.H/2
	return min(d, math.Hypot(max(x, 0), max(y, 0))+min(max(x, y), 0))
}

// skirt is the room below a node for its tab and its dots, at zoom 1.
func (b *body) skirt(z float64) draw.Rect {
	r := draw.Rect{X: b.at.X - 24*z, Y: b.at.Y + b.h/2, W: 48 * z}
	if b.tab.H > 0 {
		r.H = b.tab.H
	}
	if b.dots {
		r.H += 26 * z
	}
	if r.H == 0 {
		return draw.Rect{X: b.at.X, Y: b.at.Y}
	}
	return r
}

// nodeSize is the size of a node with such a name at a zoom.
func nodeSize(name string, face draw.Face, zoom float64) (w, h, text float64) {
	text = max(nameSize*zoom, nameLeast)
	w = draw.Measure(name, face, text) + 2.2*text
	w = min(max(w, nodeMin*zoom), nodeMax*max(zoom, 0.6))
	step := 2 * unit * zoom
	w = math.Ceil(w/step-1e-9) * step // both halves on the grid
	h = max(nodeHeight*zoom, text*1.7)
	if n := len(wrapName(name, face, text, w)); n > 1 {
		h += float64(n-1) * nameStep * text
	}
	return w, h, text
}

// nameStep is the distance of two lines of a wrapped name, in sizes of its text.
const nameStep = 1.25

// wrapName breaks a name that is too long for a node of a width at its spaces
// and underscores, within a word where it has none; nil if one line will do.
func wrapName(name string, face draw.Face, text, width float64) []string {
	room := width - text
	if draw.Measure(name, face, text) <= room {
		return nil
	}
	var lines []string
	for name != "" && len(lines) < nameLines-1 {
		end, soft, used := len(name), 0, 0.0
		for i, r := range name {
			used += draw.Measure(string(r), face, text)
			if used > room && i > 0 {
				end = i
				break
			}
			if r == '_' || r == ' ' {
				soft = i + 1
			}
		}
		if end < len(name) && soft > 0 {
			end = soft
		}
		lines, name = append(lines, strings.TrimSpace(name[:end])), strings.TrimLeft(name[end:], " ")
	}
	if name != "" {
		lines = append(lines, draw.Shorten(name, face, text, room))
	}
	return lines
}

// face is the cut a variable's name is set in.
func nameFace(v *study.Variable) draw.Face {
	if v != nil && v.Unmeasured {
		return draw.Italic
	}
	return draw.Bold
}

// layout gives the place of every node of the rival, unsaved ones arranged.
func (in *Input) layout() map[string]study.Point {
	at := in.At
	if at == nil {
		at = Places(in.Study, in.Rival, in.Question)
	}
	if len(in.Preview.Moved) == 0 {
		return at
	}
	moved := make(map[string]study.Point, len(at))
	for id, p := range at {
		moved[id] = p
	}
	for id, p := range in.Preview.Moved {
		if _, here := at[id]; here {
			moved[id] = p
		}
	}
	return moved
}

// Places gives the place of every node: the saved ones, and arranged ones for
// those without.
func Places(s *study.Study, r *study.Rival, q *study.Question) map[string]study.Point {
	if r == nil || r.Diagram == nil {
		return nil
	}
	if r.Layout != nil {
		all := true
		for _, n := range r.Diagram.Nodes {
			if _, ok := r.Layout.At[n.Variable]; !ok {
				all = false
				break
			}
		}
		if all {
			return r.Layout.At
		}
	}
	return ArrangeFor(s, r, q, true)
}

// ledger finds variables by ID without the linear search per look-up.
func ledger(s *study.Study) map[string]*study.Variable {
	m := make(map[string]*study.Variable)
	if s != nil {
		for _, v := range s.Variables {
			m[v.ID] = v
		}
	}
	return m
}

// bodies places every node of the rival.
func bodies(in *Input) []*body {
	if in.Rival == nil || in.Rival.Diagram == nil {
		return nil
	}
	variables := ledger(in.Study)
	places := in.layout()
	zoom := in.View.Scale()
	all := make([]*body, 0, len(in.Rival.Diagram.Nodes))
	for _, n := range in.Rival.Diagram.Nodes {
		p, ok := places[n.Variable]
		if !ok {
			continue
		}
		b := &body{id: n.Variable, node: n, variable: variables[n.Variable], name: n.Variable, at: in.View.Out(p)}
		if b.variable != nil {
			b.unmeasured = b.variable.Unmeasured
			if b.variable.Computed != "" {
				b.name = "= " + b.name
			}
		}
		b.w, b.h, b.text = nodeSize(b.name, nameFace(b.variable), zoom)
		b.lines = wrapName(b.name, nameFace(b.variable), b.text, b.w)
		b.dots = len(in.Dots[n.Variable]) > 0 && !b.unmeasured && zoom >= dotsBelow
		words := roles(in, n.Variable)
		b.square = slices.Contains(words, held) || slices.Contains(words, fixed) || slices.Contains(words, limits) || in.Mark.boxes(n.Variable)
		if len(words) > 0 {
			b.roles = strings.Join(words, " · ")
			size := roleSize(zoom)
			w := draw.Measure(b.roles, draw.Bold, size) + 1.6*size
			b.tab = draw.Rect{X: b.at.X - w/2, Y: b.at.Y + b.h/2 - 1, W: w, H: size * 1.4}
		}
		all = append(all, b)
	}
	return all
}

// The roles that give a node square corners.
const (
	held   = "held"
	fixed  = "fixed"
	limits = "limits rows"
)

// roleSize is the size of the words on a tab.
func roleSize(zoom float64) float64 { return min(max(tabSize*zoom, 9.5), 14) }

// roles are the words on a node's tab.
func roles(in *Input, id string) []string {
	var words []string
	if q := in.Question; q != nil {
		if q.Exposure == id {
			words = append(words, "exposure")
		}
		if q.Outcome == id {
			words = append(words, "outcome")
		}
		if slices.Contains(q.Held, id) {
			words = append(words, held)
		}
		if slices.ContainsFunc(q.Fixed, func(f study.Fix) bool { return f.Variable == id }) {
			words = append(words, fixed)
		}
	}
	if n := in.Rival.Diagram.Node(id); n != nil && n.Limits || slices.Contains(in.Limits, id) {
		words = append(words, limits)
	}
	return words
}
