package study

import (
	"bytes"
	"errors"
	"fmt"
	"reflect"
	"slices"
	"strings"
	"testing"

	"arrowroot/compile/formula"

	"pgregory.net/rapid"
)

func apply(t rapid.TB, s *Study, edits ...Edit) *Study {
	t.Helper()
	for _, e := range edits {
		next, err := e.Apply(s)
		if err != nil {
			t.Fatalf("%s: %v", e.Label(), err)
		}
		s = next
	}
	return s
}

const nest = "Nest and feed"

func TestEditsShareWhatTheyDoNotTouch(t *testing.T) {
	s := mustRead(t, example(t))
	r := s.Rival(nest)
	moved := apply(t, s, MoveNodes{Rival: nest, To: map[string]Point{"hedge": {1.23456, 2}}})
	m := moved.Rival(nest)
	if m.Diagram != r.Diagram || m.Layout == r.Layout || moved.Variables[0] != s.Variables[0] {
		t.Error("a move must change the layout alone")
	}
	if m.Layout.At["hedge"] != (Point{1.23, 2}) || r.Layout.At["hedge"] != (Point{320, 200}) {
		t.Error("a move is rounded to hundredths and leaves the old layout alone")
	}
	arrow := Arrow{From: "soil", To: "bees"}
	drawn := apply(t, s, AddArrow{Rival: nest, Arrow: arrow})
	d := drawn.Rival(nest)
	if d.Layout != r.Layout || d.Diagram == r.Diagram || d.Diagram.Nodes[0] != r.Diagram.Nodes[0] || d.Diagram.Arrows[0] != r.Diagram.Arrows[0] {
		t.Error("an arrow must change the diagram's arrows alone")
	}
	held := apply(t, s, Hold{At: 0, Variable: "temp", On: true})
	if held.Rivals[0] != s.Rivals[0] || !slices.Equal(held.Questions[0].Held, []string{"pesticide", "soil", "temp"}) || len(s.Questions[0].Held) != 2 {
		t.Error("holding must change the question alone")
	}
	copied := apply(t, s, CopyRival{From: nest, Name: "Feed only"})
	if copied.Rival("Feed only").Diagram != r.Diagram {
		t.Error("a copied rival shares its diagram")
	}
}

func TestEditsThatChangeNothingGiveTheSameStudy(t *testing.T) {
	s := mustRead(t, example(t))
	arrow := *s.Rival(nest).Diagram.Arrow("hedge", "bees")
	for _, e := range []Edit{
		SetTitle{s.Title}, Several{}, Several{Edits: []Edit{SetTitle{s.Title}}},
		ChangeVariable{ID: "bees", To: *s.Variable("bees")}, Bind{Variable: "bees", Column: "bees"},
		MoveNodes{Rival: nest, To: map[string]Point{"hedge": {320, 200}}}, MoveNodes{Rival: nest},
		ChangeArrow{Rival: nest, From: "hedge", To: "bees", Arrow: arrow},
		ChangeLaw{Rival: nest, Variable: "hedge"}, ChangeLaw{Rival: nest, Variable: "hedge", Law: &Law{}},
		ChangeLaw{Rival: nest, Variable: "bees", Law: s.Rival(nest).Diagram.Node("bees").Law},
		ChangePlate{Name: "farm", To: *s.Plates[0]}, ChangeData{Name: "traps", To: *s.Data[0]},
		ChangeQuestion{At: 0, To: *s.Questions[0]}, ChangeQuestion{At: 1, To: *s.Questions[1]},
		LimitRows{Rival: nest, Variable: "temp", On: true}, Dismiss{*s.Dismissed[0]}, Hold{At: 0, Variable: "soil", On: true}, Hold{At: 0, Variable: "temp"},
		RenameRival{Old: nest, New: nest}, AddAbsent{Rival: nest, Absent: *s.Rival(nest).Diagram.Absent[0]},
		TypeArrows{Rival: nest, Text: "hedge -> flowers -> bees"},
	} {
		if next, err := e.Apply(s); err != nil || next != s {
			t.Errorf("%T %s: another study (%v)", e, e.Label(), err)
		}
	}
}

func TestEditsRefuse(t *testing.T) {
	s := mustRead(t, example(t))
	ask := func(change func(*Question)) Edit { // the example's second question, changed
		q := copyQuestion(*s.Questions[1])
		change(&q)
		return ChangeQuestion{1, q}
	}
	for _, c := range []struct {
		edit Edit
		want string
	}{
		{AddVariable{Variable{ID: "bees"}}, "there is a variable named “bees” already"},
		{AddVariable{Variable{ID: "two words"}}, "“two words” cannot name a variable"},
		{AddVariable{Variable{ID: "σ"}}, "Greek letters are kept in their typed form, sigma"},
		{ChangeVariable{ID: "bees", To: Variable{ID: "hedge"}}, "there is a variable named “hedge” already"},
		{ChangeVariable{ID: "wasps", To: Variable{ID: "w"}}, "there is no variable wasps"},
		{AddNode{Rival: nest, Variable: "wasps"}, "there is no variable wasps"},
		{AddNode{Rival: nest, Variable: "bees"}, "bees is on the sheet of “Nest and feed” already"},
		{AddNode{Rival: "No", Variable: "bees"}, "there is no rival “No”"},
		{AddArrow{nest, Arrow{From: "hedge", To: "bees"}}, "the arrow hedge → bees is drawn already"},
		{AddArrow{nest, Arrow{From: "hedge", To: "wasps"}}, "wasps is not on the sheet of “Nest and feed”"},
		{CopyRival{nest, nest}, "there is a rival named “Nest and feed” already"},
		{AddData{Data{Name: "traps"}}, "there is a data table named “traps” already"},
		{AddArrow{nest, Arrow{From: "hedge", To: "hedge"}}, "an arrow cannot join hedge to itself"},
		{AddArrow{nest, Arrow{From: "bees", To: "hedge"}}, "An arrow bees → hedge would close a cycle: hedge → bees → hedge. If bees acts on hedge only later"},
		{AddArrow{nest, Arrow{From: "soil", To: "bees", Form: "spiral"}}, "“spiral” is not a form this version knows (slope, log, steps, one-way steps, threshold, saturating, offset)"},
		{ChangeArrow{nest, "hedge", "flowers", Arrow{From: "bees", To: "attitude"}}, "An arrow bees → attitude would close a cycle: attitude → hedge → bees → attitude."},
		{RemoveArrow{nest, "bees", "hedge"}, "there is no arrow bees → hedge"},
		{AddArc{nest, Arc{A: "pesticide", B: "hedge"}}, "the arc pesticide ↔ hedge is drawn already"},
		{AddAbsent{nest, Absent{From: "hedge", To: "bees"}}, "the arrow hedge → bees is drawn; delete it before you argue its absence"},
		{Hold{At: 0, Variable: "hedge", On: true}, "hedge cannot be held: it is what the question is about"},
		{Hold{At: 3, Variable: "soil", On: true}, "there is no question 4"},
		{AddPlate{Plate{Name: "farm"}}, "there is a plate named “farm” already"},
		{AddPlate{Plate{Name: "field", Within: "field"}}, "the plate field is within itself"},
		{Bind{Variable: "bees", Data: "nets", Column: "x"}, "bees is bound to the data “nets”, which are not in the study"},
		{Hold{At: 0, Variable: "field", On: true}, "a question holds field, which is neither among the variables nor among the plates"},
		{Dismiss{Dismissal{Rival: "No", Key: "M1"}}, "a finding is set aside for the rival “No”, which does not exist"},
		{Dismiss{Dismissal{Rival: nest, Key: " "}}, "it is not said which finding is set aside"},
		{Restore{nest, "M1"}, "the finding “M1” of “Nest and feed” was not set aside"},
		{LimitRows{nest, "wasps", true}, "wasps is not on the sheet of “Nest and feed”"},
		{ask(func(q *Question) { q.Effect = "" }), "a question fixes a variable, which only a controlled direct effect does"},
		{ask(func(q *Question) { q.Fixed[0].Variable = "hedge" }), "a question fixes hedge, which is its exposure or outcome"},
		{ask(func(q *Question) { q.Fixed[0].Variable = "wasps" }), "a question fixes wasps, which is not among the variables"},
		{ask(func(q *Question) { q.Fixed[0].Variable = "soil" }), "a question fixes soil twice"},
		{ask(func(q *Question) { q.Fixed[0].Variable = "pesticide" }), "a question holds pesticide and fixes it; only one of them can be meant"},
		{ask(func(q *Question) { q.Where[0].Variable = "wasps" }), "a question has a condition on wasps, which is not among the variables"},
		{ask(func(q *Question) { q.Where = append(q.Where, q.Where[0]) }), "a question has two conditions on pesticide"},
		{ask(func(q *Question) { q.Where[0].High = new(float64) }), "a question asks for pesticide from a higher to a lower number"},
		{ask(func(q *Question) { q.Where[0].Low = nil }), "a question has a condition on pesticide that asks for nothing: give words or bounds"},
		{ask(func(q *Question) { q.Where[0].Words = []string{"a"} }), "a question asks for words and for bounds of pesticide; only one of them can be meant"},
		{ask(func(q *Question) { q.Groups = "old groups" }), "“old groups” is not a choice of groups this version knows (these groups, new groups)"},
		{ask(func(q *Question) { q.Weigh = "by weight" }), "“by weight” is not a way to weigh this version knows (by rows, by groups)"},
		{ChangeData{"traps", Data{Name: "traps", Keep: []Condition{{Variable: "soil", Words: []string{"clay", "clay"}}}}}, "the row filter of “traps” asks for “clay” of soil twice"},
		{ChangeVariable{"temp", Variable{ID: "temp", Records: "temp"}}, "temp cannot be a record of itself"},
		{ChangeVariable{"temp", Variable{ID: "temp", Answers: "wasps"}}, "temp says where wasps is recorded, which is not among the variables"},
		{ChangeVariable{"temp", Variable{ID: "temp", Cost: -1}}, "measuring temp cannot cost less than nothing"},
		{Several{Edits: []Edit{SetTitle{"x"}, RemoveRival{"No"}}}, "there is no rival “No”"},
	} {
		if next, err := c.edit.Apply(s); err == nil || next != nil || !strings.Contains(err.Error(), c.want) {
			t.Errorf("%s: %v\nwant %s", c.edit.Label(), err, c.want)
		}
	}
	var cycle *CycleError
	_, err := AddArrow{nest, Arrow{From: "flowers", To: "attitude"}}.Apply(s)
	if !errors.As(err, &cycle) || !slices.Equal(cycle.Cycle, []string{"attitude", "hedge", "flowers", "attitude"}) {
		t.Errorf("got %v", err)
	}
}

func TestRenamingAVariableReachesEverything(t *testing.T) {
	s := mustRead(t, example(t))
	s = apply(t, s, AddVariable{Variable{ID: "hedge_bees", Computed: "hedge * bees"}})
	next := apply(t, s, ChangeVariable{ID: "hedge", To: func() Variable { v := *s.Variable("hedge"); v.ID = "rows"; return v }()})
	text := string(Write(next))
	// The only places where the letters may stand are the label, the column,
	// the reason somebody typed and the variable that has them in its name.
	for _, line := range strings.Split(text, "\n") {
		for _, allowed := range []string{"hedge density", "hedge_m_ha", "hedgerows.csv", "hedge banks flower", `"id": "hedge_bees"`, "Hedgerows"} {
			line = strings.ReplaceAll(line, allowed, "")
		}
		if strings.Contains(line, "hedge") {
			t.Errorf("hedge is left in %s", line)
		}
	}
	for _, want := range []string{
		`"log rate = alpha_bees by farm + beta_rows_bees * (rows - 90) + log hours"`,
		`{"beta_rows_bees": "normal with mean 0, sd 0.01"}`, `"computed": "rows * bees"`, `{"variable": "rows", "at": [320, 200]}`,
		`{"from": "rows", "to": "flowers"`, `{"between": ["rows", "pesticide"]`, `{"exposure": "rows"`,
		`"finding": "M3 rows flowers"`,
	} {
		if !strings.Contains(text, want) {
			t.Errorf("%s is not in\n%s", want, text)
		}
	}
	if next.Variable("bees") != s.Variable("bees") || next.Rival(nest).Diagram.Arrow("hours", "bees") != s.Rival(nest).Diagram.Arrow("hours", "bees") {
		t.Error("parts without the name lost their pointers")
	}
	back := apply(t, next, ChangeVariable{ID: "rows", To: *s.Variable("hedge")})
	if !bytes.Equal(Write(back), Write(s)) {
		t.Errorf("renaming back gives\n%s", Write(back))
	}
}

func TestRenamingAPlateReachesEverything(t *testing.T) {
	s := mustRead(t, example(t))
	s = apply(t, s, AddPlate{Plate{Name: "field", Within: "farm"}},
		AddArc{nest, Arc{A: "soil", B: "bees", Plates: []string{"farm"}}})
	next := apply(t, s, ChangePlate{Name: "farm", To: Plate{Name: "holding", Column: "farm_id"}})
	if text := strings.ReplaceAll(string(Write(next)), "farm_id", ""); strings.Contains(strings.ReplaceAll(text, "farmer", ""), "farm") {
		t.Errorf("farm is left in\n%s", text)
	}
}

func TestTypedNamesOfParameters(t *testing.T) {
	known := map[string]bool{"a": true, "b": true, "a_b": true, "bees": true, "old": true, "old_x": true, "farm": true}
	one := func(id string) string {
		return map[string]string{"old": "new"}[id] + map[bool]string{true: "", false: id}[id == "old"]
	}
	for _, c := range []struct{ id, of, want string }{
		{"beta_old_bees", "bees", "beta_new_bees"},
		{"alpha_old", "old", "alpha_new"},
		{"beta_a_old", "old", "beta_a_new"},
		{"beta_a_b_old", "old", "beta_a_b_new"},
		{"tau_old_farm", "bees", "tau_new_farm"},
		{"beta_old_x_bees", "bees", "beta_old_x_bees"},
		{"beta_old_y_bees", "bees", "beta_old_y_bees"},
		{"old_x", "bees", "old_x"},
		{"older", "bees", "older"},
		{"beta_older_bees", "bees", "beta_older_bees"},
	} {
		if got := renameParameter(c.id, c.of, one, known); got != c.want {
			t.Errorf("%s in the law of %s becomes %s, want %s", c.id, c.of, got, c.want)
		}
	}
	// "beta_a_b" is of the arrow a → b in b's law, and of a_b itself in its.
	to := func(id string) string { return map[bool]string{true: "z", false: id}[id == "a"] }
	if got := renameParameter("beta_a_b", "b", to, known); got != "beta_z_b" {
		t.Errorf("in the law of b: %s", got)
	}
	if got := renameParameter("alpha_a_b", "a_b", to, known); got != "alpha_a_b" {
		t.Errorf("in the law of a_b: %s", got)
	}
}

// Every place outside formulas where a variable can be named but for ends of
// arrows follows its name and goes with it.
func TestNamesOutsideDiagrams(t *testing.T) {
	s := mustRead(t, example(t))
	for _, id := range []string{"flowers", "soil", "temp", "pesticide", "attitude", "hours"} {
		v := *s.Variable(id)
		v.ID = "elsewhere"
		v.Label, v.Column = "", ""
		renamed := apply(t, s, SetTitle{""}, ChangeVariable{id, v})
		removed := apply(t, s, SetTitle{""}, RemoveVariable{id})
		for _, next := range []*Study{renamed, removed} {
			for _, line := range strings.Split(string(Write(next)), "\n") {
				if _, quoted, found := strings.Cut(line, `"`+id+`"`); found || strings.Contains(line, `M3 hedge `+id) {
					t.Errorf("%s is left in %s %s", id, line, quoted)
				}
			}
		}
		if next := apply(t, renamed, ChangeVariable{"elsewhere", *s.Variable(id)}, SetTitle{s.Title}); !bytes.Equal(Write(next), Write(s)) {
			t.Errorf("%s renamed and named back:\n%s", id, Write(next))
		}
	}
	next := apply(t, s, RemoveVariable{"soil"})
	if next.Data[0].Keep[0].Variable != "temp" || len(next.Questions[1].Fixed) != 1 || next.Dismissed[0] != s.Dismissed[0] {
		t.Error("more than soil is gone")
	}
	next = apply(t, s, RenameRival{nest, "Other"})
	if next.Dismissal("Other", "M3 hedge flowers") == nil || next.Rival("Other").Diagram != s.Rivals[0].Diagram {
		t.Error("a renamed rival lost what was set aside, or its diagram")
	}
	next = apply(t, s, CopyRival{nest, "Copy"}, RemoveRival{nest}, Restore{"Copy", "M3 hedge flowers"})
	if next.Dismissed != nil {
		t.Errorf("left: %+v", next.Dismissed[0])
	}
	next = apply(t, s, ChangeLaw{nest, "temp", &Law{Family: "Student t"}}, ChangePlate{"farm", Plate{Name: "holding"}})
	if !next.Rival(nest).Diagram.Node("temp").Limits || !slices.Equal(next.Questions[1].Held, []string{"pesticide", "holding"}) || s.HoldsPlate("pesticide") || !next.HoldsPlate("holding") {
		t.Error("a law or a plate's name took something else along")
	}
	if next = apply(t, next, RemovePlate{"holding"}); !slices.Equal(next.Questions[1].Held, []string{"pesticide"}) {
		t.Error("a plate that is gone is still held")
	}
}

func TestRemovingTakesAlong(t *testing.T) {
	s := mustRead(t, example(t))
	d := apply(t, s, RemoveNodes{Rival: nest, Variables: []string{"flowers"}}).Rival(nest).Diagram
	if d.Node("flowers") != nil || d.Arrow("hedge", "flowers") != nil || d.AbsentArrow("temp", "flowers") != nil || d.Arrow("hedge", "bees").With != nil {
		t.Error("something of flowers is left on the sheet")
	}
	next := apply(t, s, RemoveVariable{"hedge"})
	q := next.Questions[0]
	if q.Exposure != "" || q.From != nil || len(q.Held) != 2 || next.Rival(nest).Diagram.Arcs != nil {
		t.Errorf("hedge is left in %+v", q)
	}
	next = apply(t, s, Hold{At: 0, Variable: "soil"}, Hold{At: 0, Variable: "pesticide"})
	if held := next.Questions[0].Held; held == nil || len(held) != 0 {
		t.Errorf("nothing held must be kept apart from nothing said: %v", held)
	}
	next = apply(t, s, RemovePlate{"farm"})
	if text := string(Write(next)); strings.Contains(text, `["farm"]`) {
		t.Errorf("the plate is left in\n%s", text)
	}
	next = apply(t, s, AddData{Data{Name: "second", File: "b.csv"}}, RemoveData{"traps"})
	if next.Variable("bees").Column != "" {
		t.Error("bees is still bound")
	}
}

func TestMovesMerge(t *testing.T) {
	a := MoveNodes{Rival: nest, To: map[string]Point{"hedge": {1, 1}}}
	b := MoveNodes{Rival: nest, To: map[string]Point{"hedge": {2, 2}}}
	if m, ok := a.Merge(b); !ok || !reflect.DeepEqual(m, b) {
		t.Errorf("two moves of one node are one: %v", m)
	}
	for _, other := range []Edit{
		MoveNodes{Rival: "No", To: b.To}, MoveNodes{Rival: nest, To: map[string]Point{"bees": {}}}, SetTitle{},
	} {
		if _, ok := a.Merge(other); ok {
			t.Errorf("merged with %s", other.Label())
		}
	}
}

func TestGraph(t *testing.T) {
	s := mustRead(t, example(t))
	v := *s.Variable("temp")
	v.Computed = "2 * hours"
	g, err := apply(t, s, ChangeVariable{"temp", v}).Graph(nest)
	if err != nil {
		t.Fatal(err)
	}
	if got := strings.Join(g.Names, " "); got != "hedge flowers pesticide soil hours temp attitude bees" {
		t.Error(got)
	}
	hedge, bees := g.Index("hedge"), g.Index("bees")
	if !g.HasArrow(hedge, bees) || len(g.Arrows) != 5 || !slices.Equal(g.Siblings[hedge], []int{g.Index("pesticide")}) {
		t.Errorf("%+v", g)
	}
	if g.Measured[g.Index("attitude")] || !g.Measured[bees] || !g.Computed[g.Index("temp")] || g.Computed[bees] {
		t.Error("unmeasured or computed marks are wrong")
	}
	if _, err := s.Graph("No"); err == nil || err.Error() != "there is no rival “No”" {
		t.Error(err)
	}
}

// someEdit draws an edit that fits the study more often than not.
func someEdit(t *rapid.T, s *Study) Edit {
	name := func(what string) string {
		return rapid.SampledFrom([]string{"a", "b", "c", "d", "a_b", "long_name", "blé"}).Draw(t, what)
	}
	variable := func(what string) string {
		if len(s.Variables) == 0 {
			return name(what)
		}
		return rapid.SampledFrom(s.Variables).Draw(t, what).ID
	}
	rival := func() string {
		if len(s.Rivals) == 0 {
			return "none"
		}
		return rapid.SampledFrom(s.Rivals).Draw(t, "rival").Name
	}
	at := func() int { return rapid.IntRange(0, max(len(s.Questions)-1, 0)).Draw(t, "at") }
	note := func() int { return rapid.IntRange(0, 2).Draw(t, "note") }
	point := func() Point {
		n := rapid.IntRange(-3000, 3000)
		return Point{float64(n.Draw(t, "x")) / 7, float64(n.Draw(t, "y"))}
	}
	line := func() Variable {
		return Variable{ID: name("id"), Label: name("label"), Scale: rapid.SampledFrom(Scales[:]).Draw(t, "scale"),
			Range: &Range{0.1, point().X + 1000}, Computed: rapid.SampledFrom([]string{"", "a + log a_b"}).Draw(t, "computed"), Missing: []string{"?"},
			Records: rapid.SampledFrom([]string{"", "a"}).Draw(t, "records"), Answers: rapid.SampledFrom([]string{"", "b"}).Draw(t, "answers"), Cost: 1.5}
	}
	arrow := func() Arrow {
		return Arrow{From: variable("from"), To: variable("to"), Why: "because of \"it\"\n", Prior: "normal with mean 0, sd a",
			Form: rapid.SampledFrom(append([]string{""}, forms[:]...)).Draw(t, "form")}
	}
	law := func() *Law {
		return &Law{Family: "normal", Formula: "mean = alpha_a + beta_a_b by farm * a", Arguments: []Argument{{"sd", "2 * b"}},
			Priors: []Prior{{"beta_" + name("parent") + "_" + name("child"), "normal with mean 0, sd 1"}}}
	}
	conditions := func() []Condition {
		low := point().Y
		return rapid.SampledFrom([][]Condition{nil, {{Variable: variable("where"), Words: []string{"x", "y"}}},
			{{Variable: variable("where"), Low: &low}, {Variable: variable("where too"), Low: &low, High: &low}}}).Draw(t, "conditions")
	}
	question := func() Question {
		q := Question{Exposure: variable("exposure"), Outcome: variable("outcome"), From: &Setting{Number: point().X}, To: &Setting{Word: "high"},
			Held: rapid.SampledFrom([][]string{nil, {}, {"d"}, {"farm"}}).Draw(t, "held"), Where: conditions(),
			Groups: rapid.SampledFrom([]string{"", TheseGroups, NewGroups}).Draw(t, "groups"), Weigh: rapid.SampledFrom([]string{"", ByGroups}).Draw(t, "weigh")}
		if rapid.Bool().Draw(t, "direct") {
			q.Effect, q.Fixed = DirectEffect, []Fix{{Variable: variable("fixed"), At: Setting{Word: "low"}}}
		}
		return q
	}
	kinds := []func() Edit{
		func() Edit { return AddVariable{line()} }, func() Edit { return ChangeVariable{variable("variable"), line()} },
		func() Edit { return RemoveVariable{variable("variable")} },
		func() Edit { p := point(); return AddNode{rival(), variable("variable"), &p} }, func() Edit { return AddNode{rival(), variable("variable"), nil} },
		func() Edit { return RemoveNodes{rival(), []string{variable("variable")}} },
		func() Edit { return MoveNodes{rival(), map[string]Point{variable("variable"): point()}} },
		func() Edit { return AddArrow{rival(), arrow()} }, func() Edit { return AddArrow{rival(), arrow()} },
		func() Edit { return RemoveArrow{rival(), variable("from"), variable("to")} },
		func() Edit { return ChangeArrow{rival(), variable("old from"), variable("old to"), arrow()} },
		func() Edit { return AddArc{rival(), Arc{A: variable("end"), B: variable("end")}} },
		func() Edit { return RemoveArc{rival(), variable("end"), variable("end")} },
		func() Edit { return ChangeLaw{rival(), variable("variable"), law()} },
		func() Edit {
			return AddAbsent{rival(), Absent{From: variable("from"), To: variable("to"), Why: "no way", References: []string{"r"}}}
		},
		func() Edit { return RemoveAbsent{rival(), variable("from"), variable("to")} },
		func() Edit { return DrawTruth{rival(), variable("record"), name("truth")} },
		func() Edit { return AddNote{rival(), Note{point(), name("text")}} }, func() Edit { return ChangeNote{rival(), note(), name("text")} },
		func() Edit { return MoveNotes{rival(), map[int]Point{note(): point()}} }, func() Edit { return RemoveNotes{rival(), []int{note()}} },
		func() Edit { return AddPlate{Plate{Name: "farm"}} }, func() Edit { return AddPlate{Plate{Name: "field", Within: "farm"}} },
		func() Edit { return ChangePlate{"farm", Plate{Name: "holding"}} }, func() Edit { return RemovePlate{"farm"} },
		func() Edit { return CopyRival{rival(), "copy"} }, func() Edit { return RenameRival{rival(), name("rival")} },
		func() Edit { return RemoveRival{rival()} }, func() Edit { return AddRival{Rival{Name: "R"}} }, func() Edit { return NoteRival{rival(), "n"} },
		func() Edit { return AddQuestion{question()} }, func() Edit { return ChangeQuestion{at(), question()} },
		func() Edit { return RemoveQuestion{at()} }, func() Edit { return Hold{at(), variable("held"), rapid.Bool().Draw(t, "on")} },
		func() Edit { return AddData{Data{Name: "t", Text: "a,b\n1,2\n"}} }, func() Edit { return ChangeData{"t", Data{Name: "u", File: "u.csv", Rows: 3, Keep: conditions()}} },
		func() Edit { return RemoveData{"u"} }, func() Edit { return Bind{variable("bound"), "", name("column")} },
		func() Edit { return Dismiss{Dismissal{rival(), "M1 " + variable("finding"), "seen"}} },
		func() Edit { return Restore{rival(), "M1 " + variable("finding")} },
		func() Edit { return LimitRows{rival(), variable("limits"), rapid.Bool().Draw(t, "on")} },
		func() Edit { return SetTitle{name("title")} }, func() Edit { return SetNote{name("note")} },
		func() Edit { return TypeArrows{rival(), name("p") + " -> " + name("q") + " <- " + name("r")} },
	}
	return kinds[rapid.IntRange(0, len(kinds)-1).Draw(t, "kind")]()
}

// Any row of edits leaves each earlier study as it was, to the byte, keeps what
// must hold, and survives the file.
func TestAnyEdits(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		type step struct {
			study *Study
			text  []byte
		}
		s := New()
		steps := []step{{s, Write(s)}}
		for range rapid.IntRange(1, 60).Draw(t, "edits") {
			e := someEdit(t, s)
			next, err := e.Apply(s)
			if err != nil {
				if next != nil {
					t.Fatalf("%s gives a study with its error", e.Label())
				}
				continue
			}
			if e.Label() == "" {
				t.Fatalf("%T has no label", e)
			}
			if next != s && reflect.DeepEqual(next, s) {
				t.Fatalf("%T changed nothing and gives another pointer", e)
			}
			if err := Check(next); err != nil {
				t.Fatalf("after %T: %v", e, err)
			}
			s = next
			steps = append(steps, step{s, Write(s)})
		}
		for i, step := range steps {
			if !bytes.Equal(Write(step.study), step.text) {
				t.Fatalf("study %d changed under later edits", i)
			}
		}
		for i, q := range s.Questions {
			if q.From != nil && words(s.Variable(q.Exposure)) {
				// A number for an exposure of words makes no sense, and the
				// file would say a word: let it say so now.
				to := *q
				to.From = &Setting{Word: formula.FormatNumber(q.From.Number)}
				s = apply(t, s, ChangeQuestion{i, to})
			}
		}
		again, err := Read("x.arrowroot", Write(s))
		if err != nil {
			t.Fatalf("%v\n%s", err, Write(s))
		}
		if !bytes.Equal(Write(again), Write(s)) {
			t.Fatalf("read and written again:\n%s\nbefore:\n%s", Write(again), Write(s))
		}
		if err := same(again, s); err != nil {
			t.Fatal(err)
		}
		for _, v := range s.Variables {
			to := *v
			to.ID = "elsewhere"
			there := apply(t, s, ChangeVariable{v.ID, to})
			if back := apply(t, there, ChangeVariable{to.ID, *v}); !bytes.Equal(Write(back), Write(s)) {
				t.Fatalf("%s renamed and named back:\n%s\nbefore:\n%s", v.ID, Write(back), Write(s))
			}
		}
		for _, r := range s.Rivals {
			if g, err := s.Graph(r.Name); err != nil || g.Len() != len(r.Diagram.Nodes) {
				t.Fatalf("the graph of %s: %v", r.Name, err)
			}
		}
	})
}

// same compares studies; layouts with no places are alike.
func same(a, b *Study) error {
	for i, r := range a.Rivals {
		if len(r.Layout.At) == 0 && len(b.Rivals[i].Layout.At) == 0 {
			c := *r
			c.Layout = &Layout{At: b.Rivals[i].Layout.At, Notes: r.Layout.Notes}
			a.Rivals[i] = &c
		}
	}
	if !reflect.DeepEqual(a, b) {
		return fmt.Errorf("what was read differs from what was written:\n%s", Write(b))
	}
	return nil
}
