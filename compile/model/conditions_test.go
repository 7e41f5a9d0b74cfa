package model

import (
	"math"
	"slices"
	"testing"

	"arrowroot/compile/study"
)

// The subset is told from the rows' own values, without becoming part of the
// fit: a variable that no law reads, and whose entries are missing here and
// there, loses no row of the fit.
func TestSubsetLeavesTheFitAlone(t *testing.T) {
	s, tab, q := hedgerows(), traps(), beesQuestion()
	s.Variables = append(s.Variables, &study.Variable{ID: "slope", Unit: "°", Scale: study.Real, Column: "slope"})
	d := s.Rivals[0].Diagram
	d.Nodes = append(d.Nodes, &study.Node{Variable: "slope"})
	slope := make([]float64, tab.Rows)
	for i := range slope {
		slope[i] = float64(i % 10)
	}
	slope[5], slope[6], slope[3] = math.NaN(), math.NaN(), math.NaN() // row 3 is lost to bees anyway
	numbers(tab, "slope", slope...)
	plain := build(t, s, q, tab, Full)
	q.Where = []study.Condition{{Variable: "slope", Low: bound(7)}, {Variable: "soil", Words: []string{"clay", "sand"}}}
	for _, kind := range []Kind{Full, Held, Crude} {
		m := build(t, s, q, tab, kind)
		if kind == Full && m.Fingerprint() != plain.Fingerprint() {
			t.Error("the subset changes the fit")
		}
		if m.Asked == nil || m.Asked.Words != "slope is at least 7 ° and soil is clay or sand" {
			t.Fatalf("%+v", m.Asked)
		}
		if want := []Loss{{"slope", 2}}; !slices.Equal(m.Asked.Lacking, want) {
			t.Errorf("lacking %v, want %v", m.Asked.Lacking, want)
		}
		want := 0
		for i, row := range m.Rows.Index {
			soil := tab.Column("soil").Codes[row]
			in := slope[row] >= 7 && soil > 0
			if in {
				want++
			}
			if slices.Contains(m.Asked.Rows, i) != in {
				t.Errorf("row %d", row)
			}
		}
		if len(m.Asked.Rows) != want || want == 0 {
			t.Errorf("%d rows, want %d", len(m.Asked.Rows), want)
		}
	}
	q.Where = []study.Condition{{Variable: "hedge", High: bound(90)}}
	_, refusing := Apart(Problems(s, "R", q, tab))
	if m := build(t, s, q, tab, Full); len(refusing) > 0 || m.Asked == nil {
		t.Error("rows can be chosen by the exposure they had")
	}
}

// A row filter takes rows away before anything is read from them: they lose
// nothing, and what is wrong in them is wrong nowhere.
func TestRowFilter(t *testing.T) {
	s, tab, q := hedgerows(), traps(), beesQuestion()
	tab.Column("bees").Numbers[7] = -4 // impossible, on clay
	s.Data = []*study.Data{{Name: "traps", Keep: []study.Condition{{Variable: "soil", Words: []string{"chalk", "sand"}}, {Variable: "temp", Low: bound(12)}}}}
	kept, lost := 0, 0
	for i := range tab.Rows {
		if tab.Column("soil").Codes[i] != 1 && tab.Column("temp").Numbers[i] >= 12 {
			kept++
			if math.IsNaN(tab.Column("bees").Numbers[i]) {
				lost++
			}
		}
	}
	m, problems := Build(s, "R", q, tab, Full)
	if m == nil || Stops(problems) {
		t.Fatal(messages(problems))
	}
	if r := m.Rows; r.Read != 60 || r.Filtered != 60-kept || r.Used != kept-lost {
		t.Errorf("%d of %d rows, %d outside the filter; want %d used and %d outside", r.Used, r.Read, r.Filtered, kept-lost, 60-kept)
	}
	for _, l := range m.Rows.Lost {
		if l.Rows != lost {
			t.Errorf("%s lost %d, want %d", l.Variable, l.Rows, lost)
		}
	}
	p := find(problems, "row-filter")
	if p == nil || p.Message != "Only rows where soil is chalk or sand are used, and soil is on the sheet: every number is of such rows." {
		t.Errorf("%+v", p)
	}
	for _, c := range []struct {
		keep study.Condition
		says string
	}{
		{study.Condition{Variable: "flowers", Low: bound(0.1)}, "Only rows where flowers is at least 0.1 are used, and flowers is on the sheet: every number is of such rows, and since flowers comes after hedge, choosing rows by it can make variables go together that have nothing to do with each other."},
		{study.Condition{Variable: "bees", Low: bound(1)}, "Only rows where bees is at least 1 are used, and bees is on the sheet: every number is of such rows, and choosing rows by bees itself can bend what is fitted to them."},
		{study.Condition{Variable: "soil", Words: []string{"peat"}}, "The row filter of traps cannot be read: soil has no level “peat”; it has “chalk”, “clay” and “sand”."},
		{study.Condition{Variable: "temp", Low: bound(99)}, "The row filter leaves none of the 60 rows of traps: in no row temp is at least 99 °C."},
		{study.Condition{Variable: "attitude", Low: bound(0)}, "The row filter of traps cannot be read: farmer's attitude was not measured, so no law can read it."},
	} {
		s.Data[0].Keep = []study.Condition{c.keep}
		p := find(Problems(s, "R", q, tab), "row-filter")
		if p == nil || p.Message != c.says {
			t.Errorf("%+v\nwant %s", p, c.says)
			continue
		}
		if after, err := p.Repairs[0].Edit.Apply(s); err != nil || len(after.Data[0].Keep) > 0 {
			t.Errorf("the repair leaves the filter (%v)", err)
		}
	}
}
