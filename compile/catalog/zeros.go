package catalog

import (
	"math"

	"arrowroot/compile/kernel"
)

// Families with zeros of their own are made from others: one more argument,
// the share of zeros, and everything else follows.

// zeroInflated adds a share of further zeros to a family of counts.
func zeroInflated(f *Family) *Family {
	z := withZeroShare(f, "zero-inflated", "chance of a zero that is none of the counts")
	z.Natural, z.Linked = kernel.ZeroInflated(f.Natural), kernel.ZeroInflated(f.Linked)
	z.Quantile = func(u float64, a []float64) float64 {
		args, share := apart(a)
		if u <= share {
			return 0
		}
		return f.Quantile(min((u-share)/(1-share), 1-0x1p-53), args)
	}
	z.CDF = func(x float64, a []float64) float64 {
		args, share := apart(a)
		if x < 0 {
			return 0
		}
		return share + (1-share)*f.CDF(x, args)
	}
	z.moments(func(args []float64) (mean, sd, keep float64) { return f.Mean(args), f.SD(args), 1 })
	z.Doc = f.Doc + ", with more zeros than that would give"
	z.Source = "D. Lambert, Zero-inflated Poisson regression, Technometrics 34 (1992)"
	return z
}

// hurdle sets the zeros of a family apart from everything above them.
func hurdle(f *Family) *Family {
	z := withZeroShare(f, "hurdle", "chance of a zero")
	z.Natural, z.Linked = kernel.Hurdle(f.Natural, f.Discrete), kernel.Hurdle(f.Linked, f.Discrete)
	if !f.Discrete {
		z.Support = NonNegatives
		z.Masses = true
	}
	// zero is what the family itself gives to 0, and the hurdle takes away.
	zero := func(args []float64) float64 {
		if !f.Discrete {
			return 0
		}
		if p := f.CDF(0, args); p > 0 { // no number far out
			return p
		}
		return 0
	}
	z.Quantile = func(u float64, a []float64) float64 {
		args, share := apart(a)
		if u <= share {
			return 0
		}
		p := zero(args)
		return max(f.Quantile(min(p+(1-p)*(u-share)/(1-share), 1-0x1p-53), args), least(f))
	}
	z.CDF = func(x float64, a []float64) float64 {
		args, share := apart(a)
		if x < 0 {
			return 0
		}
		p := zero(args)
		return share + (1-share)*((f.CDF(x, args)-p)/(1-p))
	}
	z.moments(func(args []float64) (mean, sd, keep float64) { return f.Mean(args), f.SD(args), 1 - zero(args) })
	z.Doc = f.Doc + ", or nothing at all for reasons of its own"
	z.Source = "J. Mullahy, Specification and testing of some modified count data models, J. Econometrics 33 (1986)"
	return z
}

// least is the smallest value above zero.
func least(f *Family) float64 {
	if f.Discrete {
		return 1
	}
	return math.SmallestNonzeroFloat64
}

func withZeroShare(f *Family, name, doc string) *Family {
	z := *f
	z.Name = name + " " + f.Name
	z.Centred = false
	z.Arguments = append(append([]Argument(nil), f.Arguments...), Argument{Name: "zero share", Greek: "zeros", Support: Unit, Doc: doc})
	return &z
}

// apart splits the arguments of the family beneath from the share of zeros.
func apart(a []float64) (args []float64, share float64) { return a[:len(a)-1], a[len(a)-1] }

// moments fills in mean and sd where values that are not zero by the share have
// a mean and sd, of which the part keep is left after taking out their own zeros.
func (z *Family) moments(of func(args []float64) (mean, sd, keep float64)) {
	z.Mean = func(a []float64) float64 {
		args, share := apart(a)
		mean, _, keep := of(args)
		return (1 - share) * mean / keep
	}
	z.SD = func(a []float64) float64 {
		args, share := apart(a)
		mean, sd, keep := of(args)
		part := (1 - share) / keep
		return math.Sqrt(max(0, part*(sd*sd+mean*mean)-part*mean*part*mean))
	}
}

// withZeros puts, after each family that can have zeros of its own, those made
// of it.
func withZeros(all []*Family) []*Family {
	var out []*Family
	for _, f := range all {
		out = append(out, f)
		switch f.Name {
		case "Poisson", "negative binomial":
			out = append(out, zeroInflated(f), hurdle(f))
		case "binomial":
			out = append(out, zeroInflated(f))
		case "gamma", "log-normal":
			out = append(out, hurdle(f))
		}
	}
	return out
}
