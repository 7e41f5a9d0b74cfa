package scene

import (
	"arrowroot/canvas/draw"
	"arrowroot/compile/study"
)

// An Event is what a pointer or a key does, free of any toolkit.
type Event struct {
	Kind   EventKind
	At     draw.Point // of the pointer, in dips of the widget
	Button Button
	Shift  bool
	Ctrl   bool // the Command key on a Mac
	Space  bool // the space bar is down
	Key    string
	Turn   float64 // of a wheel: positive zooms in; 1 is one notch
}

// EventKind says what happened.
type EventKind uint8

// The kinds of event.
const (
	Press EventKind = iota
	Move
	Release
	DoubleClick
	Wheel
	Leave // the pointer left the widget
	Key
)

// Button is a mouse button.
type Button uint8

// The buttons.
const (
	Primary Button = iota
	Middle
	Secondary
)

// An Answer is what an event comes to. Nil and zero fields change nothing.
type Answer struct {
	Edit    study.Edit
	Select  *Selection
	View    *View
	Hover   *Target
	Preview *Preview
	Name    *Naming // ask for a name in place
	Tool    *Tool
	Menu    *Target           // a context menu for this
	Open    *Target           // show the details of this
	Command string            // a key that is not the sheet's own
	Refuse  string            // why nothing was done, for the user
	Cycle   *study.CycleError // what Refuse is about, where it is an arrow that would close a cycle
}

// A Tool is what a drag on the sheet does.
type Tool string

// The tools.
const (
	SelectTool   Tool = "select"
	VariableTool Tool = "variable"
	ArrowTool    Tool = "arrow"
	CauseTool    Tool = "common cause"
	PlateTool    Tool = "plate"
	NoteTool     Tool = "note"
)

// Cursor is the shape of the pointer.
type Cursor uint8

// The cursors.
const (
	PlainCursor Cursor = iota
	CrossCursor        // a drag draws
	GrabCursor         // a drag moves
)
