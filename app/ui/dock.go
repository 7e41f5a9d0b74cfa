package ui

import (
	"fyne.io/fyne/v2"
	"fyne.io/fyne/v2/container"

	"arrowroot/canvas"
	"arrowroot/canvas/scene"
)

// dock is the slim column of tools over the sheet.
type dock struct {
	d      *desk
	object *fyne.Container
	tools  map[scene.Tool]*press
}

func newDock(d *desk) *dock {
	k := &dock{d: d, tools: make(map[scene.Tool]*press)}
	box := column(2)
	for _, t := range []struct {
		tool scene.Tool
		icon glyph
		id   string
	}{
		{scene.SelectTool, iconSelect, "tool-select"},
		{scene.VariableTool, iconVariable, "tool-variable"},
		{scene.ArrowTool, iconArrow, "tool-arrow"},
		{scene.CauseTool, iconArc, "tool-cause"},
		{scene.PlateTool, iconPlate, "tool-plate"},
		{scene.NoteTool, iconNote, "tool-note"},
	} {
		c := d.commands.find(t.id)
		p := d.iconButton(newIcon(t.icon, tokenInk, 20), c.tip(), c.run)
		p.tipBeside = true
		p.skin = func(p *press) skin {
			if p.selected {
				return skin{fill: tokenTint, radius: 5}
			}
			return skin{radius: 5}
		}
		p.padX, p.padY = 5, 5
		k.tools[t.tool] = p
		box.Add(p)
	}
	inner := container.New(&columnLayout{padX: 4, padY: 4}, box)
	k.object = stack(bordered(tokenCard, tokenHairline, 6), inner)
	return k
}

func (k *dock) update() {
	for t, p := range k.tools {
		p.setSelected(t == k.d.editor.Tool())
	}
}

// sheetLayout lays the editor out to fill, the dock at the top left, the
// banner beside it, and the ways to begin in the middle.
type sheetLayout struct {
	editor                      *canvas.Editor
	ground, dock, banner, empty fyne.CanvasObject
}

func (l *sheetLayout) Layout(_ []fyne.CanvasObject, s fyne.Size) {
	m := l.dock.MinSize()
	left := 8 + m.Width + 8
	place(l.ground, 0, 0, s.Width, s.Height)
	place(l.editor, left, 0, s.Width-left, s.Height) // beside the dock: nothing may hide under it
	place(l.dock, 8, 10, m.Width, min(m.Height, s.Height-14))
	w := min(640, s.Width-left-10)
	if c, ok := l.banner.(*fyne.Container); ok {
		h := stackHeight(c, w)
		place(l.banner, left, 10, w, h)
		cover := float32(0)
		if c.Visible() {
			cover = 10 + h
		}
		l.editor.SetCover(cover)
	}
	ew := min(430, s.Width-left-16)
	eh := heightFor(l.empty, ew)
	place(l.empty, max(left, (s.Width-ew)/2), max(8, (s.Height-eh)/2), ew, eh)
}

func (l *sheetLayout) MinSize([]fyne.CanvasObject) fyne.Size { return fyne.NewSize(160, 80) }
