package ui

import (
	"fmt"
	"slices"
	"strings"

	"fyne.io/fyne/v2"

	"arrowroot/app/words"
	"arrowroot/canvas/scene"
	"arrowroot/compile/study"
)

// details is the right rail: what there is to know and to change about what is
// picked, or about the rival when nothing is.
type details struct {
	d    *desk
	pane *pane
	tab  map[string]string // last tab by kind of thing
	seen detailsState
}

type detailsState struct {
	study    *study.Study
	rival    *study.Rival
	question *study.Question
	model    any
	result   any
	table    any
	pick     string
	tab      string
	stale    bool
	dark     bool
	problems int
}

func newDetails(d *desk) *details {
	return &details{d: d, pane: newPane(14, 8, 8), tab: make(map[string]string)}
}

// A sheaf is the content of the rail as it is put together: objects, and which
// of them take the focus under which key.
type sheaf struct {
	d       *desk
	objects []fyne.CanvasObject
	keys    map[string]fyne.Focusable
}

func (s *sheaf) add(objects ...fyne.CanvasObject) { s.objects = append(s.objects, objects...) }

// field adds a labelled entry.
func (s *sheaf) field(key, label, text, hint string, commit func(string)) *field {
	f := s.d.field(text, hint, commit)
	s.keys[key] = f
	s.add(labelled(label, f))
	return f
}

// choice adds a labelled list to pick from.
func (s *sheaf) choice(key, label string, options []string, chosen string, pick func(string)) {
	c := s.d.choice(options, chosen, pick)
	s.keys[key] = c
	s.add(labelled(label, c))
}

const labelWidth = 84

// labelled sets a muted label before a control.
func labelled(label string, o fyne.CanvasObject) *fyne.Container {
	if fyne.MeasureText(label, sizeBody, fyne.TextStyle{}).Width > labelWidth {
		return column(2, muted(label), o)
	}
	return row(8, fixed(labelWidth, 0, muted(label).shrinkTo(20)), stretch(o))
}

// text adds a wrapped paragraph.
func (s *sheaf) text(text string, token fyne.ThemeColorName) { s.add(para(text, token)) }

func (s *sheaf) section(text string) { s.add(gapOf(1, 2), caption(text)) }

// toggles adds a row of words that are on or off.
func (s *sheaf) toggles(key, label string, options []string, on func(string) bool, flip func(string, bool)) {
	var spans []span
	for _, w := range options {
		t := s.d.toggle(w, on(w), func(on bool) { flip(w, on) })
		s.keys[key+" "+w] = t
		spans = append(spans, span{object: t}, span{text: " "})
	}
	s.add(topRow(8, fixed(labelWidth, 24, muted(label).shrinkTo(20)), stretch(newProse(sizeBody, spans...))))
}

// toggle is a word that is on or off.
func (k *kit) toggle(word string, on bool, flip func(bool)) *press {
	w := body(word)
	var p *press
	p = k.press(w, func(p *press) skin {
		w.token = tokenInk
		if p.disabled {
			w.token = tokenFaint
		}
		if p.selected {
			w.token = tokenAction
			return skin{fill: tokenTint, edge: tokenAction, width: 1, radius: 4}
		}
		return skin{fill: tokenCard, edge: tokenBorder, width: 1, radius: 4}
	}, func() { flip(!p.selected) })
	p.padX, p.padY, p.minH = 8, 2, 22
	p.selected = on
	return p
}

func (x *details) update() {
	d := x.d
	v := d.view
	p := d.pick
	state := detailsState{
		study: v.Study, rival: v.Rival, question: v.Question, model: v.Model, result: v.Result, table: v.Table,
		pick: fmt.Sprint(p.Nodes, p.Arrows, p.Arcs, p.Plate, p.Notes), stale: v.Stale, dark: d.dark(), problems: len(v.Problems),
		tab: fmt.Sprint(x.tab),
	}
	if state == x.seen {
		return
	}
	samePick := state.pick == x.seen.pick
	x.seen = state
	s := &sheaf{d: d, keys: make(map[string]fyne.Focusable)}
	n := len(p.Nodes) + len(p.Arrows) + len(p.Arcs) + len(p.Notes)
	switch {
	case n > 1:
		x.several(s)
	case len(p.Nodes) == 1 && v.Study.Variable(p.Nodes[0]) != nil:
		x.variable(s, v.Study.Variable(p.Nodes[0]))
	case len(p.Arrows) == 1 && v.Rival.Diagram.Arrow(p.Arrows[0][0], p.Arrows[0][1]) != nil:
		x.arrow(s, v.Rival.Diagram.Arrow(p.Arrows[0][0], p.Arrows[0][1]))
	case len(p.Arcs) == 1:
		x.arc(s, p.Arcs[0])
	case len(p.Notes) == 1 && p.Notes[0] < len(v.Rival.Layout.Notes):
		x.note(s, p.Notes[0])
	case p.Plate != "" && v.Study.Plate(p.Plate) != nil:
		x.plate(s, v.Study.Plate(p.Plate))
	default:
		x.rival(s)
	}
	if !samePick {
		x.pane.scroll.Offset = fyne.NewPos(0, 0)
	}
	x.pane.fill(s.keys, s.objects...)
}

// head is the kind of thing, its name, and the fold button.
func (x *details) head(s *sheaf, kind, name string, italic bool) {
	fold := x.d.foldButton(iconFoldR, "Fold the details away", func() { x.d.frame.fold("right") })
	s.keys["fold"] = fold
	title := newLabel(name, sizeTitle, tokenInk, fyne.TextStyle{Bold: true, Italic: italic}).shrinkTo(60)
	s.add(row(4, caption(kind), space(), fold), title)
}

// tabs adds the row of tabs and gives the chosen one.
func (x *details) tabs(s *sheaf, kind string, names ...string) string {
	at := max(0, slices.Index(names, x.tab[kind]))
	t := x.d.tabs(names, 28, nil)
	t.choose(at, false)
	t.pick = func(i int) {
		x.tab[kind] = names[i]
		x.update()
	}
	for i, p := range t.items {
		s.keys["tab "+names[i]] = p
	}
	s.add(column(0, t.row, hairline()))
	return names[at]
}

// showTab turns to a tab of a kind of thing.
func (x *details) showTab(kind, tab string) {
	x.tab[kind] = tab
	x.update()
}

func (x *details) several(s *sheaf) {
	p := x.d.pick
	x.head(s, "Several", times(len(p.Nodes)+len(p.Arrows)+len(p.Arcs)+len(p.Notes), "thing", "things"), false)
	if len(p.Nodes) > 0 {
		s.text("Variables: "+words.List(p.Nodes)+".", tokenInk)
	}
	if len(p.Arrows) > 0 {
		var names []string
		for _, a := range p.Arrows {
			names = append(names, a[0]+" → "+a[1])
		}
		s.text("Arrows: "+words.List(names)+".", tokenInk)
	}
	if len(p.Nodes) == 2 && len(p.Arrows)+len(p.Arcs)+len(p.Notes) == 0 {
		x.absent(s, p.Nodes[0], p.Nodes[1])
	}
	b := x.d.plain("Take off the sheet", func() { x.d.commands.find("delete").run() })
	s.keys["delete"] = b
	s.add(row(8, b))
}

// note is what is written on the sheet.
func (x *details) note(s *sheaf, at int) {
	d := x.d
	x.head(s, "Note", "on the sheet", false)
	text := d.kit.note(d.view.Rival.Layout.Notes[at].Text, "What should a reader of the sheet know?", func(text string) {
		if text == "" {
			d.do(study.RemoveNotes{Rival: d.rival(), Notes: []int{at}})
			return
		}
		d.do(study.ChangeNote{Rival: d.rival(), Note: at, Text: text})
	})
	text.SetMinRowsVisible(6)
	s.keys["text"] = text
	s.add(text)
	s.text("It stands in figures and reports, and changes no result.", tokenMuted)
	b := d.plain("Remove", func() { d.commands.find("delete").run() })
	s.keys["delete"] = b
	s.add(row(8, b))
}

func (x *details) arc(s *sheaf, pair [2]string) {
	d := x.d
	x.head(s, "Common cause", pair[0]+" ↔ "+pair[1], false)
	s.text(fmt.Sprintf("%s and %s share an unmeasured cause that nobody has named.", pair[0], pair[1]), tokenMuted)
	for _, a := range d.view.Rival.Diagram.Arcs {
		if a.A == pair[0] && a.B == pair[1] {
			why := d.note(a.Why, "Why should they share a cause?", func(text string) {
				next := *a
				next.Why = text
				d.do(study.ChangeArc{Rival: d.rival(), A: a.A, B: a.B, Arc: next})
			})
			s.keys["why"] = why
			s.add(why)
			x.references(s, a.References, func(refs []string) {
				next := *a
				next.References = refs
				d.do(study.ChangeArc{Rival: d.rival(), A: a.A, B: a.B, Arc: next})
			})
		}
	}
	b := d.plain("Remove", func() { d.commands.find("delete").run() })
	s.keys["delete"] = b
	s.add(row(8, b))
}

func (x *details) plate(s *sheaf, p *study.Plate) {
	d := x.d
	x.head(s, "Plate", "each "+p.Name, false)
	change := func(f func(*study.Plate)) {
		to := *p
		f(&to)
		d.do(study.ChangePlate{Name: p.Name, To: to})
	}
	s.field("name", "Name", p.Name, "farm", func(text string) { change(func(p *study.Plate) { p.Name = text }) })
	columns := []string{}
	if d.view.Table != nil {
		for _, c := range d.view.Table.Columns {
			columns = append(columns, c.Name)
		}
	}
	column := p.Column
	if column == "" {
		column = p.Name
	}
	if len(columns) > 0 {
		s.choice("column", "Column", columns, column, func(word string) { change(func(p *study.Plate) { p.Column = word }) })
		if d.view.Table.Column(column) == nil {
			s.text("The data have no column "+column+": choose the one that names the level of each row.", tokenFault)
		}
	}
	within := []string{"nothing"}
	for _, o := range d.view.Study.Plates {
		if o != p {
			within = append(within, o.Name)
		}
	}
	chosen := "nothing"
	if p.Within != "" {
		chosen = p.Within
	}
	s.choice("within", "Nested in", within, chosen, func(word string) {
		if word == "nothing" {
			word = ""
		}
		change(func(p *study.Plate) { p.Within = word })
	})
	var inside []string
	for _, v := range d.view.Study.Variables {
		if slices.Contains(v.Plates, p.Name) {
			inside = append(inside, v.ID)
		}
	}
	if len(inside) > 0 {
		s.text("One value for each "+p.Name+": "+words.List(inside)+".", tokenMuted)
	}
	if m := d.view.Model; m != nil {
		for _, mp := range m.Plates {
			if mp.Name == p.Name {
				s.text(times(len(mp.Levels), "level", "levels")+" in the rows used.", tokenMuted)
			}
		}
	}
	b := d.plain("Remove the plate", func() { d.do(study.RemovePlate{Name: p.Name}) })
	s.keys["delete"] = b
	s.add(row(8, b))
}

func (x *details) rival(s *sheaf) {
	d := x.d
	r := d.view.Rival
	x.head(s, "Rival", r.Name, false)
	s.field("name", "Name", r.Name, "", func(text string) { d.do(study.RenameRival{Old: r.Name, New: text}) })
	var causes int
	for _, n := range r.Diagram.Nodes {
		if v := d.view.Study.Variable(n.Variable); v != nil && v.Unmeasured {
			causes++
		}
	}
	about := times(len(r.Diagram.Nodes), "variable", "variables") + ", " + times(len(r.Diagram.Arrows), "arrow", "arrows")
	if causes+len(r.Diagram.Arcs) > 0 {
		about += ", " + times(causes+len(r.Diagram.Arcs), "unmeasured cause", "unmeasured causes")
	}
	s.text(about+".", tokenMuted)
	note := d.note(r.Note, "What does this explanation say?", func(text string) { d.do(study.NoteRival{Rival: r.Name, Note: text}) })
	s.keys["note"] = note
	s.add(note)
	arrange := d.plain("Arrange anew", func() { d.commands.find("arrange").run() })
	copied := d.plain("Copy as a rival", func() { d.commands.find("copy-rival").run() })
	s.keys["arrange"], s.keys["copy"] = arrange, copied
	s.add(row(8, arrange, copied))
	if len(d.view.Study.Rivals) > 1 {
		drop := d.quiet("Remove this rival", func() { d.do(study.RemoveRival{Name: r.Name}) })
		s.keys["drop"] = drop
		s.add(row(0, drop))
	}
	s.section("Study")
	s.field("title", "Title", d.view.Study.Title, "What is it about?", func(text string) { d.do(study.SetTitle{Title: text}) })
	if len(r.Diagram.Absent) > 0 {
		s.section("Arrows left out on purpose")
		for _, a := range r.Diagram.Absent {
			text := a.From + " → " + a.To + ": " + or(strings.TrimSpace(a.Why), "no reason given yet")
			if n := len(a.References); n > 0 {
				text += " (" + times(n, "reference", "references") + ")"
			}
			line := para(text, tokenMuted)
			b := d.press(line, func(*press) skin { return skin{radius: 4} }, func() { d.choose(scene.Selection{Nodes: []string{a.From, a.To}}) })
			b.padX, b.padY, b.tip = 4, 2, "Pick the two, to change the reason"
			s.keys["absent "+a.From+" "+a.To] = b
			s.add(b)
		}
	}
}
