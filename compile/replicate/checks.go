package replicate

import (
	"math"
	"slices"
	"strconv"

	"arrowroot/compile/model"
	"arrowroot/compile/study"
)

// checks lists what suits the variable; at is the place of its law.
func (s *sample) checks(at int) []*Check {
	var out []*Check
	add := func(c *Check) {
		if c != nil {
			out = append(out, c)
		}
	}
	switch s.sort() {
	case counts:
		add(s.zeros())
		add(s.dispersion())
		add(s.end(Largest))
		add(s.frequencies())
	case outOf:
		add(s.zeros())
		add(s.dispersion())
		add(s.calibration())
	case binary:
		add(s.share(1))
		add(s.calibration())
	case levels:
		for k := range s.of.Levels {
			add(s.share(k))
		}
	case continuous:
		add(s.spread())
		add(s.end(Largest))
		add(s.end(Smallest))
		add(s.shape())
	case angles:
		add(s.shape())
	}
	for p := range s.m.Plates {
		add(s.groups(p))
	}
	for v := range s.m.Variables {
		if parent, ok := s.against(v, at); ok {
			add(s.trend(v, parent))
		}
	}
	return out
}

// against says whether a trend over another variable speaks about this law:
// over what it reads, and over what it leaves out though it comes no later. What
// comes later may follow from the variable, and then changes with it also
// where every law is right.
func (s *sample) against(v, at int) (parent, ok bool) {
	other := s.m.Variables[v]
	if v == s.law.Variable || other.Values == nil || other.Computed != nil || other.MeanOf != "" || !s.steady(other.Plate) {
		return false, false
	}
	if slices.Contains(s.r.Reads, v) {
		return true, true
	}
	for k, l := range s.m.Laws {
		if l.Variable == v {
			return false, k < at
		}
	}
	return false, true
}

func (s *sample) zeros() *Check {
	k := s.number(Zeros, "", func(c []float64) float64 {
		n := 0.0
		for _, x := range c {
			if x == 0 {
				n++
			}
		}
		return n / float64(len(c))
	}, as, 1/float64(s.n()))
	if k.Observed == 0 && slices.Max(k.Picture.Values) == 0 {
		return nil // nobody expects any
	}
	return k
}

// dispersion is the variance about the expected values over what a Poisson, or
// of trials a binomial, would have.
func (s *sample) dispersion() *Check {
	under := 0.0
	for i, mu := range s.expected {
		if s.r.Trials != nil && s.r.Trials[i] > 0 {
			mu *= 1 - mu/s.r.Trials[i]
		}
		under += mu
	}
	if !(under > 0) {
		return nil
	}
	return s.number(Dispersion, "", func(c []float64) float64 {
		sum := 0.0
		for i, x := range c {
			sum += (x - s.expected[i]) * (x - s.expected[i])
		}
		return sum / under
	}, logged, 0)
}

func (s *sample) spread() *Check {
	return s.number(Spread, "", sd, logged, 0)
}

// end is the largest or the smallest value.
func (s *sample) end(kind Kind) *Check {
	centre := quantile(s.expected, 0.5)
	scale := math.Max(sd(s.columns[0]), 1e-12)
	of := slices.Max[[]float64]
	if kind == Smallest {
		of = slices.Min[[]float64]
	}
	floor := 0.0
	if s.sort() == counts {
		floor = 1 / scale / math.Sqrt(1+square((of(s.columns[0])-centre)/scale)) // one more or less is nothing
	}
	return s.number(kind, "", of, func(x float64) float64 { return math.Asinh((x - centre) / scale) }, floor)
}

// share of a level.
func (s *sample) share(level int) *Check {
	word := strconv.Itoa(level)
	if level < len(s.of.Levels) {
		word = s.of.Levels[level]
	}
	return s.number(Shares, word, func(c []float64) float64 {
		n := 0.0
		for _, x := range c {
			if int(x) == level {
				n++
			}
		}
		return n / float64(len(c))
	}, as, 1/float64(s.n()))
}

// frequencies compares how often each count comes, as roots, which vary alike
// for rare and for common counts (Tukey 1977; Kleiber & Zeileis 2016).
func (s *sample) frequencies() *Check {
	bins := s.countBins()
	if len(bins) < 2 {
		return nil
	}
	table := make([][]float64, len(s.columns))
	for c := range table {
		table[c] = tally(s.columns[c], bins)
		for b, n := range table[c] {
			table[c][b] = math.Sqrt(n)
		}
	}
	k := s.distance(Counts, "", table, nil)
	k.Picture = profile(table)
	k.Picture.Kind, k.Picture.Across, k.Picture.Up = Bars, s.of.ID, "how often, as root"
	for b := range bins {
		k.Picture.Labels = append(k.Picture.Labels, bins.label(b))
	}
	return k
}

// calibration compares shares of what happened in groups of units with similar
// predicted probability.
func (s *sample) calibration() *Check {
	shareOf := func(c []float64, i int) float64 {
		if s.r.Trials == nil {
			return c[i]
		}
		if s.r.Trials[i] == 0 {
			return math.NaN()
		}
		return c[i] / s.r.Trials[i]
	}
	predicted := make([]float64, s.n())
	for i := range predicted {
		predicted[i] = shareOf(s.expected, i)
	}
	parts := cut(predicted, 10)
	if parts.count < 2 {
		return nil
	}
	table := s.meansIn(parts, shareOf)
	weights := make([]float64, parts.count) // one over what shares of so many vary by
	for b, p := range parts.means(predicted) {
		weights[b] = parts.sizes[b] / math.Max(p*(1-p), 1e-3)
	}
	k := s.distance(Calibration, "", table, weights)
	k.Picture = profile(table)
	k.Picture.Kind, k.Picture.Across, k.Picture.Up = Points, "predicted probability", "share that happened"
	k.Picture.X = parts.means(predicted)
	return k
}

// shape compares the distribution of ranks with a uniform one.
func (s *sample) shape() *Check {
	const points = 50
	grid := min(points, s.n())
	table := make([][]float64, len(s.columns))
	n := float64(s.n())
	for c := range table {
		table[c] = make([]float64, grid-1)
		for _, u := range s.ranks[c] {
			if b := int(u * float64(grid)); b < grid-1 {
				table[c][b]++
			}
		}
		below := 0.0
		for b := range table[c] {
			below += table[c][b] / n
			z := float64(b+1) / float64(grid)
			table[c][b] = below - z
		}
	}
	worst := func(row []float64) float64 {
		most := 0.0
		for b, d := range row {
			z := float64(b+1) / float64(grid)
			most = math.Max(most, math.Abs(d)/math.Sqrt(z*(1-z)/n))
		}
		return most
	}
	values := make([]float64, len(table))
	for c := range table {
		values[c] = worst(table[c])
	}
	k := s.compare(Shape, "", values, logged, 0, true)
	k.Picture = Picture{Kind: Line, Across: "rank of a value among its replicates", Up: "share up to there, beyond even", Observed: table[0]}
	low, high := Bands(s.n(), grid, 0.95)
	for b := range table[0] {
		z := float64(b+1) / float64(grid)
		k.Picture.X = append(k.Picture.X, z)
		k.Picture.Low = append(k.Picture.Low, low[b]-z)
		k.Picture.High = append(k.Picture.High, high[b]-z)
		k.Picture.Middle = append(k.Picture.Middle, 0)
	}
	return k
}

// groups compares what is left over in the groups of a plate.
func (s *sample) groups(plate int) *Check {
	if plate == s.of.Plate || !s.steady(plate) {
		return nil
	}
	p := s.m.Plates[plate]
	levels := make([]float64, s.n())
	for i, row := range s.r.Rows {
		levels[i] = float64(p.Of[row])
	}
	parts := each(levels, len(p.Levels))
	if parts.count < 2 || s.n() < 2*parts.count {
		return nil
	}
	k := s.left(Groups, p.Name, parts)
	k.Picture.Kind, k.Picture.Across = Intervals, p.Name
	if !s.unordered() {
		table := s.meansIn(parts, func(c []float64, i int) float64 { return c[i] })
		k.Picture = profile(table)
		k.Picture.Kind, k.Picture.Across, k.Picture.Up = Intervals, p.Name, "mean of "+s.of.ID
	}
	for _, level := range parts.labels {
		k.Picture.Labels = append(k.Picture.Labels, p.Levels[int(level)])
	}
	k.Picture.mostStriking(24)
	return k
}

// trend compares what is left over along another variable.
func (s *sample) trend(other int, parent bool) *Check {
	v := s.m.Variables[other]
	missing := make(map[int]bool, len(v.Missing))
	for _, unit := range v.Missing {
		missing[int(unit)] = true
	}
	values := make([]float64, s.n())
	for i := range values {
		values[i] = s.value(v, missing, i)
	}
	worded := v.Scale == study.Category || v.Scale == study.Ordered || v.Scale == study.Binary
	var parts parts
	if worded {
		parts = each(values, max(2, len(v.Levels)))
	} else {
		parts = cut(values, 10)
	}
	if parts.count < 2 {
		return nil
	}
	k := s.left(Trend, v.ID, parts)
	k.Parent = parent
	k.Picture.Kind, k.Picture.Across = Points, v.ID
	if worded {
		k.Picture.Kind = Intervals
		for _, level := range parts.labels {
			k.Picture.Labels = append(k.Picture.Labels, levelWord(v, int(level)))
		}
	} else {
		k.Picture.X = parts.means(values)
	}
	return k
}

func levelWord(v *model.Variable, k int) string {
	if k < len(v.Levels) {
		return v.Levels[k]
	}
	return strconv.Itoa(k)
}

// left compares what is left over in each part: the mean rank of its values
// among their replicates or, of levels without an order, the share of each.
func (s *sample) left(kind Kind, of string, parts parts) *Check {
	ranked := s.meansOf(s.middle, parts, func(c []float64, i int) float64 { return c[i] })
	if !s.unordered() {
		k := s.distance(kind, of, ranked, parts.sizes)
		k.Picture = profile(ranked)
		k.Picture.Up = "mean rank among replicates"
		k.Picture.lift(0.5)
		return k
	}
	var table [][]float64
	var sizes []float64
	for range s.columns {
		table = append(table, nil)
	}
	worst := 0
	spread := 0.0
	var figures [][][]float64
	for level := range s.of.Levels {
		shares := s.meansIn(parts, func(c []float64, i int) float64 {
			if int(c[i]) == level {
				return 1
			}
			return 0
		})
		figures = append(figures, shares)
		centres := profile(shares)
		off := 0.0
		for b := range shares[0] {
			off += parts.sizes[b] * square(shares[0][b]-centres.Middle[b])
		}
		if off >= spread {
			worst, spread = level, off
		}
		for c := range table {
			table[c] = append(table[c], shares[c]...)
		}
		sizes = append(sizes, parts.sizes...)
	}
	k := s.distance(kind, of, table, sizes)
	k.Picture = profile(figures[worst])
	k.Picture.Up = "share of " + s.of.Levels[worst]
	return k
}
