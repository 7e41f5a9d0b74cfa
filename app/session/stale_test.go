package session

import (
	"os"
	"path/filepath"
	"testing"

	"arrowroot/app/fit"
	"arrowroot/compile/study"
	"arrowroot/compile/table"
)

// A rival that is not on the sheet keeps its result, and says when what it was
// fitted on has changed; taking the change back makes it fresh again.
func TestResultsOfOtherRivalsBecomeStale(t *testing.T) {
	w, s := newWindow(t)
	first := draw(t, s)
	path := filepath.Join(t.TempDir(), "d.csv")
	must(t, os.WriteFile(path, []byte("x,y,z\n1,2,0\n2,1,1\n3,4,0\n2,2,2\n4,3,1\n1,1,1\n"), 0o644))
	loaded := false
	s.LoadData(path, func(_ *table.Table, err error) { must(t, err); loaded = true })
	w.until(t, "the table", func() bool { return loaded && s.View().Model != nil })
	must(t, s.SetQuestion(study.Question{Exposure: "x", Outcome: "y", From: &study.Setting{Number: 1}, To: &study.Setting{Number: 2}}))
	w.until(t, "the model", func() bool { return s.View().Model != nil && !s.derived.checking })
	s.Fit()
	w.until(t, "a result", func() bool { return s.View().Result != nil && !s.View().Running })
	must(t, s.Do(study.CopyRival{From: first, Name: "other"}))
	s.ShowRival("other")
	settled := func() bool { at := s.standings[first]; return at != nil && !at.checking }
	w.until(t, "the first rival's model", settled)
	if s.View().Result != nil || s.View().StaleResults[first] {
		t.Fatalf("stale %v", s.View().StaleResults)
	}

	must(t, s.Do(study.RemoveArrow{Rival: "other", From: "z", To: "y"}))
	w.until(t, "the first rival's model", settled)
	if s.View().StaleResults[first] {
		t.Error("an arrow of another rival made the result stale")
	}
	must(t, s.Do(study.ChangeVariable{ID: "y", To: study.Variable{ID: "y", Scale: study.Real, Column: "y", Range: &study.Range{Low: -50, High: 50}}}))
	w.until(t, "a stale result", func() bool { return settled() && s.View().StaleResults[first] })
	s.Undo()
	w.until(t, "a fresh result", func() bool { return settled() && !s.View().StaleResults[first] })
	must(t, s.SetQuestion(study.Question{Exposure: "x", Outcome: "y", From: &study.Setting{Number: 1}, To: &study.Setting{Number: 3}}))
	if !s.View().StaleResults[first] {
		t.Error("an answer to another question is not stale")
	}
}

// A rival keeps its result under another name, and undo finds it under the old.
func TestAResultGoesWithTheNameOfItsRival(t *testing.T) {
	_, s := newWindow(t)
	first := draw(t, s)
	must(t, s.Do(study.CopyRival{From: first, Name: "other"}))
	s.ShowRival("other")
	name := "other"
	r := &fit.Result{}
	s.results = map[string]*fit.Result{name: r}
	must(t, s.Do(study.RenameRival{Old: name, New: "second thought"}))
	if s.View().Rival.Name != "second thought" || s.View().Result != r {
		t.Errorf("on %q the result is %v", s.View().Rival.Name, s.View().Result)
	}
	s.Undo()
	if s.View().Rival.Name != name || s.View().Result != r {
		t.Errorf("after undo, on %q the result is %v", s.View().Rival.Name, s.View().Result)
	}
}
