package replicate

import (
	"cmp"
	"math"
	"slices"
)

// PictureKind says how a picture is drawn.
type PictureKind int

// The kinds.
const (
	NoPicture PictureKind = iota
	Bars                  // replicates as bars with intervals, data as marks, over labels
	Points                // intervals and marks over a number
	Intervals             // intervals and marks over labels
	Line                  // a band and a line over a number
	Tally                 // how many replicates have which value, and the data's
)

// A Picture holds the data over their replicates. Low to High holds 95 % of
// the replicates at each place, but for the band of a shape, which holds all of
// its line with probability 95 %.
type Picture struct {
	Kind              PictureKind
	Across, Up        string
	X                 []float64
	Labels            []string
	Observed          []float64
	Low, Middle, High []float64
	Values            []float64 // Tally: of the replicates …
	At                float64   // … and of the data
	LeftOut           int       // places not shown
}

// profile is a table's first row among the others, place by place.
func profile(table [][]float64) Picture {
	p := Picture{Observed: table[0]}
	column := make([]float64, len(table)-1)
	for b := range table[0] {
		for c := range column {
			column[c] = table[c+1][b]
		}
		slices.Sort(column)
		p.Low = append(p.Low, at(column, 0.025))
		p.Middle = append(p.Middle, at(column, 0.5))
		p.High = append(p.High, at(column, 0.975))
	}
	return p
}

// lift adds a number to all heights.
func (p *Picture) lift(by float64) {
	p.Observed = slices.Clone(p.Observed)
	for b := range p.Observed {
		p.Observed[b] += by
		p.Low[b] += by
		p.Middle[b] += by
		p.High[b] += by
	}
}

// mostStriking keeps at most so many places, those where the data lie furthest
// out, in their order.
func (p *Picture) mostStriking(most int) {
	if len(p.Observed) <= most {
		return
	}
	far := func(b int) float64 {
		return math.Abs(p.Observed[b]-p.Middle[b]) / math.Max(1e-300, p.High[b]-p.Low[b])
	}
	order := make([]int, len(p.Observed))
	for b := range order {
		order[b] = b
	}
	slices.SortStableFunc(order, func(a, b int) int { return cmp.Compare(far(b), far(a)) })
	order = slices.Sorted(slices.Values(order[:most]))
	p.LeftOut = len(p.Observed) - most
	pick := func(of []float64) []float64 {
		var out []float64
		for _, b := range order {
			out = append(out, of[b])
		}
		return out
	}
	p.Observed, p.Low, p.Middle, p.High = pick(p.Observed), pick(p.Low), pick(p.Middle), pick(p.High)
	var labels []string
	for _, b := range order {
		labels = append(labels, p.Labels[b])
	}
	p.Labels = labels
}

// figure is the picture of the variable itself.
func (s *sample) figure(checks []*Check) Picture {
	of := func(kind Kind) Picture {
		for _, c := range checks {
			if c.Kind == kind {
				return c.Picture
			}
		}
		return Picture{}
	}
	switch s.sort() {
	case counts:
		return of(Counts)
	case outOf:
		return of(Calibration)
	case binary:
		if p := of(Calibration); p.Kind != NoPicture {
			return p
		}
		return of(Shares)
	case levels:
		return s.shares()
	}
	return s.density()
}

// shares of all levels.
func (s *sample) shares() Picture {
	table := make([][]float64, len(s.columns))
	for c, column := range s.columns {
		table[c] = make([]float64, len(s.of.Levels))
		for _, x := range column {
			if k := int(x); k >= 0 && k < len(table[c]) {
				table[c][k] += 1 / float64(len(column))
			}
		}
	}
	p := profile(table)
	p.Kind, p.Across, p.Up, p.Labels = Bars, s.of.ID, "share", s.of.Levels
	return p
}

// density over the middle of the data and the replicates: a histogram with
// normal weights, the same for all.
func (s *sample) density() Picture {
	const points = 64
	all := slices.Clone(s.columns[0])
	for c := 1; c < len(s.columns); c += max(1, len(s.columns)/8) {
		all = append(all, s.columns[c]...)
	}
	slices.Sort(all)
	low, high := at(all, 0.005), at(all, 0.995)
	own := slices.Sorted(slices.Values(s.columns[0]))
	low, high = math.Min(low, at(own, 0.01)), math.Max(high, at(own, 0.99))
	spread := math.Min(sd(own), (at(own, 0.75)-at(own, 0.25))/1.34)
	if !(spread > 0) {
		spread = (high - low) / 4
	}
	width := 0.9 * spread * math.Pow(float64(len(own)), -0.2) // Silverman 1986, eq. 3.31
	if !(high > low) || !(width > 0) {
		return Picture{}
	}
	step := (high - low) / (points - 1)
	width = math.Max(width, step)
	reach := int(math.Ceil(3 * width / step))
	kernel := make([]float64, reach+1)
	for k := range kernel {
		kernel[k] = math.Exp(-0.5*square(float64(k)*step/width)) / (width * math.Sqrt(2*math.Pi))
	}
	table := make([][]float64, len(s.columns))
	for c, column := range s.columns {
		bin := make([]float64, points)
		for _, x := range column {
			h := (x - low) / step
			if k := int(math.Floor(h)); h >= 0 && k < points-1 {
				bin[k] += 1 - (h - float64(k))
				bin[k+1] += h - float64(k)
			}
		}
		table[c] = make([]float64, points)
		for b := range bin {
			for k := max(0, b-reach); k <= min(points-1, b+reach); k++ {
				table[c][b] += bin[k] * kernel[max(k-b, b-k)] / float64(len(column))
			}
		}
	}
	p := profile(table)
	p.Kind, p.Across, p.Up = Line, s.of.ID, "density"
	for b := range points {
		p.X = append(p.X, low+step*float64(b))
	}
	return p
}
