package replicate

import (
	"context"
	"math"
	"math/rand/v2"
	"testing"

	"arrowroot/compile/effect"
	"arrowroot/compile/model"
)

func sampleOf(t *testing.T, m *model.Model, draws [][]float64) *sample {
	t.Helper()
	src := rand.NewPCG(1, 2)
	r, err := effect.Replicate(context.Background(), m, m.Laws[0].Variable, draws, src, effect.Options{})
	if err != nil {
		t.Fatal(err)
	}
	return newSample(m, m.Laws[0], r, src)
}

// Parts hold every value once, and equal values together.
func TestPartsKeepEqualValuesTogether(t *testing.T) {
	values := []float64{0, 0, 0, 0, 0, 0, 0, 0, 1, 2, 3, 4, 5, math.NaN(), 6, 7}
	p := cut(values, 10)
	total := 0.0
	for _, n := range p.sizes {
		total += n
	}
	if total != 15 || p.of[13] != -1 {
		t.Errorf("%v of 15 values have a part", total)
	}
	for i := range 8 {
		if p.of[i] != p.of[0] {
			t.Errorf("equal values lie in parts %d and %d", p.of[0], p.of[i])
		}
	}
	if p.count < 2 {
		t.Errorf("%d parts", p.count)
	}
}
