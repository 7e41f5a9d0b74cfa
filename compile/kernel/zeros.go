package kernel

import (
	"math"
	"sync"
)

// mostArguments is how many arguments a density with extra zeros may have
// besides its share of zeros.
const mostArguments = 7

// ZeroInflated is a count density with a share of further zeros, which comes
// as the last argument: a zero is either one of these or one of the counts (D.
// Lambert, "Zero-inflated Poisson regression", Technometrics 34, 1992).
func ZeroInflated(d *Density) *Density {
	return withZeros("zero-inflated "+d.Name, d, func(of *zeroRow, zero bool, share float64) (value, dshare, weight float64) {
		if !zero {
			return math.Log1p(-share) + of.value(), -1 / (1 - share), 1
		}
		// log(π + (1-π) f) with f the density's own zeros
		f := math.Exp(of.value())
		total := share + (1-share)*f
		return math.Log(total), (1 - f) / total, (1 - share) * f / total
	})
}

// Hurdle is a density whose zeros are apart: they have the probability that
// comes as the last argument, and everything else follows the density given
// that it is not zero (J. Mullahy, "Specification and testing of some modified
// count data models", J. Econometrics 33, 1986). whole says that the density
// is one of counts, which has zeros of its own.
func Hurdle(d *Density, whole bool) *Density {
	return withZeros("hurdle "+d.Name, d, func(of *zeroRow, zero bool, share float64) (value, dshare, weight float64) {
		if zero {
			return math.Log(share), 1 / share, 0
		}
		value = math.Log1p(-share) + of.value()
		if whole {
			value -= of.notZero()
		}
		return value, -1 / (1 - share), 1
	})
}

// A zeroRow is one row of the density beneath, with its derivatives.
type zeroRow struct {
	of      *Density
	y       []float64
	args    [mostArguments][]float64
	d, back [mostArguments]float64
	dargs   [mostArguments][]float64
	n       int
	dy      [1]float64
	wantY   bool
	scratch []float64
}

var atZero = []float64{0}

// value is the log density of the row; its derivatives come to d and dy.
func (r *zeroRow) value() float64 {
	for i := range r.n {
		r.d[i] = 0
		r.dargs[i] = r.d[i : i+1]
	}
	r.dy[0] = 0
	var dy []float64
	if r.wantY {
		dy = r.dy[:]
	}
	return r.of.Block(1, r.y, r.args[:r.n], dy, r.dargs[:r.n], nil, r.scratch)
}

// notZero is the log of the probability of not being zero, whose derivatives
// are taken from d.
func (r *zeroRow) notZero() float64 {
	for i := range r.n {
		r.back[i] = 0
		r.dargs[i] = r.back[i : i+1]
	}
	l := r.of.Block(1, atZero, r.args[:r.n], nil, r.dargs[:r.n], nil, r.scratch)
	// log(1 - f) has derivative -f/(1-f) times that of log f.
	ratio := 1 / math.Expm1(-l)
	for i := range r.n {
		r.d[i] += r.back[i] * ratio
	}
	return log1mExp(l)
}

// withZeros is the shape of both: row gives a row's value, its derivative in
// the share of zeros and the weight of the derivatives of what is beneath.
func withZeros(name string, d *Density, row func(of *zeroRow, zero bool, share float64) (value, dshare, weight float64)) *Density {
	args := d.Args
	if args >= 0 {
		args++
	}
	// What is beneath takes slices, which would be made anew for every block.
	rows := sync.Pool{New: func() any { return new(zeroRow) }}
	return &Density{Name: name, Args: args, Block: func(n int, y []float64, args [][]float64, dy []float64, dargs [][]float64, _, scratch []float64) float64 {
		last := len(args) - 1
		share, dshare := args[last], wanted(dargs, last)
		iy, is := mask(y), mask(share)
		of := rows.Get().(*zeroRow)
		defer rows.Put(of)
		of.of, of.n, of.wantY, of.scratch = d, last, dy != nil, scratch
		sum := 0.0
		for i := range n {
			s := share[i&is]
			if s < 0 || s > 1 {
				return math.Inf(-1)
			}
			at := i & iy
			of.y = y[at : at+1]
			for j := range last {
				k := i & mask(args[j])
				of.args[j] = args[j][k : k+1]
			}
			value, ds, weight := row(of, y[at] == 0, s)
			sum += value
			if math.IsInf(sum, -1) {
				return sum
			}
			if dy != nil && weight != 0 {
				dy[at] += of.dy[0]
			}
			if dshare != nil {
				dshare[i&is] += ds
			}
			if weight == 0 {
				continue
			}
			for j := range last {
				if g := wanted(dargs, j); g != nil {
					g[i&mask(g)] += weight * of.d[j]
				}
			}
		}
		return sum
	}}
}
