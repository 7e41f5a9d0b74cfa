package replicate

import (
	"math/rand/v2"
	"testing"
)

// The bands hold the whole distribution function of other uniform numbers as
// often as they say: within three standard errors of 4,000 sets, 1 %.
func TestBandsHoldAsOftenAsTheySay(t *testing.T) {
	rng := rand.New(rand.NewPCG(5, 5))
	for _, n := range []int{20, 250} {
		grid := min(50, n)
		low, high := Bands(n, grid, 0.95)
		inside := 0
		const sets = 4000
		count := make([]int, grid)
		for range sets {
			clear(count)
			for range n {
				count[rng.IntN(grid)]++
			}
			below, ok := 0, true
			for b := range low {
				below += count[b]
				share := float64(below) / float64(n)
				ok = ok && share >= low[b]-1e-12 && share <= high[b]+1e-12
			}
			if ok {
				inside++
			}
		}
		// Counts are whole: the bands can only be a little too wide.
		if share := float64(inside) / sets; share < 0.94 || share > 0.975 {
			t.Errorf("n = %d: %.3f of the sets lie within the 95 %% bands", n, share)
		}
	}
}
