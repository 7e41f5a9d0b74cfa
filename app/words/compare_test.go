package words

import (
	"slices"
	"strings"
	"testing"

	"arrowroot/app/fit"
	"arrowroot/compile/study"
)

func TestComparisonWords(t *testing.T) {
	c := &fit.Comparison{
		Question: study.Question{Exposure: "reeds", Outcome: "frogs", Held: []string{"herons"}}, Outcome: "frogs", Units: make([]string, 150), Entries: 150,
		Rivals: []*fit.Scored{
			{Rival: "Apart", Score: -212.04, Error: 8.61, Parameters: 3.02, WideScore: -211.9, Identified: true, HeldEnough: true},
			{Rival: "Through herons", Score: -105.2, Error: 9, Parameters: 4.1, WideScore: -104.96, WideShaky: 2, Refitted: []string{"row 7", "row 12"}},
		},
		Pairs:  []fit.Pair{{Higher: "Through herons", Lower: "Apart", Difference: 106.84, Error: 10.2}},
		Better: "Through herons", Weights: []float64{0.031, 0.969},
	}
	want := []string{
		"Each rival predicted frogs of one row after the other, 150 in all, without having seen it.",
		"Apart: score −212.0, standard error 8.6, 3.0 effective parameters; the effect is identified. By the widely applicable information criterion, for reference: −211.9.",
		"Through herons: score −105.2, standard error 9.0, 4.1 effective parameters; the effect is not identified. It was fitted again without row 7 and row 12, which reweighting could not leave out. By the widely applicable information criterion, for reference: −105.0, with 2 units for which it is not to be trusted.",
		"Through herons scores 106.8 above Apart, standard error 10.2.",
		"Through herons predicts frogs better than Apart.",
		"The mixture that would have predicted best weighs Apart by 3 % and Through herons by 97 %; that is no probability of being right.",
		NotCause,
	}
	if got := Comparison(c); !slices.Equal(got, want) {
		t.Errorf("%s", strings.Join(got, "\n"))
	}
	c.Plate, c.Units, c.Weights, c.NoWeights, c.Better, c.NoBetter = "pond", make([]string, 12), nil, "a score is withheld", "", []string{"the fit of Apart cannot be trusted"}
	c.Rivals[0].Withheld, c.Rivals[0].HeldEnough, c.Rivals[1].Replicates = "the fit of Apart cannot be trusted", false, 256
	c.Pairs[0].ByLaws, c.Pairs[0].Undecided = true, "it lies within two standard errors"
	want = []string{
		"Each rival predicted frogs (150 entries) of one pond after the other, 12 in all, without having seen that pond, its group effects drawn anew 256 times.",
		"Apart: no score, since the fit of Apart cannot be trusted; the effect is identified, but not by holding herons.",
		want[2],
		"Through herons scores 106.8 above Apart, standard error 10.2: it lies within two standard errors; both imply the same independences, so that they differ by laws, not by arrows.",
		"No rival is named as the better predictor: the fit of Apart cannot be trusted.",
		"No weights are given: a score is withheld.",
		NotCause,
	}
	want[2] = strings.Replace(want[2], "without row 7", "without pond row 7", 1)
	if got := Comparison(c); !slices.Equal(got, want) {
		t.Errorf("%s", strings.Join(got, "\n"))
	}
}
