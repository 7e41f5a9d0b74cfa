package table

import (
	"fmt"
	"math"
	"slices"
	"strings"
	"testing"
)

// column reads one column from entries joined by spaces.
func column(t testing.TB, name, entries string) *Column {
	t.Helper()
	var b strings.Builder
	fmt.Fprintf(&b, "%s;other\n", name)
	for _, e := range strings.Fields(entries) {
		fmt.Fprintf(&b, "%s;1\n", strings.ReplaceAll(e, "_", " "))
	}
	table, err := Read("t", strings.NewReader(b.String()), Options{Separator: ';', Decimal: '.'})
	if err != nil {
		t.Fatal(err)
	}
	return table.Columns[0]
}

func TestPropose(t *testing.T) {
	ratings := strings.Repeat("1 2 3 4 5 ", 4)
	for _, c := range []struct{ name, entries, want string }{
		{"sick", "0 1 1 0", "binary: 0 and 1"},
		{"sick", "yes no NA yes", "binary no, yes: two words, “no” and “yes”"},
		{"sick", "TRUE FALSE TRUE", "binary FALSE, TRUE: two words, “FALSE” and “TRUE”"},
		{"arm", "treated control treated", "binary control, treated: two words, “control” and “treated”"},
		{"test", "+ - + +", "binary -, +: two words, “-” and “+”"},
		{"sex", "m f", "binary f, m: two words, “f” and “m”"},
		{"bees", "0 3 87 NA", "count: whole numbers from 0 to 87"},
		{"group", "1 2 2 1", "count: 1 and 2: a count, or a code for two groups"},
		{"rating", ratings, "count: whole numbers from 1 to 5: a count, or steps of an ordered scale"},
		{"year", "1999 2004 2010", "real: whole numbers from 1999 to 2010, perhaps years"},
		{"mass", "4200 3900 5100", "positive: numbers from 3900 to 5100"},
		{"share", "0.2 0.31 0.9", "proportion: numbers from 0.2 to 0.9"},
		{"share", "0 0.31 1 0", "proportion: numbers from 0 to 1; 2 entries are exactly 0, 1 entry is exactly 1"},
		{"flower_pct", "10 55 30", "proportion %: percent from 10 to 55"},
		{"flower percent", "0 55.5 30", "proportion %: percent from 0 to 55.5; 1 entry is exactly 0"},
		{"flowers", "10% 55% 100%", "proportion %: percent from 10 to 100; 1 entry is exactly 100"},
		{"flower_pct", "0.1 0.5 0.3", "proportion: numbers from 0.1 to 0.5"},
		{"flower_pct", "10 155 30", "count: whole numbers from 10 to 155"},
		{"impact", "10 55 30", "count: whole numbers from 10 to 55"},
		{"rain", "0.0 2.5 0.0", "real: numbers from 0 to 2.5; 2 entries are exactly 0 would not suit a positive scale"},
		{"hedge", "0.5 2.5 180", "positive: numbers from 0.5 to 180"},
		{"temp", "-3.5 20", "real: numbers from −3.5 to 20"},
		{"same", "7 7 7", "positive: always 7"},
		{"gone", "NA NA NA", "real: no entries"},
		{"soil", "sand clay loam clay", "category clay, loam, sand: 3 different words"},
		{"dose", "high low medium", "ordered low, medium, high: words in an order, low < medium < high"},
		{"pain", "Severe Mild None Moderate", "ordered None, Mild, Moderate, Severe: words in an order, None < Mild < Moderate < Severe"},
		{"answer", "agree strongly_disagree neutral", "ordered strongly disagree, neutral, agree: words in an order, strongly disagree < neutral < agree"},
		{"age", "45-54 9-17 18-44", "ordered 9-17, 18-44, 45-54: words that begin with numbers, 9-17 … 45-54"},
		{"day", "2024-05-01 2024-06-11 2024-05-01 2024-07-02", "category 2024-05-01, 2024-06-11, 2024-07-02: 3 different dates; a trend needs a column of days or years as numbers"},
		{"site", "007 012 007 101", "category 007, 012, 101: 3 different words"},
		{"farm", strings.Repeat("a b c d e f g h i j k l m n ", 2), "category a, b, c, d, e, f, g, h, i, j, k, l, m, n: 14 different words, perhaps the names of groups"},
	} {
		p := Propose(column(t, c.name, c.entries))
		got := p.Scale
		if p.Percent {
			got += " %"
		}
		if p.Levels != nil {
			got += " " + strings.Join(p.Levels, ", ")
		}
		if got += ": " + p.Words; got != c.want {
			t.Errorf("%s (%s)\ngives %s\nwant  %s", c.name, c.entries, got, c.want)
		}
	}
}

// Expected values by hand from definition 7 of Hyndman & Fan (1996).
func TestQuantiles(t *testing.T) {
	nan := math.NaN()
	for _, c := range []struct {
		values []float64
		n      int
		want   []float64
	}{
		{[]float64{4, nan, 0, 2}, 2, []float64{1, 3}},
		{[]float64{4, nan, 0, 2}, 1, []float64{2}},
		{[]float64{5}, 3, []float64{5, 5, 5}},
		{[]float64{nan}, 3, nil},
		{[]float64{1}, 0, nil},
		{[]float64{math.Inf(1), 1, math.Inf(1)}, 2, []float64{math.Inf(1), math.Inf(1)}},
	} {
		if got := Quantiles(c.values, c.n); !slices.Equal(got, c.want) {
			t.Errorf("%d quantiles of %v: %v, want %v", c.n, c.values, got, c.want)
		}
	}
}
