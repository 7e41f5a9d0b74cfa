package main

import (
	"context"
	"os"
	"path/filepath"
	"strings"
	"testing"
)

// -out never writes over the study or its data.
func TestOutSparesTheStudy(t *testing.T) {
	dir := folder(t)
	for _, name := range []string{"plots.arrowroot", "plots.csv"} {
		before, err := os.ReadFile(filepath.Join(dir, name))
		if err != nil {
			t.Fatal(err)
		}
		for _, verb := range []string{"fit", "effect", "report"} {
			status, _, messages := batch(context.Background(), t, verb, "-draws", "20", "-out", filepath.Join(dir, name), filepath.Join(dir, "plots.arrowroot"))
			if status != wrongUse || !strings.Contains(messages, "written over") {
				t.Errorf("%s -out %s: status %d, %q", verb, name, status, messages)
			}
		}
		if after, err := os.ReadFile(filepath.Join(dir, name)); err != nil || string(after) != string(before) {
			t.Errorf("%s changed", name)
		}
	}
}

// A rival is fitted to the table that its variables are in, not to the first.
func TestEachRivalHasItsTable(t *testing.T) {
	dir := folder(t)
	write(t, dir, "other.csv", "p,q\n1,2\n2,4\n3,5\n4,9\n5,9\n")
	write(t, dir, "two.arrowroot", `{"arrowroot": 1, "data": [{"name": "plots", "file": "plots.csv"}, {"name": "other", "file": "other.csv"}],
 "variables": [{"id": "rain", "scale": "real", "column": "rain"}, {"id": "yield", "scale": "real", "column": "yield"},
  {"id": "p", "scale": "real", "column": "p", "data": "other"}, {"id": "q", "scale": "real", "column": "q", "data": "other"}],
 "rivals": [{"name": "one", "arrows": [{"from": "rain", "to": "yield"}]}, {"name": "two", "arrows": [{"from": "p", "to": "q"}]}]}`)
	for rival, rows := range map[string]float64{"one": 60, "two": 5} {
		status, answer, messages := batch(context.Background(), t, "fit", "-draws", "20", "-rival", rival, filepath.Join(dir, "two.arrowroot"))
		if status != done {
			t.Fatalf("%s: status %d, %s", rival, status, messages)
		}
		if read := answer["rows"].(map[string]any)["read"]; read != rows {
			t.Errorf("%s: %v rows, want %v", rival, read, rows)
		}
	}
}

// validate answers in JSON whatever is wrong.
func TestValidateAlwaysAnswers(t *testing.T) {
	dir := folder(t)
	write(t, dir, "gone.arrowroot", `{"arrowroot": 1, "data": [{"name": "d", "file": "gone.csv"}], "rivals": [{"name": "r", "nodes": []}]}`)
	write(t, dir, "cycle.arrowroot", `{"arrowroot": 1, "variables": [{"id": "a"}, {"id": "b"}], "rivals": [{"name": "r", "arrows": [{"from": "a", "to": "b"}, {"from": "b", "to": "a"}]}]}`)
	for name, says := range map[string]string{"gone.arrowroot": "gone.csv", "cycle.arrowroot": "cycle", "nowhere.arrowroot": "nowhere"} {
		status, answer, _ := batch(context.Background(), t, "validate", filepath.Join(dir, name))
		found, _ := answer["problems"].([]any)
		if status != problems || len(found) != 1 || !strings.Contains(found[0].(map[string]any)["message"].(string), says) {
			t.Errorf("%s: status %d, %v", name, status, answer)
		}
	}
}

// A number that cannot be trusted is not the answer.
func TestUnusableIsNotHeadlined(t *testing.T) {
	dir := folder(t)
	_, answer, _ := batch(context.Background(), t, "effect", "-draws", "2", filepath.Join(dir, "plots.arrowroot"))
	lines := answer["answer"].([]any)
	if answer["headline"] != "none" || !strings.Contains(lines[0].(string), "cannot be trusted") {
		t.Errorf("headline %v, %v", answer["headline"], lines)
	}
}
