package study

import (
	"os"
	"path/filepath"
	"reflect"
	"strings"
	"testing"
)

func example(t testing.TB) []byte {
	t.Helper()
	text, err := os.ReadFile("testdata/hedge.arrowroot")
	if err != nil {
		t.Fatal(err)
	}
	return text
}

func mustRead(t testing.TB, text []byte) *Study {
	t.Helper()
	s, err := Read("study.arrowroot", text)
	if err != nil {
		t.Fatal(err)
	}
	return s
}

// The example is in the form that Write gives, with every kind of part.
func TestWriteGivesTheFileBack(t *testing.T) {
	text := example(t)
	if got := string(Write(mustRead(t, text))); got != string(text) {
		t.Errorf("got\n%s", got)
	}
}

// A change of one part is a change of one to three lines, so that version
// control can merge the work of two people.
func TestOneChangeIsAFewLines(t *testing.T) {
	s := mustRead(t, example(t))
	law := *s.Rival(nest).Diagram.Node("bees").Law
	law.Family = "Poisson"
	for _, c := range []struct {
		edit Edit
		most int // lines taken out and put in
	}{
		{AddArrow{nest, Arrow{From: "soil", To: "bees"}}, 3},
		{RemoveArrow{nest, "hedge", "flowers"}, 1},
		{RemoveArrow{nest, "attitude", "hedge"}, 3},
		{ChangeArrow{nest, "hours", "bees", Arrow{From: "hours", To: "bees", Why: "longer out"}}, 2},
		{ChangeLaw{nest, "bees", &law}, 2},
		{MoveNodes{nest, map[string]Point{"hedge": {1, 2}}}, 2},
		{AddVariable{Variable{ID: "wasps"}}, 3},
		{Hold{0, "soil", false}, 2},
		{SetTitle{"Hedges"}, 2},
	} {
		next := apply(t, s, c.edit)
		count := make(map[string]int)
		for _, line := range strings.Split(string(Write(s)), "\n") {
			count[line]--
		}
		for _, line := range strings.Split(string(Write(next)), "\n") {
			count[line]++
		}
		changed := 0
		for _, n := range count {
			changed += max(n, -n)
		}
		if changed == 0 || changed > c.most {
			t.Errorf("%s changes %d lines, want at most %d", c.edit.Label(), changed, c.most)
		}
	}
}

func TestReadIsLiberalWhereNothingElseCanBeMeant(t *testing.T) {
	loose := `{"questions": [{"exposure": "dose", "outcome": "ill", "from": "1.5", "to": 2.0, "held": "age", "as": "Ratio"},
	  {"exposure": "arm", "outcome": "ill", "from": 1, "to": "2", "held": []}],
	 "arrowroot": 1.0, "$schema": "study.schema.json", "note": null,
	 "variables": [{"id": "dose"}, {"id": "ill", "scale": "Binary"}, {"id": "age"}, {"id": "arm", "scale": "category", "levels": [1, 2]}],
	 "rivals": [{"arrows": [{"from": "dose", "to": "ill"}, {"from": "age", "to": "ill"}], "arcs": [{"between": ["age", "arm"]}]}]}`
	// Questions stand first in the file; variables they name come later.
	s := mustRead(t, []byte("\ufeff"+loose))
	want := []*Question{
		{Exposure: "dose", Outcome: "ill", From: &Setting{Number: 1.5}, To: &Setting{Number: 2}, Held: []string{"age"}, As: Ratio},
		{Exposure: "arm", Outcome: "ill", From: &Setting{Word: "1"}, To: &Setting{Word: "2"}, Held: []string{}},
	}
	if !reflect.DeepEqual(s.Questions, want) {
		t.Errorf("questions: got %+v and %+v", s.Questions[0], s.Questions[1])
	}
	var nodes []string
	for _, n := range s.Rivals[0].Diagram.Nodes {
		nodes = append(nodes, n.Variable)
	}
	if got := strings.Join(nodes, " "); got != "dose ill age arm" {
		t.Errorf("without a list of nodes, the sheet shows %s", got)
	}
	if s.Rivals[0].Name != "Rival 1" || s.Variables[1].Scale != Binary {
		t.Errorf("got rival %q, scale %q", s.Rivals[0].Name, s.Variables[1].Scale)
	}
}

func TestSaveAndLoad(t *testing.T) {
	s := mustRead(t, example(t))
	path := filepath.Join(t.TempDir(), "study.arrowroot")
	if err := os.WriteFile(path, []byte("older"), 0o640); err != nil {
		t.Fatal(err)
	}
	if err := Save(path, s); err != nil {
		t.Fatal(err)
	}
	again, err := Load(path)
	if err != nil {
		t.Fatal(err)
	}
	if !reflect.DeepEqual(s, again) {
		t.Error("what was loaded differs from what was saved")
	}
	info, err := os.Stat(path)
	if err != nil || info.Mode().Perm() != 0o640 {
		t.Errorf("the file's permissions are now %v (%v)", info.Mode(), err)
	}
	left, err := os.ReadDir(filepath.Dir(path))
	if err != nil || len(left) != 1 {
		t.Errorf("files left behind: %v (%v)", left, err)
	}
}

func TestSaveThatFailsChangesNothing(t *testing.T) {
	folder := filepath.Join(t.TempDir(), "study.arrowroot")
	if err := os.Mkdir(folder, 0o755); err != nil {
		t.Fatal(err)
	}
	if err := Save(folder, New()); err == nil {
		t.Error("a folder was overwritten")
	}
	if err := Save(filepath.Join(folder, "no", "x.arrowroot"), New()); err == nil || !strings.Contains(err.Error(), "does not exist") {
		t.Errorf("got %v", err)
	}
	left, err := os.ReadDir(filepath.Dir(folder))
	if err != nil || len(left) != 1 {
		t.Errorf("files left behind: %v (%v)", left, err)
	}
}

// Each text is at fault in a line; the message must say so in these words.
func TestFileErrors(t *testing.T) {
	wrap := func(rest string) string {
		return "{\n\"arrowroot\": 1,\n\"variables\": [{\"id\": \"a\"}, {\"id\": \"b\"}, {\"id\": \"c\"}],\n" + rest + "\n}"
	}
	rival := func(rest string) string {
		return wrap("\"rivals\": [{\"name\": \"R\", \"nodes\": [{\"variable\": \"a\"}, {\"variable\": \"b\"}, {\"variable\": \"c\"}],\n" + rest + "}]")
	}
	for _, c := range []struct{ text, want string }{
		{"", "x.arrowroot: the file is empty. The file was not opened and not changed."},
		{"{}", `x.arrowroot: "arrowroot", the version of the format, is missing`},
		{"[1]", "line 1: a study is one object in braces {}, not a list"},
		{"{\n\"arrowroot\": 2}", `line 2: "arrowroot": 2 is a format that a later version writes; this version knows format 1`},
		{"{\"arrowroot\": 1", "line 1: the file ends before the { of line 1 is closed"},
		{"{\"arrowroot\": 1,\n}", "line 2: a comma stands before }"},
		{"{\"arrowroot\": 1\n\"title\": \"x\"}", `line 1: a comma or a } is missing before "title"`},
		{"{\"arrowroot\": 1, \"title\": \"x\ny\"}", "line 1: a text in quotes does not end in its line"},
		{"{\"arrowroot\": 1, \"title\": 'x'}", "line 1: 'x' is no value; text needs double quotes"},
		{"{\"arrowroot\": 1, \"title\": \"\xff\"}", "line 1: a byte (0xff) is not UTF-8"},
		{"{\"arrowroot\": 1}\n\n{}", "line 3: something follows the end"},
		{"{\"arrowroot\": 01}", "line 1: 01 is not a number as JSON writes them"},
		{wrap(`"title": "x", "title": "y"`), `line 4: "title" is here twice; the first is in line 4`},
		{wrap("\n\"tilte\": \"x\""), `line 5: "tilte" is not a key of a study (arrowroot, $schema, title, note, data, variables, plates, rivals, questions, dismissed); perhaps "title" is meant`},
		{wrap(`"title": 3`), `line 4: "title": 3 should be text in quotes`},
		{wrap(`"questions": [{"exposure": "a", "from": true}]`), `line 4: "from": true should be a number or a level's word`},
		{wrap(`"questions": [{"exposure": "d"}]`), "line 4: the exposure of a question is d, which is not among the variables"},
		{wrap(`"questions": [{"exposure": "a", "effect": "sideways"}]`), `line 4: "effect": "sideways" is not an effect this version knows (total, controlled direct)`},
		{wrap(`"questions": [{"exposure": "a", "groups": "old"}]`), `line 4: "groups": "old" is not a choice of groups this version knows (these groups, new groups)`},
		{wrap(`"questions": [{"exposure": "a", "weigh": "evenly"}]`), `line 4: "weigh": "evenly" is not a way to weigh this version knows (by rows, by groups)`},
		{wrap(`"questions": [{"exposure": "a", "effect": "controlled direct", "fixed": [{"variable": "b"}]}]`), `line 4: a variable that is fixed has no "at"`},
		{wrap(`"questions": [{"exposure": "a", "where": [{"variable": "b", "low": "3"}]}]`), `line 4: "low": "3" should be a number`},
		{wrap(`"questions": [{"exposure": "a", "where": [{"words": "x"}]}]`), `line 4: a condition has no "variable"`},
		{wrap(`"questions": [{"exposure": "a", "where": [{"variable": "b", "low": 3, "high": 1}]}]`), `line 4: a question asks for b from a higher to a lower number`},
		{wrap(`"data": [{"name": "t",` + "\n" + `"keep": [{"variable": "d", "words": "x"}]}]`), `line 4: the row filter of “t” has a condition on d, which is not among the variables`},
		{wrap("\"dismissed\": [\n{\"rival\": \"R\", \"finding\": \"M1\"}]"), `line 5: a finding is set aside for the rival “R”, which does not exist`},
		{wrap("\"dismissed\": [\n{\"rival\": \"R\"}]"), `line 5: a finding that was set aside has no "finding"`},
		{rival("\"arrows\": [\n{\"from\": \"a\", \"to\": \"b\", \"form\": \"spiral\"}]"), `x.arrowroot, line 6: "form": "spiral" is not a form this version knows (slope, log, steps, one-way steps, threshold, saturating, offset). The file was not opened and not changed.`},
		{rival("\"arrows\": [\n{\"from\": \"a\", \"to\": \"b\"},\n{\"from\": \"b\", \"to\": \"a\"}]"), "line 7: the arrows of “R” close a cycle: a → b → a"},
		{rival("\"arrows\": [\n{\"from\": \"a\", \"to\": \"d\"}]"), "line 6: an arrow a → d: d is not on the sheet of “R”"},
		{rival("\"arrows\": [\n{\"from\": \"a\"}]"), `line 6: an arrow has no "to"`},
		{rival("\"arrows\": [{\"from\": \"a\", \"to\": \"b\"}, {\"from\": \"a\", \"to\": \"b\"}]"), "line 5: the arrow a → b is drawn twice"},
		{rival("\"arrows\": [{\"from\": \"a\", \"to\": \"b\", \"varies by\": \"farm\"}]"), "line 5: the arrow a → b names the plate farm, which does not exist"},
		{rival("\"arcs\": [{\"between\": [\"a\"]}]"), `line 5: "between": a list should be a list of two variables`},
		{"{\"arrowroot\": 1, \"variables\": [{\"id\": \"log\"}]}", "“log” cannot name a variable: it has a meaning in formulas"},
		{"{\"arrowroot\": 1, \"variables\": [{\"id\": \"3a\"}]}", "“3a” cannot name a variable: a name is a letter followed by"},
		{"{\"arrowroot\": 1, \"variables\": [{\"id\": \"a\"},\n{\"id\": \"a\"}]}", "line 2: there are two variables named a"},
		{"{\"arrowroot\": 1, \"variables\": [{\"id\": \"a\", \"scale\": \"reel\"}]}", `"scale": "reel" is not a scale this version knows (real, positive,`},
		{"{\"arrowroot\": 1, \"variables\": [{\"id\": \"a\", \"range\": [3, 1]}]}", "the plausible range of a must go from a lower to a higher number"},
		{strings.Repeat("[", 1000), "nested more than"},
	} {
		s, err := Read("folder/x.arrowroot", []byte(c.text))
		if err == nil {
			t.Errorf("%s\nwas read as %+v", c.text, s)
		} else if !strings.Contains(err.Error(), c.want) {
			t.Errorf("%s\ngives %s\nwant  %s", c.text, err, c.want)
		}
	}
}
