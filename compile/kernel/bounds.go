package kernel

import (
	"math"
	"sync"
)

// Densities with bounds are made of others and of their tails. Bounds are the
// last arguments, and data: they have no derivative.

// LeftCensored has the argument low: a value at or below it is known to lie
// there and nothing more, such as a measurement below the limit of detection.
func LeftCensored(d *Density, t Tails) *Density {
	return bounded("left-censored "+d.Name, d, t, 1, func(r *boundRow, y float64, bounds []float64) float64 {
		if y <= bounds[0] {
			return r.tail(t.Below, bounds[0])
		}
		return r.density()
	})
}

// RightCensored has the argument high: a value at or above it is known to lie
// there and nothing more.
func RightCensored(d *Density, t Tails) *Density {
	return bounded("right-censored "+d.Name, d, t, 1, func(r *boundRow, y float64, bounds []float64) float64 {
		if y >= bounds[0] {
			return r.tail(t.Above, bounds[0])
		}
		return r.density()
	})
}

// Censored has the argument seen: where it is 0 the true value lies above y, as
// for what had not happened yet when observation stopped; where it is 1 the
// value is y.
func Censored(d *Density, t Tails) *Density {
	return bounded("censored "+d.Name, d, t, 1, func(r *boundRow, y float64, bounds []float64) float64 {
		switch bounds[0] {
		case 0:
			return r.ownTail(t.Above, y)
		case 1:
			return r.density()
		}
		return outside(bounds[0])
	})
}

// IntervalCensored has the argument upper: the true value lies between y and
// that, or is y where both are the same.
func IntervalCensored(d *Density, t Tails) *Density {
	return bounded("interval-censored "+d.Name, d, t, 1, func(r *boundRow, y float64, bounds []float64) float64 {
		switch upper := bounds[0]; {
		case upper > y:
			return r.between(y, upper, 1)
		case upper == y:
			return r.density()
		default:
			return outside(upper + y)
		}
	})
}

// Truncated has the arguments low and high: values outside never came to be
// seen, and how many there were is not known.
func Truncated(d *Density, t Tails) *Density {
	return bounded("truncated "+d.Name, d, t, 2, func(r *boundRow, y float64, bounds []float64) float64 {
		if y < bounds[0] || y > bounds[1] || bounds[0] >= bounds[1] {
			return math.Inf(-1)
		}
		value := r.density()
		slope := r.slope
		value -= r.between(bounds[0], bounds[1], -1)
		r.slope = slope
		return value
	})
}

// A boundRow is one row with the sums of its derivatives.
type boundRow struct {
	of      *Density
	tails   Tails
	y       []float64
	cols    [mostArguments][]float64
	args    [mostArguments]float64
	d       [mostArguments]float64
	dcols   [mostArguments][]float64
	a, b    [mostArguments + 1]float64
	slope   float64 // in y
	dy      [1]float64
	n       int
	scratch []float64
}

func (r *boundRow) density() float64 {
	r.dy[0] = 0
	for i := range r.n {
		r.dcols[i] = r.d[i : i+1]
	}
	value := r.of.Block(1, r.y, r.cols[:r.n], r.dy[:], r.dcols[:r.n], nil, r.scratch)
	r.slope = r.dy[0]
	return value
}

// tail is a tail beyond a bound, ownTail one beyond the value itself.
func (r *boundRow) tail(of func(x float64, args, d []float64) float64, at float64) float64 {
	value := r.ownTail(of, at)
	r.slope = 0
	return value
}

func (r *boundRow) ownTail(of func(x float64, args, d []float64) float64, at float64) float64 {
	value := of(at, r.args[:r.n], r.a[:])
	r.slope = r.a[0]
	for i := range r.n {
		r.d[i] += r.a[i+1]
	}
	return value
}

// between adds sign times the derivatives of the log probability of an
// interval that starts at low.
func (r *boundRow) between(low, high, sign float64) float64 {
	value := r.tails.between(low, high, r.args[:r.n], r.a[:], r.b[:])
	r.slope = sign * r.a[0]
	for i := range r.n {
		r.d[i] += sign * (r.a[i+1] + r.b[i+1])
	}
	return value
}

func bounded(name string, d *Density, t Tails, bounds int, row func(r *boundRow, y float64, bounds []float64) float64) *Density {
	// What is beneath takes slices, which would be made anew for every block.
	rows := sync.Pool{New: func() any { return new(boundRow) }}
	return &Density{Name: name, Args: d.Args + bounds, Block: func(n int, y []float64, args [][]float64, dy []float64, dargs [][]float64, _, scratch []float64) float64 {
		r := rows.Get().(*boundRow)
		defer rows.Put(r)
		r.of, r.tails, r.n, r.scratch = d, t, d.Args, scratch
		iy := mask(y)
		var limits [2]float64
		sum := 0.0
		for i := range n {
			at := i & iy
			r.y = y[at : at+1]
			for j := range d.Args {
				k := i & mask(args[j])
				r.cols[j], r.args[j], r.d[j] = args[j][k:k+1], args[j][k], 0
			}
			for j := range bounds {
				limit := args[d.Args+j]
				limits[j] = limit[i&mask(limit)]
				if limits[j] != limits[j] {
					return math.NaN()
				}
			}
			value := row(r, y[at], limits[:bounds])
			sum += value
			if math.IsInf(sum, -1) {
				return sum
			}
			if dy != nil {
				dy[at] += r.slope
			}
			for j := range d.Args {
				if g := wanted(dargs, j); g != nil {
					g[i&mask(g)] += r.d[j]
				}
			}
		}
		return sum
	}}
}
