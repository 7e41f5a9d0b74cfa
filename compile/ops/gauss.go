package ops

import (
	"math"

	"arrowroot/compile/kernel"
)

// passGauss replaces a normal density of data whose mean is a sum of scalars
// times data columns, and whose sd is a scalar, by its sufficient statistics:
// evaluating it then takes p² steps for p coefficients, whatever the rows.
//
// The residual sum of squares is kept as rss + |z - Rθ|², from an orthogonal
// triangularisation of the columns beside y (Golub & Van Loan, Matrix
// Computations, 4th ed. 2013, sections 5.2 and 5.3), not as y'y - 2θ'X'y +
// θ'X'Xθ: every part is positive, so nothing cancels, and columns may depend
// on one another.
func passGauss(u *unit) {
	u.rewrite(func(next *graph, _ id, n node) id {
		if n.op != opDensity || n.kernel.Name != "normal" || n.data != nil {
			return next.add(n)
		}
		y, mean, sd := next.nodes[n.args[0]], n.args[1], n.args[2]
		if y.op != opData || next.nodes[sd].plate != Scalar {
			return next.add(n)
		}
		p := &predictor{g: next, offset: make([]float64, len(y.data)), of: map[id]int{}}
		if !p.split(mean) || len(p.columns) == 0 || worth*len(p.columns) > len(y.data) || len(p.columns) > maxColumns {
			return next.add(n)
		}
		residual := make([]float64, len(y.data))
		for i := range residual {
			residual[i] = y.data[i] - p.offset[i]
		}
		stats := sufficient(p.columns, residual)
		if stats == nil {
			return next.add(n)
		}
		args := []id{next.constant(0)}
		for _, c := range p.coefficients {
			if len(c) == 1 {
				args = append(args, c[0])
			} else {
				args = append(args, next.make(opAdd, c...))
			}
		}
		return next.put(node{op: opDensity, kernel: collapsed, args: append(args, sd), data: stats})
	})
}

const (
	worth      = 4  // rows per coefficient from which the collapse pays
	maxColumns = 60 // the triangularisation takes rows times columns squared
)

// A predictor is offset + Σ coefficient · column, found in a graph.
type predictor struct {
	g            *graph
	offset       []float64
	columns      [][]float64 // nil = ones
	coefficients [][]id      // to be summed
	of           map[id]int  // column node → position; 0 → that of the ones
}

// split takes v apart; false if it is not of that form.
func (p *predictor) split(v id) bool {
	parts := []id{v}
	if n := &p.g.nodes[v]; n.op == opAdd && n.plate != Scalar {
		parts = n.args
	}
	for _, a := range parts {
		factors := []id{a}
		if n := &p.g.nodes[a]; n.op == opMul && n.plate != Scalar {
			factors = n.args
		}
		var column id
		var scalars []id
		for _, f := range factors {
			n := &p.g.nodes[f]
			switch {
			case n.plate == Scalar:
				scalars = append(scalars, f)
			case n.op == opData && column == 0:
				column = f
			default:
				return false
			}
		}
		if len(scalars) == 0 {
			for i, v := range p.g.nodes[column].data {
				p.offset[i] += v
			}
			continue
		}
		coefficient := scalars[0]
		if len(scalars) > 1 {
			coefficient = p.g.make(opMul, scalars...)
		}
		at, known := p.of[column]
		if !known {
			at = len(p.columns)
			p.of[column] = at
			p.columns = append(p.columns, p.g.nodes[column].data) // nil for node 0
			p.coefficients = append(p.coefficients, nil)
		}
		p.coefficients[at] = append(p.coefficients[at], coefficient)
	}
	return true
}

// sufficient packs n, rss, z and R (by rows, full) for columns and y. Where
// ones are among the columns, the others and y are centred first and the means
// make a row of their own. nil if a number is not finite.
func sufficient(columns [][]float64, y []float64) []float64 {
	n, p := len(y), len(columns)
	ones := -1
	for j, c := range columns {
		if c == nil {
			ones = j
		}
	}
	root := math.Sqrt(float64(n))
	r := make([]float64, p*p)
	z := make([]float64, p)
	row := 0
	work := make([][]float64, 0, p+1) // columns still to be triangularised, then y
	at := make([]int, 0, p)
	for j, c := range append(columns[:p:p], y) {
		if c == nil {
			continue
		}
		mean := 0.0
		if ones >= 0 {
			for _, v := range c {
				mean += v / float64(n)
			}
			if j < p {
				r[j] = root * mean
			} else {
				z[0] = root * mean
			}
		}
		centred := make([]float64, n)
		for i, v := range c {
			centred[i] = v - mean
		}
		work = append(work, centred)
		if j < p {
			at = append(at, j)
		}
	}
	if ones >= 0 {
		r[ones] = root
		row = 1
	}
	last := work[len(work)-1]
	for k := range at {
		reflect(work[k:], k)
		for i, j := range at[k:] {
			r[(row+k)*p+j] = work[k+i][k]
		}
		z[row+k] = last[k]
	}
	rss := 0.0
	for _, v := range last[len(at):] {
		rss += v * v
	}
	out := append([]float64{float64(n), rss}, z...)
	out = append(out, r...)
	for _, v := range out {
		if math.IsNaN(v) || math.IsInf(v, 0) {
			return nil
		}
	}
	return out
}

// reflect applies to all columns the Householder reflection that clears the
// first one below entry k.
func reflect(columns [][]float64, k int) {
	v := columns[0][k:]
	norm := math.Sqrt(dot(v, v))
	if norm == 0 {
		return
	}
	alpha := -math.Copysign(norm, v[0])
	v[0] -= alpha
	scale := 2 / dot(v, v)
	for _, c := range columns[1:] {
		t := scale * dot(v, c[k:])
		for i := range v {
			c[k+i] -= t * v[i]
		}
	}
	v[0] = alpha // what the first column becomes; the rest is never read again
}

// collapsed is the normal density of all rows at once. Its arguments are the
// coefficients and the sd; aux is what sufficient packs.
var collapsed = &kernel.Density{
	Name: "normal over all rows",
	Args: -1,
	Block: func(_ int, _ []float64, args [][]float64, _ []float64, slopes [][]float64, aux, scratch []float64) float64 {
		p := len(args) - 1
		n, rss, z, r := aux[0], aux[1], aux[2:2+p], aux[2+p:]
		sd := args[p][0]
		if !(sd > 0) {
			if math.IsNaN(sd) {
				return sd
			}
			return math.Inf(-1)
		}
		left := scratch[:p] // z - Rθ
		for i := range left {
			v := z[i]
			for j, w := range r[i*p : (i+1)*p] {
				v -= w * args[j][0]
			}
			left[i] = v
			rss += v * v
		}
		if slopes != nil {
			for j := range p {
				if slopes[j] == nil {
					continue
				}
				sum := 0.0
				for i, v := range left {
					sum += r[i*p+j] * v
				}
				slopes[j][0] += sum / (sd * sd)
			}
			if slopes[p] != nil {
				slopes[p][0] += (rss/(sd*sd) - n) / sd
			}
		}
		return -n*(0.5*math.Log(2*math.Pi)+math.Log(sd)) - 0.5*rss/(sd*sd)
	},
}
