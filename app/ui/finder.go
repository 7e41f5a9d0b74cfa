package ui

import (
	"strings"

	"fyne.io/fyne/v2"
)

const finderRows = 9

// finder is the place to type what to do: the start of a command's words, a
// line of arrows, or a sentence such as "hold soil". Return does it.
type finder struct {
	kit      *kit
	commands commandTable
	sentence func(string) sentence
	places   func(string) []finding // variables and notes to go to
	entry    *field
	list     *pane
	pop      *popover
	found    []finding
	at       int
	wrong    string
}

type finding struct {
	label, keys string
	run         func()
	off         bool
}

// A sentence is what a typed line means: what it would do, or why it cannot.
// The zero sentence is no sentence at all.
type sentence struct {
	does, wrong string
	run         func()
}

func (k *kit) finder(c fyne.Canvas, commands commandTable, sentence func(string) sentence, places func(string) []finding) *finder {
	f := &finder{kit: k, commands: commands, sentence: sentence, places: places, list: newPane(0, 0, 0)}
	f.entry = k.field("", "a command, a variable, or: hedge -> flowers -> bees", nil)
	f.entry.typing = func(string) { f.search() }
	f.entry.OnSubmitted = func(string) { f.run(f.at) }
	f.entry.pasting = func(text string) string { // several lines of arrows at once
		return strings.Join(strings.FieldsFunc(text, func(r rune) bool { return r == '\n' || r == '\r' }), "; ")
	}
	f.entry.escape = func() { f.pop.close() }
	f.entry.handled = func(e *fyne.KeyEvent) bool {
		switch e.Name {
		case fyne.KeyDown:
			f.move(1)
		case fyne.KeyUp:
			f.move(-1)
		default:
			return false
		}
		return true
	}
	const width = 520
	content := column(6, f.entry, fixed(0, finderRows*26, f.list))
	area := c.Size()
	f.pop = k.pop(c, content, fyne.NewPos((area.Width-width)/2, 64), width)
	f.search()
	c.Focus(f.entry)
	return f
}

func (f *finder) search() {
	typed := f.entry.Text
	f.found = f.found[:0]
	say := f.sentence(typed)
	if say.run != nil {
		f.found = append(f.found, finding{label: say.does, run: say.run})
	}
	places := f.places(typed)
	for _, c := range f.commands.match(typed) {
		if !strings.HasPrefix(strings.ToLower(c.text()), strings.ToLower(typed)) { // places come after what is called as typed
			f.found, places = append(f.found, places...), nil
		}
		f.found = append(f.found, finding{label: c.text(), keys: c.keys, off: !c.ready(), run: c.run})
	}
	f.found = append(f.found, places...)
	f.at = 0
	f.wrong = say.wrong
	f.show()
}

func (f *finder) show() {
	var rows []fyne.CanvasObject
	for i, x := range f.found {
		token := tokenInk
		if x.off {
			token = tokenFaint
		}
		line := row(8, stretch(newLabel(x.label, sizeBody, token, fyne.TextStyle{}).shrinkTo(60)), small(x.keys))
		p := f.kit.press(line, func(p *press) skin {
			if p.selected {
				return skin{fill: tokenTint, radius: 4}
			}
			return skin{radius: 4}
		}, func() { f.run(i) })
		p.padX, p.padY, p.minH = 8, 3, 26
		p.selected = i == f.at
		rows = append(rows, p)
	}
	switch {
	case f.wrong != "":
		rows = append([]fyne.CanvasObject{padded(8, 6, 0, para(f.wrong, tokenFault))}, rows...)
	case len(rows) == 0:
		rows = append(rows, padded(8, 6, 0, para("Nothing is called that. Arrows are drawn by typing them: hedge -> flowers -> bees", tokenMuted)))
	}
	f.list.fill(nil, rows...)
}

func (f *finder) move(by int) {
	f.at = min(max(f.at+by, 0), max(len(f.found)-1, 0))
	f.show()
	f.list.scroll.ScrollToOffset(fyne.NewPos(0, max(0, float32(f.at-finderRows+2)*26)))
}

func (f *finder) run(i int) {
	if i >= len(f.found) || f.found[i].off {
		return
	}
	run := f.found[i].run
	f.pop.close()
	f.kit.post(run) // the popover is gone before the command opens one of its own
}
