package evidence

import (
	"math"
	"slices"

	"arrowroot/compile/causal"
	"arrowroot/compile/study"
)

// logRatios gives, for each row, the logarithm of a chosen law of a fixed
// variable over its law given what it depends on, both from weighted
// regressions. The chosen law may be any that does not depend on what is not
// fixed; only the other has to be right.
func (b *bench) logRatios(f causal.Fixing, gaps string, weights []float64) []float64 {
	values := b.scored(f.Node, gaps).values
	units := int(effective(weights))
	few := distinct(values, fewValues) <= fewValues
	if few {
		units = min(units, 2*minority(values))
	}
	given, known := b.regressors(f.Given, gaps, units), b.regressors(f.Known, gaps, units)
	switch {
	case few:
		return levelRatios(values, given, known, weights)
	case b.data.of[f.Node].scale == study.Count && !slices.ContainsFunc(values, func(x float64) bool { return x < 0 || x != math.Floor(x) }):
		return countRatios(values, given, known, weights)
	}
	return normalRatios(readingsOf(values, b.scored(f.Node, gaps).scores[0]), given, known, weights)
}

// A reading is a variable on one of the scales on which its law may be normal.
type reading struct {
	values []float64
	gain   float64 // mean logarithm of its slope over the variable's own unit
}

// readingsOf gives scores, own unit and, of what is positive, logarithms. The
// slope of scores takes the density of the values from their spacings (Vasicek
// 1976); where ties hide it, scores alone are taken.
func readingsOf(values, scores []float64) []reading {
	n := len(values)
	sorted := slices.Clone(values)
	slices.Sort(sorted)
	reach := int(math.Sqrt(float64(n)))
	density := 0.0
	for i := range sorted {
		low, high := max(0, i-reach), min(n-1, i+reach)
		density -= math.Log((sorted[high] - sorted[low]) / float64(high-low) * float64(n))
	}
	density /= float64(n)
	all := []reading{{scores, density + (math.Log(2*math.Pi)+1)/2}}
	if math.IsInf(density, 0) {
		return all
	}
	straight := func(x []float64, gain float64) {
		before := slices.Clone(x)
		if standardise(x) {
			low, high := slices.Min(x), slices.Max(x)
			all = append(all, reading{x, gain + math.Log((high-low)/(slices.Max(before)-slices.Min(before)))})
		}
	}
	straight(slices.Clone(values), 0)
	if sorted[0] > 0 {
		logs, sum := make([]float64, n), 0.0
		for i, x := range values {
			logs[i] = math.Log(x)
			sum += logs[i]
		}
		straight(logs, -sum/float64(n))
	}
	return all
}

// normalRatios takes a variable for normal about a curve, with a spread that
// changes along another, on the scale that makes the data likeliest.
//
// With one spread s about the curve of given, and q the variance of that curve
// about the one of known, the weights' sum of squares is smallest for a chosen
// law of variance s² − q: rows count as 1 − q/s² of their number. That is where
// the integral of chosen²/given, s²/(t √(2s² − t² − 2q)), is least in t. Of
// several spreads, s² is the harmonic mean.
func normalRatios(readings []reading, given, known regressors, weights []float64) []float64 {
	var x []float64
	var law normalLaw
	best := math.Inf(-1)
	for _, r := range readings {
		if l := normalAbout(r.values, given.weigh(weights), weights); l.likelihood+r.gain > best {
			x, law, best = r.values, l, l.likelihood+r.gain
		}
	}
	d := known.weigh(weights).residual(x)
	var precision, gap, total float64
	for i, w := range weights {
		precision += w / law.variance[i]
		e := d[i] - law.residual[i]
		gap += w * e * e
		total += w
	}
	s2 := total / precision
	t2 := math.Max(s2/4, s2-gap/total)
	out := make([]float64, len(x))
	for i, e := range law.residual {
		v := law.variance[i]
		out[i] = e*e/(2*v) + math.Log(v)/2 - d[i]*d[i]/(2*t2)
	}
	return out
}

// A normalLaw is what a normal regression leaves, and how much it should.
type normalLaw struct {
	residual, variance []float64
	likelihood         float64 // mean logarithm
}

// widest is how many times a variance may differ from the mean one, as a logarithm.
const widest = 3

// normalAbout fits mean and logarithm of the variance in turns, the latter as
// squares with a gamma law (Smyth 1989).
func normalAbout(x []float64, on *weighed, weights []float64) normalLaw {
	law := normalLaw{residual: on.residual(x), variance: make([]float64, len(x))}
	precise, z := make([]float64, len(x)), make([]float64, len(x))
	for range 3 {
		mean := 0.0
		for i, e := range law.residual {
			mean += weights[i] * e * e
		}
		n := effective(weights)
		mean *= n / math.Max(1, n-float64(on.rank)) / float64(len(x))
		centre := math.Log(mean)
		eta := slices.Repeat([]float64{centre}, len(x))
		for range iterations {
			for i, e := range law.residual {
				z[i] = eta[i] + e*e/math.Exp(eta[i]) - 1
			}
			next, moved := on.fitted(z), 0.0
			for i := range next {
				next[i] = math.Max(centre-widest, math.Min(centre+widest, next[i]))
				moved = math.Max(moved, math.Abs(next[i]-eta[i]))
			}
			if eta = next; moved < 1e-4 {
				break
			}
		}
		for i := range eta {
			law.variance[i] = math.Exp(eta[i])
			precise[i] = weights[i] / law.variance[i]
		}
		law.residual = on.regressors.weigh(precise).residual(x)
	}
	sum := 0.0
	for i, e := range law.residual {
		law.likelihood -= weights[i] * (math.Log(2*math.Pi*law.variance[i]) + e*e/law.variance[i]) / 2
		sum += weights[i]
	}
	law.likelihood /= sum
	return law
}

const (
	iterations = 25   // of weighted least squares
	steady     = 1e-6 // change of a linear predictor that ends them
	steepest   = 30   // of a linear predictor
)

// levelRatios is the multinomial logit law of few values, one logistic
// regression for each value against the most frequent one (Begg & Gray 1984).
func levelRatios(values []float64, given, known regressors, weights []float64) []float64 {
	levels := slices.Clone(values)
	slices.Sort(levels)
	levels = slices.Compact(levels)
	count := make([]float64, len(levels))
	place := make([]int, len(values))
	for i, x := range values {
		place[i], _ = slices.BinarySearch(levels, x)
		count[place[i]] += weights[i]
	}
	base := slices.Index(count, slices.Max(count))
	logChance := func(x regressors) []float64 {
		total, own := make([]float64, len(values)), make([]float64, len(values))
		for i := range total {
			total[i] = 1
		}
		among, is := make([]float64, len(values)), make([]float64, len(values))
		for k := range levels {
			if k == base {
				continue
			}
			for i, at := range place {
				among[i], is[i] = 0, 0
				if at == k || at == base {
					among[i] = weights[i]
				}
				if at == k {
					is[i] = 1
				}
			}
			for i, eta := range logistic(x, is, among) {
				total[i] += math.Exp(eta)
				if place[i] == k {
					own[i] = eta
				}
			}
		}
		for i := range own {
			own[i] -= math.Log(total[i])
		}
		return own
	}
	out := logChance(known)
	for i, x := range logChance(given) {
		out[i] -= x
	}
	return out
}

// logistic gives the linear predictor of a logistic regression in all rows.
func logistic(x regressors, is, weights []float64) []float64 {
	return reweighted(x, math.Log(weightedMean(is, weights)/(1-weightedMean(is, weights))), func(i int, eta float64) (float64, float64) {
		p := 1 / (1 + math.Exp(-eta))
		slope := math.Max(1e-9, p*(1-p))
		return weights[i] * slope, eta + (is[i]-p)/slope
	})
}

// countRatios is the negative binomial law of counts, its mean on the scale of
// logarithms, its dispersion such that squared differences over variances have
// mean 1. The chosen law has the same dispersion.
func countRatios(values []float64, given, known regressors, weights []float64) []float64 {
	fit := func(x regressors, dispersion float64) []float64 {
		return reweighted(x, math.Log(math.Max(1e-9, weightedMean(values, weights))), func(i int, eta float64) (float64, float64) {
			mean := math.Exp(eta)
			return weights[i] * mean / (1 + dispersion*mean), eta + (values[i]-mean)/mean
		})
	}
	dispersion := 0.0
	var eta []float64
	for range 4 {
		eta = fit(given, dispersion)
		dispersion = overdispersion(values, eta, weights, len(given))
	}
	eta = fit(given, dispersion)
	chosen := fit(known, dispersion)
	out := make([]float64, len(values))
	for i, y := range values {
		m, c := math.Exp(eta[i]), math.Exp(chosen[i])
		out[i] = y * (chosen[i] - eta[i])
		if dispersion > 0 {
			out[i] -= (y + 1/dispersion) * (math.Log1p(dispersion*c) - math.Log1p(dispersion*m))
		} else {
			out[i] -= c - m
		}
	}
	return out
}

// overdispersion solves ∑ w (y − μ)²/(μ + αμ²) = ∑ w less parameters for α; 0
// where counts vary less than Poisson ones.
func overdispersion(values, eta, weights []float64, parameters int) float64 {
	share := 1 - float64(parameters)/effective(weights)
	excess := func(alpha float64) float64 {
		s := 0.0
		for i, y := range values {
			m := math.Exp(eta[i])
			s += weights[i] * ((y-m)*(y-m)/(m+alpha*m*m) - share)
		}
		return s
	}
	if excess(0) <= 0 {
		return 0
	}
	low, high := 0.0, 1.0
	for excess(high) > 0 && high < 1e3 {
		low, high = high, 4*high
	}
	for range 30 {
		if mid := (low + high) / 2; excess(mid) > 0 {
			low = mid
		} else {
			high = mid
		}
	}
	return (low + high) / 2
}

// reweighted repeats weighted least squares until the linear predictor is steady
// (McCullagh & Nelder 1989, § 2.5); step gives a row's weight and response.
func reweighted(x regressors, start float64, step func(row int, eta float64) (weight, response float64)) []float64 {
	n := len(x[0])
	eta := slices.Repeat([]float64{math.Max(-steepest, math.Min(steepest, start))}, n)
	w, z := make([]float64, n), make([]float64, n)
	for range iterations {
		for i := range eta {
			w[i], z[i] = step(i, eta[i])
		}
		next, moved := x.weigh(w).fitted(z), 0.0
		for i := range next {
			next[i] = math.Max(-steepest, math.Min(steepest, next[i]))
			moved = math.Max(moved, math.Abs(next[i]-eta[i]))
		}
		if eta = next; moved < steady {
			break
		}
	}
	return eta
}

func weightedMean(x, w []float64) float64 {
	sum := 0.0
	for _, v := range w {
		sum += v
	}
	return dot(x, w) / sum
}

// regressors are the columns of a regression, the first of ones.
type regressors [][]float64

// mostCellsGiven is how many cells of given variables get an indicator each.
const mostCellsGiven = 32

// regressors reads given variables in the rows of a gap key as newDesign does;
// units is what these rows are worth.
func (b *bench) regressors(given []int, gaps string, units int) regressors {
	rows := len(b.rows(gaps))
	all := regressors{slices.Repeat([]float64{1}, rows)}
	var with []*column
	var values [][]float64
	for _, v := range given {
		with, values = append(with, b.data.of[v]), append(values, b.scored(v, gaps).values)
	}
	if len(given) == 0 {
		return all
	}
	d := &design{rows: rows}
	if !d.byCells(values, units) || d.cells > mostCellsGiven {
		return append(all, splines(with, values, rows, units)...)
	}
	for cell := 1; cell < d.cells; cell++ {
		x := make([]float64, rows)
		for i, at := range d.cell {
			if at == cell {
				x[i] = 1
			}
		}
		all = append(all, x)
	}
	return all
}

// weighed are regressors with a weight for each row.
type weighed struct {
	regressors
	root   []float64 // of the weights
	design           // over columns that are multiplied by it
}

func (x regressors) weigh(weights []float64) *weighed {
	on := &weighed{regressors: x, root: make([]float64, len(weights))}
	for i, w := range weights {
		on.root[i] = math.Sqrt(w)
	}
	for _, column := range x {
		on.columns = append(on.columns, on.rooted(column))
	}
	on.factorise()
	return on
}

// rooted multiplies by the roots of the weights.
func (on *weighed) rooted(y []float64) []float64 {
	out := make([]float64, len(y))
	for i, r := range on.root {
		out[i] = r * y[i]
	}
	return out
}

// fitted is the regression of y in all rows, those of weight 0 too.
func (on *weighed) fitted(y []float64) []float64 {
	out := make([]float64, len(y))
	for j, b := range on.coefficients(on.rooted(y)) {
		for i, x := range on.regressors[j] {
			out[i] += b * x
		}
	}
	return out
}

func (on *weighed) residual(y []float64) []float64 {
	out := on.fitted(y)
	for i := range out {
		out[i] = y[i] - out[i]
	}
	return out
}
