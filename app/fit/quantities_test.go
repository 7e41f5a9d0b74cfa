package fit

import (
	"slices"
	"testing"

	"arrowroot/infer/summary"
)

// A fit's verdict says once what all its quantities share, and names the worst
// entry of the worst three parameters beyond that.
func TestReasonsOfAFit(t *testing.T) {
	sampling := summary.Sampling{Chains: 1, Draws: 4000, WorstEBFMI: 1}
	var all []Quantity
	var trusts []summary.Trust
	add := func(parameter int, symbol string, rHat, ess float64) {
		q := Quantity{Symbol: symbol, Parameter: parameter, Summary: summary.Summary{RHat: rHat, BulkESS: ess, TailESS: ess + 1}}
		all, trusts = append(all, q), append(trusts, summary.Judge(q.Summary, sampling))
	}
	add(0, "α_bees", 1, 2000)
	add(1, "α_farm[north]", 1.001, 300)
	add(1, "α_farm[south]", 1.2, 50)
	add(2, "τ_farm", 1.02, 150)
	add(3, "β_hedge→bees", 1, 350)
	add(4, "k_bees", 1, 360)
	add(5, "σ_flowers", 1, 370)
	got := worstQuantity(all, trusts)
	want := []string{
		"only 1 of 4 chains were run",
		"α_farm[south]: chains disagree (R-hat 1.20), too few effective draws (50)",
		"τ_farm: chains do not quite agree (R-hat 1.020), few effective draws (150)",
		"β_hedge→bees: few effective draws (350)",
		"and 2 more",
	}
	if got.Verdict != summary.Unusable || !slices.Equal(got.Reasons, want) {
		t.Errorf("%v: %q", got.Verdict, got.Reasons)
	}
	if sound := worstQuantity(nil, nil); sound.Verdict != summary.Sound || sound.Reasons != nil {
		t.Errorf("nothing: %v", sound)
	}
}
