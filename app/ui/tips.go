package ui

import (
	"time"

	"fyne.io/fyne/v2"
	"fyne.io/fyne/v2/canvas"
	"fyne.io/fyne/v2/container"
)

const tipDelay = 600 * time.Millisecond

// tips is a layer above the window that shows one line of help beside a
// control. It takes no events.
type tips struct {
	layer *fyne.Container
	box   *canvas.Rectangle
	text  *canvas.Text
	post  func(func())
	turn  int // a later hover makes an earlier timer void
}

func newTips(post func(func())) *tips {
	t := &tips{post: post, box: canvas.NewRectangle(nil), text: canvas.NewText("", nil)}
	t.box.CornerRadius = 4
	t.layer = container.NewWithoutLayout(t.box, t.text)
	t.box.Hide()
	t.text.Hide()
	return t
}

func (t *tips) after(text string, over fyne.CanvasObject, beside bool) {
	t.turn++
	turn := t.turn
	time.AfterFunc(tipDelay, func() {
		t.post(func() {
			if turn == t.turn {
				t.show(text, over, beside)
			}
		})
	})
}

func (t *tips) show(text string, over fyne.CanvasObject, beside bool) {
	d := fyne.CurrentApp().Driver()
	if d.CanvasForObject(over) == nil {
		return
	}
	at := d.AbsolutePositionForObject(over)
	if beside {
		t.put(text, at.AddXY(over.Size().Width+8, (over.Size().Height-22)/2), at.Y-4)
		return
	}
	t.put(text, at.AddXY(0, over.Size().Height+4), at.Y-4)
}

// follow shows text beside the pointer, which is at a place of the window.
func (t *tips) follow(text string, at fyne.Position) {
	t.turn++
	t.put(text, at.AddXY(12, 14), at.Y-14)
}

// put shows text at a place of the window, or above another height if there is
// no room.
func (t *tips) put(text string, at fyne.Position, above float32) {
	t.text.Text = text
	t.text.TextSize = sizeSmall
	t.text.Color = ink(tokenSheet)
	t.box.FillColor = ink(tokenInk)
	m := t.text.MinSize()
	size := fyne.NewSize(m.Width+2*unit, m.Height+unit)
	origin := fyne.CurrentApp().Driver().AbsolutePositionForObject(t.layer)
	x := at.X - origin.X
	y := at.Y - origin.Y
	if y+size.Height > t.layer.Size().Height {
		y = above - origin.Y - size.Height
	}
	x = max(4, min(x, t.layer.Size().Width-size.Width-4))
	t.box.Move(fyne.NewPos(x, y))
	t.box.Resize(size)
	t.text.Move(fyne.NewPos(x+unit, y+unit/2))
	t.text.Resize(m)
	t.box.Show()
	t.text.Show()
	t.layer.Refresh()
}

func (t *tips) hide() {
	t.turn++
	if t.box.Visible() {
		t.box.Hide()
		t.text.Hide()
		t.layer.Refresh()
	}
}
