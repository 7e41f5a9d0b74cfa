// Package scene turns one rival into a picture and gestures into edits. It has
// no window: Build makes a draw.List and a Map of what stands where, a Hand
// turns pointer and key events into study edits, and Arrange finds places for
// nodes.
//
// Read scene.go and paint.go (what goes in), geometry.go and curve.go (where
// things stand), build.go with nodes.go, arrows.go, paths.go, marks.go,
// plates.go, notes.go and preview.go (the picture), hit.go (what the pointer
// meets), event.go, hand.go and keys.go (the tools), pick.go and naming.go
// (selections and typed names), arrange.go with arrange_layers.go,
// arrange_order.go, arrange_heights.go and arrange_settle.go (the layout, step
// by step), fit.go, and palette.go with color.go.
//
// Positions come in two kinds: sheet units, in which nodes are placed and
// saved (study.Point), and dips of the widget (draw.Point). A View joins them.
package scene

import (
	"slices"

	"arrowroot/canvas/draw"
	"arrowroot/compile/causal"
	"arrowroot/compile/study"
)

// Input is everything the sheet shows. The zero value of every field but
// Study, Rival and Palette means "none"; Size is in dips.
type Input struct {
	Study    *study.Study
	Rival    *study.Rival
	Question *study.Question
	Reading  *causal.Reading // its graph names nodes by variable ID

	Paint         *Paint
	Dots          map[string][]float64 // sorted quantiles by variable, for the dot strips
	PlateCounts   map[string]int       // levels by plate name
	Missing       map[string]float64   // share of entries missing, by variable
	Findings      map[string]string    // variables with something to say: a small mark, the text on hover
	ArrowFindings map[[2]string]string // the same for arrows and arcs
	Limits        []string             // variables that limit the rows (a filter or a selection)

	Selected  Selection
	Hover     Target
	LitPath   int // place in Reading.Paths of the path to mark alone; -1 = none (see NoPath)
	HidePaths bool
	Mark      *Mark // what a list beside the sheet points at; nil = nothing

	Focused bool // the sheet has the keyboard

	Palette Palette
	Width   float64 // of the widget, in dips
	Height  float64
	View    View
	Preview Preview

	At map[string]study.Point // places of all nodes; nil = from the layout, missing ones by Arrange
}

// middle of the widget.
func (in *Input) middle() draw.Point { return draw.Point{X: in.Width / 2, Y: in.Height / 2} }

// NoPath in Input.LitPath means that no single path is picked out.
const NoPath = -1

// A View says which part of the sheet is seen: a point p of the sheet is drawn
// at p·Zoom + Pan.
type View struct {
	Pan  draw.Point
	Zoom float64 // 0 = 1
}

// Scale is the zoom, 1 when none was set.
func (v View) Scale() float64 {
	if v.Zoom == 0 {
		return 1
	}
	return v.Zoom
}

// Out gives the place in the widget of a point of the sheet.
func (v View) Out(p study.Point) draw.Point {
	z := v.Scale()
	return draw.Point{X: p.X*z + v.Pan.X, Y: p.Y*z + v.Pan.Y}
}

// In gives the point of the sheet at a place in the widget.
func (v View) In(p draw.Point) study.Point {
	z := v.Scale()
	return study.Point{X: (p.X - v.Pan.X) / z, Y: (p.Y - v.Pan.Y) / z}
}

// Limits of the zoom.
const (
	MinZoom = 0.25
	MaxZoom = 4
)

// ZoomAt changes the zoom by a factor and keeps the sheet still under a place
// in the widget.
func (v View) ZoomAt(at draw.Point, factor float64) View {
	z := min(max(v.Scale()*factor, MinZoom), MaxZoom)
	p := v.In(at)
	return View{Zoom: z, Pan: draw.Point{X: at.X - p.X*z, Y: at.Y - p.Y*z}}
}

// A Selection is what the user has picked.
type Selection struct {
	Nodes  []string
	Arrows [][2]string // from, to
	Arcs   [][2]string // A, B as in the study
	Plate  string
	Notes  []int // their places in the layout
}

// Empty reports whether nothing is picked.
func (s Selection) Empty() bool {
	return len(s.Nodes) == 0 && len(s.Arrows) == 0 && len(s.Arcs) == 0 && s.Plate == "" && len(s.Notes) == 0
}

// HasNode reports whether a node is picked.
func (s Selection) HasNode(id string) bool { return slices.Contains(s.Nodes, id) }

// HasNote reports whether a note is picked.
func (s Selection) HasNote(note int) bool { return slices.Contains(s.Notes, note) }

// HasArrow reports whether an arrow is picked.
func (s Selection) HasArrow(from, to string) bool {
	return slices.Contains(s.Arrows, [2]string{from, to})
}

// HasArc reports whether an arc is picked.
func (s Selection) HasArc(a, b string) bool { return slices.Contains(s.Arcs, [2]string{a, b}) }

// Kind says what stands at a place of the sheet.
type Kind uint8

// The kinds.
const (
	Nothing Kind = iota
	OnNode       // the inside of a node: dragging moves it
	OnEdge       // the rim of a node: dragging draws an arrow
	OnArrow
	OnArc
	OnPlate // the tab of a plate
	OnNote  // words on the sheet
)

// A Target is what a place of the sheet belongs to.
type Target struct {
	Kind  Kind
	Node  string
	Pair  [2]string // of an arrow (from, to) or an arc
	Plate string
	Note  int // its place in the layout
}

// A Preview is what a gesture in progress would do; it is drawn, not done.
type Preview struct {
	Moved      map[string]study.Point // nodes under the pointer, at their places for now
	MovedNotes map[int]study.Point    // the same for notes
	Draw       *Draft
	Box        *draw.Rect   // a marquee or a plate being drawn, in dips
	Plate      bool         // Box is a plate
	Ghost      *study.Point // a variable that waits for its name
}

// A Draft is an arrow or arc being drawn.
type Draft struct {
	From   string
	To     string      // the node under the pointer; "" = none
	End    study.Point // where the pointer is
	Arc    bool
	Refuse string // why it cannot be dropped here; "" = it can
}
