package study

import "testing"

func TestNotesStayWhereTheyAre(t *testing.T) {
	s := mustRead(t, example(t))
	s = apply(t, s, AddNote{Rival: nest, Note: Note{Point{1.234, 5}, "b"}}, AddNote{Rival: nest, Note: Note{Point{}, "c"}})
	diagram := s.Rival(nest).Diagram
	next := apply(t, s, MoveNotes{Rival: nest, To: map[int]Point{1: {7, 8}}}, ChangeNote{Rival: nest, Note: 2, Text: "d"},
		MoveNodes{Rival: nest, To: map[string]Point{"soil": {0, 0}}}, RemoveNotes{Rival: nest, Notes: []int{0}})
	notes := next.Rival(nest).Layout.Notes
	if len(notes) != 2 || *notes[0] != (Note{Point{7, 8}, "b"}) || *notes[1] != (Note{Point{}, "d"}) {
		t.Errorf("notes %v %v", *notes[0], *notes[1])
	}
	if *s.Rival(nest).Layout.Notes[1] != (Note{Point{1.23, 5}, "b"}) {
		t.Error("the study before has changed")
	}
	if next.Rival(nest).Diagram != diagram {
		t.Error("a note must leave the diagram alone, or a fit would go stale by it")
	}
	for _, e := range []Edit{
		AddNote{Rival: nest, Note: Note{Text: " \n"}}, ChangeNote{Rival: nest, Note: 3, Text: "x"}, ChangeNote{Rival: nest, Note: 0},
		MoveNotes{Rival: nest, To: map[int]Point{-1: {}}}, RemoveNotes{Rival: nest, Notes: []int{9}},
	} {
		if _, err := e.Apply(s); err == nil {
			t.Errorf("%T is not refused", e)
		}
	}
}
