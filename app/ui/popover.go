package ui

import (
	"fyne.io/fyne/v2"
	"fyne.io/fyne/v2/container"
	"fyne.io/fyne/v2/widget"
)

// A popover is a panel above the window that a click outside or Escape closes.
type popover struct {
	up      *widget.PopUp
	inner   *fyne.Container
	at      fyne.Position // where it hangs
	width   float32
	changed func()
}

// pop shows content at a place of the window, moved so that all of it is seen.
func (k *kit) pop(c fyne.Canvas, content fyne.CanvasObject, at fyne.Position, width float32) *popover {
	inner := padded(12, 10, 8, content)
	inner.Layout.(*columnLayout).width = width
	p := &popover{up: widget.NewPopUp(container.NewVScroll(inner), c), inner: inner, width: width} // what is too tall for the window scrolls
	size := p.size()
	area := c.Size()
	at.X = within(at.X, 8, max(8, area.Width-size.Width-16))
	p.at = at
	p.up.ShowAtPosition(p.place(size))
	p.up.Resize(size)
	k.popovers = append(k.popovers, p)
	p.changed = k.onPopover
	k.onPopover()
	return p
}

func (p *popover) size() fyne.Size {
	return fyne.NewSize(p.width, min(heightFor(p.inner, p.width), p.up.Canvas.Size().Height-16))
}

// place is where it stands: where it hangs, or higher if all of it would not be
// seen.
func (p *popover) place(size fyne.Size) fyne.Position {
	return fyne.NewPos(p.at.X, within(p.at.Y, 8, max(8, p.up.Canvas.Size().Height-size.Height-16)))
}

// resize fits the popover to content that has changed.
func (p *popover) resize() {
	p.inner.Refresh()
	size := p.size()
	p.up.Move(p.place(size))
	p.up.Resize(size)
}

func (p *popover) close() {
	if p.up.Visible() {
		p.up.Hide()
		p.changed()
	}
}

// closeTop closes the popover that was opened last and still stands; false if
// there is none.
func (k *kit) closeTop() bool {
	for n := len(k.popovers); n > 0; n-- {
		p := k.popovers[n-1]
		k.popovers = k.popovers[:n-1]
		if p.up.Visible() {
			p.close()
			return true
		}
	}
	return false
}

// below is the place under an object.
func below(o fyne.CanvasObject) fyne.Position {
	return fyne.CurrentApp().Driver().AbsolutePositionForObject(o).AddXY(0, o.Size().Height+4)
}
