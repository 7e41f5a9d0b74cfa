package words

import (
	"slices"
	"testing"

	"arrowroot/compile/replicate"
)

func TestChecksInSentences(t *testing.T) {
	zeros := &replicate.Check{Variable: "bees", Kind: replicate.Zeros, Observed: 0.3, Centre: 0.1, Low: 0.05, High: 0.15, Failed: true}
	fine := &replicate.Check{Variable: "soil", Kind: replicate.Trend, Of: "rain", Upward: true, Tail: 0.4, Beyond: 79, Words: replicate.Reproduced}
	for _, c := range []struct {
		name string
		of   *replicate.Checks
		want []string
	}{
		{"none", nil, []string{NoCheck}},
		{"good", &replicate.Checks{Variables: []*replicate.Variable{{ID: "soil", Checks: []*replicate.Check{fine}}}, Replicates: 200, Made: 1},
			[]string{"The model reproduces the data in the one check that suits them, against 200 replicates.",
				"Reproducing the data says that the laws fit, not that the arrows are right."}},
		{"bad", &replicate.Checks{Variables: []*replicate.Variable{
			{ID: "bees", Checks: []*replicate.Check{zeros}}, {ID: "soil", Checks: []*replicate.Check{fine}}, {ID: "age", Refusal: "it has too few values to check"},
		}, Replicates: 200, Made: 2}, []string{
			"The model does not reproduce bees: more zeros than the model gives.", "It reproduces the other variable.",
			"Reproducing the data says that the laws fit, not that the arrows are right.", "No check was made of age: it has too few values to check."}},
	} {
		if got := Checks(c.of); !slices.Equal(got, c.want) {
			t.Errorf("%s: %q, want %q", c.name, got, c.want)
		}
	}
	if got, want := Check(fine), "change with rain, left out of its law: 40 % of the replicates are as far off or further, reproduced"; got != want {
		t.Errorf("%q, want %q", got, want)
	}
	if got, want := CheckNumbers(zeros), "0.300, replicates 0.0500 to 0.150"; got != want {
		t.Errorf("%q, want %q", got, want)
	}
}
