package model

import (
	"math"
	"slices"
	"strings"
	"testing"

	"arrowroot/compile/formula"
	"arrowroot/compile/study"
	"arrowroot/compile/table"
)

// scholarship is story S3's shape: U, unmeasured, acts on entry score and
// final mark; the award is given by score and income. What the drawn parents
// of mark leave open, its carrier, the score, closes (SEMANTICS A1).
func scholarship() *study.Study {
	number := func(id string) *study.Variable {
		return &study.Variable{ID: id, Scale: study.Real, Range: &study.Range{Low: -3, High: 3}}
	}
	u := number("background")
	u.Unmeasured = true
	return sheet([]*study.Variable{u, number("score"), number("income"), number("award"), number("hours"), number("mark")},
		"background -> score; score -> award; background -> mark; income -> award; income -> mark; award -> hours; hours -> mark; award -> mark", nil)
}

func TestCarriers(t *testing.T) {
	m, _ := Build(scholarship(), "R", study.Question{Exposure: "award", Outcome: "mark"}, nil, Full)
	if m == nil {
		t.Fatal("no model")
	}
	var mark *Law
	for _, l := range m.Laws {
		if m.Variables[l.Variable].ID == "mark" {
			mark = l
		}
	}
	if got := formula.Format(mark.Predictors[0]); got != "alpha_mark + beta_income_mark * income + beta_hours_mark * hours + beta_award_mark * award + beta_score_mark * score" {
		t.Errorf("mark: %s", got)
	}
	if len(mark.Carried) != 1 || m.Variables[mark.Carried[0].Variable].ID != "score" || !slices.Equal(mark.Carried[0].For, []string{"background"}) {
		t.Errorf("carried: %+v", mark.Carried)
	}
	// Four terms, the carried one counted: sd W/(1.96 √4 R) with W = R.
	near4(t, "slope", arg(t, parameter(t, m, "beta_award_mark"), 1), 1/(1.96*2))
	if p := parameter(t, m, "beta_score_mark"); p.Why != "3 parents and 1 carried term; range of mark −3 to 3" {
		t.Error(p.Why)
	}
	last := mark.Terms[len(mark.Terms)-1]
	if !last.Carried || m.Variables[last.Variable].ID != "score" || slices.Contains(mark.Drawn, last.Variable) {
		t.Errorf("the carried term is not marked: %+v", last)
	}
	// A2: score has an arc in the projection, so it is modelled; income is given.
	if !slices.Equal(m.Given, []string{"income"}) {
		t.Errorf("given: %v", m.Given)
	}
	found := false
	for _, l := range m.Statement().Lines {
		found = found || l.Kind == CarriedLine && l.Right == "carried terms (for background, left out): score in the law of mark."
	}
	if !found {
		t.Error("the statement does not name the carried term")
	}
}

// An arc asks for the same as a drawn common cause (A1), and its carriers say so.
func TestArc(t *testing.T) {
	s := scholarship()
	d := s.Rivals[0].Diagram
	d.Nodes = d.Nodes[1:]
	d.Arrows = slices.DeleteFunc(d.Arrows, func(a *study.Arrow) bool { return a.From == "background" })
	d.Arcs = []*study.Arc{{A: "score", B: "mark"}}
	m, _ := Build(s, "R", study.Question{Exposure: "award", Outcome: "mark"}, nil, Full)
	if !strings.Contains(m.Statement().String(), "carried terms (for an unnamed common cause, left out): score in the law of mark.") {
		t.Error(m.Statement().String())
	}
}

// Anything can be set to given or modelled (A3).
func TestTreat(t *testing.T) {
	s := scholarship()
	law(s, "income").Treat = "modelled"
	law(s, "hours").Treat = "given"
	m, _ := Build(s, "R", study.Question{Exposure: "award", Outcome: "mark"}, nil, Full)
	if !slices.Equal(m.Given, []string{"hours"}) {
		t.Errorf("given: %v", m.Given)
	}
	parameter(t, m, "alpha_income")
}

// The held and crude models keep offset and varying baseline, and the rows of
// the full model (B8).
func TestOutcomeAlone(t *testing.T) {
	tab := traps()
	tab.Column("temp").Numbers[9] = math.NaN() // no part of the held model
	full := build(t, hedgerows(), beesQuestion(), tab, Full)
	for _, c := range []struct {
		kind Kind
		want string
	}{
		{Held, "alpha_bees_farm by farm + beta_pesticide_bees * (pesticide - 5) + beta_hedge_bees * (hedge - 90) + step_soil_bees of soil + log hours"},
		{Crude, "alpha_bees_farm by farm + beta_hedge_bees * (hedge - 90) + log hours"},
	} {
		m := build(t, hedgerows(), beesQuestion(), tab, c.kind)
		if got := formula.Format(m.Laws[0].Predictors[0]); got != c.want || len(m.Laws) != 1 {
			t.Errorf("%s", got)
		}
		if !slices.Equal(m.Rows.Index, full.Rows.Index) || m.Rows.Used != 57 {
			t.Errorf("%d rows, the full model has %d", m.Rows.Used, full.Rows.Used)
		}
	}
}

// Of a typed formula the models of the outcome alone keep what they can, with
// its priors (B8).
func TestOutcomeAloneTyped(t *testing.T) {
	for _, c := range []struct {
		name, formula string
		kind          Kind
		held          []string
		want          string
	}{
		{"summands dropped", "", Crude, nil,
			"alpha_bees_farm by farm + beta_hedge_bees * (hedge - 90) / 10 + log hours"},
		{"a held variable keeps its term, another gets a default one", "", Held, []string{"pesticide", "soil"},
			"alpha_bees_farm by farm + beta_hedge_bees * (hedge - 90) / 10 + beta_pesticide_bees * log(pesticide + 1) + log hours + step_soil_bees of soil"},
		{"whole", "", Held, []string{"pesticide", "flowers", "temp"},
			"alpha_bees_farm by farm + beta_hedge_bees * (hedge - 90) / 10 + beta_flowers_bees * flowers + beta_pesticide_bees * log(pesticide + 1) + bend * (temp - 18)^2 + log hours"},
		{"kept and dropped in one summand", "log rate = alpha_bees - bend * (hedge - flowers) + log hours + beta_temp_bees * temp + beta_pesticide_bees * pesticide", Crude, nil,
			"alpha_bees + log hours + beta_hedge_bees * (hedge - 90)"},
		{"signs", "log rate = log hours - (bend * hedge ^ 2 - alpha_bees + beta_flowers_bees * flowers) + beta_temp_bees * temp + beta_pesticide_bees * pesticide", Crude, nil,
			"log hours - bend * hedge^2 + alpha_bees"},
		{"an offset with a power of its own", "log rate = alpha_bees + beta_hours_bees * log hours + beta_hedge_bees * hedge + beta_flowers_bees * flowers + beta_temp_bees * temp + beta_pesticide_bees * pesticide", Crude, nil,
			"alpha_bees + beta_hours_bees * log hours + beta_hedge_bees * hedge"},
		{"no baseline left", "log rate = alpha_bees * exp(-bend * flowers) + beta_hedge_bees * hedge + log hours + beta_temp_bees * temp + beta_pesticide_bees * pesticide", Crude, nil,
			"alpha_bees + beta_hedge_bees * (hedge - 90) + log hours"},
	} {
		t.Run(c.name, func(t *testing.T) {
			s, q := typedBees(), beesQuestion()
			if c.formula != "" {
				law(s, "bees").Formula, law(s, "bees").VariesBy = c.formula, nil
			}
			q.Held = c.held
			m := build(t, s, q, traps(), c.kind)
			if got := formula.Format(m.Laws[0].Predictors[0]); got != c.want {
				t.Errorf("%s\nnot\n%s", got, c.want)
			}
			for _, id := range []string{"beta_hedge_bees", "k_bees", "bend"} {
				if _, i := m.Name(id); i >= 0 && !m.Parameters[i].Prior.FromUser && m.Laws[0].Typed {
					t.Errorf("the stated prior of %s is lost", id)
				}
			}
		})
	}
}

// A stated prior of the baseline is for the whole formula (B8).
func TestOutcomeAloneBaseline(t *testing.T) {
	s, q := typedBees(), beesQuestion()
	law(s, "bees").Priors = append(law(s, "bees").Priors, study.Prior{Parameter: "alpha_bees", Text: "normal with mean 3, sd 1"})
	q.Held = []string{"pesticide", "flowers", "temp"}
	if !parameter(t, build(t, s, q, traps(), Held), "alpha_bees").Prior.FromUser {
		t.Error("the stated prior is lost with the whole formula")
	}
	p := parameter(t, build(t, s, q, traps(), Crude), "alpha_bees")
	if p.Prior.FromUser || !strings.HasSuffix(p.Why, "; the stated prior is for a formula with terms that this law leaves out") {
		t.Error(p.Why)
	}
}

// A stated prior of a slope holds where the slope means the same (B8).
func TestOutcomeAlonePriors(t *testing.T) {
	s := sheet([]*study.Variable{
		{ID: "c", Scale: study.Real, Column: "hedge"}, {ID: "x", Scale: study.Real, Column: "temp"},
		{ID: "m", Scale: study.Real, Column: "flowers"}, {ID: "y", Scale: study.Real, Column: "pesticide"},
	}, "c -> x; c -> y; x -> y; x -> m", nil)
	s.Rivals[0].Diagram.Arrows[2].Prior = "normal with mean 2, sd 0.01"
	law(s, "y").Priors = []study.Prior{{Parameter: "beta_c_y", Text: "normal with mean 1, sd 1"}}
	q := study.Question{Exposure: "x", Outcome: "y", Held: []string{"c"}}
	m := build(t, s, q, traps(), Held)
	for _, id := range []string{"beta_x_y", "beta_c_y"} {
		if !parameter(t, m, id).Prior.FromUser {
			t.Errorf("the stated prior of %s is lost", id)
		}
	}
	s.Rivals[0].Diagram.Arrows = append(s.Rivals[0].Diagram.Arrows, &study.Arrow{From: "m", To: "y"})
	m = build(t, s, q, traps(), Held)
	for _, id := range []string{"beta_x_y", "beta_c_y"} {
		p := parameter(t, m, id)
		if p.Prior.FromUser || !strings.HasSuffix(p.Why, "; the stated prior is for a law with m, which this one leaves out") {
			t.Errorf("%s: %s", id, p.Why)
		}
	}
}

// A8: rows used of rows read, and who lost the others.
func TestRows(t *testing.T) {
	tab := traps()
	tab.Column("temp").Numbers[3] = math.NaN() // bees is missing there too
	tab.Column("farm").Codes[40] = -1
	m := build(t, hedgerows(), beesQuestion(), tab, Full)
	if m.Rows.Read != 60 || m.Rows.Used != 57 || len(m.Rows.Index) != 57 {
		t.Errorf("%+v", m.Rows)
	}
	want := []Loss{{"bees", 2}, {"temp", 1}, {"farm", 1}}
	if !slices.Equal(m.Rows.Lost, want) {
		t.Errorf("lost %v, want %v", m.Rows.Lost, want)
	}
}

// A5: what lives on the farm has one value per farm, known from any of its
// rows, and its law one factor per farm.
func TestLevel(t *testing.T) {
	s, tab := hedgerows(), traps()
	for _, i := range []int{0, 4, 7} { // hedge, soil, arable
		s.Variables[i].Plates = []string{"farm"}
	}
	for i := range 60 {
		tab.Column("hedge").Numbers[i] = float64(10 * (i / 5))
		tab.Column("arable").Numbers[i] = float64(i/5) / 20
	}
	tab.Column("hedge").Numbers[7] = math.NaN()
	for i := 20; i < 25; i++ {
		tab.Column("bees").Numbers[i] = math.NaN() // a farm without a used row
	}
	// pesticide differs from row to row: the farm's hedge cannot carry it.
	if p := find(Problems(s, "R", beesQuestion(), tab), "level"); p == nil {
		t.Error("a law per farm reads what changes within farms")
	}
	s.Rivals[0].Diagram.Arrows = slices.DeleteFunc(s.Rivals[0].Diagram.Arrows, func(a *study.Arrow) bool { return a.From == "attitude" })
	m := build(t, s, beesQuestion(), tab, Full)
	i, _ := m.Name("hedge")
	v := m.Variables[i]
	if v.Plate != 0 || len(v.Values) != 11 || v.Values[1] != 10 || v.Values[4] != 50 {
		t.Errorf("hedge: plate %d, %v", v.Plate, v.Values)
	}
	if m.Rows.Used != 53 {
		t.Errorf("%d rows used, want 53: only bees loses rows", m.Rows.Used)
	}
	for _, l := range m.Laws {
		if l.Variable == i && l.Plate != 0 {
			t.Error("the law of hedge is not at the farm's level")
		}
	}
}

// Nested plates tell their levels apart by both names; crossed levels of a
// variable are the pairs that occur.
func TestNestedAndCrossed(t *testing.T) {
	tab := newTable("t", 8)
	words(tab, "farm", []int32{0, 0, 0, 0, 1, 1, 1, 1}, "A", "B")
	numbers(tab, "field", 1, 1, 2, 2, 1, 1, 2, 2)
	numbers(tab, "year", 1, 2, 1, 2, 1, 2, 1, 2)
	numbers(tab, "x", 1, 2, 1, 2, 3, 4, 3, 4) // one value per farm and year
	numbers(tab, "y", 1, 5, 2, 6, 3, 7, 4, 8)
	s := sheet([]*study.Variable{
		{ID: "x", Scale: study.Real, Column: "x", Plates: []string{"farm", "year"}},
		{ID: "y", Scale: study.Real, Column: "y"},
	}, "x -> y", map[string]*study.Law{"y": {VariesBy: []string{"field"}}})
	s.Plates = []*study.Plate{{Name: "farm"}, {Name: "field", Within: "farm"}, {Name: "year"}}
	m := build(t, s, study.Question{}, tab, Full)
	names := make(map[string][]string)
	for _, p := range m.Plates {
		names[p.Name] = p.Levels
	}
	if !slices.Equal(names["field"], []string{"A · 1", "A · 2", "B · 1", "B · 2"}) {
		t.Errorf("field: %v", names["field"])
	}
	if !slices.Equal(m.Variables[0].Values, []float64{1, 2, 3, 4}) {
		t.Errorf("x: %v", m.Variables[0].Values)
	}
	if of, ok := m.LevelOf(1, 0); !ok || !slices.Equal(of, []int32{0, 0, 1, 1}) {
		t.Errorf("fields lie in farms %v", of)
	}
	if _, ok := m.LevelOf(0, 1); ok {
		t.Error("a farm cannot lie in one field")
	}
}

// Percent columns are divided, words become codes in the ledger's order, and a
// computed variable takes its value from its parents.
func TestColumns(t *testing.T) {
	tab := newTable("t", 4)
	numbers(tab, "cover", 10, 20, 30, 45)
	words(tab, "sex", []int32{0, 1, 1, 0}, "male", "female")
	numbers(tab, "a", 1, 2, 3, 4)
	numbers(tab, "b", 2, 4, 5, 5)
	numbers(tab, "y", 1, 3, 2, 5)
	s := sheet([]*study.Variable{
		{ID: "cover", Scale: study.Proportion, Column: "cover", Divide: 100},
		{ID: "sex", Scale: study.Binary, Levels: []string{"female", "male"}, Column: "sex"},
		{ID: "a", Scale: study.Positive, Column: "a"},
		{ID: "b", Scale: study.Positive, Column: "b"},
		{ID: "ratio", Scale: study.Real, Computed: "a / b"},
		{ID: "y", Scale: study.Real, Column: "y"},
	}, "cover -> y; sex -> y; a -> ratio; b -> ratio; ratio -> y", nil)
	m := build(t, s, study.Question{}, tab, Full)
	for id, want := range map[string][]float64{"cover": {.1, .2, .3, .45}, "sex": {1, 0, 0, 1}, "ratio": {.5, .5, .6, .8}} {
		i, _ := m.Name(id)
		if !slices.EqualFunc(m.Variables[i].Values, want, func(a, b float64) bool { return math.Abs(a-b) < 1e-12 }) {
			t.Errorf("%s: %v, want %v", id, m.Variables[i].Values, want)
		}
	}
	if slices.Contains(m.Given, "ratio") || len(m.Laws) != 1 {
		t.Errorf("a computed variable is neither given nor has a law: %v, %d laws", m.Given, len(m.Laws))
	}
}

// Nudged ends stay inside the scale and are counted in the statement.
func TestNudge(t *testing.T) {
	s, tab := hedgerows(), traps()
	tab.Column("flowers").Numbers[5], tab.Column("flowers").Numbers[6] = 0, 1
	s.Variables[2].Nudge = 0.002
	m := build(t, s, beesQuestion(), tab, Full)
	i, _ := m.Name("flowers")
	low, high := extent(m.Variables[i].Values)
	if low != 0.002 || high != 0.998 || m.Variables[i].Nudged != 2 {
		t.Errorf("flowers in %v–%v, %d nudged", low, high, m.Variables[i].Nudged)
	}
	if !strings.Contains(m.Statement().String(), "flowers: 2 rows are at the exact end of its scale, moved inwards by 0.002.") {
		t.Error("the statement does not say so")
	}
}

// Group effects become centred where the groups have much data (a
// logistic law with 20 rows per group favours scores, with 100 the effects).
func TestCentring(t *testing.T) {
	for _, c := range []struct {
		rows    int
		centred bool
	}{{2, false}, {20, false}, {100, true}} {
		tab := ill(10, c.rows)
		s := sheet([]*study.Variable{
			{ID: "x", Scale: study.Real, Column: "x"},
			{ID: "ill", Scale: study.Binary, Column: "ill"},
		}, "x -> ill", map[string]*study.Law{"ill": {VariesBy: []string{"farm"}}})
		m := build(t, s, study.Question{}, tab, Full)
		if p := parameter(t, m, "alpha_ill_farm"); p.Centred != c.centred {
			t.Errorf("%d rows per group: centred %v", c.rows, p.Centred)
		}
	}
}

func ill(groups, rows int) *table.Table {
	n := groups * rows
	t := newTable("t", n)
	farm := make([]int32, n)
	x, y := make([]float64, n), make([]float64, n)
	var names []string
	for g := range groups {
		names = append(names, string(rune('A'+g)))
	}
	for i := range n {
		farm[i], x[i], y[i] = int32(i%groups), float64(i*7%11), float64(i*13%2)
	}
	words(t, "farm", farm, names...)
	numbers(t, "x", x...)
	numbers(t, "ill", y...)
	return t
}
