package model

import "testing"

func TestOutermostPlates(t *testing.T) {
	m := &Model{Plates: []*Plate{
		{Name: "field", Levels: make([]string, 4), Of: []int32{0, 1, 2, 3, 0, 1}},
		{Name: "farm", Levels: make([]string, 2), Of: []int32{0, 0, 1, 1, 0, 0}},
		{Name: "year", Levels: make([]string, 2), Of: []int32{0, 0, 0, 0, 1, 1}},
		{Name: "holding", Levels: make([]string, 2), Of: []int32{1, 1, 0, 0, 1, 1}}, // farm by another name
	}}
	got := m.Outermost()
	if len(got) != 2 || got[0] != 1 || got[1] != 2 {
		t.Errorf("outermost plates %v, want farm and year", got)
	}
}
