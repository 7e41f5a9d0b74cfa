package fit

import (
	"math"
	"testing"

	"arrowroot/infer/summary"
)

// SEMANTICS E: without a length of its own a run goes in rounds of 250 steps
// until every shown quantity has an effective sample size of 1,000; the same
// draws come from a run that was asked for that length.
func TestStoppingRule(t *testing.T) {
	long(t)
	t.Parallel()
	req := request(t, "eight_schools")
	byRule := run(t, req)
	f := byRule.Full
	if f.Steps()%roundSteps != 0 || len(f.Chains) != 4 {
		t.Errorf("%d chains of %d steps", len(f.Chains), f.Steps())
	}
	for _, q := range f.Quantities {
		if ess := math.Min(q.BulkESS, q.TailESS); ess < wantedESS {
			t.Errorf("%s: effective sample size %.0f", q.Symbol, ess)
		}
	}
	if f.Trust.Verdict == summary.Unusable {
		t.Errorf("eight schools should not be unusable: %v", f.Trust.Reasons)
	}
	req.Draws = f.Steps()
	identical(t, "fixed length", byRule, run(t, req), f.Steps())
}
