package fit

import (
	"strings"
	"testing"

	"arrowroot/compile/study"
)

// Where no chain can start, the sentence names the prior and the variable at
// fault and says what to change.
func TestNoPlaceToStart(t *testing.T) {
	t.Parallel()
	err := fitTraps(t, trapRows, func(s *study.Study) {
		s.Rivals[0].Diagram.Arrows[0].Prior = "uniform with low 2, high 1"
	})
	if err == nil {
		t.Fatal("no error")
	}
	for _, part := range []string{"the prior of beta_hedge_bees in the law of bees", "Change that prior"} {
		if !strings.Contains(err.Error(), part) {
			t.Errorf("%q does not say %q", err, part)
		}
	}
}
