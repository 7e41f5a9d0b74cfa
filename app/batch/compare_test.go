package main

import (
	"context"
	"encoding/csv"
	"os"
	"path/filepath"
	"strings"
	"testing"
)

// Rain acts on yield in these data, and whoever lets it predicts better; with
// 60 rows nobody is named all the same.
func TestCompareVerb(t *testing.T) {
	dir := folder(t)
	doc, out := filepath.Join(dir, "plots.arrowroot"), filepath.Join(dir, "scores.csv")
	status, got, messages := batch(context.Background(), t, "compare", doc, "-draws", "300", "-out", out)
	if status != done {
		t.Fatal(messages)
	}
	if got["unit"] != "row" || got["units"] != 60.0 || got["better"] != "" || len(got["noBetter"].([]any)) != 1 {
		t.Errorf("unit %v, %v of them, better %v: %v", got["unit"], got["units"], got["better"], got["noBetter"])
	}
	d := got["differences"].([]any)[0].(map[string]any)
	if d["higher"] != "soil acts" || !(d["difference"].(float64) > 10) || d["lawsOnly"] != false || !strings.Contains(d["undecided"].(string), "60 units") {
		t.Errorf("difference %v", d)
	}
	rivals := got["rivals"].([]any)
	if first, second := rivals[0].(map[string]any), rivals[1].(map[string]any); first["identified"] != true || first["noEffectDrawn"] != false ||
		second["noEffectDrawn"] != true || len(first["byUnit"].([]any)) != 60 {
		t.Errorf("%v\n%v", first, second)
	}
	text, err := os.ReadFile(out)
	if err != nil {
		t.Fatal(err)
	}
	rows, err := csv.NewReader(strings.NewReader(string(text))).ReadAll()
	if err != nil || len(rows) != 61 || strings.Join(rows[0], "|") != "row|soil acts|soil acts, tail|rain idle|rain idle, tail" || rows[1][0] != "row 1" {
		t.Errorf("%v: %d lines, first %q", err, len(rows), rows[0])
	}

	status, got, _ = batch(context.Background(), t, "compare", doc, "-rivals", "soil acts")
	if blocked := got["blocked"].([]any); status != problems || len(blocked) != 1 || !strings.Contains(blocked[0].(string), "only one rival") {
		t.Errorf("status %d: %v", status, got)
	}
}
