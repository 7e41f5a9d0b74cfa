package catalog

import (
	"math"

	"arrowroot/compile/kernel"
)

// Families whose values are known only within bounds, or came to be seen only
// within them, are made of others: the bounds are one or two more arguments,
// given as numbers or columns.

// tails are the families that can have bounds, with their tails on the natural
// and on the link scale.
var tails = map[string][2]kernel.Tails{
	"normal":      {kernel.NormalTails, kernel.NormalTails},
	"logistic":    {kernel.LogisticTails, kernel.LogisticTails},
	"log-normal":  {kernel.LogNormalTails, kernel.LogNormalLogTails},
	"Weibull":     {kernel.WeibullTails, kernel.WeibullLogTails},
	"exponential": {kernel.ExponentialTails, kernel.ExponentialLogTails},
}

const tobin = "J. Tobin, Estimation of relationships for limited dependent variables, Econometrica 26 (1958)"

const survival = "J. D. Kalbfleisch & R. L. Prentice, The Statistical Analysis of Failure Time Data, 2nd ed., Wiley 2002, ch. 3"

// Bounded returns the families made of f by bounds; none where its tails are
// not known in closed form. They are not in Families.
func Bounded(f *Family) []*Family { return bounded[f.Name] }

func boundedOf(f *Family) []*Family {
	of, ok := tails[f.Name]
	if !ok {
		return nil
	}
	with := func(name, doc, source string, kernels func(*kernel.Density, kernel.Tails) *kernel.Density, bounds ...Argument) *Family {
		b := *f
		b.Name = name + " " + f.Name
		b.Masses = true
		b.Doc, b.Source = f.Doc+"; "+doc, source
		b.Natural, b.Linked = kernels(f.Natural, of[0]), kernels(f.Linked, of[1])
		b.Arguments = append(append([]Argument(nil), f.Arguments...), bounds...)
		// What is asked about is the value itself, known or not.
		n := len(f.Arguments)
		b.Quantile = func(u float64, a []float64) float64 { return f.Quantile(u, a[:n]) }
		b.CDF = func(x float64, a []float64) float64 { return f.CDF(x, a[:n]) }
		b.Mean = func(a []float64) float64 { return f.Mean(a[:n]) }
		b.SD = func(a []float64) float64 { return f.SD(a[:n]) }
		return &b
	}
	out := []*Family{
		with("left-censored", "values at or below a limit are known to lie there and nothing more", tobin, kernel.LeftCensored,
			Argument{Name: "low", Also: []string{"limit"}, Greek: "low", Support: Reals, Given: true, Doc: "the limit, a number or a column"}),
		with("right-censored", "values at or above a limit are known to lie there and nothing more", tobin, kernel.RightCensored,
			Argument{Name: "high", Also: []string{"limit"}, Greek: "high", Support: Reals, Given: true, Doc: "the limit, a number or a column"}),
		with("censored", "where it was not seen to the end, the true value lies above", survival, kernel.Censored,
			Argument{Name: "seen", Greek: "seen", Support: ZeroOne, Given: true, Doc: "a column that is 1 where the value was seen, 0 where observation stopped before"}),
		with("interval-censored", "the true value lies between this and another column", survival, kernel.IntervalCensored,
			Argument{Name: "upper", Greek: "upper", Support: Reals, Given: true, Doc: "a column: the upper end of what is known"}),
	}
	if f.Name == "normal" {
		out = append(out, truncatedNormal(f, of[0]))
	}
	return out
}

// truncatedNormal is a normal of which only values between two limits came to
// be seen. Its mean and sd are those of what was seen.
func truncatedNormal(f *Family, of kernel.Tails) *Family {
	t := *f
	t.Name = "truncated normal"
	t.Centred = false
	t.Natural = kernel.Truncated(f.Natural, of)
	t.Linked = t.Natural
	t.Arguments = append(append([]Argument(nil), f.Arguments...),
		Argument{Name: "low", Greek: "low", Support: Reals, Given: true, Doc: "smallest value that could be seen"},
		Argument{Name: "high", Greek: "high", Support: Reals, Given: true, Doc: "largest value that could be seen"})
	t.Doc = f.Doc + ", of which only those between two limits came to be seen"
	t.Source = f.Source
	// between is the probability of an interval, from the side on which the tail
	// keeps its digits.
	between := func(lo, hi float64, a []float64) float64 {
		if lo > a[0] {
			lo, hi = 2*a[0]-hi, 2*a[0]-lo
		}
		return f.CDF(hi, a[:2]) - f.CDF(lo, a[:2])
	}
	t.CDF = func(x float64, a []float64) float64 {
		return between(a[2], min(max(x, a[2]), a[3]), a) / between(a[2], a[3], a)
	}
	t.Quantile = func(u float64, a []float64) float64 {
		if a[2] > a[0] {
			mirror := []float64{-a[0], a[1], -a[3], -a[2]}
			return -t.Quantile(1-u, mirror)
		}
		p := f.CDF(a[2], a[:2]) + u*between(a[2], a[3], a)
		if !(p > 0 && p < 1) {
			return min(max(a[0], a[2]), a[3])
		}
		return min(max(f.Quantile(p, a[:2]), a[2]), a[3])
	}
	moments := func(a []float64) (mean, variance float64) {
		lo, hi := (a[2]-a[0])/a[1], (a[3]-a[0])/a[1]
		mass := between(a[2], a[3], a)
		phi := func(z float64) float64 { return math.Exp(-0.5*z*z) / math.Sqrt(2*math.Pi) }
		times := func(z float64) float64 {
			if math.IsInf(z, 0) {
				return 0
			}
			return z * phi(z)
		}
		d := (phi(lo) - phi(hi)) / mass
		return a[0] + a[1]*d, a[1] * a[1] * (1 + (times(lo)-times(hi))/mass - d*d)
	}
	t.Mean = func(a []float64) float64 { m, _ := moments(a); return m }
	t.SD = func(a []float64) float64 { _, v := moments(a); return math.Sqrt(max(0, v)) }
	return &t
}

// bounded holds them by the family that they are made of, so that a name always
// finds the same one.
var bounded = func() map[string][]*Family {
	all := make(map[string][]*Family)
	for _, f := range families {
		if made := boundedOf(f); made != nil {
			all[f.Name] = made
		}
	}
	return all
}()
