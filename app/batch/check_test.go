package main

import (
	"context"
	"path/filepath"
	"strings"
	"testing"
)

// A rival without an arrow that the data have is contradicted, worst first, with
// the arrow that would repair it; the rival with it is not.
func TestCheckFindsTheMissingArrow(t *testing.T) {
	file := filepath.Join(folder(t), "plots.arrowroot")
	status, answer, messages := batch(context.Background(), t, "check", "-rival", "rain idle", file)
	if status != done || answer["contradicted"] != 1.0 {
		t.Fatalf("status %d, %v, %s", status, answer["summary"], messages)
	}
	first := answer["independences"].([]any)[0].(map[string]any)
	repair, _ := first["repair"].(map[string]any)
	if first["verdict"] != "contradicted" || repair["from"] != "rain" || repair["to"] != "yield" || !strings.Contains(first["sentence"].(string), "An arrow rain → yield") {
		t.Errorf("%v", first)
	}
	for _, field := range strings.Fields("between given verdict sentence size low high signed p adjustedP rows lost groups plate repair") {
		if !has(first, []string{field}) {
			t.Errorf("there is no %s", field)
		}
	}
	status, answer, _ = batch(context.Background(), t, "check", file)
	if status != done || answer["contradicted"] != 0.0 {
		t.Errorf("status %d, %v", status, answer["summary"])
	}
}

// Without data there is a sentence and no answer.
func TestCheckWithoutData(t *testing.T) {
	dir := t.TempDir()
	write(t, dir, "bare.arrowroot", `{"arrowroot": 1, "variables": [{"id": "a"}, {"id": "b"}], "rivals": [{"name": "r", "nodes": [{"variable": "a"}, {"variable": "b"}]}]}`)
	status, _, messages := batch(context.Background(), t, "check", filepath.Join(dir, "bare.arrowroot"))
	if status != problems || !strings.Contains(messages, "no data to hold its arrows against") {
		t.Errorf("status %d, %q", status, messages)
	}
}
