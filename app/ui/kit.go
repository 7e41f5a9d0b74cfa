package ui

import (
	"image/color"

	"fyne.io/fyne/v2"
	"fyne.io/fyne/v2/theme"
)

// A kit makes the small controls and gives them what they share: the seam to
// the window's goroutine, and the layer that shows tips.
type kit struct {
	post func(func())
	tips *tips

	onPopover func()             // one was opened or closed
	onKey     func(fyne.KeyName) // a key that no control took
	popovers  []*popover         // opened, the last on top; some may be closed again
}

func newKit(post func(func())) *kit {
	return &kit{post: post, tips: newTips(post), onPopover: func() {}, onKey: func(fyne.KeyName) {}}
}

// ink is the present colour of a token.
func ink(name fyne.ThemeColorName) color.Color {
	return theme.Color(name)
}
