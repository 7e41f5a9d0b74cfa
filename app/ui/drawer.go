package ui

import (
	"fyne.io/fyne/v2"
	"fyne.io/fyne/v2/container"
)

// drawer is the panel below the sheet: a row of tabs and one page at a time.
// A click on the chosen tab folds it.
type drawer struct {
	d      *desk
	object *fyne.Container
	tabs   *tabs
	pages  []page
	fold   *press
	arrow  *icon
	body   *fyne.Container
}

// A page is one tab of the drawer.
type page interface {
	panel
	name() string
	content() fyne.CanvasObject
}

func newDrawer(d *desk) *drawer {
	w := &drawer{d: d, pages: []page{newReadingPage(d), newStatementPage(d), newFitPage(d), newChecksPage(d), newEffectPage(d), newRivalsPage(d)}}
	var names []string
	for _, p := range w.pages {
		names = append(names, p.name())
	}
	w.tabs = d.tabs(names, tabsHeight, nil)
	w.tabs.pick = func(i int) {
		d.frame.unfold("drawer")
		w.turn(i)
	}
	w.arrow = newIcon(iconFoldD, tokenMuted, 16)
	w.fold = d.iconButton(w.arrow, "Fold the drawer   Ctrl+J", func() { d.frame.fold("drawer"); w.update() })
	w.body = container.NewStack()
	head := column(0, row(4, gapOf(6, 1), w.tabs.row, space(), w.fold, gapOf(4, 1)), hairline())
	w.object = container.NewBorder(head, nil, nil, nil, w.body)
	w.turn(0)
	return w
}

func (w *drawer) turn(i int) {
	w.tabs.choose(i, false)
	w.body.Objects = []fyne.CanvasObject{w.pages[i].content()}
	if w.d.view != nil {
		w.pages[i].update()
	}
	w.body.Refresh()
}

// show opens a page by name.
func (w *drawer) show(name string) {
	for i, p := range w.pages {
		if p.name() == name {
			w.turn(i)
			w.d.frame.unfold("drawer")
		}
	}
}

// read opens the Reading page at a subject.
func (w *drawer) read(subject string) {
	w.show(w.pages[0].name())
	w.pages[0].(*readingPage).turn(subject)
}

func (w *drawer) page() string { return w.pages[w.tabs.chosen].name() }

func (w *drawer) update() {
	w.pages[w.tabs.chosen].update()
	if w.d.frame.open("drawer") {
		w.arrow.set(iconFoldD, tokenMuted)
	} else {
		w.arrow.set(iconFoldU, tokenMuted)
	}
}
