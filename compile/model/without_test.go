package model

import (
	"slices"
	"testing"

	"arrowroot/compile/study"
)

// Entries that are left out count as missing ones; the model itself stays as it
// was, and one whose missing entries are unknowns refuses.
func TestWithout(t *testing.T) {
	m := &Model{Variables: []*Variable{{ID: "x", Scale: study.Real, Values: []float64{1, 2, 3, 4}, Missing: []int32{2}}}}
	out, err := m.Without(0, []int32{3, 0})
	if err != nil {
		t.Fatal(err)
	}
	if got := out.Variables[0].Missing; !slices.Equal(got, []int32{0, 2, 3}) {
		t.Errorf("missing %v", got)
	}
	if !slices.Equal(m.Variables[0].Missing, []int32{2}) {
		t.Error("the model changed")
	}
	if _, err := m.Without(0, []int32{0, 1, 3}); err == nil {
		t.Error("nothing is left to learn from")
	}
	m.Parameters = []*Parameter{{Name: "missing_x", Shape: Unrecorded, Size: 1}}
	if _, err := m.Without(0, []int32{0}); err == nil {
		t.Error("unknowns were left out")
	}
}
