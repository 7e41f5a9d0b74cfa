package density

import (
	"math"
	"slices"

	"arrowroot/compile/catalog"
	"arrowroot/compile/model"
	"arrowroot/compile/ops"
)

// placeUnrecorded lowers the missing entries of a variable, each where its law
// can lie. That law is their prior, so only the Jacobian comes back. They are
// measured by what was recorded.
func (l *lowering) placeUnrecorded(i, offset int) (ops.Value, error) {
	p := l.m.Parameters[i]
	u := l.b.Parameter(offset, l.vectorPlate(p.Name, p.Size))
	middle, spread := recorded(l.m.Variables[p.Of])
	var x placed
	switch p.Support {
	case catalog.Positives, catalog.NonNegatives:
		if !(middle > 0) {
			middle = 1
		}
		x = l.positive(u, middle)
	case catalog.Unit:
		x = l.between(u, p.Size, l.b.Const(0), l.b.Const(1))
	default:
		x = l.onLine(u, p.Size, yardstick{middle, spread})
	}
	l.natural[i] = x.natural
	return x.jacobian, nil
}

// recorded gives the mean and standard deviation of the entries that are there.
func recorded(v *model.Variable) (mean, sd float64) {
	n, square := 0.0, 0.0
	gone := holes(v)
	for i, x := range v.Values {
		if !gone[i] {
			n++
			d := x - mean
			mean += d / n
			square += d * (x - mean)
		}
	}
	sd = math.Sqrt(square / max(n, 1))
	if !(sd > 0) {
		sd = 1
	}
	return mean, sd
}

// holes marks the missing entries.
func holes(v *model.Variable) []bool {
	gone := make([]bool, len(v.Values))
	for _, i := range v.Missing {
		gone[i] = true
	}
	return gone
}

// column is a variable's value at its own level: data, with unknowns in the
// places of missing entries.
func (l *lowering) column(variable int) amount {
	v := l.m.Variables[variable]
	at := level(v.Plate)
	p, missing := l.unknowns[variable]
	if !missing {
		return amount{l.b.Data(l.plate(at), v.Values), at}
	}
	x, known := l.columns[variable]
	if !known {
		data, hole, entry := slices.Clone(v.Values), make([]float64, len(v.Values)), make([]int32, len(v.Values))
		for k, i := range v.Missing {
			data[i], hole[i], entry[i] = 0, 1, int32(k)
		}
		plate := l.plate(at)
		spread := l.natural[p] // one unknown serves every row as it is
		if l.m.Parameters[p].Size > 1 {
			spread = l.b.Gather(spread, plate, entry)
		}
		x = l.b.Add(l.b.Data(plate, data), l.b.Mul(l.b.Data(plate, hole), spread))
		l.columns[variable] = x
	}
	return amount{x, at}
}

// explained is what a law is the density of: its variable's values, or, where
// entries are missing that nothing reads, those observed, on a plate of their
// own with their units.
func (l *lowering) explained(variable int) (y ops.Value, on ops.Plate, observed []int32) {
	v := l.m.Variables[variable]
	if _, unknown := l.unknowns[variable]; unknown || len(v.Missing) == 0 {
		x := l.column(variable)
		return x.v, l.plate(x.at), nil
	}
	values := []float64{}
	observed = []int32{}
	gone := holes(v)
	for i, x := range v.Values {
		if !gone[i] {
			values = append(values, x)
			observed = append(observed, int32(i))
		}
	}
	on = l.b.Plate(v.ID+" recorded", len(values))
	return l.b.Data(on, values), on, observed
}
