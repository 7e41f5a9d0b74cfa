package study

import (
	"fmt"
	"slices"
)

// Dismiss sets a finding on a rival aside. A reason that is there is replaced.
type Dismiss struct{ Dismissal Dismissal }

// Apply refuses an unknown rival and an empty key.
func (e Dismiss) Apply(s *Study) (*Study, error) {
	d := e.Dismissal
	return changed(s, func(s *Study) {
		if i := slices.IndexFunc(s.Dismissed, byFinding(d.Rival, d.Key)); i >= 0 {
			s.Dismissed = with(s.Dismissed, i, &d)
		} else {
			s.Dismissed = and(s.Dismissed, &d)
		}
	})
}

// Label names the edit.
func (e Dismiss) Label() string { return "Set a finding on “" + e.Dismissal.Rival + "” aside" }

// Restore brings a finding back that was set aside.
type Restore struct{ Rival, Key string }

// Apply refuses a finding that was not set aside.
func (e Restore) Apply(s *Study) (*Study, error) {
	if !slices.ContainsFunc(s.Dismissed, byFinding(e.Rival, e.Key)) {
		return nil, fmt.Errorf("the finding “%s” of “%s” was not set aside", e.Key, e.Rival)
	}
	return changed(s, func(s *Study) { s.Dismissed = without(s.Dismissed, byFinding(e.Rival, e.Key)) })
}

// Label names the edit.
func (e Restore) Label() string { return "Bring a finding on “" + e.Rival + "” back" }

// Dismissal finds what was said when a finding was set aside; nil if it was not.
func (s *Study) Dismissal(rival, key string) *Dismissal {
	return find(s.Dismissed, byFinding(rival, key))
}

func byFinding(rival, key string) func(*Dismissal) bool {
	return func(d *Dismissal) bool { return d.Rival == rival && d.Key == key }
}
