package fit

import (
	"slices"
	"strings"
	"testing"

	"arrowroot/compile/study"
)

// typed makes a study from arrows; names that begin with u are unmeasured.
func typed(t *testing.T, arrows ...string) *study.Study {
	t.Helper()
	s := study.New()
	for _, line := range arrows {
		next, err := study.TypeArrows{Rival: "Rival 1", Text: line}.Apply(s)
		if err != nil {
			t.Fatal(err)
		}
		s = next
	}
	for _, v := range s.Variables {
		if strings.HasPrefix(v.ID, "u") {
			to := *v
			to.Unmeasured = true
			next, err := study.ChangeVariable{ID: v.ID, To: to}.Apply(s)
			if err != nil {
				t.Fatal(err)
			}
			s = next
		}
	}
	return s
}

func claimsOf(t *testing.T, s *study.Study, q study.Question) *claims {
	t.Helper()
	q.Exposure, q.Outcome = "x", "y"
	g, err := s.Graph("Rival 1")
	if err != nil {
		t.Fatal(err)
	}
	return claimed(g, &q, limitsOf(s, "Rival 1", g))
}

func where(ids ...string) []study.Condition {
	var out []study.Condition
	for _, id := range ids {
		out = append(out, study.Condition{Variable: id, Low: new(float64)})
	}
	return out
}

// What may be said of the held number of some rows follows from separation,
// worked out by hand for each diagram.
func TestClaimsOfSubsets(t *testing.T) {
	s := typed(t, "z -> x -> y", "z -> y", "w -> y", "v -> x")
	for _, c := range []struct {
		name   string
		where  []study.Condition
		held   []string // nil = not said
		want   string   // what is held then
		valid  bool
		crude  bool
		noteOn string
	}{
		{name: "all rows", want: "z", valid: true},
		{name: "by a cause of the outcome alone", where: where("w"), want: "z w", valid: true},
		{name: "the same, not held", where: where("w"), held: []string{"z"}, want: "z", noteOn: "w"},
		{name: "by the confounder", where: where("z"), want: "z", valid: true},
		{name: "by what acts on the exposure alone", where: where("v"), held: []string{"z"}, want: "z", valid: true},
		{name: "by the exposure itself", where: where("x"), held: []string{"z"}, want: "z", valid: true},
	} {
		got := claimsOf(t, s, study.Question{Where: c.where, Held: c.held})
		if strings.Join(got.held, " ") != c.want || got.heldValid != c.valid || got.crudeValid != c.crude || !got.identified {
			t.Errorf("%s: %+v", c.name, got)
		}
		if (len(got.notes) > 0) != (c.noteOn != "") || c.noteOn != "" && !strings.Contains(got.notes[0], "apart by "+c.noteOn) {
			t.Errorf("%s: notes %v", c.name, got.notes)
		}
	}
	// Without a confounder the crude number is an effect for all rows, and for
	// those with some w only if w tells nothing of y.
	s = typed(t, "x -> y", "w -> y", "v -> x")
	if c := claimsOf(t, s, study.Question{}); !c.crudeValid {
		t.Error("crude for all rows")
	}
	if c := claimsOf(t, s, study.Question{Where: where("w")}); c.crudeValid || !slices.Equal(c.held, []string{"w"}) {
		t.Errorf("crude by w: %+v", c)
	}
	if c := claimsOf(t, s, study.Question{Where: where("v")}); !c.crudeValid {
		t.Error("crude by v")
	}
}

// Controlled direct effects hold for what is fixed and set together (Pearl
// 2009, section 4.5.3).
func TestClaimsOfDirectEffects(t *testing.T) {
	fixed := study.Question{Effect: study.DirectEffect, Fixed: []study.Fix{{Variable: "m"}}}
	for _, c := range []struct {
		name             string
		arrows           []string
		held             []string
		want             string
		identified, none bool
		valid            bool
	}{
		{name: "mediator alone", arrows: []string{"x -> m -> y", "x -> y"}, identified: true, valid: true},
		{name: "no arrow around it", arrows: []string{"x -> m -> y"}, identified: true, none: true, valid: true},
		{name: "a confounder of the mediator", arrows: []string{"x -> m -> y", "x -> y", "l -> m", "l -> y"}, want: "l", identified: true, valid: true},
		{name: "the same, left free", arrows: []string{"x -> m -> y", "x -> y", "l -> m", "l -> y"}, held: []string{}, identified: true},
		{name: "one that the exposure moves", arrows: []string{"x -> m -> y", "x -> y", "x -> l -> m", "l -> y"}, held: []string{"l"}, want: "l", identified: true},
		{name: "one that nobody measured", arrows: []string{"x -> m -> y", "x -> y", "u -> m", "u -> y"}},
	} {
		q := fixed
		q.Held = c.held
		got := claimsOf(t, typed(t, c.arrows...), q)
		if got.identified != c.identified || got.none != c.none || got.heldValid != c.valid || strings.Join(got.held, " ") != c.want {
			t.Errorf("%s: %+v", c.name, got)
		}
		if !c.identified && got.why == "" {
			t.Errorf("%s: no reason", c.name)
		}
	}
}

// Rows chosen by what a law knows leave it as it is; rows chosen by a common
// effect, or by the outcome, do not (SEMANTICS A7).
func TestClaimsOfChosenRows(t *testing.T) {
	for _, c := range []struct {
		name   string
		arrows []string
		by     string
		filter bool
		why    string
	}{
		{"by the confounder", []string{"z -> x -> y", "z -> y"}, "z", true, ""},
		{"by what acts on the exposure", []string{"v -> x -> y"}, "v", false, ""},
		{"by the exposure", []string{"x -> y"}, "x", true, ""},
		{"by a common effect", []string{"x -> y", "x -> s", "y -> s"}, "s", false, "chosen by s, which goes together with y"},
		{"by the outcome", []string{"x -> y"}, "y", true, "chosen by y itself"},
		{"by what shares a cause with the outcome", []string{"x -> y", "u -> y", "u -> s", "x -> s"}, "s", true, "chosen by s, which goes together with y"},
		{"by the mediator", []string{"x -> m -> y"}, "m", true, "chosen by m itself"},
		{"by an effect of the exposure alone", []string{"x -> y", "x -> s"}, "s", false, ""},
	} {
		s := typed(t, c.arrows...)
		var edit study.Edit = study.LimitRows{Rival: "Rival 1", Variable: c.by, On: true}
		if c.filter {
			edit = study.AddData{Data: study.Data{Name: "t", Keep: where(c.by)}}
		}
		s, err := edit.Apply(s)
		if err != nil {
			t.Fatal(err)
		}
		got := claimsOf(t, s, study.Question{})
		if got.identified != (c.why == "") || !strings.Contains(got.why, c.why) || c.why != "" && (got.heldValid || got.crudeValid) {
			t.Errorf("%s: %+v", c.name, got)
		}
	}
}
