package effect

import (
	"math"

	"arrowroot/compile/catalog"
	"arrowroot/compile/model"
)

// A rowset is the rows that a contrast averages over: all used rows, or an
// even selection of them. Variables of coarser levels are spread over rows, so
// that every law can be evaluated row by row.
type rowset struct {
	n       int
	columns [][]float64 // per variable
	of      [][]int32   // per plate: level of each row
}

// rowsOf takes every used row, or n of them evenly spaced if there are more.
func rowsOf(m *model.Model, n int) *rowset {
	all := m.Rows.Used
	if n <= 0 || n > all {
		n = all
	}
	pick := make([]int, n)
	for i := range pick {
		pick[i] = int(int64(i) * int64(all) / int64(n))
	}
	s := &rowset{n: n}
	for _, p := range m.Plates {
		of := make([]int32, n)
		for i, row := range pick {
			of[i] = p.Of[row]
		}
		s.of = append(s.of, of)
	}
	for _, v := range m.Variables {
		c := make([]float64, n)
		for i, row := range pick {
			if v.Plate >= 0 {
				row = int(m.Plates[v.Plate].Of[row])
			}
			if row < len(v.Values) {
				c[i] = v.Values[row]
			} else {
				c[i] = math.NaN()
			}
		}
		s.columns = append(s.columns, c)
	}
	return s
}

// A worker evaluates laws for one draw at a time. Each goroutine has its own.
type worker struct {
	rows    *rowset
	draw    []float64
	columns [][]float64 // per variable, as it stands under the intervention
	slots   [][]float64
	args    []float64 // natural arguments of one row
	in      []float64 // arguments of one function call
	shares  []float64 // level probabilities of one row
}

func newWorker(rows *rowset, slots int) *worker {
	w := &worker{rows: rows, slots: make([][]float64, slots), in: make([]float64, 8)}
	w.columns = append(w.columns, rows.columns...)
	return w
}

// eval gives the values of a node: one for every row, or a single one if it is
// the same in all rows. The result is valid until the node is evaluated again.
func (w *worker) eval(n *node) []float64 {
	if n.code == column {
		return w.columns[n.variable]
	}
	if w.slots[n.slot] == nil {
		w.slots[n.slot] = make([]float64, w.rows.n)
	}
	dst := w.slots[n.slot]
	switch n.code {
	case number:
		dst[0] = n.value
		return dst[:1]
	case scalar:
		dst[0] = w.draw[n.at]
		return dst[:1]
	case byRow:
		entries := w.draw[n.at:]
		for i, level := range w.rows.of[n.plate] {
			dst[i] = entries[level]
		}
		return dst
	case byCode:
		entries := w.draw[n.at : n.at+n.size]
		for i, c := range w.columns[n.variable] {
			if k := int(c); k >= 0 && k < len(entries) {
				dst[i] = entries[k]
			} else {
				dst[i] = math.NaN()
			}
		}
		return dst
	case negate:
		x := w.eval(n.args[0])
		dst = dst[:len(x)]
		for i, v := range x {
			dst[i] = -v
		}
		return dst
	case call:
		return w.call(n, dst)
	}
	x, y := w.eval(n.args[0]), w.eval(n.args[1])
	size := max(len(x), len(y))
	dst = dst[:size]
	dx, dy := stride(x), stride(y)
	for i, j, k := 0, 0, 0; i < size; i, j, k = i+1, j+dx, k+dy {
		switch n.code {
		case add:
			dst[i] = x[j] + y[k]
		case subtract:
			dst[i] = x[j] - y[k]
		case multiply:
			dst[i] = x[j] * y[k]
		case divide:
			dst[i] = x[j] / y[k]
		case power:
			dst[i] = math.Pow(x[j], y[k])
		}
	}
	return dst
}

// call applies a function of the catalogue row by row.
func (w *worker) call(n *node, dst []float64) []float64 {
	size := 1
	args := make([][]float64, len(n.args))
	for a, x := range n.args {
		args[a] = w.eval(x)
		size = max(size, len(args[a]))
	}
	in := w.in[:0]
	for range args {
		in = append(in, 0)
	}
	for i := range size {
		for a, x := range args {
			in[a] = at(x, i)
		}
		dst[i] = n.function(in)
	}
	return dst[:size]
}

// stride is 0 for a value that serves all rows.
func stride(x []float64) int {
	if len(x) == 1 {
		return 0
	}
	return 1
}

// at is the value of row i.
func at(x []float64, i int) float64 {
	if len(x) == 1 {
		return x[0]
	}
	return x[i]
}

// A natural holds a law's evaluated predictors and arguments, ready to be read
// row by row.
type natural struct {
	law        *law
	predictors [][]float64
	arguments  [][]float64
	cuts       []float64
}

// natural evaluates what a law needs for the current draw and columns.
func (w *worker) natural(l *law) natural {
	e := natural{law: l}
	for _, n := range l.predictors {
		e.predictors = append(e.predictors, w.eval(n))
	}
	for _, n := range l.arguments {
		if n == nil {
			e.arguments = append(e.arguments, nil)
		} else {
			e.arguments = append(e.arguments, w.eval(n))
		}
	}
	if l.cuts >= 0 {
		e.cuts = w.draw[l.cuts : l.cuts+l.levels-1]
	}
	return e
}

// row gives the family's natural arguments at row i; for laws of levels these
// are the probabilities of the levels. Valid until the next call.
func (w *worker) row(e *natural, i int) []float64 {
	l := e.law
	switch l.Family.Link {
	case catalog.Softmax:
		return w.softmax(e, i)
	case catalog.Cumulate:
		return w.cumulate(e, i)
	}
	args := w.args[:0]
	for a, x := range e.arguments {
		if x == nil {
			args = append(args, inverseLink(l.Family.Link, at(e.predictors[0], i)))
		} else {
			args = append(args, at(e.arguments[a], i))
		}
	}
	w.args = args
	return args
}

func (w *worker) softmax(e *natural, i int) []float64 {
	shares := w.shares[:0]
	most := math.Inf(-1)
	for _, x := range e.predictors {
		shares = append(shares, at(x, i))
		most = math.Max(most, at(x, i))
	}
	total := 0.0
	for k, x := range shares {
		shares[k] = math.Exp(x - most)
		total += shares[k]
	}
	for k := range shares {
		shares[k] /= total
	}
	w.shares = shares
	return shares
}

// cumulate: P(level ≤ j) = logistic(cut j − predictor).
func (w *worker) cumulate(e *natural, i int) []float64 {
	shares := w.shares[:0]
	eta, below := at(e.predictors[0], i), 0.0
	for _, c := range e.cuts {
		upTo := logistic(c - eta)
		shares = append(shares, upTo-below)
		below = upTo
	}
	w.shares = append(shares, 1-below)
	return w.shares
}

func inverseLink(link catalog.Link, eta float64) float64 {
	switch link {
	case catalog.Log:
		return math.Exp(eta)
	case catalog.Logit:
		return logistic(eta)
	}
	return eta
}

func logistic(x float64) float64 {
	if x >= 0 {
		return 1 / (1 + math.Exp(-x))
	}
	e := math.Exp(x)
	return e / (1 + e)
}

// simulate writes a variable's values, the quantiles of u under its law. A law
// at a plate's level has one u for each level.
func (w *worker) simulate(dst []float64, l *law, u []float64, mirrored bool) {
	e := w.natural(l)
	var of []int32
	if l.Plate >= 0 {
		of = w.rows.of[l.Plate]
	}
	for i := range dst {
		at := i
		if of != nil {
			at = int(of[i])
		}
		p := u[at]
		if mirrored {
			p = 1 - p
		}
		dst[i] = quantileOf(l, p, w.row(&e, i))
	}
}

// quantileOf is the family's quantile with arguments kept inside their
// supports, where a draw far out has rounded them to its edge; NaN if one is
// no number.
func quantileOf(l *law, p float64, args []float64) float64 {
	const nearly = 1e-12
	for i, x := range args {
		if math.IsNaN(x) {
			return x
		}
		if l.levels > 0 {
			continue
		}
		switch l.Family.Arguments[i].Support {
		case catalog.Unit:
			args[i] = math.Min(math.Max(x, nearly), 1-nearly)
		case catalog.Positives:
			args[i] = math.Min(math.Max(x, 1e-300), 1e300)
		}
	}
	return l.Family.Quantile(p, args)
}

// A scale says what of a variable is averaged: its expectation, the
// probability of some of its levels, or the probability of each.
type scale struct {
	levels int    // K of a law of levels; 0 = a number
	event  []bool // levels whose probability is asked for; nil = each level apart
	// predicted: what is averaged is the predicted argument itself, which for
	// most families is the expectation. A binomial law gives its probability
	// (SEMANTICS B6), a Student t its centre, also where it has no expectation.
	predicted bool
}

// parts is how many numbers a scale averages.
func (s *scale) parts() int {
	if s.levels > 0 && s.event == nil {
		return s.levels
	}
	return 1
}

// expected adds up the weighted expectation over rows into sum, one number per
// part; weights are scaled to total 1.
func (w *worker) expected(sum []float64, l *law, s *scale, weights []float64) {
	clear(sum)
	if s.predicted {
		eta := w.eval(l.predictors[0])
		for i, weight := range weights {
			sum[0] += weight * inverseLink(l.Family.Link, at(eta, i))
		}
	} else {
		w.average(sum, l, s, weights)
	}
	if s.levels == 0 && s.event != nil && !s.event[1] { // a binary outcome read as its lower level
		sum[0] = 1 - sum[0]
	}
}

// average is expected where each row's arguments are needed.
func (w *worker) average(sum []float64, l *law, s *scale, weights []float64) {
	e := w.natural(l)
	for i, weight := range weights {
		args := w.row(&e, i)
		switch {
		case s.levels == 0:
			sum[0] += weight * l.Family.Mean(args)
		case s.event == nil:
			for k, p := range args {
				sum[k] += weight * p
			}
		default:
			for k, p := range args {
				if s.event[k] {
					sum[0] += weight * p
				}
			}
		}
	}
}

// averageOf is expected for a computed variable: its values are given.
func averageOf(sum []float64, values, weights []float64) {
	clear(sum)
	for i, weight := range weights {
		sum[0] += weight * at(values, i)
	}
}
