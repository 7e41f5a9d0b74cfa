package fit

import "arrowroot/compile/model"

// mostBandDraws is how many draws a band is made of: enough for an interval as
// wide as a picture can show.
const mostBandDraws = 600

// Band is the posterior of what one variable adds to another's predictor over
// n values of its plausible range, or its levels; ok is false where no term of
// the fitted laws is the arrow's alone.
func (f *Fitted) Band(from, to string, n int, level float64) (b model.Band, ok bool) {
	t, ok := f.Model.TermOf(from, to)
	if !ok {
		return b, false
	}
	column := make(map[[2]int]int, len(f.Density.Quantities))
	for i, q := range f.Density.Quantities {
		column[[2]int{q.Parameter, q.At}] = i
	}
	rows := f.Pooled()
	draws := min(len(rows), mostBandDraws)
	return f.Model.Band(t, f.Model.Places(t, n), level, draws, func(draw, parameter, at int) float64 {
		return rows[draw*len(rows)/draws][column[[2]int{parameter, at}]]
	})
}
