package session

import (
	"os"
	"testing"

	"arrowroot/compile/study"
)

// A fit is checked by itself once it is done; stopped, it can be checked again.
func TestAFitIsChecked(t *testing.T) {
	w, s := newWindow(t)
	doc, err := study.Load("../../testdata/studies/scholarship.arrowroot")
	must(t, err)
	csv, err := os.ReadFile("../../testdata/studies/scholarship.csv")
	must(t, err)
	must(t, s.OpenBuiltIn(doc, map[string][]byte{"scholarship.csv": csv}))
	w.until(t, "a model", func() bool { return s.View().Model != nil })
	s.Check()
	if s.View().Checking {
		t.Fatal("nothing is fitted, and yet it is checked")
	}
	s.Fit()
	w.until(t, "checking", func() bool { return s.View().Checking })
	s.StopChecks()
	if s.View().Checking || s.View().Checks != nil {
		t.Fatal("checking goes on")
	}
	s.Check()
	w.until(t, "checks", func() bool { return s.View().Checks != nil || s.View().ChecksError != nil })
	must(t, s.View().ChecksError)
	first := s.View().Checks
	if first.Made == 0 || s.View().Checking {
		t.Errorf("%d checks, still checking: %v", first.Made, s.View().Checking)
	}
	s.Check()
	if s.View().Checks != first || s.View().Checking {
		t.Error("what is known was found out again")
	}
	// Moving to an empty study leaves nothing behind.
	s.New()
	if s.View().Checks != nil || len(s.checkers) > 0 {
		t.Error("checks outlive their study")
	}
}
