package model

import (
	"flag"
	"math"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"arrowroot/compile/formula"
	"arrowroot/compile/study"
	"arrowroot/compile/table"
)

var update = flag.Bool("update", false, "rewrite the golden files")

// A specimen is a study whose statement is kept in testdata.
type specimen struct {
	name  string
	study *study.Study
	table *table.Table
	asks  study.Question
	kind  Kind
}

func specimens() []specimen {
	return []specimen{
		{"hedgerows", hedgerows(), traps(), beesQuestion(), Full},
		{"hedgerows-held", hedgerows(), traps(), beesQuestion(), Held},
		{"hedgerows-crude", hedgerows(), traps(), beesQuestion(), Crude},
		{"levels", ofLevels(), nil, study.Question{}, Full},
		{"plates", ofPlates(), plots(), study.Question{Exposure: "water", Outcome: "yield", Shift: 1}, Full},
		{"schools", schools(), coached(), study.Question{}, Full},
		{"trials", sown(), trays(), study.Question{Exposure: "warmth", Outcome: "sprouted", Shift: 1}, Full},
		{"typed", typedBees(), traps(), beesQuestion(), Full},
		{"farms", inFarms(), traps(), beesQuestion(), Full},
		{"farms-held", inFarms(), traps(), withinFarms(), Held},
		{"imputed", imputed(), holed(), beesQuestion(), Full},
		{"forms", bentBees(), traps(), beesQuestion(), Full},
	}
}

// inFarms has its unmeasured cause at the level of farms, where it joins hedge
// and bees besides (SEMANTICS A6).
func inFarms() *study.Study {
	s := hedgerows()
	for _, v := range s.Variables {
		if v.ID == "attitude" {
			v.Plates = []string{"farm"}
		}
	}
	d := s.Rivals[0].Diagram
	d.Arrows = append(d.Arrows, &study.Arrow{From: "attitude", To: "bees"})
	return s
}

// withinFarms holds farm, and soil, which is a category.
func withinFarms() study.Question {
	q := beesQuestion()
	q.Held = []string{"farm", "soil"}
	return q
}

// imputed has flowers, which bees read, and bees, which nothing reads, imputed.
func imputed() *study.Study {
	s := hedgerows()
	law(s, "flowers").Treat = study.Imputed
	law(s, "bees").Treat = study.Imputed
	return s
}

// holed is traps with entries missing.
func holed() *table.Table {
	t := traps()
	set(t, "flowers", 1, math.NaN())
	set(t, "flowers", 4, math.NaN())
	set(t, "bees", 2, math.NaN())
	return t
}

// ofLevels has children of every kind of level, and products.
func ofLevels() *study.Study {
	s := sheet([]*study.Variable{
		{ID: "x", Scale: study.Real, Range: &study.Range{Low: 0, High: 4}},
		{ID: "g", Scale: study.Category, Levels: []string{"p", "q", "r"}},
		{ID: "crop", Scale: study.Category, Levels: []string{"oats", "rye", "peas"}},
		{ID: "mood", Scale: study.Ordered, Levels: []string{"low", "middle", "high"}},
		{ID: "ill", Scale: study.Binary, Levels: []string{"no", "yes"}},
	}, "x -> crop; g -> crop; x -> mood; g -> mood; mood -> ill; x -> ill; g -> ill", nil)
	s.Rivals[0].Diagram.Arrows[5].With = []string{"g"}
	return s
}

// ofPlates has two crossed plates, a slope that varies, a variable at a
// plate's level and one that is computed.
func ofPlates() *study.Study {
	s := sheet([]*study.Variable{
		{ID: "clay", Scale: study.Proportion, Range: &study.Range{Low: 0, High: 0.6}, Column: "clay", Plates: []string{"farm"}},
		{ID: "rain", Unit: "mm", Scale: study.Positive, Range: &study.Range{Low: 300, High: 900}, Column: "rain", Plates: []string{"year"}},
		{ID: "irrigation", Unit: "mm", Scale: study.Real, Range: &study.Range{Low: 0, High: 300}, Column: "irrigation"},
		{ID: "water", Unit: "mm", Scale: study.Real, Range: &study.Range{Low: 300, High: 1200}, Computed: "rain + irrigation"},
		{ID: "yield", Unit: "t/ha", Scale: study.Positive, Column: "yield"},
		{ID: "skill", Scale: study.Real, Unmeasured: true},
	}, "clay -> irrigation; rain -> water; irrigation -> water; water -> yield; skill -> irrigation; skill -> yield",
		map[string]*study.Law{"yield": {VariesBy: []string{"farm", "year"}}})
	s.Plates = []*study.Plate{{Name: "farm"}, {Name: "year"}}
	s.Rivals[0].Diagram.Arrows[3].VariesBy = []string{"farm"}
	return s
}

// plots is a table for ofPlates: six farms in three years, two plots each.
func plots() *table.Table {
	t := newTable("plots", 36)
	farm, year := make([]int32, 36), make([]float64, 36)
	clay, rain, irrigation, yield := make([]float64, 36), make([]float64, 36), make([]float64, 36), make([]float64, 36)
	for i := range 36 {
		farm[i], year[i] = int32(i/6), float64(2019+i%3)
		clay[i], rain[i] = float64(farm[i])/10, 400+100*float64(i%3)
		irrigation[i] = float64(i * 37 % 250)
		yield[i] = 3 + float64(i*11%17)/4
	}
	words(t, "farm", farm, "Ash", "Birch", "Cedar", "Dogwood", "Elder", "Fir")
	numbers(t, "year", year...)
	numbers(t, "clay", clay...)
	numbers(t, "rain", rain...)
	numbers(t, "irrigation", irrigation...)
	numbers(t, "yield", yield...)
	return t
}

// schools is a hierarchy with known standard errors, all of it typed: the
// effect of coaching in eight schools (the form of Rubin 1981).
func schools() *study.Study {
	s := sheet([]*study.Variable{{ID: "effect", Unit: "points", Scale: study.Real, Column: "effect"}}, "",
		map[string]*study.Law{"effect": {
			Formula:   "mu_i = theta by school",
			Arguments: []study.Argument{{Name: "sd", Text: "se"}},
			Priors: []study.Prior{
				{Parameter: "mu", Text: "normal with mean 0, sd 5"},
				{Parameter: "tau", Text: "half-t with scale 5, degrees of freedom 3"},
				{Parameter: "θ by school", Text: "normal with mean mu, sd tau"},
			},
		}})
	s.Plates = []*study.Plate{{Name: "school"}}
	return s
}

func coached() *table.Table {
	t := newTable("coached", 8)
	words(t, "school", []int32{0, 1, 2, 3, 4, 5, 6, 7}, "A", "B", "C", "D", "E", "F", "G", "H")
	numbers(t, "effect", 28, 8, -3, 7, -1, 1, 18, 12)
	numbers(t, "se", 15, 10, 16, 11, 9, 11, 10, 18)
	return t
}

// sown counts sprouted seeds out of those sown in each tray.
func sown() *study.Study {
	return sheet([]*study.Variable{
		{ID: "warmth", Unit: "°C", Scale: study.Real, Range: &study.Range{Low: 5, High: 25}, Column: "warmth"},
		{ID: "sprouted", Scale: study.Count, Column: "sprouted"},
	}, "warmth -> sprouted", map[string]*study.Law{"sprouted": {Arguments: []study.Argument{{Name: "trials", Text: "seeds"}}}})
}

func trays() *table.Table {
	t := newTable("trays", 5)
	numbers(t, "warmth", 6, 10, 14, 18, 22)
	numbers(t, "sprouted", 1, 4, 9, 15, 19)
	numbers(t, "seeds", 20, 20, 20, 20, 20)
	return t
}

// typedBees says by formula what the arrows of hedgerows say, in a user's own
// words, with a prior and a parameter of the user's own.
func typedBees() *study.Study {
	s := hedgerows()
	*law(s, "bees") = study.Law{
		Formula: "log rate = α_bees by farm + β_hedge→bees * (hedge − 90)/10 + beta_flowers_bees * flowers + beta_pesticide_bees * log(pesticide + 1) + bend * (temp - 18)^2 + log hours",
		Arguments: []study.Argument{
			{Name: "mean", Text: "rate"},
			{Name: "overdispersion", Text: "k_bees"},
		},
		Priors: []study.Prior{
			{Parameter: "bend", Text: "normal with mean 0, sd 0.01"},
			{Parameter: "k_bees", Text: "gamma with mean 4, shape 2"},
			{Parameter: "beta_hedge_bees", Text: "Student t with mean 0, scale 0.1, degrees of freedom 4"},
		},
	}
	return s
}

// buildSpecimen allows the problem of having no data: those studies state
// their ranges.
func buildSpecimen(t *testing.T, c specimen) *Model {
	t.Helper()
	m, problems := Build(c.study, "R", c.asks, c.table, c.kind)
	for _, p := range problems {
		if p.Code != "no-data" {
			t.Fatalf("%s: %s", p.Code, p.Display())
		}
	}
	return m
}

// Goldens: testdata/*.txt, rewritten with -update. They are checked by eye
// against SEMANTICS A and C.
func TestStatements(t *testing.T) {
	for _, c := range specimens() {
		t.Run(c.name, func(t *testing.T) {
			s := buildSpecimen(t, c).Statement()
			got := s.String() + "\n" + strings.Join(s.Typed, "\n") + "\n"
			path := filepath.Join("testdata", c.name+".txt")
			if *update {
				if err := os.WriteFile(path, []byte(got), 0o644); err != nil {
					t.Fatal(err)
				}
			}
			want, err := os.ReadFile(path)
			if err != nil {
				t.Fatal(err)
			}
			if got != string(want) {
				t.Errorf("%s differs; is now\n%s", path, got)
			}
		})
	}
}

// SEMANTICS H: the typed form of every default law, put in as the law's
// formula, gives the same predictor, parameters and priors.
func TestTypedRoundTrip(t *testing.T) {
	for _, c := range specimens() {
		t.Run(c.name, func(t *testing.T) {
			if c.kind != Full {
				t.Skip("the formula of a held or crude model is no law of the rival")
			}
			m := buildSpecimen(t, c)
			typed := m.Statement().Typed
			for i, l := range m.Laws {
				if len(l.Predictors) != 1 {
					continue
				}
				id := m.Variables[l.Variable].ID
				at := law(c.study, id)
				for j, line := range typed {
					if strings.HasPrefix(line, id+" ~ ") {
						at.Formula = typed[j+1]
					}
				}
				if len(l.Carried) > 0 { // a formula may name what it carries
					for _, k := range l.Carried {
						if !strings.Contains(at.Formula, m.Variables[k.Variable].ID) {
							t.Errorf("%s: %s is not in %s", id, m.Variables[k.Variable].ID, at.Formula)
						}
					}
				}
				again := buildSpecimen(t, c)
				if got, want := formula.Format(again.Laws[i].Predictors[0]), formula.Format(l.Predictors[0]); got != want {
					t.Errorf("%s: typed back %s, was %s", id, got, want)
				}
				was := m.Statement().Typed
				if now := again.Statement().Typed; strings.Join(sorted(now), "\n") != strings.Join(sorted(was), "\n") {
					t.Errorf("%s: priors changed:\n%s\nwere\n%s", id, strings.Join(now, "\n"), strings.Join(was, "\n"))
				}
			}
		})
	}
}

func TestFingerprint(t *testing.T) {
	one := build(t, hedgerows(), beesQuestion(), traps(), Full).Fingerprint()
	if again := build(t, hedgerows(), beesQuestion(), traps(), Full).Fingerprint(); again != one {
		t.Error("the same model has two fingerprints")
	}
	tab := traps()
	tab.Column("temp").Numbers[5]++
	if build(t, hedgerows(), beesQuestion(), tab, Full).Fingerprint() == one {
		t.Error("other data, same fingerprint")
	}
	tab = traps()
	tab.Column("bees").Numbers[3] = 4 // was missing: one more row
	if build(t, hedgerows(), beesQuestion(), tab, Full).Fingerprint() == one {
		t.Error("other rows, same fingerprint")
	}
	s := hedgerows()
	s.Variables[0].Range.High = 200
	if build(t, s, beesQuestion(), traps(), Full).Fingerprint() == one {
		t.Error("other priors, same fingerprint")
	}
	s = hedgerows()
	s.Variables[0].Note, s.Rivals[0].Layout = "a note", &study.Layout{At: map[string]study.Point{"hedge": {X: 3}}}
	if build(t, s, beesQuestion(), traps(), Full).Fingerprint() != one {
		t.Error("a note and a moved node are no other model")
	}
}
