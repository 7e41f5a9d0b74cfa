package study

import (
	"slices"
	"strings"
	"testing"
)

func TestArrowTable(t *testing.T) {
	s := &Study{
		Plates:    []*Plate{{Name: "farm"}},
		Variables: []*Variable{{ID: "soil", Scale: Category, Tier: 1}, {ID: "hedge", Tier: 2}, {ID: "bees", Tier: 2}, {ID: "temp"}},
		Rivals: []*Rival{{Name: "r", Layout: &Layout{}, Diagram: &Diagram{
			Nodes: []*Node{{Variable: "soil"}, {Variable: "hedge"}, {Variable: "bees"}, {Variable: "temp"}},
			Arrows: []*Arrow{
				{From: "soil", To: "hedge", Why: "banks, on heavy soil"},
				{From: "hedge", To: "bees", With: []string{"temp"}, VariesBy: []string{"farm"}, References: []string{"Bell 1990", "Crow 2001"}},
				{From: "temp", To: "bees", Form: Offset},
			},
			Arcs:   []*Arc{{A: "hedge", B: "temp", Plates: []string{"farm"}, Why: "slope"}},
			Absent: []*Absent{{From: "soil", To: "bees", Why: "they nest in wood", References: []string{"Crow 2001"}}},
		}}},
	}
	if err := Check(s); err != nil {
		t.Fatal(err)
	}
	want := []string{
		"from|to|kind|form|varies by|why|references|tier from|tier to",
		"soil|hedge|arrow|steps||banks, on heavy soil||1|2",
		"hedge|bees|arrow|slope × temp|farm||Bell 1990; Crow 2001|2|2",
		"temp|bees|arrow|offset|||||2",
		"hedge|temp|common cause||farm|slope||2|",
		"soil|bees|no arrow|||they nest in wood|Crow 2001|1|2",
	}
	var got []string
	for _, row := range s.ArrowTable("r") {
		got = append(got, strings.Join(row, "|"))
	}
	if !slices.Equal(got, want) {
		t.Errorf("the table is\n%s", strings.Join(got, "\n"))
	}
	if s.ArrowTable("none") != nil {
		t.Error("a rival that is not there has a table")
	}
}
