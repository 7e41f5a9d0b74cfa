package mistake

import (
	"slices"
	"strings"
	"testing"

	"arrowroot/compile/study"
	"arrowroot/compile/table"
)

func limits(id string) study.Edit { return study.LimitRows{Rival: "r", Variable: id, On: true} }

func draws(from, to string) study.Edit {
	return study.AddArrow{Rival: "r", Arrow: study.Arrow{From: from, To: to}}
}

// tiers says when variables came: "a1 b2" puts a into tier 1 and b into 2.
func tiers(t testing.TB, s *study.Study, text string) *study.Study {
	for _, word := range strings.Fields(text) {
		s = change(t, s, word[:len(word)-1], func(v *study.Variable) { v.Tier = int(word[len(word)-1] - '0') })
	}
	return s
}

// TestSeededFaults plants one mistake at a time into a sound diagram.
func TestSeededFaults(t *testing.T) {
	low := 1.0
	for _, c := range []struct {
		name, sheet, ask string
		seed             func(s *study.Study) *study.Study
		code             Code
		severity         Severity
		path             string // "" = none
		says             string // a part of the sentence
		repairs          string // the words of all, parted by "; "
	}{
		{
			name: "M1 mediator", sheet: hedges, ask: "hedge bees spray soil flowers",
			code: HeldMediator, path: "hedge flowers bees", says: "Holding flowers would hide part of the effect: it lies on hedge → flowers → bees.",
			repairs: "Leave flowers free; Ask for the direct effect",
			seed: func(s *study.Study) *study.Study {
				return change(t, s, "flowers", func(v *study.Variable) { v.Range = &study.Range{Low: 0, High: 1} })
			},
		},
		{
			name: "M1 birth weight", sheet: births, ask: "smoke trouble class age weight",
			code: HeldMediator, path: "smoke weight trouble", says: "Holding weight would hide part of the effect", repairs: "Leave weight free",
		},
		{
			name: "M1 proxy of a mediator", sheet: hedges + ", flowers -> nectar", ask: "hedge bees spray soil nectar",
			code: HeldMediator, path: "hedge flowers nectar", says: "it is an effect of flowers", repairs: "Leave nectar free",
		},
		{
			name: "M2 effect of the outcome", sheet: hedges, ask: "hedge bees spray soil count",
			code: HeldCollider, path: "hedge bees count", says: "Holding count would distort the effect: it is an effect of bees", repairs: "Leave count free",
		},
		{
			name: "M2 collider before the exposure", sheet: "(a) -> m, (b) -> m, a -> x -> y, b -> y", ask: "x y m",
			code: HeldCollider, path: "x a m b y", says: "it opens x ← a → m ← b → y", repairs: "Leave m free",
		},
		{
			name: "M2 that another closes", sheet: "a -> m, (b) -> m, a -> x -> y, b -> y", ask: "x y m",
			code: HeldCollider, path: "x a m b y", says: "it opens x ← a → m ← b → y", repairs: "Leave m free; Hold a as well",
		},
		{
			name: "M2 child of a collider", sheet: "(a) -> m, (b) -> m, a -> x -> y, b -> y, m -> d", ask: "x y d",
			code: HeldCollider, path: "x a m b y", says: "Holding d makes the comparison misleading", repairs: "Leave d free",
		},
		{
			name: "M2 where no set would do", sheet: "(u) -> x, u -> y, x -> y, (a) -> m, (b) -> m, a -> x, b -> y", ask: "x y m",
			code: HeldCollider, path: "x a m b y", says: "it opens x ← a → m ← b → y", repairs: "Leave m free",
		},
		{
			name: "M3 responders", sheet: scholarship, ask: "award mark income entry", seed: func(s *study.Study) *study.Study { return apply(t, s, limits("answered")) },
			code: ChosenRows, path: "mark answered", says: "Only rows with one value of answered, an effect of mark by mark → answered, are in the data: what they show is not the effect of award in all rows.", repairs: "answered limits no rows",
		},
		{
			name: "M3 filter on an effect of the outcome", sheet: scholarship, ask: "award mark income entry", seed: func(s *study.Study) *study.Study {
				return apply(t, s, study.AddData{Data: study.Data{Name: "d", File: "d.csv", Keep: []study.Condition{{Variable: "answered", Low: &low}}}})
			},
			code: ChosenRows, path: "mark answered", says: "Rows are kept by answered", repairs: "Use all rows",
		},
		{
			name: "M3 filter on the outcome", sheet: hedges, ask: "hedge bees spray soil", seed: func(s *study.Study) *study.Study {
				return apply(t, s, study.AddData{Data: study.Data{Name: "d", File: "d.csv", Keep: []study.Condition{{Variable: "bees", Low: &low}}}})
			},
			code: ChosenRows, says: "Rows are kept by bees, the outcome itself", repairs: "Use all rows",
		},
		{
			name: "M3 filter on a mediator", sheet: hedges, ask: "hedge bees spray soil", seed: func(s *study.Study) *study.Study {
				return apply(t, s, study.AddData{Data: study.Data{Name: "d", File: "d.csv", Keep: []study.Condition{{Variable: "flowers", Low: &low}}}})
			},
			code: ChosenRows, path: "hedge flowers bees", says: "part of the effect cannot be seen", repairs: "Use all rows",
		},
		{
			name: "M3 rows by a collider before the exposure", sheet: "(a) -> m, (b) -> m, a -> x -> y, b -> y", ask: "x y",
			seed: func(s *study.Study) *study.Study { return apply(t, s, limits("m")) },
			code: ChosenRows, path: "x a m b y", says: "x ← a → m ← b → y is open", repairs: "m limits no rows",
		},
		{
			name: "M3 that another closes", sheet: "a -> m, (b) -> m, a -> x -> y, b -> y", ask: "x y",
			seed: func(s *study.Study) *study.Study { return apply(t, s, limits("m")) },
			code: ChosenRows, path: "x a m b y", says: "is open, which is closed in all rows", repairs: "Hold a as well; m limits no rows",
		},
		{
			name: "M3 by an effect of the exposure alone", sheet: "x -> y, x -> s, (u) -> y", ask: "x y",
			seed: func(s *study.Study) *study.Study { return apply(t, s, limits("s")) },
			code: ChosenRows, severity: Warn, path: "x s", says: "by these arrows that does no harm", repairs: "s limits no rows",
		},
		{
			name: "M3 by what is not drawn", sheet: hedges, ask: "hedge bees spray soil", seed: func(s *study.Study) *study.Study {
				return apply(t, s, study.AddVariable{Variable: study.Variable{ID: "answered"}},
					study.AddData{Data: study.Data{Name: "d", File: "d.csv", Keep: []study.Condition{{Variable: "answered", Low: &low}}}})
			},
			code: ChosenRows, severity: Warn, says: "answered, which is not on the sheet", repairs: "Put answered on the sheet; Use all rows",
		},
		{
			name: "M4 later tier", sheet: births, ask: "smoke trouble class age noted", seed: func(s *study.Study) *study.Study { return tiers(t, s, "smoke1 noted2") },
			code: AfterExposure, severity: Warn, says: "noted is held and came after smoke (tier 2 after 1)", repairs: "Draw smoke → noted; Leave noted free",
		},
		{
			name: "M4 harmless effect of the exposure", sheet: hedges + ", hedge -> shade", ask: "hedge bees spray soil shade",
			code: AfterExposure, severity: Warn, path: "hedge shade", says: "shade is held, but it is an effect of hedge, by hedge → shade", repairs: "Leave shade free",
		},
		{
			name: "M4 by the level of the data", sheet: hedges + ", wind -> mood, mood -> bees", ask: "hedge bees spray soil mood", seed: func(s *study.Study) *study.Study {
				s = apply(t, s, study.AddPlate{Plate: study.Plate{Name: "farm"}})
				s = change(t, s, "spray", func(v *study.Variable) { v.Plates = []string{"farm"} })
				return change(t, s, "hedge", func(v *study.Variable) { v.Plates = []string{"farm"} })
			},
			code: AfterExposure, severity: Note, says: "mood is held and varies within farm, where hedge does not", repairs: "Draw hedge → mood; Leave mood free; mood came first",
		},
		{
			name: "M5 instrument", sheet: "z -> x -> y, c -> x, c -> y, (u) -> y", ask: "x y c z",
			code: HeldInstrument, severity: Warn, path: "z x y", says: "Holding z only makes the answer less precise", repairs: "Leave z free",
		},
		{
			name: "M5 subsidy, where no set would do", sheet: crops, ask: "cover yield subsidy",
			code: HeldInstrument, severity: Warn, path: "cover skill yield", says: "cover ← skill → yield stays open", repairs: "Leave subsidy free",
		},
		{
			name: "M6 nothing unmeasured", sheet: "c -> x -> m -> y, c -> y", ask: "x y c",
			code: NothingHidden, severity: Note, says: "could x and y share a cause that nobody measured", repairs: "Draw one of x and y; Draw one of x and m",
		},
		{
			name: "M7 no contrast", sheet: hedges, ask: "hedge bees spray soil", seed: func(s *study.Study) *study.Study {
				s = change(t, s, "hedge", func(v *study.Variable) { v.Range = &study.Range{Low: 0, High: 180} })
				q := *s.Questions[0]
				q.From, q.To = nil, nil
				return apply(t, s, study.ChangeQuestion{To: q})
			},
			code: NoContrast, severity: Warn, says: "The question compares no values of hedge", repairs: "Compare 20 → 160",
		},
		{
			name: "M8 no reason", sheet: hedges + ", moon", ask: "hedge bees spray soil moon",
			code: HeldForNoReason, severity: Note, says: "with spray and soil held it goes neither with hedge nor with bees", repairs: "Leave moon free",
		},
		{
			name: "M17 record taken for the thing", sheet: "c -> x -> y, c -> y, (u) -> y", ask: "x y c", seed: func(s *study.Study) *study.Study {
				s = apply(t, s, study.AddVariable{Variable: study.Variable{ID: "truth"}})
				return change(t, s, "c", func(v *study.Variable) { v.Records = "truth" })
			},
			code: RecordTakenExact, severity: Note, says: "c is an error-prone record of truth", repairs: "Draw truth behind it",
		},
		{
			name: "M17 record held for the thing", sheet: "(truth) -> x -> y, truth -> y, truth -> c", ask: "x y c", seed: func(s *study.Study) *study.Study {
				return change(t, s, "c", func(v *study.Variable) { v.Records = "truth" })
			},
			code: RecordTakenExact, severity: Note, path: "x truth y", says: "Holding c, a record of truth with error, closes x ← truth → y only in part", repairs: "Leave c free",
		},
		{
			name: "M19 against time", sheet: hedges, ask: "hedge bees spray soil", seed: func(s *study.Study) *study.Study { return tiers(t, s, "wind3 count2") },
			code: AgainstTime, path: "wind count", says: "The arrow wind → count runs against time: wind is of tier 3, count of tier 2.", repairs: "Turn it round; Delete it",
		},
	} {
		t.Run(c.name, func(t *testing.T) {
			s := sheet(t, c.sheet, c.ask)
			if c.seed != nil {
				s = c.seed(s)
			}
			all := find(s)
			if len(all) != 1 && (c.code == NothingHidden || len(alarms(all)) != 1) {
				t.Fatalf("%d findings: %s", len(all), spell(all))
			}
			m := all[0]
			if m.Code != c.code || m.Severity != c.severity || !strings.Contains(m.Sentence, c.says) {
				t.Errorf("it says %s %d: %s", m.Key, m.Severity, m.Sentence)
			}
			if got := strings.Join(m.Path, " "); got != c.path {
				t.Errorf("path %q, want %q", got, c.path)
			}
			var words []string
			for _, r := range m.Repairs {
				words = append(words, r.Words)
				after := find(apply(t, s, r.Edit))
				if slices.Contains(keys(after), m.Key) {
					t.Errorf("%q leaves it", r.Words)
				}
			}
			if got := strings.Join(words, "; "); got != c.repairs {
				t.Errorf("repairs %q, want %q", got, c.repairs)
			}
			if m.Why == "" || !strings.HasSuffix(m.Sentence, ".") && !strings.HasSuffix(m.Sentence, "?") {
				t.Errorf("%q, because %q", m.Sentence, m.Why)
			}
			aside := apply(t, s, study.Dismiss{Dismissal: study.Dismissal{Rival: "r", Key: m.Key, Why: "known"}})
			if slices.Contains(keys(find(aside)), m.Key) {
				t.Error("set aside, it is still told")
			}
			if set := SetAside(aside, "r", aside.Questions[0], nil, nil); len(set) != 1 || set[0].Aside != "known" {
				t.Errorf("set aside: %v", set)
			}
		})
	}
}

// TestDirectEffect: what is fixed is no mistake, what the fixed and the
// exposure act on is.
func TestDirectEffect(t *testing.T) {
	direct := func(s *study.Study, fixed string) *study.Study {
		q := *s.Questions[0]
		q.Effect, q.Fixed = study.DirectEffect, []study.Fix{{Variable: fixed}}
		return apply(t, s, study.ChangeQuestion{To: q})
	}
	if bad := find(direct(sheet(t, hedges, "hedge bees spray soil"), "flowers")); len(bad) > 0 {
		t.Errorf("a sound direct question: %s", spell(bad))
	}
	all := find(direct(sheet(t, hedges+", hedge -> nests -> bees", "hedge bees spray soil nests"), "flowers"))
	if len(all) != 1 || all[0].Code != HeldMediator || strings.Join(all[0].Path, " ") != "hedge nests" {
		t.Errorf("a held variable on the direct way: %s", spell(all))
	}
}

// TestMiddle: the value at which a mediator is first fixed is the median of its
// column, in its unit.
func TestMiddle(t *testing.T) {
	data, err := table.Read("d", strings.NewReader("f\n10\n20\n30\n40\n50\n"), table.Options{})
	if err != nil {
		t.Fatal(err)
	}
	v := &study.Variable{ID: "f", Column: "f", Divide: 100}
	if at, ok := middle(v, data); !ok || at.Number != 0.3 {
		t.Errorf("middle %v, %v", at, ok)
	}
	from, to := Contrast(v, data)
	if from == nil || from.Number != 0.15 || to.Number != 0.45 {
		t.Errorf("contrast %v, %v", from, to)
	}
}

func TestUnroll(t *testing.T) {
	s := sheet(t, "soil -> hedge -> flowers -> bees, soil -> bees, temp -> bees, (care) -> flowers", "hedge bees")
	_, err := draws("bees", "hedge").Apply(s)
	if err == nil || !strings.Contains(err.Error(), "hedge → flowers → bees → hedge") {
		t.Fatalf("the cycle is not named: %v", err)
	}
	edit, err := Unroll(s, "r", "bees", "hedge")
	if err != nil {
		t.Fatal(err)
	}
	after := apply(t, s, edit)
	var drawn []string
	for _, a := range after.Rival("r").Diagram.Arrows {
		if s.Rival("r").Diagram.Arrow(a.From, a.To) == nil {
			drawn = append(drawn, a.From+" "+a.To)
		}
	}
	slices.Sort(drawn)
	want := []string{
		"bees_before bees", "bees_before hedge", "care flowers_before", "flowers_before bees_before", "flowers_before flowers",
		"hedge_before flowers_before", "hedge_before hedge", "soil bees_before", "soil hedge_before", "temp bees_before",
	}
	if !slices.Equal(drawn, want) {
		t.Errorf("drawn %v", drawn)
	}
	if v := after.Variable("bees_before"); !v.Unmeasured || v.Column != "" || v.Label != "earlier bees" {
		t.Errorf("the earlier bees are %+v", v)
	}
	if _, err := Unroll(s, "r", "hedge", "bees"); err == nil {
		t.Error("an arrow that closes no cycle is unrolled")
	}
}

// TestCoefficients labels the table of story S3 (REQUIREMENTS row 40) and
// others: the income coefficient there is not the total effect of income.
func TestCoefficients(t *testing.T) {
	for _, c := range []struct {
		sheet, ask, parent, child, given string
		as                               ReadAs
		control                          bool
		words, path                      string
	}{
		{scholarship, "award mark", "award", "mark", "award income entry", TotalEffect, false, "total effect of award on mark", ""},
		{scholarship, "award mark", "income", "mark", "award income entry", DirectEffect, true, "not a total effect: what income does to mark directly, with entry and award kept fixed", ""},
		{scholarship, "award mark", "entry", "mark", "award income entry", Association, true, "association, not an effect of entry on mark: entry ← gift → mark is open", "entry gift mark"},
		{scholarship, "award mark", "award", "mark", "award income study entry", DirectEffect, false, "not a total effect: what award does to mark directly", ""},
		{hedges, "hedge bees", "hedge", "bees", "hedge flowers spray soil", DirectEffect, false, "not a total effect: what hedge does to bees directly, with spray, soil and flowers kept fixed", ""},
		{hedges, "hedge bees", "flowers", "bees", "hedge flowers spray", TotalEffect, true, "total effect of flowers on bees", ""},
		{hedges, "hedge bees", "hedge", "bees", "hedge", Association, false, "association, not an effect of hedge on bees: hedge ↔ spray → bees is open", "hedge spray bees"},
		{"a, b", "a b", "a", "b", "a", Association, false, "association, not an effect of a on b: no arrows lead there", ""},
	} {
		s := sheet(t, c.sheet, c.ask)
		g, err := s.Graph("r")
		if err != nil {
			t.Fatal(err)
		}
		ends := strings.Fields(c.ask)
		r := ReadCoefficient(g, g.Index(ends[0]), g.Index(ends[1]), g.Index(c.parent), g.Index(c.child), sortedIndex(g, strings.Fields(c.given)))
		if r.As != c.as || r.Control != c.control || !strings.Contains(r.Words, c.words) || strings.Join(g.NamesOf(r.Path), " ") != c.path {
			t.Errorf("%s in the law of %s given %s: %+v", c.parent, c.child, c.given, r)
		}
	}
}
