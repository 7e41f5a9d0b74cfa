package ops

import (
	"math"
	"slices"
)

// passTally splits densities of data with many equal values in two, where the
// kernel offers it: see kernel.Tally. The costly part then goes through the
// distinct values only.
func passTally(u *unit) {
	u.rewrite(func(next *graph, _ id, n node) id {
		if n.op != opDensity || n.kernel.Tally == nil || n.data != nil {
			return next.add(n)
		}
		t := n.kernel.Tally
		y, arg := next.nodes[n.args[0]], n.args[1+t.Arg]
		if y.op != opData || next.nodes[arg].plate != Scalar {
			return next.add(n)
		}
		values, counts := distinct(y.data)
		if values == nil {
			return next.add(n)
		}
		p := next.newPlate("distinct values of "+next.plates[y.plate].name, len(values))
		rows := n
		rows.kernel = t.Rows
		each := node{op: opDensity, kernel: t.Values, args: []id{next.column(p, values), arg, next.column(p, counts)}}
		return next.make(opAdd, next.put(rows), next.put(each))
	})
}

// distinct lists the different values of y, rising, and how often each comes;
// nil if that would save less than half.
func distinct(y []float64) (values, counts []float64) {
	sorted := slices.Clone(y)
	slices.Sort(sorted)
	if math.IsNaN(sorted[0]) {
		return nil, nil
	}
	for _, v := range sorted {
		if k := len(values); k > 0 && values[k-1] == v {
			counts[k-1]++
			continue
		}
		values, counts = append(values, v), append(counts, 1)
	}
	if 2*len(values) > len(y) {
		return nil, nil
	}
	return values, counts
}
