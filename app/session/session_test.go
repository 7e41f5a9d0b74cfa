package session

import (
	"os"
	"path/filepath"
	"testing"
	"time"

	"arrowroot/compile/causal"
	"arrowroot/compile/mistake"
	"arrowroot/compile/study"
	"arrowroot/compile/table"
)

// window is the goroutine that a session lives on, for tests: posted functions
// wait until the test lets them run.
type window struct{ queue chan func() }

func newWindow(t *testing.T) (*window, *Session) {
	t.Setenv("XDG_CACHE_HOME", t.TempDir())
	w := &window{queue: make(chan func(), 1000)}
	return w, New(func(f func()) { w.queue <- f })
}

// until runs posted functions until ok holds.
func (w *window) until(t *testing.T, what string, ok func() bool) {
	t.Helper()
	timeout := time.After(5 * time.Minute) // a bound on hanging, not on speed
	for !ok() {
		select {
		case f := <-w.queue:
			f()
		case <-timeout:
			t.Fatalf("waited for %s", what)
		}
	}
}

func must(t *testing.T, err error) {
	t.Helper()
	if err != nil {
		t.Fatal(err)
	}
}

func draw(t *testing.T, s *Session) string {
	t.Helper()
	rival := s.View().Rival.Name
	for _, id := range []string{"x", "z", "y"} {
		must(t, s.Do(study.AddVariable{Variable: study.Variable{ID: id, Scale: study.Real}}))
		must(t, s.Do(study.AddNode{Rival: rival, Variable: id}))
	}
	for _, a := range [][2]string{{"z", "x"}, {"z", "y"}, {"x", "y"}} {
		must(t, s.Do(study.AddArrow{Rival: rival, Arrow: study.Arrow{From: a[0], To: a[1]}}))
	}
	must(t, s.SetQuestion(study.Question{Exposure: "x", Outcome: "y"}))
	return rival
}

func TestReadingFollowsTheHand(t *testing.T) {
	w, s := newWindow(t)
	draw(t, s)
	w.until(t, "a reading", func() bool { return s.View().Reading != nil })
	if k := s.View().Reading.Verdict.Kind; k != causal.Confounded {
		t.Fatalf("verdict %v: %s", k, s.View().Reading.Verdict.Sentence)
	}
	must(t, s.Do(study.Hold{At: 0, Variable: "z", On: true}))
	w.until(t, "a reading", func() bool { return s.View().Reading != nil })
	if k := s.View().Reading.Verdict.Kind; k != causal.Readable {
		t.Fatalf("verdict %v: %s", k, s.View().Reading.Verdict.Sentence)
	}
	held := s.View().Reading
	must(t, s.Do(study.MoveNodes{Rival: s.View().Rival.Name, To: map[string]study.Point{"x": {X: 1, Y: 2}}}))
	if s.View().Reading != held {
		t.Error("moving a node made the reading again")
	}
}

func TestUndoGivesBackTheSameStudy(t *testing.T) {
	_, s := newWindow(t)
	before := s.View().Study
	draw(t, s)
	after := s.View().Study
	for s.View().Undo != "" {
		s.Undo()
	}
	if s.View().Study != before {
		t.Error("undo does not lead back to the first study")
	}
	for s.View().Redo != "" {
		s.Redo()
	}
	if s.View().Study != after {
		t.Error("redo does not lead to the last study")
	}
}

func TestADragIsOneStep(t *testing.T) {
	_, s := newWindow(t)
	rival := draw(t, s)
	before := s.View().Study
	for i := range 5 {
		must(t, s.Do(study.MoveNodes{Rival: rival, To: map[string]study.Point{"x": {X: float64(i + 1), Y: 0}}}))
	}
	s.EndGesture()
	must(t, s.Do(study.MoveNodes{Rival: rival, To: map[string]study.Point{"x": {X: 50, Y: 0}}}))
	s.Undo()
	if p := s.View().Rival.Layout.At["x"]; p.X != 5 {
		t.Errorf("after one undo x stands at %g, want 5", p.X)
	}
	s.Undo()
	if s.View().Study != before {
		t.Error("a drag took more than one undo")
	}
}

func TestSaveAndReopen(t *testing.T) {
	w, s := newWindow(t)
	folder := t.TempDir()
	data := filepath.Join(folder, "d.csv")
	must(t, os.WriteFile(data, []byte("x,z,y\n1,2,3\n2,3,5\n3,1,4\n4,4,8\n5,2,6\n"), 0o644))
	draw(t, s)
	var loadError error
	loaded := false
	s.LoadData(data, func(_ *table.Table, err error) { loaded, loadError = true, err })
	w.until(t, "data", func() bool { return loaded })
	must(t, loadError)
	if c := s.View().Study.Variable("x").Column; c != "x" {
		t.Errorf("x was bound to %q", c)
	}
	path := filepath.Join(folder, "s.arrowroot")
	must(t, s.Save(path))
	if s.View().Dirty {
		t.Error("dirty after saving")
	}
	if f := s.View().Study.Data[0].File; f != "d.csv" {
		t.Errorf("the data file is called %q from beside it", f)
	}
	text, err := os.ReadFile(path)
	must(t, err)
	must(t, s.Do(study.SetTitle{Title: "changed"}))
	must(t, s.Open(path))
	w.until(t, "the table", func() bool { return s.View().Table != nil })
	if s.View().Table.Rows != 5 {
		t.Errorf("%d rows", s.View().Table.Rows)
	}
	if string(study.Write(s.View().Study)) != string(text) {
		t.Error("the reopened study differs from the file")
	}
	must(t, os.WriteFile(path, []byte(`{"arrowroot": 99}`), 0o644))
	before := s.View().Study
	if err := s.Open(path); err == nil || s.View().Study != before {
		t.Errorf("a study of another version: %v", err)
	}
}

// A built-in study brings its data along when it is saved, and never writes
// over a file of the user's.
func TestSaveABuiltInStudy(t *testing.T) {
	w, s := newWindow(t)
	doc, err := study.Load("../../testdata/studies/scholarship.arrowroot")
	must(t, err)
	must(t, s.OpenBuiltIn(doc, map[string][]byte{"scholarship.csv": []byte("award,mark,hours,entry,income\n1,2,3,4,5\n2,3,4,5,6\n")}))
	folder := t.TempDir()
	path := filepath.Join(folder, "mine.arrowroot")
	must(t, s.Save(path))
	must(t, s.Open(path))
	w.until(t, "the table", func() bool { return s.View().Table != nil })
	if s.View().Table.Rows != 2 {
		t.Errorf("%d rows", s.View().Table.Rows)
	}
	must(t, os.WriteFile(filepath.Join(folder, "scholarship.csv"), []byte("mine\n"), 0o644))
	must(t, s.OpenBuiltIn(doc, map[string][]byte{"scholarship.csv": []byte("award\n1\n")}))
	if err := s.Save(filepath.Join(folder, "other.arrowroot")); err == nil {
		t.Error("a file of the user's was written over")
	}
}

func TestUnsavedWorkIsOffered(t *testing.T) {
	w, s := newWindow(t)
	path := filepath.Join(t.TempDir(), "s.arrowroot")
	draw(t, s)
	must(t, s.Save(path))
	must(t, s.Do(study.SetTitle{Title: "unsaved"}))
	deadline := time.Now().Add(20 * time.Second)
	for {
		if _, err := os.Stat(s.recovery.file(path)); err == nil {
			break
		}
		if time.Now().After(deadline) {
			t.Fatal("no recovery file was written")
		}
		time.Sleep(50 * time.Millisecond)
	}
	again := New(func(f func()) { w.queue <- f })
	must(t, again.Open(path))
	if again.View().Recovered == nil {
		t.Fatal("unsaved work is not offered")
	}
	s.Undo() // back at what was saved: nothing is left to offer
	if _, err := os.Stat(s.recovery.file(path)); err == nil {
		t.Error("the unsaved work was undone, and is still kept")
	}
	again.Recover()
	if again.View().Study.Title != "unsaved" {
		t.Errorf("title %q", again.View().Study.Title)
	}
	again.Undo()
	if again.View().Study.Title == "unsaved" {
		t.Error("taking up unsaved work cannot be undone")
	}
}

// A fit of simulated data, with an edit while it runs.
func TestFitBecomesStale(t *testing.T) {
	w, s := newWindow(t)
	doc, err := study.Load("../../testdata/studies/scholarship.arrowroot")
	must(t, err)
	csv, err := os.ReadFile("../../testdata/studies/scholarship.csv")
	must(t, err)
	must(t, s.OpenBuiltIn(doc, map[string][]byte{"scholarship.csv": csv}))
	w.until(t, "a model", func() bool { return s.View().Model != nil })
	s.Fit()
	if !s.View().Running {
		t.Fatal("not running")
	}
	must(t, s.Do(study.MoveNodes{Rival: s.View().Rival.Name, To: map[string]study.Point{"mark": {X: 9, Y: 9}}}))
	w.until(t, "a result", func() bool { return !s.View().Running })
	must(t, s.View().FitError)
	if s.View().Result == nil || s.View().Stale {
		t.Fatal("moving a node made the result stale")
	}
	must(t, s.Do(study.RemoveArrow{Rival: s.View().Rival.Name, From: "income", To: "mark"}))
	w.until(t, "staleness", func() bool { return s.View().Stale })
	s.Undo()
	w.until(t, "freshness", func() bool { return !s.View().Stale })
	// An edit that leaves no model makes it stale as well.
	must(t, s.Do(study.Bind{Variable: "mark", Column: "nowhere"}))
	w.until(t, "staleness without a model", func() bool { return s.View().Stale })
	s.Undo()
	w.until(t, "freshness", func() bool { return !s.View().Stale })
}

// TestMistakesFollowTheHand: a held mediator is told, set aside with a reason,
// brought back, and gone once it is free.
func TestMistakesFollowTheHand(t *testing.T) {
	w, s := newWindow(t)
	defer s.Close()
	must(t, s.Do(study.TypeArrows{Rival: s.View().Rival.Name, Text: "? -> hedge, soil\nhedge -> flowers -> bees"}))
	must(t, s.SetQuestion(study.Question{Exposure: "hedge", Outcome: "bees", From: &study.Setting{}, To: &study.Setting{Number: 1}, Held: []string{"flowers"}}))
	told := func() bool { m := s.View().Mistakes; return len(m) == 1 && m[0].Code == mistake.HeldMediator }
	w.until(t, "the held mediator", told)
	rival, key := s.View().Rival.Name, s.View().Mistakes[0].Key
	must(t, s.Do(study.Dismiss{Dismissal: study.Dismissal{Rival: rival, Key: key, Why: "asked for"}}))
	if v := s.View(); len(v.Mistakes) != 0 || len(v.Aside) != 1 || v.Aside[0].Aside != "asked for" {
		t.Errorf("set aside: %v, %v", v.Mistakes, v.Aside)
	}
	s.Undo()
	w.until(t, "it again", told)
	must(t, s.Do(s.View().Mistakes[0].Repairs[0].Edit))
	w.until(t, "silence", func() bool {
		v := s.View()
		return v.Reading != nil && len(v.Mistakes)+len(v.Aside) == 0 && len(v.Question.Held) == 0
	})
}
