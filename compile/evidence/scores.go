package evidence

import (
	"math"
	"slices"

	"arrowroot/compile/study"
	"gonum.org/v1/gonum/stat/distuv"
)

// Whatever two variables are measured in, they are compared by scores: one
// column of normal scores where there is an order (numbers, counts,
// proportions, ordered levels; of two values, binary ones included, that is no
// more than a change of unit), an indicator of every level but one for a
// category. A change of scores keeps an independence, so that neither a skewed
// count nor an outlier can break one.

// normalScores gives Φ⁻¹((r − 3/8)/(n + 1/4)) for rank r (Blom 1958), the mean
// rank for ties, then mean 0 and variance 1. It is nil where all are equal.
func normalScores(values []float64) []float64 {
	n := len(values)
	order := make([]int, n)
	for i := range order {
		order[i] = i
	}
	slices.SortFunc(order, func(a, b int) int {
		switch {
		case values[a] < values[b]:
			return -1
		case values[a] > values[b]:
			return 1
		}
		return a - b
	})
	scores := make([]float64, n)
	for i := 0; i < n; {
		j := i
		for j < n && values[order[j]] == values[order[i]] {
			j++
		}
		rank := float64(i+j+1) / 2
		score := distuv.UnitNormal.Quantile((rank - 0.375) / (float64(n) + 0.25))
		for ; i < j; i++ {
			scores[order[i]] = score
		}
	}
	if !standardise(scores) {
		return nil
	}
	return scores
}

// standardise gives a column mean 0 and variance 1 in place; not where it is
// constant.
func standardise(x []float64) bool {
	centre(x)
	s := 0.0
	for _, v := range x {
		s += v * v
	}
	s = math.Sqrt(s / float64(len(x)))
	if !(s > 1e-12) {
		return false
	}
	for i := range x {
		x[i] /= s
	}
	return true
}

// centre takes the mean out in place.
func centre(x []float64) {
	m := 0.0
	for _, v := range x {
		m += v
	}
	m /= float64(len(x))
	for i := range x {
		x[i] -= m
	}
}

// fewestOfLevel is how many rows a level of a category needs to be told apart;
// those with fewer are taken together, which keeps an independence.
const fewestOfLevel = 5

// indicators gives a centred column for every value but the most frequent one,
// values with fewer than least rows taken as one. It is nil where a single
// value is left.
func indicators(values []float64, least int) [][]float64 {
	count := make(map[float64]int)
	for _, v := range values {
		count[v]++
	}
	var kept []float64
	rare := 0
	for v, n := range count {
		if n >= least {
			kept = append(kept, v)
		} else {
			rare += n
		}
	}
	slices.SortFunc(kept, func(a, b float64) int {
		if count[a] != count[b] {
			return count[b] - count[a]
		}
		return int(math.Copysign(1, a-b))
	})
	if rare > 0 && rare < least && len(kept) > 1 { // too few together: they go with the rarest of the others
		kept = kept[:len(kept)-1]
		rare = least
	}
	if len(kept) == 0 {
		return nil
	}
	first := 1
	if rare > 0 {
		first = 0 // the rare ones are what the columns are against
	}
	var columns [][]float64
	for _, level := range kept[first:] {
		x := make([]float64, len(values))
		for i, v := range values {
			if v == level {
				x[i] = 1
			}
		}
		centre(x)
		columns = append(columns, x)
	}
	return columns
}

// scoresOf gives the scores of one side of an independence.
func scoresOf(c *column, values []float64) [][]float64 {
	if c.scale == study.Category && len(c.levels) > 2 {
		return indicators(values, fewestOfLevel)
	}
	if s := normalScores(values); s != nil {
		return [][]float64{s}
	}
	return nil
}

// minority counts the rows that do not have the most frequent value.
func minority(values []float64) int {
	sorted := slices.Clone(values)
	slices.Sort(sorted)
	most := 0
	for i := 0; i < len(sorted); {
		j := i
		for j < len(sorted) && sorted[j] == sorted[i] {
			j++
		}
		most = max(most, j-i)
		i = j
	}
	return len(values) - most
}

// distinct counts different values, up to limit + 1.
func distinct(values []float64, limit int) int {
	seen := make(map[float64]bool)
	for _, v := range values {
		seen[v] = true
		if len(seen) > limit {
			break
		}
	}
	return len(seen)
}
