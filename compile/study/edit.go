package study

import (
	"fmt"
	"reflect"
	"slices"
)

// An Edit is one change, as a value. Apply never changes its argument: it
// gives a new study that shares every part the edit did not touch, the same
// pointer if nothing changed, or an error that says why not. There is a
// file for each thing that can be edited: edit_variable.go, edit_arrow.go, ….
type Edit interface {
	Apply(*Study) (*Study, error)
	Label() string // for the Edit menu: "Draw hedge → bees"
}

// A Merger is an edit that can take in the one that follows it, so that both
// are one step of undo.
type Merger interface {
	Edit
	Merge(next Edit) (Edit, bool)
}

// Several is a row of edits that are one step.
type Several struct {
	Name  string
	Edits []Edit
}

// Apply makes all edits or none.
func (e Several) Apply(s *Study) (*Study, error) {
	for _, edit := range e.Edits {
		next, err := edit.Apply(s)
		if err != nil {
			return nil, err
		}
		s = next
	}
	return s, nil
}

// Label is the name of the whole.
func (e Several) Label() string {
	if e.Name == "" && len(e.Edits) > 0 {
		return e.Edits[0].Label()
	}
	return e.Name
}

// SetTitle names the study.
type SetTitle struct{ Title string }

// Apply changes the title alone.
func (e SetTitle) Apply(s *Study) (*Study, error) {
	return changed(s, func(s *Study) { s.Title = e.Title })
}

// Label names the edit.
func (e SetTitle) Label() string { return "Change the title" }

// SetNote changes the note on the study.
type SetNote struct{ Note string }

// Apply changes the note alone.
func (e SetNote) Apply(s *Study) (*Study, error) {
	return changed(s, func(s *Study) { s.Note = e.Note })
}

// Label names the edit.
func (e SetNote) Label() string { return "Change the note" }

// changed applies a change to a copy of the study and checks the outcome. If
// the copy ends up equal, the original is returned.
func changed(s *Study, change func(*Study)) (*Study, error) {
	next := *s
	change(&next)
	if reflect.DeepEqual(s, &next) {
		return s, nil
	}
	return checked(&next)
}

// with gives a copy of parts in which the part at i is another.
func with[T any](parts []T, i int, part T) []T {
	next := slices.Clone(parts)
	next[i] = part
	return next
}

// without gives a copy of parts without those that match; nil if none is left.
func without[T any](parts []T, match func(T) bool) []T {
	var next []T
	for _, p := range parts {
		if !match(p) {
			next = append(next, p)
		}
	}
	return next
}

// and gives a copy of parts with one more.
func and[T any](parts []T, part T) []T {
	return append(slices.Clip(parts), part)
}

// mapped gives parts with each replaced by change of it; parts that change
// returns as they were keep their pointers, and if all do, the slice is kept.
func mapped[T any](parts []*T, change func(*T) *T) []*T {
	next := parts
	for i, p := range parts {
		if q := change(p); q != p {
			if &next[0] == &parts[0] {
				next = slices.Clone(parts)
			}
			next[i] = q
		}
	}
	return next
}

func taken(kind, name string) error {
	return fmt.Errorf("there is a %s named “%s” already", kind, name)
}

func noRival(name string) error { return fmt.Errorf("there is no rival “%s”", name) }

func noVariable(id string) error { return fmt.Errorf("there is no variable %s", id) }

// onSheet applies a change to a copy of one rival. The change gets copies of
// the rival and of its diagram; slices in them must be replaced, not changed.
func onSheet(s *Study, rival string, change func(*Rival) error) (*Study, error) {
	i := slices.IndexFunc(s.Rivals, byRivalName(rival))
	if i < 0 {
		return nil, noRival(rival)
	}
	r, d := *s.Rivals[i], *s.Rivals[i].Diagram
	r.Diagram = &d
	if err := change(&r); err != nil {
		return nil, err
	}
	if reflect.DeepEqual(&d, s.Rivals[i].Diagram) {
		r.Diagram = s.Rivals[i].Diagram
	}
	if reflect.DeepEqual(r.Layout, s.Rivals[i].Layout) {
		r.Layout = s.Rivals[i].Layout
	}
	return changed(s, func(s *Study) { s.Rivals = with(s.Rivals, i, &r) })
}
