package model

import (
	"fmt"
	"math"
	"math/rand/v2"
	"strings"
	"testing"

	"arrowroot/compile/study"
	"arrowroot/compile/table"
)

// Studies and tables made by hand for tests; all facts in them are invented.

// hedgerows is a study of hedges and wild bees on farms.
func hedgerows() *study.Study {
	return sheet(
		[]*study.Variable{
			{ID: "hedge", Label: "hedge density", Unit: "m/ha", Scale: study.Real, Column: "hedge", Range: &study.Range{Low: 0, High: 180}},
			{ID: "bees", Label: "bees per trap", Scale: study.Count, Column: "bees", Range: &study.Range{Low: 0, High: 120}},
			{ID: "flowers", Scale: study.Proportion, Column: "flowers", Range: &study.Range{Low: 0, High: 0.6}},
			{ID: "pesticide", Unit: "units", Scale: study.Real, Column: "pesticide", Range: &study.Range{Low: 0, High: 10}},
			{ID: "soil", Scale: study.Category, Levels: []string{"chalk", "clay", "sand"}, Column: "soil"},
			{ID: "temp", Unit: "°C", Scale: study.Real, Column: "temp", Range: &study.Range{Low: 10, High: 26}},
			{ID: "hours", Unit: "h", Scale: study.Positive, Column: "hours", Range: &study.Range{Low: 2, High: 10}},
			{ID: "arable", Scale: study.Proportion, Column: "arable", Range: &study.Range{Low: 0, High: 1}},
			{ID: "attitude", Label: "farmer's attitude", Scale: study.Real, Unmeasured: true},
		},
		"arable -> hedge; arable -> pesticide; pesticide -> bees; soil -> hedge; soil -> flowers; attitude -> hedge; attitude -> pesticide; "+
			"hedge -> flowers; flowers -> bees; hedge -> bees; temp -> bees; hours -> bees offset",
		map[string]*study.Law{"bees": {VariesBy: []string{"farm"}}},
	)
}

// sheet makes a study with one rival, "R", and a plate "farm"; arrows are
// "a -> b form", nodes are all variables.
func sheet(variables []*study.Variable, arrows string, laws map[string]*study.Law) *study.Study {
	d := &study.Diagram{}
	for _, v := range variables {
		d.Nodes = append(d.Nodes, &study.Node{Variable: v.ID, Law: laws[v.ID]})
	}
	for _, line := range strings.Split(arrows, ";") {
		f := strings.Fields(line)
		if len(f) < 3 {
			continue
		}
		if f[1] == "<->" {
			d.Arcs = append(d.Arcs, &study.Arc{A: f[0], B: f[2]})
			continue
		}
		a := &study.Arrow{From: f[0], To: f[2]}
		if len(f) > 3 {
			a.Form = f[3]
		}
		d.Arrows = append(d.Arrows, a)
	}
	return &study.Study{
		Variables: variables,
		Plates:    []*study.Plate{{Name: "farm"}},
		Rivals:    []*study.Rival{{Name: "R", Layout: &study.Layout{}, Diagram: d}},
	}
}

// traps is a table for hedgerows: 60 rows on 12 farms, two counts missing.
func traps() *table.Table {
	r := rand.New(rand.NewPCG(7, 7))
	n := 60
	t := newTable("traps", n)
	farm := make([]int32, n)
	soil := make([]int32, n)
	hedge, bees, flowers, pesticide, temp, hours, arable := make([]float64, n), make([]float64, n), make([]float64, n), make([]float64, n), make([]float64, n), make([]float64, n), make([]float64, n)
	for i := range n {
		farm[i] = int32(i / 5)
		soil[i] = int32(farm[i] % 3)
		hedge[i] = math.Round(180 * r.Float64())
		bees[i] = float64(r.IntN(60))
		flowers[i] = 0.05 + 0.4*r.Float64()
		pesticide[i] = math.Round(100*r.Float64()) / 10
		temp[i] = math.Round(10 + 16*r.Float64())
		hours[i] = float64(4 + r.IntN(5))
		arable[i] = r.Float64()
	}
	bees[3], bees[17] = math.NaN(), math.NaN()
	names := make([]string, 12)
	for i := range names {
		names[i] = fmt.Sprintf("farm %d", i+1)
	}
	words(t, "farm", farm, names...)
	words(t, "soil", soil, "chalk", "clay", "sand")
	numbers(t, "hedge", hedge...)
	numbers(t, "bees", bees...)
	numbers(t, "flowers", flowers...)
	numbers(t, "pesticide", pesticide...)
	numbers(t, "temp", temp...)
	numbers(t, "hours", hours...)
	numbers(t, "arable", arable...)
	return t
}

func newTable(name string, rows int) *table.Table { return &table.Table{Name: name, Rows: rows} }

func numbers(t *table.Table, name string, values ...float64) {
	c := &table.Column{Name: name, Kind: table.Numeric, Numbers: values}
	for _, v := range values {
		if math.IsNaN(v) {
			c.Missing++
		}
	}
	t.Columns = append(t.Columns, c)
}

func words(t *table.Table, name string, codes []int32, levels ...string) {
	t.Columns = append(t.Columns, &table.Column{Name: name, Kind: table.Words, Codes: codes, Levels: levels})
}

func beesQuestion() study.Question {
	return study.Question{Exposure: "hedge", Outcome: "bees", From: &study.Setting{Number: 40}, To: &study.Setting{Number: 90}, Held: []string{"pesticide", "soil"}}
}

func build(t *testing.T, s *study.Study, q study.Question, tab *table.Table, kind Kind) *Model {
	t.Helper()
	m, problems := Build(s, "R", q, tab, kind)
	for _, p := range problems {
		if p.Stops {
			t.Fatalf("%s: %s", p.Code, p.Display())
		}
	}
	if m == nil {
		t.Fatal("no model and no problem")
	}
	return m
}
