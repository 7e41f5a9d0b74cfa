package main

import (
	"context"
	"encoding/json"
	"fmt"
	"math"
	"math/rand/v2"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"arrowroot/compile/study"
)

// orchards is an invented study with a known truth: spray acts on fruit by 2
// on sandy soil and by 1 on clay, and through aphids, on which water acts as
// well. Trees stand in orchards of which the first is far larger than the
// others; spray works by 1 more there.
func orchards(t *testing.T, questions ...string) string {
	t.Helper()
	dir := t.TempDir()
	rng := rand.New(rand.NewPCG(5, 9))
	var rows strings.Builder
	fmt.Fprintln(&rows, "orchard,soil,water,spray,aphids,fruit,note")
	level := []float64{0.6, -0.4, 0.1, -0.9, 0.5, 0.3, -0.6, 0.4}
	for i := range 400 {
		orchard := max(0, i-180) / 32 // 212 trees in the first, 32 or fewer in each of the others
		soil, by := "clay", 1.0
		if rng.Float64() < 0.4 {
			soil, by = "sand", 2.0
		}
		water := rng.NormFloat64()
		spray := 0.5*water + rng.NormFloat64()
		aphids := -0.8*spray + 0.5*water + 0.5*rng.NormFloat64()
		fruit := 10 + level[orchard] + by*spray - 0.5*aphids + 0.4*water + 0.5*rng.NormFloat64()
		note := fmt.Sprintf("%d", i%4)
		if i%10 == 0 {
			note = ""
		}
		fmt.Fprintf(&rows, "o%d,%s,%.4f,%.4f,%.4f,%.4f,%s\n", orchard, soil, water, spray, aphids, fruit, note)
	}
	write(t, dir, "orchards.csv", rows.String())
	write(t, dir, "orchards.arrowroot", `{"arrowroot": 1, "data": [{"name": "orchards", "file": "orchards.csv"}],
 "plates": [{"name": "orchard"}],
 "variables": [
  {"id": "water", "scale": "real", "column": "water", "range": [-2, 2]},
  {"id": "soil", "scale": "category", "levels": ["clay", "sand"], "column": "soil"},
  {"id": "spray", "scale": "real", "column": "spray", "range": [-2, 2]},
  {"id": "aphids", "scale": "real", "column": "aphids", "range": [-3, 3]},
  {"id": "note", "scale": "real", "column": "note", "range": [0, 3]},
  {"id": "vigour", "scale": "real", "unmeasured": true},
  {"id": "fruit", "scale": "real", "column": "fruit", "range": [4, 16]}],
 "rivals": [{"name": "A",
  "nodes": [{"variable": "water"}, {"variable": "soil"}, {"variable": "spray"}, {"variable": "aphids"}, {"variable": "note"}, {"variable": "vigour"},
   {"variable": "fruit", "law": {"baseline varies by": ["orchard"]}}],
  "arrows": [{"from": "water", "to": "spray"}, {"from": "water", "to": "aphids"}, {"from": "water", "to": "fruit"}, {"from": "soil", "to": "fruit"},
   {"from": "spray", "to": "aphids"}, {"from": "spray", "to": "fruit", "product with": ["soil"]}, {"from": "aphids", "to": "fruit"}, {"from": "vigour", "to": "water"}]}],
 "questions": [`+strings.Join(questions, ",\n")+`]}`)
	return filepath.Join(dir, "orchards.arrowroot")
}

// ask is a question about the orchards with more in it.
func ask(more string) string {
	return `{"exposure": "spray", "outcome": "fruit", "from": 0, "to": 1` + more + `}`
}

// Subsets, direct effects, weights and new groups give the numbers by which the
// data were made, and say what they are about.
func TestQuestionsOfEveryKind(t *testing.T) {
	for _, c := range []struct {
		name, more string
		truth      float64 // NaN = none
		says       []string
		over       string
	}{
		{"sand alone", `, "where": [{"variable": "soil", "words": ["sand"]}]`, 2 + 0.4, []string{"where soil is sand, each row alike"}, "the 1"},
		{"clay alone, by what it had", `, "where": [{"variable": "soil", "words": ["clay"]}, {"variable": "spray", "low": 0}]`, 1 + 0.4, []string{"soil is clay and spray is at least 0"}, ""},
		{"with missing entries", `, "where": [{"variable": "note", "low": 3, "high": 3}]`, math.NaN(), []string{"40 of the used rows lack note and are not among those asked about."}, "over the 100 of 400 rows where note is 3"},
		{"direct", `, "effect": "controlled direct", "fixed": [{"variable": "aphids", "at": -0.5}], "where": [{"variable": "soil", "words": ["clay"]}]`, 1,
			[]string{"with aphids kept at −0.5 changes", "Crude: not for a direct effect"}, "where soil is clay"},
		{"orchards once each", `, "weigh": "by groups", "where": [{"variable": "soil", "words": ["sand"]}]`, 2.4, []string{"each orchard counts once (7)"}, ""},
		{"new orchards", `, "groups": "new groups", "where": [{"variable": "soil", "words": ["sand"]}]`, 2.4, []string{"averaged over new levels of orchard"}, ""},
	} {
		t.Run(c.name, func(t *testing.T) {
			t.Parallel()
			status, answer, messages := batch(context.Background(), t, "effect", "-draws", "250", orchards(t, ask(c.more)))
			if status != done {
				t.Fatalf("status %d: %s", status, messages)
			}
			full, _ := answer["full"].(map[string]any)
			if full == nil || answer["headline"] != "full" {
				t.Fatalf("no number: %v", answer["answer"])
			}
			centre, spread := full["centre"].(float64), full["spread"].(float64)
			// The data are one sample: three posterior sds around the truth.
			if !math.IsNaN(c.truth) && !(math.Abs(centre-c.truth) < 3*spread && spread < 0.1) {
				t.Errorf("%.3f with sd %.3f, not %.3f", centre, spread, c.truth)
			}
			text := fmt.Sprint(answer["answer"])
			for _, says := range c.says {
				if !strings.Contains(text, says) {
					t.Errorf("does not say %q:\n%s", says, text)
				}
			}
			if over := full["over"].(string); !strings.Contains(over, c.over) {
				t.Errorf("over %s", over)
			}
			held, _ := answer["held"].(map[string]any)
			if held == nil || answer["heldIsEnough"] != true || answer["heldProposed"] != true || held["association"] != false {
				t.Errorf("held %v, set %v: %v", held, answer["heldSet"], text)
			} else if h := held["centre"].(float64); math.Abs(h-centre) > 4*spread {
				t.Errorf("held %.3f, full %.3f ± %.3f", h, centre, spread)
			}
			if (answer["crude"] == nil) != (c.name == "direct") {
				t.Errorf("crude is %v", answer["crude"])
			}
		})
	}
}

// Expected outcomes for new groups are less sure than for these, since nobody
// has seen them; the effect of a linear law is the same.
func TestNewGroupsAreLessSure(t *testing.T) {
	var sides [2]map[string]any
	for i, groups := range []string{"these groups", "new groups"} {
		_, answer, messages := batch(context.Background(), t, "effect", "-draws", "250", orchards(t, ask(`, "groups": "`+groups+`"`)))
		full, _ := answer["full"].(map[string]any)
		if full == nil {
			t.Fatal(messages)
		}
		sides[i] = full
	}
	these, fresh := sides[0], sides[1]
	if a, b := these["centre"].(float64), fresh["centre"].(float64); math.Abs(a-b) > 0.01 {
		t.Errorf("effect %.4f in these orchards, %.4f in new ones", a, b)
	}
	sd := func(n map[string]any) float64 { return n["expectedFrom"].(map[string]any)["spread"].(float64) }
	if !(sd(fresh) > 3*sd(these)) {
		t.Errorf("expected fruit has sd %.3f in new orchards, %.3f in these", sd(fresh), sd(these))
	}
}

// A row filter takes rows away, and the rows say so; chosen by the outcome they
// give no effect.
func TestRowFilters(t *testing.T) {
	file := orchards(t, ask(""))
	text, err := os.ReadFile(file)
	if err != nil {
		t.Fatal(err)
	}
	filtered := func(keep string) map[string]any {
		t.Helper()
		write(t, filepath.Dir(file), "filtered.arrowroot", strings.Replace(string(text), `"file": "orchards.csv"`, `"file": "orchards.csv", "keep": [`+keep+`]`, 1))
		status, answer, messages := batch(context.Background(), t, "effect", "-draws", "100", filepath.Join(filepath.Dir(file), "filtered.arrowroot"))
		if status != done {
			t.Fatal(messages)
		}
		return answer
	}
	answer := filtered(`{"variable": "soil", "words": ["sand"]}, {"variable": "water", "high": 1}`)
	rows := answer["rows"].(map[string]any)
	used, outside := rows["used"].(float64), rows["outsideFilter"].(float64)
	if full, _ := answer["full"].(map[string]any); full == nil || math.Abs(full["centre"].(float64)-2.4) > 0.2 || used+outside != 400 || used > 200 || len(rows["lost"].(map[string]any)) > 0 {
		t.Errorf("full %v, rows %v: %v", full, rows, answer["answer"])
	}
	answer = filtered(`{"variable": "fruit", "low": 9}`)
	if text := fmt.Sprint(answer["answer"]); answer["full"] != nil || answer["headline"] != "none" || answer["identified"] != false || !strings.Contains(text, "the rows were chosen by fruit, which goes together with aphids") {
		t.Errorf("%v", text)
	}
}

// What cannot be answered is said in one message, with the variable, and the
// study is fitted all the same.
func TestQuestionsThatCannotBeAnswered(t *testing.T) {
	for _, c := range []struct{ more, says string }{
		{`, "where": [{"variable": "soil", "words": ["peat"]}]`, "soil has no level “peat”"},
		{`, "where": [{"variable": "aphids", "low": 0}]`, "aphids comes after spray"},
		{`, "where": [{"variable": "vigour", "low": 0}]`, "vigour was not measured"},
		{`, "where": [{"variable": "water", "low": 9}]`, "there is nothing to average over"},
		{`, "effect": "controlled direct"`, "needs at least one variable on the way"},
		{`, "effect": "controlled direct", "fixed": [{"variable": "soil", "at": "peat"}]`, "soil has no level “peat”"},
		{`, "effect": "controlled direct", "fixed": [{"variable": "vigour", "at": 1}]`, "vigour is fixed, but was not measured"},
	} {
		status, answer, messages := batch(context.Background(), t, "effect", "-draws", "20", orchards(t, ask(c.more)))
		if status != problems || answer != nil || !strings.Contains(messages, c.says) {
			t.Errorf("%s: status %d, %q does not say %q", c.more, status, messages, c.says)
		}
	}
	for _, c := range []struct{ more, says string }{
		{`, "where": [{"variable": "water", "low": 2, "high": 1}]`, "a question asks for water from a higher to a lower number"},
		{`, "where": [{"variable": "rain", "low": 2}]`, "a question has a condition on rain, which is not among the variables"},
		{`, "effect": "controlled direct", "fixed": [{"variable": "spray", "at": 1}]`, "a question fixes spray, which is its exposure or outcome"},
		{`, "groups": "some groups"`, "is not a choice of groups this version knows"},
	} {
		status, answer, messages := batch(context.Background(), t, "effect", orchards(t, ask(c.more)))
		if status == done || answer != nil || !strings.Contains(messages, c.says) {
			t.Errorf("%s: status %d, %q does not say %q", c.more, status, messages, c.says)
		}
	}
}

// What is printed of a question says what was asked, levels included.
func TestPrintedQuestion(t *testing.T) {
	got, err := json.Marshal(printQuestion(&study.Question{Exposure: "x", Outcome: "y", From: &study.Setting{Number: 1}, To: &study.Setting{Word: "b"}, OutcomeLevels: []string{"mid", "top"}, Level: 0.8}))
	if err != nil {
		t.Fatal(err)
	}
	want := `{"exposure":"x","outcome":"y","effect":"total","from":1,"to":"b","shift":0,"fixed":[],"held":[],"where":[],` +
		`"over":"these rows","groups":"these groups","weigh":"by rows","as":"difference","outcomeLevels":["mid","top"],"level":0.8}`
	if string(got) != want {
		t.Errorf("%s\nwant %s", got, want)
	}
}
