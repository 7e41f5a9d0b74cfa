package model

import (
	"math"
	"slices"
	"testing"
)

// Means within groups are those of the used rows, and stand beside the baseline
// that varies by the plate (SEMANTICS A6).
func TestGroupMeans(t *testing.T) {
	tab := traps()
	if m := build(t, inFarms(), withinFarms(), tab, Held); len(m.Laws[0].Within[0].Means) != 1 {
		t.Error("soil is the same throughout each farm, but has shares")
	}
	codes := tab.Column("soil").Codes
	codes[0] = (codes[0] + 1) % 3
	m := build(t, inFarms(), withinFarms(), tab, Held)
	at, _ := m.Name("mean_hedge_farm")
	if at < 0 {
		t.Fatal("there is no mean of hedge")
	}
	v := m.Variables[at]
	if v.MeanOf != "hedge" || m.Plates[v.Plate].Name != "farm" || v.Low != 0 || v.High != 180 {
		t.Errorf("the mean is %+v", v)
	}
	h, _ := m.Name("hedge")
	sums, rows := make([]float64, len(v.Values)), make([]float64, len(v.Values))
	for i, j := range m.Plates[v.Plate].Of {
		sums[j] += m.Variables[h].Values[i]
		rows[j]++
	}
	for j, got := range v.Values {
		if math.Abs(got-sums[j]/rows[j]) > 1e-12 {
			t.Errorf("%s: %g, not %g", m.Plates[v.Plate].Levels[j], got, sums[j]/rows[j])
		}
	}
	if slices.Contains(m.Given, v.ID) {
		t.Error("a mean is listed as given")
	}
	means := 0
	for _, term := range m.Laws[0].Terms {
		if term.Kind == GroupMean {
			means++
		}
	}
	if means != 3 || len(m.Laws[0].Within) != 1 || len(m.Laws[0].Within[0].Means) != 3 || m.Laws[0].Within[0].For != nil {
		t.Errorf("%d means among the terms; %+v", means, m.Laws[0].Within)
	}
}

// An exposure that never changes within a held group leaves nothing to compare.
func TestUnmovedWithinGroups(t *testing.T) {
	s, tab := inFarms(), traps()
	m := build(t, s, beesQuestion(), tab, Crude)
	farm := slices.IndexFunc(m.Plates, func(p *Plate) bool { return p.Name == "farm" })
	for i, j := range m.Plates[farm].Of {
		set(tab, "hedge", m.Rows.Index[i], float64(10*(j+1)))
	}
	_, problems := Build(s, "R", withinFarms(), tab, Held)
	p := find(problems, "within")
	if p == nil {
		t.Fatalf("no problem; there are %v", messages(problems))
	}
	if want := "hedge has one value throughout each farm in these data, so that nothing is left to compare within it."; p.Message != want {
		t.Errorf("says %q", p.Message)
	}
	if p.Repairs[0].Label != "Say that hedge has one value per farm" {
		t.Errorf("offers %q", p.Repairs[0].Label)
	}
}
