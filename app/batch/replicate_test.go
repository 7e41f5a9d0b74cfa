package main

import (
	"context"
	"encoding/csv"
	"os"
	"path/filepath"
	"slices"
	"strings"
	"testing"
)

// replicate says of every modelled variable whether it is reproduced, and
// writes data and replicates.
func TestReplicate(t *testing.T) {
	dir := folder(t)
	out := filepath.Join(dir, "replicates.csv")
	status, answer, messages := batch(context.Background(), t, "replicate", "-draws", "250", "-chains", "2", "-out", out, filepath.Join(dir, "plots.arrowroot"))
	if status != done {
		t.Fatalf("status %d: %s", status, messages)
	}
	if answer["reproduced"] != true || answer["replicates"].(float64) != 200 {
		t.Errorf("%v of %v replicates: %v", answer["reproduced"], answer["replicates"], answer["sentences"])
	}
	var looks []string
	for _, v := range answer["variables"].([]any) {
		one := v.(map[string]any)
		for _, k := range one["checks"].([]any) {
			c := k.(map[string]any)
			if one["variable"] == "yield" {
				looks = append(looks, strings.TrimSpace(c["looksAt"].(string)+" "+c["of"].(string)))
			}
			if c["verdict"] != "reproduced" || c["far"].(float64) > 1 {
				t.Errorf("%v: %v", one["variable"], c)
			}
		}
	}
	slices.Sort(looks)
	if want := []string{"largest", "shape", "smallest", "standard deviation", "trend rain", "trend soil"}; !slices.Equal(looks, want) {
		t.Errorf("of yield it looks at %v, not %v", looks, want)
	}
	file, err := os.Open(out)
	if err != nil {
		t.Fatal(err)
	}
	defer file.Close()
	rows, err := csv.NewReader(file).ReadAll()
	if err != nil {
		t.Fatal(err)
	}
	if len(rows) != 1+2*60 || len(rows[0]) != 3+20 || rows[0][0] != "variable" || rows[0][3] != "replicate 1" {
		t.Errorf("%d rows of %d fields, headed %v", len(rows), len(rows[0]), rows[0])
	}
}

// The report shows the checks, and says so when there are none.
func TestReportTellsOfChecks(t *testing.T) {
	dir := folder(t)
	out := filepath.Join(dir, "plots.html")
	if status, _, messages := batch(context.Background(), t, "report", "-draws", "250", "-chains", "2", "-out", out, filepath.Join(dir, "plots.arrowroot")); status != done {
		t.Fatalf("status %d: %s", status, messages)
	}
	text, err := os.ReadFile(out)
	if err != nil {
		t.Fatal(err)
	}
	for _, part := range []string{"Can the model reproduce the data?", "The model reproduces the data in every one of ", "yield: reproduced"} {
		if !strings.Contains(string(text), part) {
			t.Errorf("the report does not say %q", part)
		}
	}
}
