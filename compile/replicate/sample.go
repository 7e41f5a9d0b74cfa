package replicate

import (
	"cmp"
	"math"
	"math/rand/v2"
	"slices"

	"arrowroot/compile/catalog"
	"arrowroot/compile/effect"
	"arrowroot/compile/model"
	"arrowroot/compile/study"
)

// A sample holds the data and their replicates side by side, as columns: the
// first is the data. Under the model all columns are alike, so that whatever is
// computed of one can be computed of each, and compared.
type sample struct {
	m        *model.Model
	law      *model.Law
	of       *model.Variable
	r        *effect.Replica
	columns  [][]float64 // column, unit
	expected []float64   // per unit: mean over all columns
	middle   [][]float64 // column, unit: mid-rank among all columns, from −½ to ½
	ranks    [][]float64 // column, unit: rank with ties broken by chance, in 0 … 1
}

// newSample ranks each unit's value among its replicates. The rank of the data
// is its probability integral transform under the posterior predictive
// distribution; that of a replicate is uniform by construction.
func newSample(m *model.Model, l *model.Law, r *effect.Replica, src rand.Source) *sample {
	s := &sample{m: m, law: l, of: m.Variables[l.Variable], r: r}
	s.columns = append(s.columns, r.Observed)
	s.columns = append(s.columns, r.Values...)
	n, k := len(r.Rows), len(s.columns)
	for _, c := range s.columns {
		for i, x := range c {
			c[i] = math.Max(-huge, math.Min(huge, x)) // sums stay finite
		}
	}
	s.expected = make([]float64, n)
	for range s.columns {
		s.middle = append(s.middle, make([]float64, n))
		s.ranks = append(s.ranks, make([]float64, n))
	}
	rng := rand.New(src)
	order := make([]int, k)
	for i := range n {
		for c := range order {
			order[c] = c
			s.expected[i] += s.columns[c][i] / float64(k)
		}
		slices.SortFunc(order, func(a, b int) int { return cmp.Compare(s.columns[a][i], s.columns[b][i]) })
		for from := 0; from < k; {
			to := from + 1
			for to < k && s.columns[order[to]][i] == s.columns[order[from]][i] {
				to++
			}
			width := float64(to-from) / float64(k)
			below := float64(from) / float64(k)
			for _, c := range order[from:to] {
				s.middle[c][i] = below + width/2 - 0.5
				s.ranks[c][i] = below + width*rng.Float64()
			}
			from = to
		}
	}
	return s
}

// huge is the largest number that statistics see.
const huge = 1e100

// n is the number of units.
func (s *sample) n() int { return len(s.r.Rows) }

// A sort of variable, by what checks suit it.
type sort int

const (
	continuous sort = iota
	counts
	outOf // successes in a known number of trials
	binary
	levels
	angles // continuous, without an end
)

func (s *sample) sort() sort {
	switch f := s.law.Family; f.Support {
	case catalog.Levels:
		return levels
	case catalog.ZeroOne:
		return binary
	case catalog.UpTo:
		if s.r.Trials != nil {
			return outOf
		}
		return counts
	case catalog.Counts:
		return counts
	case catalog.Turn:
		return angles
	}
	return continuous
}

// unordered reports whether levels have no order.
func (s *sample) unordered() bool {
	return s.sort() == levels && s.of.Scale != study.Ordered
}

// value of another variable at a unit; NaN where it is missing.
func (s *sample) value(v *model.Variable, missing map[int]bool, unit int) float64 {
	row := s.r.Rows[unit]
	if v.Plate >= 0 {
		row = int(s.m.Plates[v.Plate].Of[row])
	}
	if missing[row] || row >= len(v.Values) {
		return math.NaN()
	}
	return v.Values[row]
}

// steady reports whether something that changes with a plate (−1 = by row) is
// the same throughout each unit of the variable.
func (s *sample) steady(plate int) bool {
	own := s.of.Plate
	if own < 0 || own == plate {
		return true
	}
	if plate < 0 {
		return false
	}
	first := make(map[int32]int32)
	for row, unit := range s.m.Plates[own].Of {
		level := s.m.Plates[plate].Of[row]
		if seen, ok := first[unit]; ok && seen != level {
			return false
		}
		first[unit] = level
	}
	return true
}
