package model

import (
	"fmt"
	"slices"
)

// Without gives the model with some entries of a variable left unexplained, by
// their places at its own level: its law has no factor for them, and nothing
// else changes, priors that were made from the data included. That is what a
// prediction of these entries is made from.
func (m *Model) Without(variable int, entries []int32) (*Model, error) {
	v := m.Variables[variable]
	if m.Unknowns(variable) >= 0 {
		return nil, fmt.Errorf("missing entries of %s are unknowns of the model, among which none can be left out", v.ID)
	}
	bare := *v
	bare.Missing = slices.Concat(v.Missing, entries)
	slices.Sort(bare.Missing)
	bare.Missing = slices.Compact(bare.Missing)
	if len(bare.Missing) >= len(v.Values) {
		return nil, fmt.Errorf("no entry of %s would be left to learn from", v.ID)
	}
	out := *m
	out.Variables = slices.Clone(m.Variables)
	out.Variables[variable] = &bare
	return &out, nil
}
