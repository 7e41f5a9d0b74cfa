package kernel

import "math"

// Triangular has arguments low, high and mode: its density rises in a straight
// line from 0 at low to the mode, and falls to 0 at high.
var Triangular = &Density{Name: "triangular", Args: 3, Block: triangularBlock}

func triangularBlock(n int, y []float64, args [][]float64, dy []float64, dargs [][]float64, _, _ []float64) float64 {
	low, high, mode := args[0], args[1], args[2]
	dlow, dhigh, dmode := wanted(dargs, 0), wanted(dargs, 1), wanted(dargs, 2)
	iy, il, ih, im := mask(y), mask(low), mask(high), mask(mode)
	sum := 0.0
	for i := range n {
		v, l, h, m := y[i&iy], low[i&il], high[i&ih], mode[i&im]
		if v != v || l != l || h != h || m != m {
			return math.NaN()
		}
		if l >= h || m < l || m > h || v < l || v > h || v == l && m > l || v == h && m < h {
			return math.Inf(-1)
		}
		width := h - l
		sum += math.Ln2 - math.Log(width)
		// Of the two sides only the one on which y lies counts; at the mode
		// the density is 2/width whichever is taken.
		var slope, end, top float64
		left := v < m
		switch {
		case v == m:
		case left:
			sum += math.Log((v - l) / (m - l))
			slope, end, top = 1/(v-l), 1/(m-l)-1/(v-l), -1/(m-l)
		default:
			sum += math.Log((h - v) / (h - m))
			slope, end, top = -1/(h-v), 1/(h-v)-1/(h-m), 1/(h-m)
		}
		if dy != nil {
			dy[i&iy] += slope
		}
		if dlow != nil {
			dlow[i&il] += 1 / width
			if left {
				dlow[i&il] += end
			}
		}
		if dhigh != nil {
			dhigh[i&ih] -= 1 / width
			if !left {
				dhigh[i&ih] += end
			}
		}
		if dmode != nil {
			dmode[i&im] += top
		}
	}
	return sum
}
