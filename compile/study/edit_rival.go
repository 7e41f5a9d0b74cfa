package study

import "slices"

// AddRival adds an explanation.
type AddRival struct{ Rival Rival }

// Apply refuses a name that is taken. A rival without layout or diagram gets
// an empty one.
func (e AddRival) Apply(s *Study) (*Study, error) {
	if s.Rival(e.Rival.Name) != nil {
		return nil, taken("rival", e.Rival.Name)
	}
	r := e.Rival
	if r.Layout == nil {
		r.Layout = &Layout{}
	}
	if r.Diagram == nil {
		r.Diagram = &Diagram{}
	}
	return changed(s, func(s *Study) { s.Rivals = and(s.Rivals, &r) })
}

// Label names the edit.
func (e AddRival) Label() string { return "Add the rival “" + e.Rival.Name + "”" }

// CopyRival adds a copy of an explanation under another name, behind it.
type CopyRival struct {
	From, Name string
}

// Apply refuses a name that is taken. Both rivals share diagram and layout
// until one of them changes. What was set aside of the one is of the other.
func (e CopyRival) Apply(s *Study) (*Study, error) {
	i := slices.IndexFunc(s.Rivals, byRivalName(e.From))
	if i < 0 {
		return nil, noRival(e.From)
	}
	if s.Rival(e.Name) != nil {
		return nil, taken("rival", e.Name)
	}
	r := *s.Rivals[i]
	r.Name = e.Name
	return changed(s, func(s *Study) {
		s.Rivals = slices.Insert(slices.Clone(s.Rivals), i+1, &r)
		for _, d := range s.Dismissed {
			if d.Rival == e.From {
				s.Dismissed = and(s.Dismissed, &Dismissal{Rival: e.Name, Key: d.Key, Why: d.Why})
			}
		}
	})
}

// Label names the edit.
func (e CopyRival) Label() string { return "Copy the rival “" + e.From + "”" }

// RenameRival gives an explanation another name.
type RenameRival struct {
	Old, New string
}

// Apply refuses a name that is taken.
func (e RenameRival) Apply(s *Study) (*Study, error) {
	if e.Old != e.New && s.Rival(e.New) != nil {
		return nil, taken("rival", e.New)
	}
	i := slices.IndexFunc(s.Rivals, byRivalName(e.Old))
	if i < 0 {
		return nil, noRival(e.Old)
	}
	r := *s.Rivals[i]
	r.Name = e.New
	return changed(s, func(s *Study) {
		s.Rivals = with(s.Rivals, i, &r)
		s.Dismissed = mapped(s.Dismissed, func(d *Dismissal) *Dismissal {
			to := *d
			to.Rival = e.New
			return kept(d, to, d.Rival != e.Old)
		})
	})
}

// Label names the edit.
func (e RenameRival) Label() string { return "Rename the rival “" + e.Old + "”" }

// NoteRival changes the note on an explanation.
type NoteRival struct {
	Rival, Note string
}

// Apply changes the note alone.
func (e NoteRival) Apply(s *Study) (*Study, error) {
	return onSheet(s, e.Rival, func(r *Rival) error {
		r.Note = e.Note
		return nil
	})
}

// Label names the edit.
func (e NoteRival) Label() string { return "Change the note on “" + e.Rival + "”" }

// RemoveRival removes an explanation.
type RemoveRival struct{ Name string }

// Apply refuses an unknown rival.
func (e RemoveRival) Apply(s *Study) (*Study, error) {
	if s.Rival(e.Name) == nil {
		return nil, noRival(e.Name)
	}
	return changed(s, func(s *Study) {
		s.Rivals = without(s.Rivals, byRivalName(e.Name))
		s.Dismissed = without(s.Dismissed, func(d *Dismissal) bool { return d.Rival == e.Name })
	})
}

// Label names the edit.
func (e RemoveRival) Label() string { return "Delete the rival “" + e.Name + "”" }
