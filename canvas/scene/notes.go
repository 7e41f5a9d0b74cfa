package scene

import (
	"maps"
	"slices"
	"strings"

	"arrowroot/canvas/draw"
	"arrowroot/compile/study"
)

// Notes are words on the sheet that belong to no variable: they stand beside a
// thin rule, as in a margin.

// Sizes of a note at zoom 1, in dips.
const (
	noteSize  = 11.5
	noteLeast = 11.0 // its text is never smaller
	noteWidth = 208.0
	noteInset = 10.0 // of the text from the rule
	noteLines = 60
)

// A slip is a note as it stands on the sheet.
type slip struct {
	note  int // its place in the layout
	lines []string
	text  float64 // size
	box   draw.Rect
}

// notePlaces gives where the notes of the rival stand for now.
func (in *Input) notePlaces() map[int]study.Point {
	if in.Rival == nil || in.Rival.Layout == nil {
		return nil
	}
	at := make(map[int]study.Point, len(in.Rival.Layout.Notes))
	for i, n := range in.Rival.Layout.Notes {
		at[i] = n.At
		if p, moved := in.Preview.MovedNotes[i]; moved {
			at[i] = p
		}
	}
	return at
}

// slips places the notes.
func (b *builder) slips() {
	places := b.in.notePlaces()
	for _, i := range slices.Sorted(maps.Keys(places)) {
		s := &slip{note: i, text: max(noteSize*b.zoom, noteLeast)}
		scale := s.text / noteSize // at a low zoom the words need more of the sheet
		wide := 0.0
		for _, part := range strings.Split(b.in.Rival.Layout.Notes[i].Text, "\n") {
			lines := draw.Wrap(part, draw.Regular, s.text, (noteWidth-noteInset)*scale, noteLines)
			if len(lines) == 0 {
				lines = []string{""}
			}
			s.lines = append(s.lines, lines...)
		}
		for _, line := range s.lines {
			wide = max(wide, draw.Measure(line, draw.Regular, s.text))
		}
		at := b.in.View.Out(places[i])
		s.box = draw.Rect{X: at.X, Y: at.Y, W: wide + (noteInset+4)*scale, H: s.lineHeight()*float64(len(s.lines)) + 4*scale}
		b.notes = append(b.notes, s)
	}
}

func (s *slip) lineHeight() float64 { return 1.35 * s.text }

// drawNotes draws the notes on a soft ground, so that lines behind them leave
// them readable.
func (b *builder) drawNotes() {
	p := &b.in.Palette
	for _, s := range b.notes {
		ground, rule, width := draw.Alpha(p.Sheet, 0.88), p.Border, 1.5
		switch {
		case b.in.Selected.HasNote(s.note):
			ground, rule, width = mix(p.Sheet, p.Action, 0.14), p.Action, 2.5
		case b.in.Hover.Kind == OnNote && b.in.Hover.Note == s.note:
			rule = p.Ink
		}
		b.list.Add(
			&draw.Shape{Path: draw.RoundRect(s.box, 2), Fill: ground},
			&draw.Shape{Path: draw.Polyline(draw.Point{X: s.box.X + 1, Y: s.box.Y}, draw.Point{X: s.box.X + 1, Y: s.box.Y + s.box.H}), Stroke: rule, Width: width, Crisp: true},
		)
		scale := s.text / noteSize
		for i, line := range s.lines {
			at := draw.Point{X: s.box.X + noteInset*scale, Y: s.box.Y + 2*scale + s.lineHeight()*(float64(i)+0.5) + draw.Drop(s.text)}
			b.list.Add(&draw.Text{At: at, Text: line, Size: s.text, Color: p.Ink})
		}
	}
}

// NoteRect is where a note stands, in dips of the widget.
func (m *Map) NoteRect(note int) (r draw.Rect, ok bool) {
	for _, s := range m.notes {
		if s.note == note {
			return s.box, true
		}
	}
	return r, false
}

// NotesWithin gives the notes whose middle lies in a rectangle of the widget.
func (m *Map) NotesWithin(r draw.Rect) []int {
	var notes []int
	for _, s := range m.notes {
		if r.Contains(s.box.Centre()) {
			notes = append(notes, s.note)
		}
	}
	return notes
}

// NoteNaming opens a note of the rival for its words; nil if it is not there.
func NoteNaming(in *Input, note int) *Naming {
	if in.Rival == nil || in.Rival.Layout == nil || note < 0 || note >= len(in.Rival.Layout.Notes) {
		return nil
	}
	n := in.Rival.Layout.Notes[note]
	return &Naming{At: n.At, Note: true, Which: note, Was: n.Text}
}

// write is the edit that typed words of a note come to; nil if nothing changes.
func (n Naming) write(rival, text string) study.Edit {
	text = strings.TrimSpace(text)
	switch {
	case text == n.Was:
		return nil
	case n.Which < 0:
		return study.AddNote{Rival: rival, Note: study.Note{At: n.At, Text: text}}
	case text == "":
		return study.RemoveNotes{Rival: rival, Notes: []int{n.Which}}
	}
	return study.ChangeNote{Rival: rival, Note: n.Which, Text: text}
}
