package evidence

import (
	"fmt"
	"math"
	"slices"

	"arrowroot/compile/causal"
	"arrowroot/compile/study"
)

// leastEffective is how many equal rows the weighted ones must be worth.
const leastEffective = 50

// weighted tests a constraint as the independence that it is once some
// variables are fixed (Richardson, Evans, Robins & Shpitser 2023). Rows count by
// stabilised weights (Robins, Hernán & Brumback 2000): for each fixed variable, a
// chosen law over its law given what it depends on. Then the two ends are
// compared as in any independence, sums and regressions weighted. Spreads take
// the weights as known, which is on the careful side where they come from
// likelihoods (Robins, Rotnitzky & Zhao 1994).
func (b *bench) weighted(f causal.Functional, _ []int) Functional {
	out := Functional{Functional: f, P: math.NaN(), Adjusted: math.NaN(), Verdict: TooFew, Short: "too few rows to say", Weighted: true}
	out.Effect = Effect{Value: math.NaN(), Low: math.NaN(), High: math.NaN()}
	gaps := b.gapKey(weighing(f))
	rows := b.rows(gaps)
	out.Rows, out.Effective = len(rows), len(rows)
	weights := slices.Repeat([]float64{1}, len(rows))
	for _, round := range f.Fixings {
		if out.Effective < leastEffective {
			return out
		}
		ratios := make([]float64, len(rows)) // logarithms
		for _, fix := range round {
			own := b.logRatios(fix, gaps, weights)
			if !b.matched(fix, gaps, weights, own) {
				out.Short = fmt.Sprintf("the law of %s given %s is none that rows can be weighted by", b.g.Names[fix.Node], b.list(fix.Given))
				return out
			}
			for i, x := range own {
				ratios[i] += x
			}
		}
		reweigh(weights, ratios)
		out.Effective = int(effective(weights))
	}
	left, right := b.scored(f.Node, gaps), b.scored(f.FreeOf, gaps)
	if out.Effective < leastEffective || min(left.others, right.others) < fewestOfLevel {
		return out
	}
	on := b.regressors(f.Given, gaps, out.Effective).weigh(weights)
	schemes := []scheme{{units: out.Effective, rank: on.rank}}
	for _, g := range b.groups {
		if of, n := renumber(g.of, rows); n >= fewGroups && n < len(rows) {
			schemes = append(schemes, scheme{plate: g.name, of: of, units: n, rank: 1})
		}
	}
	residuals := func(scores ...[]float64) [][]float64 {
		var all [][]float64
		for _, x := range scores {
			all = append(all, on.rooted(on.residual(x)))
		}
		return all
	}
	x, y := residuals(left.scores...), residuals(right.scores...)
	a, why := associate(x, y, schemes, b.req.Level)
	if why != "" {
		return out
	}
	out.Effect, out.P, out.Verdict = a.Effect, a.p, Undecided
	if !a.Signed {
		return out
	}
	square := func(kept *keptScores) []float64 {
		if kept.square == nil {
			return nil
		}
		return residuals(kept.square)[0]
	}
	if bent, ok := associateBent(x[0], y[0], square(left), square(right), schemes, b.req.Level); ok { // as of any independence
		if out.Bent = bent.p < min(out.P, bentAt); out.Bent {
			out.Effect, out.P = bent.Effect, bent.p
		}
		out.P = math.Min(1, 2*out.P)
	}
	return out
}

// mismatch is the p under which weights are taken to miss what they are for.
const mismatch = 0.001

// matched reports whether ratios do what they are for: their mean is 1 whatever
// the fixed variable depended on, and weighted by them it depends on that no
// more. If they do not, the law they come from is wrong or leaves gaps, and a
// constraint would be refused for that.
func (b *bench) matched(f causal.Fixing, gaps string, weights, logRatios []float64) bool {
	after := slices.Clone(weights)
	reweigh(after, logRatios)
	n := int(effective(after))
	if n < leastEffective {
		return true // said elsewhere
	}
	score := normalScores(b.scored(f.Node, gaps).values)
	known := b.regressors(f.Known, gaps, n).weigh(after)
	score = known.residual(score)
	var moments [][]float64
	for _, x := range b.regressors(f.Given, gaps, n)[1:] {
		left := known.residual(x)
		shift, tied := make([]float64, len(x)), make([]float64, len(x))
		for i, v := range left {
			shift[i] = (after[i] - weights[i]) * x[i]
			tied[i] = after[i] * score[i] * v
		}
		moments = append(moments, shift, tied)
	}
	sums := make([]float64, len(moments))
	for k, m := range moments {
		for _, v := range m {
			sums[k] += v
		}
	}
	total, rank := pseudoQuadratic(crossProducts(moments), sums)
	k := float64(rank)
	return rank == 0 || float64(n) <= k+leastFreedom || tailF(total/k, k, float64(n)-k) > mismatch
}

// weighing lists the nodes that a constraint is tested with.
func weighing(f causal.Functional) []int {
	all := union(f.Given, []int{f.Node, f.FreeOf})
	for _, round := range f.Fixings {
		for _, fix := range round {
			all = union(all, slices.Concat([]int{fix.Node}, fix.Given, fix.Known))
		}
	}
	return all
}

// cannotWeigh says why a constraint cannot be tested with weighted rows; "" if
// it can.
func (b *bench) cannotWeigh(f causal.Functional) string {
	for _, v := range weighing(f) {
		switch {
		case b.data.of[v] == nil:
			return b.data.lacks[v]
		case b.data.constant(v):
			return fmt.Sprintf("%s is the same in all rows that are used", b.g.Names[v])
		}
	}
	for _, round := range f.Fixings {
		for _, fix := range round {
			c := b.data.of[fix.Node]
			if c.scale == study.Category && distinct(pick(c.values, b.rows(b.gapKey([]int{fix.Node}))), fewValues) > fewValues {
				return fmt.Sprintf("%s has too many levels to weight rows by", b.g.Names[fix.Node])
			}
		}
	}
	return ""
}

// methodOfWeights says how it was done, where it was, for a methods section.
func methodOfWeights(all []Functional) string {
	if !slices.ContainsFunc(all, func(f Functional) bool { return f.Weighted }) {
		return ""
	}
	return " Functional constraints are independences once some variables are fixed (Richardson, Evans, Robins & Shpitser 2023): rows are weighted by a chosen law of each fixed variable over its law given what " +
		"it depends on, from regressions (normal with a changing spread, negative binomial for counts, logistic for levels), cut at √n times the mean weight (Ionides 2008). " +
		"Intervals take these laws for right; where weighted rows show that they are not, no verdict is given."
}

// reweigh multiplies weights by ratios, given as logarithms, to mean 1. They are
// cut at √n times their mean, which keeps a sum over them near enough while its
// spread stays finite (Ionides 2008, "Truncated importance sampling").
func reweigh(weights, logRatios []float64) {
	for i := range weights {
		weights[i] = math.Log(weights[i]) + logRatios[i]
	}
	most, sum := slices.Max(weights), 0.0
	for i := range weights {
		weights[i] = math.Exp(weights[i] - most)
		sum += weights[i]
	}
	n := float64(len(weights))
	highest, lowest := sum/math.Sqrt(n), sum/n*1e-9 // logarithms of a weight have to be finite
	sum = 0
	for i, w := range weights {
		weights[i] = math.Max(lowest, math.Min(highest, w))
		sum += weights[i]
	}
	for i := range weights {
		weights[i] *= n / sum
	}
}

// effective is how many equal rows weighted ones are worth (Kish 1965).
func effective(weights []float64) float64 {
	sum := 0.0
	for _, w := range weights {
		sum += w
	}
	return sum * sum / dot(weights, weights)
}
