package study

import (
	"slices"
	"testing"
)

func TestTheTruthTakesOverTheArrowsOfItsRecord(t *testing.T) {
	s := mustRead(t, example(t))
	s = apply(t, s, AddNote{Rival: nest, Note: Note{Text: "stays"}})
	next := apply(t, s, DrawTruth{Rival: nest, Record: "flowers", Truth: "true_flowers"})
	d := next.Rival(nest).Diagram
	if d.Arrow("hedge", "true_flowers") == nil || d.Arrow("true_flowers", "bees") == nil || d.Arrow("true_flowers", "flowers") == nil ||
		d.Arrow("hedge", "flowers") != nil || d.AbsentArrow("temp", "true_flowers") == nil || !slices.Equal(d.Arrow("hedge", "bees").With, []string{"true_flowers"}) {
		t.Error("an arrow is not where it should be")
	}
	v, u := next.Variable("flowers"), next.Variable("true_flowers")
	if v.Records != "true_flowers" || v.Column != s.Variable("flowers").Column || !u.Unmeasured || u.Scale != v.Scale || u.Column != "" {
		t.Errorf("record %+v, truth %+v", v, u)
	}
	next = apply(t, s, DrawTruth{Rival: nest, Record: "hedge", Truth: "h"})
	if d := next.Rival(nest).Diagram; d.Arc("h", "pesticide") == nil || next.Rival(nest).Layout.At["h"] != s.Rival(nest).Layout.At["hedge"] || len(next.Rival(nest).Layout.Notes) != 2 {
		t.Error("the arc or the place of hedge did not go to the true one")
	}
	for _, e := range []DrawTruth{{nest, "wasps", "w"}, {nest, "flowers", "bees"}, {"No", "flowers", "f"}, {nest, "flowers", "no name"}} {
		if _, err := e.Apply(s); err == nil {
			t.Errorf("%+v is not refused", e)
		}
	}
}
