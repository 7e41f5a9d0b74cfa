package findings

import (
	"context"
	"slices"
	"strings"
	"testing"

	"arrowroot/compile/causal"
	"arrowroot/compile/study"
)

// drawn is a study with one rival; capital letters are unmeasured.
func drawn(arrows ...string) *study.Study {
	rival := &study.Rival{Name: "drawn", Layout: &study.Layout{}, Diagram: &study.Diagram{}}
	s := &study.Study{Rivals: []*study.Rival{rival}}
	for _, arrow := range arrows {
		for _, id := range strings.Fields(arrow) {
			if s.Variable(id) == nil {
				s.Variables = append(s.Variables, &study.Variable{ID: id, Unmeasured: id == strings.ToUpper(id)})
				rival.Diagram.Nodes = append(rival.Diagram.Nodes, &study.Node{Variable: id})
			}
		}
		from, to, _ := strings.Cut(arrow, " ")
		rival.Diagram.Arrows = append(rival.Diagram.Arrows, &study.Arrow{From: from, To: to})
	}
	return s
}

func read(t *testing.T, s *study.Study, ask Ask) *Findings {
	t.Helper()
	f, err := Read(context.Background(), s, "drawn", ask, Limits{})
	if err != nil {
		t.Fatal(err)
	}
	return f
}

// P(y | do(x), w) = Σ_z P(y | x, z, w) P(z | w) where z and w together are an
// adjustment set and x acts on neither; what x acts on cannot be held for it.
func TestSetsHoldWhatIsGiven(t *testing.T) {
	s := drawn("U z", "z x", "U y", "i x", "i y", "x m", "m y", "x y", "y r", "x r", "i r")
	ask := Ask{Exposures: []string{"x"}, Outcomes: []string{"y"}}
	names := func(f *Findings) (sets []string) {
		for _, set := range f.Adjustment.Sets {
			sets = append(sets, strings.Join(f.names(set), " "))
		}
		return sets
	}

	ask.Given = []string{"i"}
	f := read(t, s, ask)
	if got := names(f); !slices.Equal(got, []string{"z i"}) || f.Verdict.Kind != causal.Confounded || !strings.Contains(f.Verdict.Sentence, "among rows alike in i") {
		t.Errorf("given i: %q, %s", got, f.Verdict.Sentence)
	}
	ask.Held = []string{"z"}
	if f = read(t, s, ask); f.Verdict.Kind != causal.Readable {
		t.Errorf("given i, z held: %s", f.Verdict.Sentence)
	}

	ask = Ask{Exposures: []string{"x"}, Outcomes: []string{"y"}, Given: []string{"r"}, Held: []string{"z", "i"}}
	f = read(t, s, ask)
	if f.Adjustment.Sets != nil || f.Verdict.Kind != causal.NoSet || !strings.Contains(f.Verdict.Sentence, "x acts on r") || len(f.Controls.List) > 0 {
		t.Errorf("given r, on which x acts: %q, %s, %s", names(f), f.Verdict.Sentence, f.Controls.Summary)
	}
	if !f.Beyond.Identification.Identified {
		t.Error("given r: identified all the same, by a formula")
	}
}

// A direct effect sets two variables: controls and the case of SEMANTICS B2
// are those of both (Pearl, Causality 2009, 4.5.3; B9).
func TestDirectEffectsAreJudgedWithWhatTheyFix(t *testing.T) {
	direct := Ask{Exposures: []string{"x"}, Outcomes: []string{"y"}, Effect: study.DirectEffect, Fixed: []string{"m"}}
	f := read(t, drawn("x m", "m y", "x y", "U m", "U y", "c x", "c y"), direct)
	if f.Laws.Case != causal.NotSimulated || !strings.Contains(f.Laws.Reason, "m to y") {
		t.Errorf("m and y share a cause: case %v, %s", f.Laws.Case, f.Laws.Reason)
	}
	for _, one := range f.Controls.List {
		if one.Kind != causal.BadControl {
			t.Errorf("no set gives it, but: %s", one.Sentence)
		}
	}

	f = read(t, drawn("x m", "m y", "x y", "w m", "w y", "x w"), direct)
	if f.Laws.Case != causal.PinAndSimulate {
		t.Errorf("all measured: case %v, %s", f.Laws.Case, f.Laws.Reason)
	}

	// w mixes m with y, so the direct effect needs it held; the total one needs nothing.
	f = read(t, drawn("x m", "m y", "x y", "w m", "w y"), direct)
	if len(f.Controls.List) != 1 || f.Controls.List[0].Kind != causal.GoodControl {
		t.Errorf("controls %+v", f.Controls.List)
	}
	if got := f.Forbidden(); len(got) != 1 || f.Graph.Names[got[0].Node] != "y" {
		t.Errorf("forbidden %+v: m is set, not held", got)
	}
}

// What lives at a plate's level and was never measured has no law, and no law
// is said to be fitted on it (SEMANTICS A6).
func TestNoLawIsFittedOnWhatWasNotMeasured(t *testing.T) {
	s := drawn("U x", "U y", "x m", "m y")
	s.Plates = []*study.Plate{{Name: "farm"}}
	s.Variable("U").Plates = []string{"farm"}
	f := read(t, s, Ask{Exposures: []string{"x"}, Outcomes: []string{"y"}})
	for _, law := range f.Laws.List {
		if name := f.Graph.Names[law.Node]; name == "U" || slices.Contains(law.Parents, f.Graph.Index("U")) {
			t.Errorf("a law of %s on %v", name, f.names(law.Parents))
		}
	}
	if f.Laws.Case != causal.PinAndSimulate || !strings.HasSuffix(f.Laws.Reason, "once each law compares within groups") {
		t.Errorf("case %v: %s", f.Laws.Case, f.Laws.Reason)
	}
}

// A set that the wish rules out is not proposed.
func TestVerdictKeepsToWishes(t *testing.T) {
	s := drawn("c x", "c y", "d c", "d y", "x y")
	ask := Ask{Exposures: []string{"x"}, Outcomes: []string{"y"}, Unavailable: []string{"c"}}
	if f := read(t, s, ask); f.Verdict.Kind != causal.NoSet || f.Verdict.Sentence != "Without c, no set of measured variables gives the effect of x on y." {
		t.Errorf("without c: %+v", f.Verdict)
	}
	ask.Unavailable, ask.Forced = nil, []string{"d"}
	if f := read(t, s, ask); f.Verdict.Kind != causal.Confounded || !strings.HasSuffix(f.Verdict.Sentence, "Hold c and d.") {
		t.Errorf("with d: %+v", f.Verdict)
	}
}
