package study

import (
	"fmt"
	"maps"
	"math"
	"slices"
)

// Notes on a sheet have no names: edits say which by its place in the list.

// AddNote writes a note on a sheet, behind those that are there.
type AddNote struct {
	Rival string
	Note  Note
}

// Apply rounds the place to hundredths of a sheet unit.
func (e AddNote) Apply(s *Study) (*Study, error) {
	return onSheet(s, e.Rival, func(r *Rival) error {
		n := Note{e.Note.At.rounded(), e.Note.Text}
		r.Layout = &Layout{At: r.Layout.At, Notes: and(r.Layout.Notes, &n)}
		return nil
	})
}

// Label names the edit.
func (e AddNote) Label() string { return "Write a note" }

// ChangeNote puts another text into a note; its place stays.
type ChangeNote struct {
	Rival string
	Note  int
	Text  string
}

// Apply refuses a note that is not there.
func (e ChangeNote) Apply(s *Study) (*Study, error) {
	return onSheet(s, e.Rival, func(r *Rival) error {
		if err := r.hasNote(e.Note); err != nil {
			return err
		}
		n := *r.Layout.Notes[e.Note]
		n.Text = e.Text
		r.Layout = &Layout{At: r.Layout.At, Notes: with(r.Layout.Notes, e.Note, &n)}
		return nil
	})
}

// Label names the edit.
func (e ChangeNote) Label() string { return "Change a note" }

// MoveNotes puts notes at other places.
type MoveNotes struct {
	Rival string
	To    map[int]Point
}

// Apply rounds places to hundredths of a sheet unit.
func (e MoveNotes) Apply(s *Study) (*Study, error) {
	return onSheet(s, e.Rival, func(r *Rival) error {
		notes := r.Layout.Notes
		for _, i := range slices.Sorted(maps.Keys(e.To)) {
			if err := r.hasNote(i); err != nil {
				return err
			}
			n := *notes[i]
			n.At = e.To[i].rounded()
			notes = with(notes, i, &n)
		}
		r.Layout = &Layout{At: r.Layout.At, Notes: notes}
		return nil
	})
}

// Label names the edit.
func (e MoveNotes) Label() string {
	if len(e.To) == 1 {
		return "Move a note"
	}
	return "Move notes"
}

// Merge makes one step of two moves of the same notes.
func (e MoveNotes) Merge(next Edit) (Edit, bool) {
	n, ok := next.(MoveNotes)
	if !ok || n.Rival != e.Rival || !slices.Equal(slices.Sorted(maps.Keys(n.To)), slices.Sorted(maps.Keys(e.To))) {
		return nil, false
	}
	return n, true
}

// RemoveNotes takes notes off a sheet.
type RemoveNotes struct {
	Rival string
	Notes []int
}

// Apply refuses a note that is not there.
func (e RemoveNotes) Apply(s *Study) (*Study, error) {
	return onSheet(s, e.Rival, func(r *Rival) error {
		var left []*Note
		for _, i := range e.Notes {
			if err := r.hasNote(i); err != nil {
				return err
			}
		}
		for i, n := range r.Layout.Notes {
			if !slices.Contains(e.Notes, i) {
				left = append(left, n)
			}
		}
		r.Layout = &Layout{At: r.Layout.At, Notes: left}
		return nil
	})
}

// Label names the edit.
func (e RemoveNotes) Label() string {
	if len(e.Notes) == 1 {
		return "Remove a note"
	}
	return "Remove notes"
}

func (r *Rival) hasNote(at int) error {
	if at < 0 || at >= len(r.Layout.Notes) {
		return fmt.Errorf("there is no note %d on the sheet of “%s”", at+1, r.Name)
	}
	return nil
}

// rounded cuts a place to hundredths of a sheet unit, so that files stay short.
func (p Point) rounded() Point {
	return Point{math.Round(p.X*100) / 100, math.Round(p.Y*100) / 100}
}
