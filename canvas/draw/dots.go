package draw

import (
	"math"
	"slices"
)

// A Stack is dots piled up over a line.
type Stack struct {
	Centres []Point // x from 0 to the width asked for, y upwards negative from the line
	Radius  float64
	Width   float64 // of the occupied part
}

// StackDots piles quantiles (rising) into columns of dots of one diameter, as
// in a quantile dot plot: each dot stands for the same share of the values
// (Kay et al. 2016; Fernandes et al. 2018). A few different values become
// blocks, one per value; others equally wide bins. The dots are as large as
// fits; where twenty would be specks, every dot stands for two of them.
func StackDots(quantiles []float64, width, height, largest float64) Stack {
	if len(quantiles) == 0 {
		return Stack{}
	}
	if counts := levels(quantiles); len(counts) <= 5 {
		return blocks(counts, width, height, largest)
	}
	best, diameter := piles(quantiles, width, height, largest)
	if diameter < 1.3*largest && len(quantiles) >= 10 {
		if fewer, d := piles(halved(quantiles), width, height, largest); d > diameter {
			best, diameter = fewer, d
		}
	}
	return stack(best, 1, 0, diameter)
}

// levels counts the different values in order.
func levels(quantiles []float64) []int {
	var counts []int
	for i, v := range quantiles {
		if i == 0 || v != quantiles[i-1] {
			counts = append(counts, 0)
		}
		counts[len(counts)-1]++
	}
	return counts
}

// halved puts one quantile in the place of two.
func halved(quantiles []float64) []float64 {
	half := make([]float64, len(quantiles)/2)
	for i := range half {
		half[i] = (quantiles[2*i] + quantiles[2*i+1]) / 2
	}
	return half
}

// piles finds the number of bins that gives the largest dots.
func piles(quantiles []float64, width, height, largest float64) (counts []int, diameter float64) {
	from, to := quantiles[0], quantiles[len(quantiles)-1]
	for columns := 20; columns >= 5; columns-- {
		c := bins(quantiles, from, to, columns)
		if d := min(2*largest, width/float64(columns), height/float64(slices.Max(c))); d > diameter {
			counts, diameter = c, d
		}
	}
	return counts, diameter
}

// blocks gives every value a block of dots, a few columns wide.
func blocks(counts []int, width, height, largest float64) Stack {
	const gap = 0.8 // of a dot, between blocks
	n := float64(len(counts))
	wide, diameter := 1, 0.0
	for m := 1; m <= 6; m++ {
		rows := (slices.Max(counts) + m - 1) / m
		d := min(2*largest, width/(n*float64(m)+(n-1)*gap), height/float64(rows))
		if d > diameter {
			wide, diameter = m, d
		}
	}
	return stack(counts, wide, gap, diameter)
}

func bins(values []float64, from, to float64, n int) []int {
	counts := make([]int, n)
	for _, v := range values {
		k := 0
		if to > from {
			k = min(n-1, int(math.Floor((v-from)/(to-from)*float64(n))))
		}
		counts[k]++
	}
	return counts
}

// stack places dots of diameter d: each count fills a block so many columns
// wide from the bottom, blocks gap·d apart.
func stack(counts []int, columns int, gap, d float64) Stack {
	n := float64(len(counts))
	s := Stack{Radius: d / 2 * 0.86, Width: d * (n*float64(columns) + (n-1)*gap)}
	for k, c := range counts {
		left := float64(k) * (float64(columns) + gap)
		for i := range c {
			s.Centres = append(s.Centres, Point{
				X: (left + float64(i%columns) + 0.5) * d,
				Y: -(float64(i/columns) + 0.55) * d,
			})
		}
	}
	return s
}

// DotStrip draws quantiles (rising) as a stacked strip of dots over a line.
func DotStrip(width, height float64, quantiles []float64, s Style) *List {
	l := &List{Width: width, Height: height, Background: s.Ground}
	base := math.Floor(height - 2)
	st := StackDots(quantiles, width-8, base-2, 3)
	left := (width - st.Width) / 2
	d := &Discs{Radius: st.Radius, Color: s.Muted}
	for _, c := range st.Centres {
		d.Centres = append(d.Centres, Point{left + c.X, base + c.Y})
	}
	l.Add(d, &Shape{Path: Polyline(Point{left - 3, base}, Point{left + st.Width + 3, base}), Stroke: s.Muted, Width: 1, Crisp: true})
	return l
}
