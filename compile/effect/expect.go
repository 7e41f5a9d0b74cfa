package effect

import (
	"math"

	"arrowroot/compile/catalog"
)

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
	case catalog.Cumulate, catalog.Probit:
		return w.cumulate(e, i)
	}
	args := w.args[:0]
	for a, x := range e.arguments {
		if x == nil {
			args = append(args, l.Family.Link.Inverse(at(e.predictors[0], i)))
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

// cumulate: P(level ≤ j) is the inverse link of cut j − predictor.
func (w *worker) cumulate(e *natural, i int) []float64 {
	shares := w.shares[:0]
	eta, below := at(e.predictors[0], i), 0.0
	for _, c := range e.cuts {
		upTo := e.law.Family.Link.Inverse(c - eta)
		shares = append(shares, upTo-below)
		below = upTo
	}
	w.shares = append(shares, 1-below)
	return w.shares
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
	trials    int // argument by which an expected count of successes is divided (B6); -1 = none
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
			sum[0] += weight * l.Family.Link.Inverse(at(eta, i))
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
			mean := l.Family.Mean(args)
			if s.trials >= 0 {
				mean /= args[s.trials]
			}
			sum[0] += weight * mean
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
