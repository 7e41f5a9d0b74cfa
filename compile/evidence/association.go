package evidence

import (
	"math"

	"gonum.org/v1/gonum/mathext"
)

// An association is what two residuals have in common.
type association struct {
	Effect
	p      float64
	groups int    // of the coarsest scheme; 0 = rows are independent
	plate  string // of that
}

// A scheme says which rows may depend on each other.
type scheme struct {
	plate string
	of    []int // group of each row; nil = each row by itself
	units int   // groups, or rows
	rank  int   // what the given variables took of them
}

// freedom is what is left to estimate a spread from.
func (s *scheme) freedom() float64 { return float64(s.units - s.rank - 1) }

// leastFreedom is what it takes to say anything.
const leastFreedom = 5

// associate compares residuals column by column at a level. There is no answer
// where nothing is left of a side, or too few independent pieces; why says so.
//
// With a column on either side the size is their correlation ρ, which for
// linear laws is the partial correlation. Its p value is that of the
// generalised covariance measure (Shah & Peters 2020), its interval that of ρ's
// influence function on the scale of artanh ρ. With more columns the size is
// √(V/s), V the Pillai (1955) trace and s the fewer columns: of two categories
// Cramér's (1946) V, of a category and numbers the root of the share of
// variation, in either case with the mean that chance alone gives taken off
// (compare Bergsma 2013). Spreads are those of sums over groups, so that rows of
// one group may depend on each other in any way (Liang & Zeger 1986); of
// several schemes the most careful one speaks.
func associate(a, b [][]float64, schemes []scheme, level float64) (found association, why string) {
	a, b = orthonormal(a), orthonormal(b)
	if len(a) == 0 {
		return found, "left"
	}
	if len(b) == 0 {
		return found, "right"
	}
	for _, s := range schemes {
		if s.freedom() < leastFreedom {
			return found, "few"
		}
	}
	found.p = -1
	for i := range schemes {
		s := &schemes[i]
		var next association
		if len(a) == 1 && len(b) == 1 {
			next = correlation(a[0], b[0], s, level)
		} else {
			k := len(a) * len(b)
			if s.freedom() < float64(k)+leastFreedom {
				return found, "few"
			}
			var ok bool
			if next, ok = shared(a, b, s, level); !ok {
				return found, "few"
			}
		}
		if next.p > found.p {
			next.groups, next.plate = found.groups, found.plate
			found, next = next, found
		}
		if s.of != nil && (found.groups == 0 || s.units < found.groups) {
			found.groups, found.plate = s.units, s.plate
		}
		if found.Signed && next.p >= 0 {
			found.Low, found.High = math.Min(found.Low, next.Low), math.Max(found.High, next.High)
		}
	}
	return found, ""
}

// correlation compares two standardised residuals.
func correlation(a, b []float64, s *scheme, level float64) association {
	n := float64(len(a))
	r := dot(a, b) / n
	product, influence := make([]float64, len(a)), make([]float64, len(a))
	for i := range a {
		product[i] = a[i]*b[i] - r
		influence[i] = a[i]*b[i] - r*(a[i]*a[i]+b[i]*b[i])/2
	}
	df := s.freedom()
	inflate := float64(s.units) / df
	null := sumOfSquares(product, s.of, s.units) * inflate / (n * n)
	spread := math.Sqrt(sumOfSquares(influence, s.of, s.units)*inflate) / n
	out := association{p: 1}
	out.Signed, out.Value = true, r
	if null > 0 {
		out.p = tailF(r*r/null, 1, df)
	} else if r != 0 {
		out.p = 0
	}
	z, width := math.Atanh(clip(r)), 0.0
	if rest := 1 - r*r; rest > 1e-12 {
		width = spread / rest * quantileT((1+level)/2, df)
	}
	out.Low, out.High = math.Tanh(z-width), math.Tanh(z+width)
	return out
}

func clip(r float64) float64 { return math.Max(-1+1e-12, math.Min(1-1e-12, r)) }

// shared compares two sets of orthonormal residuals.
func shared(a, b [][]float64, s *scheme, level float64) (association, bool) {
	var pairs [][2][]float64
	for _, x := range a {
		for _, y := range b {
			pairs = append(pairs, [2][]float64{x, y})
		}
	}
	return together(pairs, min(len(a), len(b)), s, level)
}

// together holds the correlations of several pairs of standardised residuals
// against 0 at once; the size is the root of the sum of their squares over most.
func together(pairs [][2][]float64, most int, s *scheme, level float64) (association, bool) {
	n := float64(len(pairs[0][0]))
	k := len(pairs)
	covariances := make([]float64, 0, k)
	products := make([][]float64, 0, k)
	trace := 0.0
	for _, pair := range pairs {
		x, y := pair[0], pair[1]
		c := dot(x, y) / n
		trace += c * c
		p := make([]float64, len(x))
		for i := range p {
			p[i] = x[i]*y[i] - c
		}
		covariances, products = append(covariances, c), append(products, p)
	}
	if s.of != nil {
		for j, p := range products {
			products[j] = sums(p, s.of, s.units)
		}
	}
	df := s.freedom()
	inflate := float64(s.units) / df / (n * n)
	omega := crossProducts(products)
	for i := range omega {
		for j := range omega[i] {
			omega[i][j] *= inflate
		}
	}
	wald, ok := quadratic(omega, covariances)
	if !ok {
		return association{}, false
	}
	kf := float64(k)
	wald *= (df - kf + 1) / df // Hotelling's T² as kF
	out := association{p: tailF(wald/kf, kf, df-kf+1)}
	if wald > 0 {
		size := math.Sqrt(trace / float64(most) / wald)
		tail := (1 - level) / 2
		out.Value = math.Min(1, size*math.Sqrt(math.Max(0, wald-kf)))
		out.Low = math.Min(1, size*math.Sqrt(noncentrality(wald, kf, 1-tail)))
		out.High = math.Min(1, size*math.Sqrt(noncentrality(wald, kf, tail)))
	}
	return out, true
}

// associateBent compares each side with the squared scores of the other, where
// they are given: what rises and falls again has no correlation, but these. A
// nil square is left out. The size is the root of the sum of squares of the
// correlations.
func associateBent(a, b, squareA, squareB []float64, schemes []scheme, level float64) (found association, ok bool) {
	var pairs [][2][]float64
	for _, pair := range [][2][]float64{{squareA, b}, {a, squareB}} {
		if pair[0] == nil || pair[1] == nil {
			continue
		}
		x, y := orthonormal([][]float64{pair[0]}), orthonormal([][]float64{pair[1]})
		if len(x) == 1 && len(y) == 1 {
			pairs = append(pairs, [2][]float64{x[0], y[0]})
		}
	}
	if len(pairs) == 0 {
		return found, false
	}
	found.p = -1
	for i := range schemes {
		if schemes[i].freedom() < float64(len(pairs))+leastFreedom {
			return found, false
		}
		next, ok := together(pairs, 1, &schemes[i], level)
		if !ok {
			return found, false
		}
		if next.p > found.p {
			found = next
		}
	}
	return found, true
}

// orthonormal makes columns uncorrelated with variance 1; those that follow
// from the ones before go.
func orthonormal(columns [][]float64) [][]float64 {
	var out [][]float64
	for _, c := range columns {
		n := float64(len(c))
		x := append([]float64(nil), c...)
		before := dot(x, x)
		for _, o := range out {
			s := dot(x, o) / n
			for i := range x {
				x[i] -= s * o[i]
			}
		}
		left := dot(x, x)
		if !(left > collinear*before) || !(left > 1e-9*n) { // scores have variance 1 to begin with, or that of an indicator
			continue
		}
		scale := math.Sqrt(n / left)
		for i := range x {
			x[i] *= scale
		}
		out = append(out, x)
	}
	return out
}

// sumOfSquares adds the squares of x, or of its sums over groups.
func sumOfSquares(x []float64, of []int, groups int) float64 {
	if of != nil {
		x = sums(x, of, groups)
	}
	return dot(x, x)
}

func sums(x []float64, of []int, groups int) []float64 {
	out := make([]float64, groups)
	for i, g := range of {
		out[g] += x[i]
	}
	return out
}

// quadratic gives c'Ω⁻¹c for a lower triangle Ω; not ok where Ω is singular.
func quadratic(omega [][]float64, c []float64) (float64, bool) {
	n := len(c)
	y := make([]float64, n)
	total := 0.0
	for j := range n {
		l := omega[j]
		whole := l[j]
		for k := range j {
			for m := range k {
				l[k] -= l[m] * omega[k][m]
			}
			l[k] /= omega[k][k]
		}
		rest, s := whole, c[j]
		for k := range j {
			rest -= l[k] * l[k]
			s -= l[k] * y[k]
		}
		if !(rest > 1e-10*whole) {
			return 0, false
		}
		l[j] = math.Sqrt(rest)
		y[j] = s / l[j]
		total += y[j] * y[j]
	}
	return total, true
}

// tailF is P(F > f) with d1 and d2 degrees of freedom; with d1 = 1 the two-sided
// tail of Student's t at √f.
func tailF(f, d1, d2 float64) float64 {
	if !(f > 0) {
		return 1
	}
	return mathext.RegIncBeta(d2/2, d1/2, d2/(d2+d1*f))
}

// quantileT is the p quantile, p > 1/2, of Student's t.
func quantileT(p, df float64) float64 {
	x := mathext.InvRegIncBeta(df/2, 0.5, 2*(1-p))
	return math.Sqrt(df * (1 - x) / x)
}

// noncentrality is the λ for which a noncentral χ² variable with k degrees of
// freedom stays under x with probability p; 0 where even λ = 0 gives less.
func noncentrality(x, k, p float64) float64 {
	if chiSquared(x, k, 0) <= p {
		return 0
	}
	low, high := 0.0, x+10
	for chiSquared(x, k, high) > p {
		low, high = high, 2*high
	}
	for range 60 {
		mid := (low + high) / 2
		if chiSquared(x, k, mid) > p {
			low = mid
		} else {
			high = mid
		}
	}
	return (low + high) / 2
}

// chiSquared is the distribution function of a noncentral χ² variable as a
// Poisson mixture of central ones, from the likeliest term outwards.
func chiSquared(x, k, lambda float64) float64 {
	if lambda == 0 {
		return mathext.GammaIncReg(k/2, x/2)
	}
	if lambda > 1e4 { // normal by then: mean k + λ, variance 2(k + 2λ)
		return math.Erfc(-(x-k-lambda)/math.Sqrt(4*(k+2*lambda))) / 2
	}
	half := lambda / 2
	term := func(j float64) float64 {
		lg, _ := math.Lgamma(j + 1)
		return math.Exp(-half+j*math.Log(half)-lg) * mathext.GammaIncReg(k/2+j, x/2)
	}
	mode := math.Floor(half)
	reach := 12*math.Sqrt(half) + 20
	total := 0.0
	for j := math.Max(0, mode-reach); j <= mode+reach; j++ {
		total += term(j)
	}
	return math.Min(1, total)
}
