package main

import (
	"bytes"
	"context"
	"encoding/json"
	"os"
	"path/filepath"
	"strings"
	"testing"
)

// A stopper ends a run when the program says that so much is done.
type stopper struct {
	bytes.Buffer
	says string
	stop context.CancelFunc
}

func (s *stopper) Write(text []byte) (int, error) {
	if strings.Contains(string(text), s.says) {
		s.stop()
	}
	return s.Buffer.Write(text)
}

// A report on a run that was stopped says so, and holds the reading all the
// same.
func TestStoppedReport(t *testing.T) {
	dir := folder(t)
	ctx, stop := context.WithCancel(context.Background())
	messages := &stopper{says: "50 % done", stop: stop}
	var stdout bytes.Buffer
	status := run(ctx, []string{"report", "-draws", "4000", filepath.Join(dir, "plots.arrowroot")}, &stdout, messages)
	var out reportOut
	if err := json.Unmarshal(stdout.Bytes(), &out); err != nil || status != done {
		t.Fatalf("status %d, %v: %s%s", status, err, stdout.String(), messages.String())
	}
	if !out.Cut {
		t.Error("the report does not say that the run was stopped")
	}
	page, err := os.ReadFile(out.Report)
	if err != nil || !strings.Contains(string(page), "Leave") && !strings.Contains(string(page), "Hold") {
		t.Errorf("no reading in the report: %v", err)
	}
}
