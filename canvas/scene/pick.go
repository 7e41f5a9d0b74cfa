package scene

import (
	"slices"

	"arrowroot/compile/study"
)

// only is the selection of one target.
func only(t Target) Selection {
	switch t.Kind {
	case OnNode, OnEdge:
		return Selection{Nodes: []string{t.Node}}
	case OnArrow:
		return Selection{Arrows: [][2]string{t.Pair}}
	case OnArc:
		return Selection{Arcs: [][2]string{t.Pair}}
	case OnPlate:
		return Selection{Plate: t.Plate}
	case OnNote:
		return Selection{Notes: []int{t.Note}}
	}
	return Selection{}
}

// covers reports whether a target is picked.
func (s Selection) covers(t Target) bool {
	switch t.Kind {
	case OnNode, OnEdge:
		return s.HasNode(t.Node)
	case OnArrow:
		return s.HasArrow(t.Pair[0], t.Pair[1])
	case OnArc:
		return s.HasArc(t.Pair[0], t.Pair[1])
	case OnPlate:
		return s.Plate == t.Plate
	case OnNote:
		return s.HasNote(t.Note)
	}
	return false
}

// toggled adds a target to a selection or takes it out.
func (s Selection) toggled(t Target) Selection {
	switch t.Kind {
	case OnNode, OnEdge:
		s.Nodes = toggle(s.Nodes, t.Node)
	case OnArrow:
		s.Arrows = toggle(s.Arrows, t.Pair)
	case OnArc:
		s.Arcs = toggle(s.Arcs, t.Pair)
	case OnPlate:
		if s.Plate == t.Plate {
			s.Plate = ""
		} else {
			s.Plate = t.Plate
		}
	case OnNote:
		s.Notes = toggle(s.Notes, t.Note)
	}
	return s
}

func toggle[T comparable](set []T, v T) []T {
	set = slices.Clone(set)
	if i := slices.Index(set, v); i >= 0 {
		return slices.Delete(set, i, i+1)
	}
	return append(set, v)
}

// Kept is the part of a selection that is still on the sheet.
func (s Selection) Kept(st *study.Study, r *study.Rival) Selection {
	if st == nil || r == nil || r.Diagram == nil {
		return Selection{}
	}
	var kept Selection
	for _, id := range s.Nodes {
		if r.Diagram.Node(id) != nil {
			kept.Nodes = append(kept.Nodes, id)
		}
	}
	for _, p := range s.Arrows {
		if r.Diagram.Arrow(p[0], p[1]) != nil {
			kept.Arrows = append(kept.Arrows, p)
		}
	}
	for _, p := range s.Arcs {
		if r.Diagram.Arc(p[0], p[1]) != nil {
			kept.Arcs = append(kept.Arcs, p)
		}
	}
	if st.Plate(s.Plate) != nil {
		kept.Plate = s.Plate
	}
	for _, i := range s.Notes {
		if r.Layout != nil && i < len(r.Layout.Notes) {
			kept.Notes = append(kept.Notes, i)
		}
	}
	return kept
}

// Equal reports whether two selections hold the same things in the same order.
func (s Selection) Equal(t Selection) bool {
	return slices.Equal(s.Nodes, t.Nodes) && slices.Equal(s.Arrows, t.Arrows) && slices.Equal(s.Arcs, t.Arcs) && s.Plate == t.Plate && slices.Equal(s.Notes, t.Notes)
}

// remove is the edit that deletes a selection from a rival; nil if it is
// empty. Variables stay in the ledger.
func remove(r *study.Rival, s Selection) study.Edit {
	if r == nil {
		return nil
	}
	var edits []study.Edit
	gone := func(pair [2]string) bool { return s.HasNode(pair[0]) || s.HasNode(pair[1]) }
	for _, p := range s.Arrows {
		if !gone(p) {
			edits = append(edits, study.RemoveArrow{Rival: r.Name, From: p[0], To: p[1]})
		}
	}
	for _, p := range s.Arcs {
		if !gone(p) {
			edits = append(edits, study.RemoveArc{Rival: r.Name, A: p[0], B: p[1]})
		}
	}
	if len(s.Nodes) > 0 {
		edits = append(edits, study.RemoveNodes{Rival: r.Name, Variables: s.Nodes})
	}
	if s.Plate != "" {
		edits = append(edits, study.RemovePlate{Name: s.Plate})
	}
	if len(s.Notes) > 0 {
		edits = append(edits, study.RemoveNotes{Rival: r.Name, Notes: s.Notes})
	}
	switch len(edits) {
	case 0:
		return nil
	case 1:
		return edits[0]
	}
	return study.Several{Name: "Delete the selection", Edits: edits}
}
