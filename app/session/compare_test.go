package session

import (
	"errors"
	"os"
	"path/filepath"
	"testing"

	"arrowroot/app/fit"
	"arrowroot/compile/study"
	"arrowroot/compile/table"
)

// Rivals are compared behind the window. What a comparison was made from makes
// it stale, a node that moves does not, and one that is stopped leaves what was
// there.
func TestCompareBehindTheWindow(t *testing.T) {
	w, s := newWindow(t)
	first := draw(t, s)
	path := filepath.Join(t.TempDir(), "d.csv")
	must(t, os.WriteFile(path, []byte("x,y,z\n1,2,0\n2,1,1\n3,4,0\n2,2,2\n4,3,1\n1,1,1\n"), 0o644))
	loaded := false
	s.LoadData(path, func(_ *table.Table, err error) { must(t, err); loaded = true })
	w.until(t, "the table", func() bool { return loaded && s.View().Model != nil })
	must(t, s.SetQuestion(study.Question{Exposure: "x", Outcome: "y", From: &study.Setting{Number: 1}, To: &study.Setting{Number: 2}}))
	settled := func() bool { return !s.View().Prediction.Running }

	s.Compare()
	w.until(t, "an answer", settled)
	if no := new(fit.Incomparable); !errors.As(s.View().Prediction.Error, &no) {
		t.Fatalf("one rival was compared: %v", s.View().Prediction.Error)
	}
	must(t, s.Do(study.CopyRival{From: first, Name: "other"}))
	s.Compare()
	w.until(t, "a comparison", settled)
	p := s.View().Prediction
	if p.Error != nil || p.Comparison == nil || len(p.Comparison.Rivals) != 2 || p.Stale {
		t.Fatalf("%+v", p)
	}
	must(t, s.Do(study.MoveNodes{Rival: first, To: map[string]study.Point{"x": {X: 5, Y: 9}}}))
	if s.View().Prediction.Stale {
		t.Error("a node that moved made the comparison stale")
	}
	must(t, s.Do(study.RemoveArrow{Rival: "other", From: "z", To: "y"}))
	if !s.View().Prediction.Stale {
		t.Error("another arrow did not make it stale")
	}
	s.Compare()
	s.StopCompare()
	if got := s.View().Prediction; got.Running || got.Comparison != p.Comparison {
		t.Errorf("stopped: %+v", got)
	}
	s.Undo()
	if s.View().Prediction.Stale {
		t.Error("undo did not make it fresh")
	}
}
