package model

import (
	"math"
	"math/rand/v2"
	"slices"

	"arrowroot/compile/formula"
)

// Values gives entry at of a parameter (0 of a scalar) in one draw.
type Values func(draw, parameter, at int) float64

// A Band is what an arrow adds to its child's predictor, over values of the
// parent: the median and the central interval of a level.
type Band struct{ X, Low, Middle, High []float64 }

// Band works out a term at values of its parent, over draws of its parameters.
// What varies by a plate is taken at the mean around which it does. ok is
// false for a term that is not one parent's alone.
func (m *Model) Band(t Term, x []float64, level float64, draws int, values Values) (b Band, ok bool) {
	if t.Part == nil || t.Variable < 0 || draws == 0 {
		return b, false
	}
	index := make(map[string]int, len(t.Parameters))
	for _, i := range t.Parameters {
		index[m.Parameters[i].Name] = i
		if mean := m.Parameters[i].Mean; mean != "" {
			_, index[mean] = m.Name(mean)
		}
	}
	own := m.Variables[t.Variable].ID
	sums := make([]float64, draws)
	for _, at := range x {
		for d := range sums {
			sums[d] = Evaluate(t.Part, func(e formula.Expr) float64 {
				switch e := e.(type) {
				case *formula.Name:
					if e.ID == own {
						return at
					}
					if i, known := index[e.ID]; known {
						return values(d, i, 0)
					}
				case *formula.By:
					i, known := index[e.Name.ID]
					switch {
					case !known:
					case m.Parameters[i].Mean == "":
						return 0
					default:
						return values(d, index[m.Parameters[i].Mean], 0)
					}
				case *formula.Of:
					if i, known := index[e.Vector.ID]; known && int(at) >= 0 && int(at) < m.Parameters[i].Size {
						return values(d, i, int(at))
					}
				case *formula.Element:
					if n, is := e.Vector.(*formula.Name); is {
						if i, known := index[n.ID]; known {
							return values(d, i, e.At)
						}
					}
				}
				return math.NaN()
			})
		}
		slices.Sort(sums)
		if math.IsNaN(sums[0]) {
			return Band{}, false
		}
		q := func(p float64) float64 { return sums[min(int(p*float64(draws)), draws-1)] }
		b.X = append(b.X, at)
		b.Low = append(b.Low, q((1-level)/2))
		b.Middle = append(b.Middle, q(0.5))
		b.High = append(b.High, q((1+level)/2))
	}
	return b, true
}

// TermOf is the term that an arrow makes in its child's law; ok is false where
// there is none, or the law's formula was typed.
func (m *Model) TermOf(from, to string) (t Term, ok bool) {
	parent, _ := m.Name(from)
	child, _ := m.Name(to)
	for _, l := range m.Laws {
		for _, t := range l.Terms {
			if l.Variable == child && child >= 0 && t.Variable == parent && parent >= 0 && t.Part != nil && t.Kind != GroupMean {
				return t, true
			}
		}
	}
	return Term{}, false
}

// PriorValues draws the parameters that a term reads from their priors. ok is
// false where one leans on parameters outside the term.
func (m *Model) PriorValues(t Term, draws int, rng *rand.Rand) (v Values, ok bool) {
	drawn := make(map[int][][]float64) // parameter → draw → entries
	add := func(i int) bool {
		p := m.Parameters[i]
		if drawn[i] != nil || p.Shape == ByPlate {
			return true
		}
		args := make([]float64, len(p.Prior.Arguments))
		for k, e := range p.Prior.Arguments {
			x, fixed := constant(e)
			if !fixed {
				return false
			}
			args[k] = x
		}
		f := p.Prior.Family
		if p.Shape != Rising && (f == nil || f.Quantile == nil || p.Prior.On != Itself) {
			return false
		}
		for range draws {
			entries := make([]float64, p.Size)
			switch p.Shape {
			case Rising:
				for k := 1; k < p.Size-1; k++ {
					entries[k] = rng.Float64()
				}
				entries[p.Size-1] = 1
				slices.Sort(entries)
			case ZeroSum:
				mean := 0.0
				for k := range entries {
					entries[k] = f.Quantile(rng.Float64(), args) / math.Sqrt2
					mean += entries[k] / float64(p.Size)
				}
				for k := range entries {
					entries[k] -= mean
				}
			default:
				for k := range entries {
					entries[k] = f.Quantile(rng.Float64(), args)
				}
			}
			drawn[i] = append(drawn[i], entries)
		}
		return true
	}
	for _, i := range t.Parameters {
		if !add(i) {
			return nil, false
		}
		if mean := m.Parameters[i].Mean; mean != "" {
			if _, j := m.Name(mean); j < 0 || !add(j) {
				return nil, false
			}
		}
	}
	return func(draw, parameter, at int) float64 { return drawn[parameter][draw][at] }, true
}

// Places are the values of a parent at which its form is shown: n over its
// plausible range, or its levels.
func (m *Model) Places(t Term, n int) []float64 {
	v := m.Variables[t.Variable]
	if k := len(v.Levels); k > 0 {
		n = k
	}
	out := make([]float64, n)
	for i := range out {
		out[i] = float64(i)
		if len(v.Levels) == 0 {
			out[i] = v.Low + (v.High-v.Low)*float64(i)/float64(max(n-1, 1))
		}
	}
	if t.Kind == Log && len(out) > 1 && out[0] <= 0 { // the range as the log reads it
		out[0] = leastOfHigh * v.High
		out = slices.DeleteFunc(out, func(x float64) bool { return x < leastOfHigh*v.High })
	}
	return out
}
