package ui

import (
	"fyne.io/fyne/v2"
	"fyne.io/fyne/v2/container"
)

// primary is the one filled button of a place.
func (k *kit) primary(label string, tap func()) *press {
	w := newLabel(label, sizeBody, tokenOnAction, fyne.TextStyle{Bold: true}).centered()
	p := k.press(w, func(p *press) skin {
		if p.disabled {
			w.token = tokenFaint
			return skin{fill: tokenPanel, edge: tokenHairline, width: 1, radius: 5}
		}
		w.token = tokenOnAction
		return skin{fill: tokenAction, radius: 5}
	}, tap)
	p.padX, p.padY, p.minH = 12, 5, 28
	return p
}

// plain is a button with an outline.
func (k *kit) plain(label string, tap func()) *press {
	w := body(label).centered()
	p := k.press(w, func(p *press) skin {
		w.token = tokenInk
		if p.disabled {
			w.token = tokenFaint
			return skin{fill: tokenPanel, edge: tokenHairline, width: 1, radius: 5}
		}
		return skin{fill: tokenCard, edge: tokenBorder, width: 1, radius: 5}
	}, tap)
	p.padX, p.padY, p.minH = 10, 4, 26
	return p
}

// quiet is a button of words alone, in the action colour.
func (k *kit) quiet(label string, tap func()) *press {
	w := newLabel(label, sizeBody, tokenAction, fyne.TextStyle{})
	p := k.press(w, func(p *press) skin {
		w.token = tokenAction
		if p.disabled {
			w.token = tokenFaint
		}
		return skin{radius: 4}
	}, tap)
	p.padX, p.padY = 4, 2
	return p
}

// chip is a rounded action that stands inside a sentence.
func (k *kit) chip(label string, amber bool, tap func()) *press {
	text, fill := tokenAction, tokenTint
	if amber {
		text, fill = tokenConfound, tokenAmberTint
	}
	w := newLabel(label, sizeBody, text, fyne.TextStyle{Bold: true})
	p := k.press(w, func(p *press) skin {
		w.token = text
		if p.disabled {
			w.token = tokenFaint
		}
		return skin{fill: fill, edge: text, width: 1, radius: 11}
	}, tap)
	p.padX, p.padY = 10, 2
	return p
}

// iconButton is a small square with a glyph.
func (k *kit) iconButton(of *icon, tip string, tap func()) *press {
	p := k.press(of.object, func(*press) skin { return skin{radius: 4} }, tap)
	p.padX, p.padY = 3, 3
	p.tip = tip
	return p
}

// foldButton is an iconButton with a chevron.
func (k *kit) foldButton(of glyph, tip string, tap func()) *press {
	return k.iconButton(newIcon(of, tokenMuted, 16), tip, tap)
}

// tile is a picture with a name under it, one of several to choose from.
func (k *kit) tile(picture fyne.CanvasObject, name string, chosen bool, tap func()) *press {
	w := small(name).centered()
	w.size = sizeCaption
	content := column(2, picture, w)
	p := k.press(content, func(p *press) skin {
		w.token = tokenMuted
		if p.selected {
			w.token = tokenInk
			return skin{fill: tokenCard, edge: tokenAction, width: 2, radius: 5}
		}
		return skin{fill: tokenCard, edge: tokenHairline, width: 1, radius: 5}
	}, tap)
	p.padX, p.padY = 4, 4
	p.selected = chosen
	return p
}

// tabs is a row of names of which one is chosen. Left and Right walk it.
type tabs struct {
	kit    *kit
	row    *fyne.Container
	items  []*press
	chosen int
	pick   func(int)
}

func (k *kit) tabs(names []string, height float32, pick func(int)) *tabs {
	t := &tabs{kit: k, pick: pick}
	var objects []fyne.CanvasObject
	for i, name := range names {
		w := muted(name)
		p := k.press(w, func(p *press) skin {
			w.token, w.style.Bold = tokenMuted, false
			if p.selected {
				w.token, w.style.Bold = tokenAction, true
				return skin{underline: tokenAction}
			}
			return skin{}
		}, func() { t.choose(i, true) })
		// Bold is wider: leave room for it, so that choosing moves nothing.
		p.minW = fyne.MeasureText(name, sizeBody, fyne.TextStyle{Bold: true}).Width + 16
		p.padX, p.padY, p.minH = 8, (height-18)/2, height
		p.key = "tab " + name
		p.onKey = func(key fyne.KeyName) bool {
			switch key {
			case fyne.KeyLeft:
				t.step(i, -1)
			case fyne.KeyRight:
				t.step(i, 1)
			default:
				return false
			}
			return true
		}
		t.items = append(t.items, p)
		objects = append(objects, p)
	}
	t.row = row(4, objects...)
	t.choose(0, false)
	return t
}

func (t *tabs) step(from, by int) {
	to := from + by
	if to < 0 || to >= len(t.items) {
		return
	}
	t.choose(to, true)
	if c := fyne.CurrentApp().Driver().CanvasForObject(t.items[to]); c != nil {
		c.Focus(t.items[to])
	}
}

func (t *tabs) choose(i int, tell bool) {
	t.chosen = i
	for j, p := range t.items {
		p.setSelected(i == j)
	}
	if tell && t.pick != nil {
		t.pick(i)
	}
}

// stack lays objects over one another.
func stack(objects ...fyne.CanvasObject) *fyne.Container { return container.NewStack(objects...) }
