package effect

import (
	"math"

	"arrowroot/compile/model"
)

// A rowset is the rows that a contrast averages over: all used rows, or an
// even selection of them. Variables of coarser levels are spread over rows, so
// that every law can be evaluated row by row.
type rowset struct {
	n       int
	picked  []int       // the used row of each
	columns [][]float64 // per variable
	of      [][]int32   // per plate: level of each row
	counts  [][]float64 // per plate: rows of each level
}

// units is how many levels of a plate have a row here.
func (s *rowset) units(plate int) int {
	n := 0
	for _, rows := range s.counts[plate] {
		if rows > 0 {
			n++
		}
	}
	return n
}

// rowsOf takes every used row, or those of a subset, or n of them evenly spaced
// if there are more.
func rowsOf(m *model.Model, asked *model.Subset, n int) *rowset {
	all := m.Rows.Used
	if asked != nil {
		all = len(asked.Rows)
	}
	if n <= 0 || n > all {
		n = all
	}
	pick := make([]int, n)
	for i := range pick {
		pick[i] = int(int64(i) * int64(all) / int64(n))
		if asked != nil {
			pick[i] = asked.Rows[pick[i]]
		}
	}
	return rowsAt(m, pick)
}

// rowsAt takes these used rows.
func rowsAt(m *model.Model, pick []int) *rowset {
	n := len(pick)
	s := &rowset{n: n, picked: pick}
	for _, p := range m.Plates {
		of := make([]int32, n)
		for i, row := range pick {
			of[i] = p.Of[row]
		}
		s.of = append(s.of, of)
		in := make([]float64, len(p.Levels))
		for _, level := range of {
			in[level]++
		}
		s.counts = append(s.counts, in)
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
