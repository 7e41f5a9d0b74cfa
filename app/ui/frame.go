package ui

import (
	"slices"

	"fyne.io/fyne/v2"
	"fyne.io/fyne/v2/driver/desktop"
	"fyne.io/fyne/v2/widget"
)

// Sizes of the frame's parts.
const (
	statusHeight float32 = 27
	stubWidth    float32 = 24 // of a folded rail
	tabsHeight   float32 = 32 // of a folded drawer
	sheetLeast   float32 = 160
	roomyWidth   float32 = 980 // below it rails lie over the sheet
	roomyHeight  float32 = 560 // below it the drawer does
)

// arrangement is what the frame remembers between runs.
type arrangement struct {
	Left, Right, Drawer                   float32
	LeftFolded, RightFolded, DrawerFolded bool
}

var firstArrangement = arrangement{Left: 236, Right: 304, Drawer: 256}

// A frame places the verdict strip, the two rails, the sheet with its status
// line, and the drawer. Rails and drawer fold to a stub; in a small window, or
// with large type, they open over the sheet instead of beside it.
type frame struct {
	widget.BaseWidget
	strip, left, sheet, status, right, drawer fyne.CanvasObject
	leftStub, rightStub                       *press
	handles                                   [3]*handle // left, right, drawer
	now                                       arrangement
	over                                      string // which rail lies over the sheet: "", "left", "right"
	drawerOver                                bool   // the drawer lies over the sheet
	onChange                                  func(arrangement)
}

func newFrame(k *kit, strip, left, sheet, status, right, drawer fyne.CanvasObject, now arrangement) *frame {
	f := &frame{strip: strip, left: left, sheet: sheet, status: status, right: right, drawer: drawer, now: now}
	f.leftStub = k.foldButton(iconFoldR, "Show the ledger", func() { f.fold("left") })
	f.rightStub = k.foldButton(iconFoldL, "Show the details", func() { f.fold("right") })
	f.handles[0] = newHandle(desktop.HResizeCursor, func(d fyne.Delta) {
		f.now.Left = within(f.now.Left+d.DX, 170, 420)
		f.changed()
	})
	f.handles[1] = newHandle(desktop.HResizeCursor, func(d fyne.Delta) {
		f.now.Right = within(f.now.Right-d.DX, 230, 560)
		f.changed()
	})
	f.handles[2] = newHandle(desktop.VResizeCursor, func(d fyne.Delta) {
		f.now.Drawer = within(f.now.Drawer-d.DY, 96, 640)
		f.changed()
	})
	f.ExtendBaseWidget(f)
	return f
}

func within(x, low, high float32) float32 { return max(low, min(high, x)) }

func (f *frame) parts() []fyne.CanvasObject {
	return []fyne.CanvasObject{f.strip, f.left, f.sheet, f.status, f.right, f.drawer}
}

func (f *frame) small() bool { return f.Size().Width < roomyWidth }
func (f *frame) low() bool   { return f.Size().Height < roomyHeight }

// fold opens or closes a part: "left", "right" or "drawer".
func (f *frame) fold(part string) {
	switch {
	case part == "drawer" && f.low():
		f.drawerOver = !f.drawerOver
	case part == "drawer":
		f.now.DrawerFolded = !f.now.DrawerFolded
	case f.small() && f.over == part:
		f.over = ""
	case f.small():
		f.over = part
	case part == "left":
		f.now.LeftFolded = !f.now.LeftFolded
	case part == "right":
		f.now.RightFolded = !f.now.RightFolded
	}
	f.changed()
}

// open reports whether a part can be seen.
func (f *frame) open(part string) bool {
	switch {
	case part == "drawer" && f.low():
		return f.drawerOver
	case part == "drawer":
		return !f.now.DrawerFolded
	case f.small():
		return f.over == part
	case part == "left":
		return !f.now.LeftFolded
	}
	return !f.now.RightFolded
}

// show opens a part if it is folded.
func (f *frame) unfold(part string) {
	if !f.open(part) {
		f.fold(part)
	}
}

func (f *frame) changed() {
	f.Refresh()
	if f.onChange != nil {
		f.onChange(f.now)
	}
}

func (f *frame) MinSize() fyne.Size { return fyne.NewSize(560, 320) }

func (f *frame) CreateRenderer() fyne.WidgetRenderer {
	r := &frameRenderer{f: f, panel: filled(tokenPanel), stripBack: filled(tokenCard), leftBack: filled(tokenPanel), rightBack: filled(tokenPanel), drawerBack: filled(tokenCard)}
	for i := range r.lines {
		r.lines[i] = hairline()
	}
	return r
}

type frameRenderer struct {
	f                                                 *frame
	panel, stripBack, leftBack, rightBack, drawerBack *fillBox
	lines                                             [5]*fillBox // under the strip, left, right, over the status line, over the drawer
}

func place(o fyne.CanvasObject, x, y, w, h float32) {
	o.Move(fyne.NewPos(x, y))
	o.Resize(fyne.NewSize(max(0, w), max(0, h)))
}

func show(on bool, objects ...fyne.CanvasObject) {
	for _, o := range objects {
		if on {
			o.Show()
		} else {
			o.Hide()
		}
	}
}

func (r *frameRenderer) Layout(s fyne.Size) {
	f := r.f
	w, h := s.Width, s.Height
	place(r.panel, 0, 0, w, h)
	strip := stripHeight(w)
	place(r.stripBack, 0, 0, w, strip)
	place(f.strip, 0, 0, w, strip)
	place(r.lines[0], 0, strip, w, 1)
	top := strip + 1
	bodyH := h - top

	leftOpen, rightOpen, drawerOpen := f.open("left"), f.open("right"), f.open("drawer")
	leftW, rightW := min(f.now.Left, w*0.85), min(f.now.Right, w*0.85)
	x0, x1 := stubWidth, w-stubWidth // of the middle
	if !f.small() {
		if leftOpen {
			x0 = leftW
		}
		if rightOpen {
			x1 = w - rightW
		}
	}
	show(leftOpen, f.left, f.handles[0], r.leftBack)
	show(rightOpen, f.right, f.handles[1], r.rightBack)
	show(!leftOpen, f.leftStub)
	show(!rightOpen, f.rightStub)
	place(f.leftStub, 1, top+6, 22, 22)
	place(f.rightStub, w-23, top+6, 22, 22)
	lx, rx := x0, x1
	if leftOpen {
		place(r.leftBack, 0, top, leftW, bodyH)
		place(f.left, 0, top, leftW, bodyH)
		place(f.handles[0], leftW-3, top, 6, bodyH)
		lx = leftW
	}
	if rightOpen {
		place(r.rightBack, w-rightW, top, rightW, bodyH)
		place(f.right, w-rightW, top, rightW, bodyH)
		place(f.handles[1], w-rightW-3, top, 6, bodyH)
		rx = w - rightW
	}
	place(r.lines[1], lx-1, top, 1, bodyH)
	place(r.lines[2], rx, top, 1, bodyH)

	mw := x1 - x0 - 1
	drawerH := tabsHeight
	takes := drawerH // how much of the sheet's place the drawer takes
	if drawerOpen {
		drawerH = min(f.now.Drawer, bodyH-statusHeight-sheetLeast)
		if f.low() {
			drawerH = min(f.now.Drawer, bodyH*0.72)
		} else {
			takes = max(drawerH, tabsHeight)
		}
	}
	drawerH = max(drawerH, tabsHeight)
	sheetH := bodyH - takes - statusHeight - 1
	place(f.sheet, x0, top, mw, sheetH)
	place(r.lines[3], x0, top+sheetH, mw, 1)
	place(f.status, x0, top+sheetH+1, mw, statusHeight)
	place(r.drawerBack, x0, h-drawerH, mw, drawerH)
	place(f.drawer, x0, h-drawerH, mw, drawerH)
	place(r.lines[4], x0, h-drawerH-1, mw, 1)
	show(drawerOpen, f.handles[2])
	place(f.handles[2], x0, h-drawerH-4, mw, 6)
}

func (r *frameRenderer) MinSize() fyne.Size { return r.f.MinSize() }

func (r *frameRenderer) Refresh() {
	r.Layout(r.f.Size())
	for _, o := range r.Objects() {
		o.Refresh()
	}
}

func (r *frameRenderer) Objects() []fyne.CanvasObject {
	f := r.f
	head := []fyne.CanvasObject{r.panel, r.stripBack, f.strip, r.lines[0]}
	left := []fyne.CanvasObject{f.leftStub, r.leftBack, f.left, r.lines[1], f.handles[0]}
	middle := []fyne.CanvasObject{f.sheet, r.lines[3], f.status, r.drawerBack, f.drawer, r.lines[4], f.handles[2]}
	right := []fyne.CanvasObject{f.rightStub, r.rightBack, f.right, r.lines[2], f.handles[1]}
	if f.small() { // rails over the sheet: painted last
		return slices.Concat(head, middle, left, right)
	}
	return slices.Concat(head, left, middle, right) // the order in which Tab walks
}

func (r *frameRenderer) Destroy() {}

// A handle is the invisible edge between two parts that a drag moves.
type handle struct {
	widget.BaseWidget
	cursor desktop.StandardCursor
	move   func(fyne.Delta)
	box    *fillBox
}

func newHandle(cursor desktop.StandardCursor, move func(fyne.Delta)) *handle {
	h := &handle{cursor: cursor, move: move, box: filled(tokenNone)}
	h.ExtendBaseWidget(h)
	return h
}

func (h *handle) Dragged(e *fyne.DragEvent)      { h.move(e.Dragged) }
func (h *handle) DragEnd()                       {}
func (h *handle) Cursor() desktop.Cursor         { return h.cursor }
func (h *handle) MouseIn(*desktop.MouseEvent)    { h.tint(tokenTint) }
func (h *handle) MouseMoved(*desktop.MouseEvent) {}
func (h *handle) MouseOut()                      { h.tint(tokenNone) }
func (h *handle) tint(token fyne.ThemeColorName) { h.box.token = token; h.box.Refresh() }
func (h *handle) CreateRenderer() fyne.WidgetRenderer {
	return widget.NewSimpleRenderer(h.box)
}
