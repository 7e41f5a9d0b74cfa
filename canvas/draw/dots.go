package draw

import "math"

// A Stack is dots piled up over a line: Build it with StackDots.
type Stack struct {
	Centres []Point // x from 0 to the width asked for, y upwards negative from the line
	Radius  float64
	Width   float64 // of the occupied part
}

// StackDots piles quantiles (rising) into columns of dots of one diameter, as
// in a quantile dot plot: each dot stands for the same share of the values
// (Kay et al. 2016; Fernandes et al. 2018). The columns are equally wide bins
// over the range; the diameter is as large as fits the width and the height.
func StackDots(quantiles []float64, width, height, largest float64) Stack {
	n := len(quantiles)
	if n == 0 {
		return Stack{}
	}
	from, to := quantiles[0], quantiles[n-1]
	columns := max(1, min(n, int(width/(2*largest))))
	if from == to {
		columns = 1
	}
	for {
		counts := bins(quantiles, from, to, columns)
		tallest := 0
		for _, c := range counts {
			tallest = max(tallest, c)
		}
		d := min(2*largest, width/float64(columns), height/float64(tallest))
		if d*float64(columns) >= width*0.6 || columns >= 24 || columns == 1 || d == 2*largest {
			return stack(counts, d)
		}
		columns++
	}
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

func stack(counts []int, d float64) Stack {
	s := Stack{Radius: d / 2 * 0.86, Width: d * float64(len(counts))}
	for k, c := range counts {
		for i := range c {
			s.Centres = append(s.Centres, Point{(float64(k) + 0.5) * d, -(float64(i) + 0.55) * d})
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
