package evidence

import (
	"math"
	"slices"

	"arrowroot/compile/study"
)

// A design is what the given variables explain by: the columns of a regression,
// or the cells of a cross table where all of them have few values.
//
// A given variable enters by a natural cubic spline of its normal scores, or
// by an indicator for each value where it has few; products of the scores of
// any two enter where there are rows enough. That is cheap (one regression,
// shared by all statements with the same given variables) and bends; what is
// left is compared by its product, which is off only by the product of both
// regressions' errors (Shah & Peters 2020).
type design struct {
	rows    int
	columns [][]float64 // centred
	factor  [][]float64 // lower Cholesky factor of their cross products
	dropped []bool      // columns that follow from those before
	rank    int         // parameters used, the mean included

	cell  []int // of each row, where cells are used
	cells int
}

const (
	fewValues   = 8 // a given variable with no more has an indicator for each
	rowsPerCell = 5
	rowsPerPair = 20 // rows for each column before products of given variables are added
)

// newDesign reads the given columns in some rows; units is how many independent
// pieces these are, rows or groups.
func newDesign(given []*column, values [][]float64, rows, units int) *design {
	d := &design{rows: rows, rank: 1}
	if len(given) == 0 {
		return d
	}
	if !d.byCells(values, units) {
		d.columns = splines(given, values, rows, units)
		d.factorise()
	}
	return d
}

// splines are the centred columns of a regression on the given ones.
func splines(given []*column, values [][]float64, rows, units int) (columns [][]float64) {
	type part struct{ linear, bent [][]float64 }
	var parts []part
	total := 1
	for i, c := range given {
		var p part
		if c.scale == study.Category || distinct(values[i], fewValues) <= fewValues {
			p.linear = indicators(values[i], 1)
		} else if s := normalScores(values[i]); s != nil {
			p.linear = [][]float64{s}
			p.bent = bends(s, bendsFor(units, len(given)))
		}
		parts = append(parts, p)
		total += len(p.linear) + len(p.bent)
	}
	for _, p := range parts {
		columns = append(columns, p.linear...)
		columns = append(columns, p.bent...)
	}
	products := 0
	for i := range parts {
		for j := range i {
			products += len(parts[i].linear) * len(parts[j].linear)
		}
	}
	if products > 0 && (total+products)*rowsPerPair <= units {
		for i := range parts {
			for j := range i {
				for _, a := range parts[i].linear {
					for _, b := range parts[j].linear {
						x := make([]float64, rows)
						for k := range x {
							x[k] = a[k] * b[k]
						}
						centre(x)
						columns = append(columns, x)
					}
				}
			}
		}
	}
	return columns
}

// byCells uses the cross table of the given variables if each has few values
// and every cell rows enough.
func (d *design) byCells(values [][]float64, units int) bool {
	for _, v := range values {
		if distinct(v, fewValues) > fewValues {
			return false
		}
	}
	seen := make(map[string]int)
	cell := make([]int, d.rows)
	key := make([]byte, 0, 8*len(values))
	for i := range cell {
		key = key[:0]
		for _, v := range values {
			bits := math.Float64bits(v[i])
			for s := 0; s < 64; s += 8 {
				key = append(key, byte(bits>>s))
			}
		}
		at, ok := seen[string(key)]
		if !ok {
			at = len(seen)
			seen[string(key)] = at
		}
		cell[i] = at
	}
	if len(seen)*rowsPerCell > units {
		return false
	}
	d.cell, d.cells, d.rank = cell, len(seen), len(seen)
	return true
}

// bendsFor is how many bends a spline gets: more with more rows, fewer where
// many variables are given.
func bendsFor(units, given int) int {
	return min(max(0, units/(15*given)-1), 4)
}

// bends gives the columns of a natural cubic spline of x beyond x itself, with
// knots at quantiles (Hastie, Tibshirani & Friedman 2009, eq. 5.4 and 5.5).
func bends(x []float64, n int) [][]float64 {
	if n == 0 {
		return nil
	}
	sorted := slices.Clone(x)
	slices.Sort(sorted)
	knots := make([]float64, n+2)
	for k := range knots {
		share := 0.05 + 0.9*float64(k)/float64(n+1)
		knots[k] = sorted[int(share*float64(len(sorted)-1)+0.5)]
	}
	knots = slices.Compact(knots)
	if len(knots) < 3 {
		return nil
	}
	last := knots[len(knots)-1]
	d := func(v, knot float64) float64 {
		return (cube(v-knot) - cube(v-last)) / (last - knot)
	}
	var columns [][]float64
	before := knots[len(knots)-2]
	for _, knot := range knots[:len(knots)-2] {
		column := make([]float64, len(x))
		for i, v := range x {
			column[i] = d(v, knot) - d(v, before)
		}
		if standardise(column) {
			columns = append(columns, column)
		}
	}
	return columns
}

func cube(x float64) float64 {
	if x <= 0 {
		return 0
	}
	return x * x * x
}

// collinear is the share of a column left by those before it under which it
// counts as following from them.
const collinear = 1e-8

// factorise makes the Cholesky factor of the columns' cross products.
func (d *design) factorise() {
	p := len(d.columns)
	d.factor = crossProducts(d.columns)
	d.dropped = make([]bool, p)
	for j := range p {
		l := d.factor[j]
		whole := l[j]
		for k := range j {
			s := l[k]
			for m := range k {
				s -= l[m] * d.factor[k][m]
			}
			l[k] = 0
			if !d.dropped[k] {
				l[k] = s / d.factor[k][k]
			}
		}
		rest := whole
		for k := range j {
			rest -= l[k] * l[k]
		}
		if !(rest > collinear*whole) || whole == 0 {
			d.dropped[j] = true
			clear(l)
			continue
		}
		l[j] = math.Sqrt(rest)
		d.rank++
	}
}

// residual gives what the given variables leave of a column.
func (d *design) residual(y []float64) []float64 {
	out := slices.Clone(y)
	if d.cell != nil {
		sum, count := make([]float64, d.cells), make([]float64, d.cells)
		for i, c := range d.cell {
			sum[c] += y[i]
			count[c]++
		}
		for i, c := range d.cell {
			out[i] -= sum[c] / count[c]
		}
		return out
	}
	centre(out)
	for j, b := range d.coefficients(out) {
		if b == 0 {
			continue
		}
		for i, v := range d.columns[j] {
			out[i] -= b * v
		}
	}
	return out
}

// coefficients are those of the columns that fit y best; 0 of what is dropped.
func (d *design) coefficients(y []float64) []float64 {
	p := len(d.columns)
	b := make([]float64, p)
	for j, x := range d.columns { // forward
		if d.dropped[j] {
			continue
		}
		s := dot(x, y)
		for k := range j {
			s -= d.factor[j][k] * b[k]
		}
		b[j] = s / d.factor[j][j]
	}
	for j := p - 1; j >= 0; j-- { // back
		if d.dropped[j] {
			continue
		}
		s := b[j]
		for k := j + 1; k < p; k++ {
			s -= d.factor[k][j] * b[k]
		}
		b[j] = s / d.factor[j][j]
	}
	return b
}

// crossProducts gives the lower triangle of X'X, block of rows by block so that
// the columns of one stay in the cache.
func crossProducts(columns [][]float64) [][]float64 {
	out := make([][]float64, len(columns))
	for i := range out {
		out[i] = make([]float64, len(columns))
	}
	if len(columns) == 0 {
		return out
	}
	const block = 512
	for from := 0; from < len(columns[0]); from += block {
		to := min(from+block, len(columns[0]))
		for i, x := range columns {
			for j := range i + 1 {
				out[i][j] += dot(x[from:to], columns[j][from:to])
			}
		}
	}
	return out
}

func dot(a, b []float64) float64 {
	b = b[:len(a)]
	var s0, s1, s2, s3 float64
	i := 0
	for ; i+4 <= len(a); i += 4 {
		s0 += a[i] * b[i]
		s1 += a[i+1] * b[i+1]
		s2 += a[i+2] * b[i+2]
		s3 += a[i+3] * b[i+3]
	}
	for ; i < len(a); i++ {
		s0 += a[i] * b[i]
	}
	return s0 + s1 + s2 + s3
}
