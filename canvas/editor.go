// Package canvas is the drawing surface as Fyne widgets: the Editor shows one
// rival in one raster that our own painter fills, and hands events to a
// scene.Hand; a Picture shows any display list. They hold no document logic:
// what the user does leaves as study edits through Editor.OnEdit.
//
// Read editor.go (what the window calls), surface.go (the raster), mouse.go
// and keyboard.go (events), entry.go (names typed in place), picture.go.
package canvas

import (
	"reflect"

	"fyne.io/fyne/v2"
	"fyne.io/fyne/v2/widget"

	"arrowroot/canvas/draw"
	"arrowroot/canvas/scene"
	"arrowroot/compile/study"
)

// An Editor shows one rival and lets people change it. Set the callbacks
// before it is shown; they run on the window's goroutine and may be nil. All
// methods must be called on that goroutine.
type Editor struct {
	widget.BaseWidget

	OnEdit   func(study.Edit)                           // an edit to do
	OnSelect func(scene.Selection)                      // the selection changed by hand
	OnHover  func(scene.Target)                         // the pointer is over something else
	OnKey    func(name string) bool                     // a key that is not the sheet's own, with its modifiers: "X", "Shift+H"; true = taken
	OnRename func(variable string)                      // instead of the entry in place, if set
	OnMenu   func(at scene.Target, where fyne.Position) // a right click, where on the window's canvas
	OnOpen   func(scene.Target)                         // a double click on an arrow, an arc or a plate
	OnView   func(scene.View)                           // panned or zoomed
	OnNaming func()                                     // the entry for a name has opened
	OnTool   func(scene.Tool)                           // Escape went back to the select tool
	OnDraft  func(study.Edit)                           // an arrow in the hand has come over a variable: what letting go would draw; nil = no longer
	OnRefuse func(reason string)                        // a gesture or a name that cannot be, and why
	OnCycle  func(*study.CycleError)                    // instead of OnRefuse, if set: an arrow that would close a cycle

	in      scene.Input
	hand    *scene.Hand
	surface *surface
	entry   *nameEntry
	pointer draw.Point // where the pointer was last
	keys    modifiers
	views   map[string]scene.View // by rival
	cover   cover
	adrift  bool // the view still follows the content: nobody panned or zoomed
	focused bool
	post    func(func())
	press   pressed
	drafted study.Edit // what OnDraft was last told
}

// NewEditor makes an empty editor. post runs a function on the window's
// goroutine later.
func NewEditor(post func(func())) *Editor {
	e := &Editor{post: post, hand: scene.NewHand(), views: make(map[string]scene.View), adrift: true}
	e.in.LitPath = scene.NoPath
	e.in.Palette = scene.Light()
	e.surface = newSurface(e)
	e.entry = newNameEntry(e)
	e.ExtendBaseWidget(e)
	return e
}

// SetInput shows something else. The editor keeps its own size, view,
// selection, hover, lit path, mark and preview; those fields of in are ignored. A
// zero palette keeps the one at hand.
func (e *Editor) SetInput(in scene.Input) {
	was := e.in
	other := in.Rival != nil && (was.Rival == nil || was.Rival.Name != in.Rival.Name)
	if other && was.Rival != nil && !e.adrift {
		e.views[was.Rival.Name] = was.View
	}
	in.Width, in.Height, in.View = was.Width, was.Height, was.View
	in.Selected = was.Selected.Kept(in.Study, in.Rival)
	in.Hover, in.Preview = was.Hover, was.Preview
	in.LitPath, in.Mark = was.LitPath, was.Mark
	if in.Reading != was.Reading {
		in.LitPath, in.Mark = scene.NoPath, nil
	}
	if in.Palette == (scene.Palette{}) {
		in.Palette = was.Palette
	}
	if in.At == nil && in.Study == was.Study && in.Rival == was.Rival && in.Question == was.Question {
		in.At = was.At // a layout of a thousand variables takes longer than a frame
	}
	if in.At == nil {
		in.At = scene.Places(in.Study, in.Rival, in.Question)
	}
	e.in = in
	if other {
		e.in.Selected, e.in.Hover = scene.Selection{}, scene.Target{}
		e.look(was)
	}
	e.changed()
	if !e.in.Selected.Equal(was.Selected) && e.OnSelect != nil {
		e.OnSelect(e.in.Selected)
	}
}

// look chooses the view of a rival that was not on the sheet: the same if its
// nodes stand where those of the last one stood, so that flipping between
// rivals shows the difference; else the one it was left with; else all of it.
func (e *Editor) look(was scene.Input) {
	if was.Rival != nil && alike(was.At, e.in.At) {
		return
	}
	v, known := e.views[e.in.Rival.Name]
	e.adrift = !known
	if known {
		e.in.View = v
	} else {
		e.fit()
	}
}

// alike reports whether most nodes stand in the same place.
func alike(a, b map[string]study.Point) bool {
	same := 0
	for id, p := range b {
		if q, ok := a[id]; ok && p == q {
			same++
		}
	}
	return 2*same > len(b)
}

// SetPalette takes other colours.
func (e *Editor) SetPalette(p scene.Palette) {
	e.in.Palette = p
	e.entry.Refresh()
	e.changed()
}

// SetTool takes another tool; it does not call OnTool.
func (e *Editor) SetTool(t scene.Tool) {
	e.hand.Take(t)
	e.in.Preview = scene.Preview{}
	e.changed()
}

// Tool is the tool at hand.
func (e *Editor) Tool() scene.Tool { return e.hand.Tool() }

// Select picks things; it does not call OnSelect.
func (e *Editor) Select(s scene.Selection) {
	e.in.Selected = s.Kept(e.in.Study, e.in.Rival)
	e.changed()
}

// Input is what is shown, with the editor's own fields filled in.
func (e *Editor) Input() scene.Input { return e.in }

// Point marks what a list beside the sheet points at; nil marks nothing.
func (e *Editor) Point(m *scene.Mark) {
	if e.in.Mark != m {
		e.in.Mark = m
		e.changed()
	}
}

// View says which part of the sheet is seen.
func (e *Editor) View() scene.View { return e.in.View }

// SetView shows another part.
func (e *Editor) SetView(v scene.View) {
	e.in.View = v
	e.adrift = false
	e.viewed()
}

// ZoomFit shows the whole rival.
func (e *Editor) ZoomFit() {
	e.adrift = true
	e.fit()
	e.viewed()
}

func (e *Editor) fit() { e.in.View = e.all() }

// ZoomBy zooms by a factor about the middle.
func (e *Editor) ZoomBy(factor float64) {
	middle := draw.Point{X: e.in.Width / 2, Y: e.in.Height / 2}
	e.SetView(e.in.View.ZoomAt(middle, factor))
}

// ZoomReset goes to 100 % about the middle.
func (e *Editor) ZoomReset() { e.ZoomBy(1 / e.in.View.Scale()) }

// Reveal brings a node into view.
func (e *Editor) Reveal(variable string) {
	r, ok := e.surface.mapNow().NodeRect(variable)
	if !ok {
		return
	}
	const margin = 24
	dx := max(margin-r.X, 0) - max(r.X+r.W-e.in.Width+margin, 0)
	dy := max(e.cover.height+margin-r.Y, 0) - max(r.Y+r.H-e.in.Height+margin, 0)
	if dx != 0 || dy != 0 {
		v := e.in.View
		v.Pan = v.Pan.Add(draw.Point{X: dx, Y: dy})
		e.SetView(v)
	}
}

// StartNaming opens the name entry for a new variable near the middle of the
// sheet.
func (e *Editor) StartNaming() {
	if e.in.Rival != nil {
		e.name(scene.Naming{At: scene.Free(&e.in)})
	}
}

// StartRename opens the name entry over a node.
func (e *Editor) StartRename(variable string) { e.name(scene.Naming{Variable: variable}) }

// StartNote opens a note of the rival for its words.
func (e *Editor) StartNote(note int) {
	if n := scene.NoteNaming(&e.in, note); n != nil {
		e.name(*n)
	}
}

// changed asks for a new picture.
func (e *Editor) changed() { e.surface.changed() }

// viewed is changed for the view.
func (e *Editor) viewed() {
	e.changed()
	e.entry.place()
	if e.OnView != nil {
		e.OnView(e.in.View)
	}
}

// handle gives an event to the hand and does what it answers.
func (e *Editor) handle(event scene.Event) {
	a := e.hand.Handle(&e.in, e.surface.mapNow(), event)
	if a.Preview != nil {
		e.in.Preview = *a.Preview
		e.changed()
	}
	if a.Hover != nil && *a.Hover != e.in.Hover {
		e.in.Hover = *a.Hover
		e.changed()
		if e.OnHover != nil {
			e.OnHover(*a.Hover)
		}
	}
	if a.View != nil {
		e.SetView(*a.View)
	}
	if a.Edit != nil {
		e.edit(a.Edit)
	}
	if a.Select != nil {
		e.pick(*a.Select)
	}
	if a.Tool != nil {
		e.changed()
		if e.OnTool != nil {
			e.OnTool(*a.Tool)
		}
	}
	switch {
	case a.Cycle != nil && e.OnCycle != nil:
		e.OnCycle(a.Cycle)
	case a.Refuse != "":
		e.refuse(a.Refuse)
	}
	if n := a.Name; n != nil && event.Kind == scene.Release {
		e.post(func() { e.name(*n) }) // Fyne takes the focus away from what a release opens
	} else if n != nil {
		e.name(*n)
	}
	if a.Menu != nil && e.OnMenu != nil {
		e.OnMenu(*a.Menu, e.press.window)
	}
	if a.Open != nil && e.OnOpen != nil {
		e.OnOpen(*a.Open)
	}
	if a.Command != "" && e.OnKey != nil {
		e.OnKey(a.Command)
	}
	e.draft()
}

// draft tells what letting go of the arrow in the hand would draw, once for
// every variable that it comes over.
func (e *Editor) draft() {
	var now study.Edit
	if e.in.Rival != nil {
		now = e.in.Preview.Draw.Edit(e.in.Rival.Name)
	}
	if e.OnDraft != nil && !reflect.DeepEqual(now, e.drafted) {
		e.drafted = now
		e.OnDraft(now)
	}
}

func (e *Editor) edit(edit study.Edit) {
	e.adrift = false // what was drawn stays where it was drawn
	if e.OnEdit != nil {
		e.OnEdit(edit)
	}
}

func (e *Editor) refuse(reason string) {
	if e.OnRefuse != nil {
		e.OnRefuse(reason)
	}
}

// pick changes the selection by hand.
func (e *Editor) pick(s scene.Selection) {
	s = s.Kept(e.in.Study, e.in.Rival)
	if s.Equal(e.in.Selected) {
		return
	}
	e.in.Selected = s
	e.changed()
	if e.OnSelect != nil {
		e.OnSelect(s)
	}
}

// name opens the entry.
func (e *Editor) name(n scene.Naming) {
	if n.Variable != "" && e.OnRename != nil {
		e.OnRename(n.Variable)
		return
	}
	e.entry.open(n)
	if e.OnNaming != nil {
		e.OnNaming()
	}
}

// MinSize implements fyne.CanvasObject.
func (e *Editor) MinSize() fyne.Size { return fyne.NewSize(160, 120) }

// Resize implements fyne.CanvasObject.
func (e *Editor) Resize(size fyne.Size) {
	e.BaseWidget.Resize(size)
	w, h := float64(size.Width), float64(size.Height)
	if w == e.in.Width && h == e.in.Height {
		return
	}
	e.in.Width, e.in.Height = w, h
	if e.adrift {
		e.fit()
	}
	e.viewed()
}

// CreateRenderer implements fyne.Widget.
func (e *Editor) CreateRenderer() fyne.WidgetRenderer {
	return &editorRenderer{editor: e, objects: []fyne.CanvasObject{e.surface.raster, e.entry}}
}

type editorRenderer struct {
	editor  *Editor
	objects []fyne.CanvasObject
}

func (r *editorRenderer) Layout(size fyne.Size) {
	r.editor.surface.raster.Resize(size)
	r.editor.entry.place()
}

func (r *editorRenderer) MinSize() fyne.Size           { return r.editor.MinSize() }
func (r *editorRenderer) Objects() []fyne.CanvasObject { return r.objects }
func (r *editorRenderer) Destroy()                     {}
func (r *editorRenderer) Refresh()                     { r.editor.surface.changed() }
