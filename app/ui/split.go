package ui

import "fyne.io/fyne/v2"

// splitLayout sets two panes side by side with a line between them.
type splitLayout struct{ share float32 }

func (l *splitLayout) Layout(o []fyne.CanvasObject, s fyne.Size) {
	w := s.Width * l.share
	place(o[0], 0, 0, w, s.Height)
	place(o[1], w, 8, 1, s.Height-16)
	place(o[2], w+1, 0, s.Width-w-1, s.Height)
}

func (l *splitLayout) MinSize([]fyne.CanvasObject) fyne.Size { return fyne.NewSize(80, 24) }
