package replicate

import (
	"math"
	"math/rand/v2"
	"slices"
)

// Bands gives simultaneous limits of the distribution function of n uniform
// numbers at 1/grid, 2/grid … (grid−1)/grid: with probability level it lies
// within all of them at once. The limits are binomial ones, each of the coverage
// that makes it so, found by simulation (Säilynoja, Bürkner & Vehtari, Statistics
// and Computing 32, 2022, section 2.2). It is the same for the same n.
func Bands(n, grid int, level float64) (low, high []float64) {
	upTo := make([][]float64, grid-1) // probability of at most so many
	for b := range upTo {
		upTo[b] = binomialUpTo(n, float64(b+1)/float64(grid))
	}
	const simulations = 2000
	rng := rand.New(rand.NewPCG(uint64(n), uint64(grid)))
	rarest := make([]float64, simulations) // of each simulated set: twice the smaller tail, at its worst place
	count := make([]int, grid)
	for s := range rarest {
		clear(count)
		for range n {
			count[int(rng.Float64()*float64(grid))]++
		}
		rarest[s] = 1
		below := 0
		for b := range upTo {
			below += count[b]
			rarest[s] = math.Min(rarest[s], 2*math.Min(upTo[b][below+1], 1-upTo[b][below]))
		}
	}
	slices.Sort(rarest)
	each := at(rarest, 1-level)
	for b := range upTo {
		from, to := 0, n
		for from < n && 2*upTo[b][from+1] < each {
			from++
		}
		for to > 0 && 2*(1-upTo[b][to]) < each {
			to--
		}
		low, high = append(low, float64(from)/float64(n)), append(high, float64(to)/float64(n))
	}
	return low, high
}

// binomialUpTo gives P(X < k) for k = 0 … n+1.
func binomialUpTo(n int, p float64) []float64 {
	out := make([]float64, n+2)
	whole, _ := math.Lgamma(float64(n + 1))
	for k := range n + 1 {
		a, _ := math.Lgamma(float64(k + 1))
		b, _ := math.Lgamma(float64(n - k + 1))
		out[k+1] = out[k] + math.Exp(whole-a-b+float64(k)*math.Log(p)+float64(n-k)*math.Log1p(-p))
	}
	return out
}
