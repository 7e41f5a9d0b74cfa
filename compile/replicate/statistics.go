package replicate

import (
	"math"
	"slices"
	"strconv"
)

// number compares one statistic of the data with that of each replicate. bend
// maps it to a scale on which its replicates lie about evenly around their
// centre; floor is a distance on that scale that is too small to mean anything.
func (s *sample) number(kind Kind, of string, statistic func([]float64) float64, bend func(float64) float64, floor float64) *Check {
	values := make([]float64, len(s.columns))
	for c, column := range s.columns {
		values[c] = statistic(column)
	}
	k := s.compare(kind, of, values, bend, floor, false)
	k.Picture = Picture{Kind: Tally, Across: string(kind), Values: values[1:], At: values[0]}
	if kind == Shares {
		k.Picture.Across = "share of " + of
	}
	return k
}

// distance compares how far each column of a table lies from the average
// column: the weighted sum of squares, whose cube root is nearly normal (Wilson &
// Hilferty 1931). Only a large one speaks against the model: a law that was
// fitted to these values lies nearer to them than to new ones.
func (s *sample) distance(kind Kind, of string, table [][]float64, weights []float64) *Check {
	wide := len(table[0])
	mean := make([]float64, wide)
	for _, row := range table {
		for b, x := range row {
			mean[b] += x / float64(len(table))
		}
	}
	values := make([]float64, len(table))
	for c, row := range table {
		for b, x := range row {
			w := 1.0
			if weights != nil {
				w = weights[b]
			}
			values[c] += w * square(x-mean[b])
		}
	}
	return s.compare(kind, of, values, math.Cbrt, 0, true)
}

// compare scores the data and each replicate: the first value is the data's.
func (s *sample) compare(kind Kind, of string, values []float64, bend func(float64) float64, floor float64, upward bool) *Check {
	k := &Check{Variable: s.of.ID, Kind: kind, Of: of, Upward: upward, Observed: values[0]}
	replicates := slices.Sorted(slices.Values(values[1:]))
	k.Low, k.Centre, k.High = at(replicates, 0.025), at(replicates, 0.5), at(replicates, 0.975)
	if upward {
		k.Low, k.High = at(replicates, 0), at(replicates, 0.95)
	}
	k.Tail, k.Beyond = tail(replicates, values[0], upward)
	bent := make([]float64, len(replicates))
	for i, x := range replicates {
		bent[i] = bend(x)
	}
	middle := at(bent, 0.5)
	above := math.Max(at(bent, 0.975)-middle, floor*1.96) / 1.96
	under := math.Max(middle-at(bent, 0.025), floor*1.96) / 1.96
	score := func(x float64) float64 {
		d := bend(x) - middle
		scale := above
		if d < 0 {
			if upward {
				return 0
			}
			d, scale = -d, under
		}
		if d <= 1e-12*math.Abs(middle) { // nothing but rounding
			return 0
		}
		return math.Min(d/math.Max(scale, 1e-12*math.Abs(middle)), 1e6)
	}
	k.Distance = score(values[0])
	for _, x := range values[1:] {
		k.scores = append(k.scores, score(x))
	}
	return k
}

// tail is the share of replicates at least as far out as the data, which count
// as one of them, and how many these are on its side.
func tail(sorted []float64, x float64, upward bool) (share float64, beyond int) {
	below, _ := slices.BinarySearch(sorted, x)
	upTo := below
	for upTo < len(sorted) && sorted[upTo] == x {
		upTo++
	}
	n := float64(len(sorted) + 1)
	up := (float64(len(sorted)-below) + 1) / n
	if upward {
		return up, len(sorted) - below
	}
	return math.Min(1, 2*math.Min(up, (float64(upTo)+1)/n)), min(len(sorted)-below, upTo)
}

// Scales of statistics.
func as(x float64) float64     { return x }
func logged(x float64) float64 { return math.Log(math.Max(x, 1e-300)) }

func square(x float64) float64 { return x * x }

func sd(values []float64) float64 {
	mean, sum := 0.0, 0.0
	for _, x := range values {
		mean += x / float64(len(values))
	}
	for _, x := range values {
		sum += square(x - mean)
	}
	return math.Sqrt(sum / math.Max(1, float64(len(values)-1)))
}

// at is the quantile of sorted values, between neighbours on a line.
func at(sorted []float64, p float64) float64 {
	h := p * float64(len(sorted)-1)
	i := min(int(h), len(sorted)-1)
	j := min(i+1, len(sorted)-1)
	return sorted[i] + (h-float64(i))*(sorted[j]-sorted[i])
}

func quantile(values []float64, p float64) float64 {
	return at(slices.Sorted(slices.Values(values)), p)
}

// parts sorts units into a few: −1 is none.
type parts struct {
	of     []int
	count  int
	sizes  []float64
	labels []float64 // of each: the value all its units have, where they have one
}

// each makes a part of every whole number below k that some unit has.
func each(values []float64, k int) parts {
	p := parts{of: make([]int, len(values))}
	place := make([]int, k)
	for _, x := range values {
		if !math.IsNaN(x) && int(x) >= 0 && int(x) < k {
			place[int(x)]++
		}
	}
	for level, n := range place {
		place[level] = -1
		if n > 0 {
			place[level] = p.count
			p.count++
			p.sizes, p.labels = append(p.sizes, float64(n)), append(p.labels, float64(level))
		}
	}
	for i, x := range values {
		p.of[i] = -1
		if !math.IsNaN(x) && int(x) >= 0 && int(x) < k {
			p.of[i] = place[int(x)]
		}
	}
	return p
}

// cut makes up to most parts of about equal size of values in order; equal ones
// stay together.
func cut(values []float64, most int) parts {
	p := parts{of: make([]int, len(values))}
	var order []int
	for i, x := range values {
		p.of[i] = -1
		if !math.IsNaN(x) {
			order = append(order, i)
		}
	}
	slices.SortStableFunc(order, func(a, b int) int {
		switch {
		case values[a] < values[b]:
			return -1
		case values[a] > values[b]:
			return 1
		}
		return 0
	})
	most = min(most, max(2, len(order)/4))
	for from := 0; from < len(order); {
		to := max(from+1, (p.count+1)*len(order)/most)
		to = min(to, len(order))
		for to < len(order) && values[order[to]] == values[order[to-1]] {
			to++
		}
		for _, i := range order[from:to] {
			p.of[i] = p.count
		}
		p.count++
		p.sizes = append(p.sizes, float64(to-from))
		from = to
		for p.count < most && from < len(order) && (p.count+1)*len(order)/most <= from {
			most-- // a long run of equal values has used up parts
		}
	}
	return p
}

// means gives the mean of values in each part.
func (p *parts) means(values []float64) []float64 {
	out := make([]float64, p.count)
	for i, b := range p.of {
		if b >= 0 {
			out[b] += values[i] / p.sizes[b]
		}
	}
	return out
}

// meansIn is a table: for each column of values, its mean in each part.
func (s *sample) meansIn(p parts, of func(column []float64, unit int) float64) [][]float64 {
	return s.meansOf(s.columns, p, of)
}

func (s *sample) meansOf(columns [][]float64, p parts, of func(column []float64, unit int) float64) [][]float64 {
	out := make([][]float64, len(columns))
	for c, column := range columns {
		out[c] = make([]float64, p.count)
		for i, b := range p.of {
			if b >= 0 {
				out[c][b] += of(column, i) / p.sizes[b]
			}
		}
	}
	return out
}

// bins of counts: each holds those from one edge up to the next.
type bins []float64

// countBins covers all counts of the data and of most replicates in at most 25
// bins, the last one open.
func (s *sample) countBins() bins {
	var tops []float64
	for _, c := range s.columns {
		tops = append(tops, slices.Max(c))
	}
	top := math.Max(tops[0], quantile(tops, 0.9))
	bottom := slices.Min(s.columns[0])
	for _, c := range s.columns {
		bottom = math.Min(bottom, slices.Min(c))
	}
	step := math.Max(1, math.Ceil((top-bottom+1)/25))
	var out bins
	for x := bottom; x <= top && len(out) < 25; x += step {
		out = append(out, x)
	}
	return out
}

func (b bins) label(i int) string {
	from := strconv.FormatFloat(b[i], 'g', 6, 64)
	if i == len(b)-1 {
		return from + "+"
	}
	if b[i+1]-b[i] == 1 {
		return from
	}
	return from + "–" + strconv.FormatFloat(b[i+1]-1, 'g', 6, 64)
}

func tally(values []float64, b bins) []float64 {
	out := make([]float64, len(b))
	step := 1.0
	if len(b) > 1 {
		step = b[1] - b[0]
	}
	for _, x := range values {
		out[min(len(b)-1, max(0, int((x-b[0])/step)))]++
	}
	return out
}
