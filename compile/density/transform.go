package density

import (
	"math"

	"arrowroot/compile/formula"
	"arrowroot/compile/kernel"
	"arrowroot/compile/model"
	"arrowroot/compile/ops"
)

// coordinates is the number of unconstrained coordinates of a parameter.
func coordinates(m *model.Model, p *model.Parameter) int {
	switch p.Shape {
	case model.ByPlate:
		return len(m.Plates[p.Plate].Levels)
	case model.ZeroSum, model.Simplex:
		return p.Size - 1
	case model.Rising:
		return max(p.Size-2, 0)
	}
	return p.Size // K-1 cut points come from K shares, which have K-1 coordinates
}

// entries is the number of natural values of a parameter.
func entries(m *model.Model, p *model.Parameter) int {
	if p.Shape == model.ByPlate {
		return len(m.Plates[p.Plate].Levels)
	}
	return p.Size
}

// basis is an orthonormal basis of the vectors of n entries with sum zero, as
// an n × (n-1) matrix by rows: column j compares the mean of the first j+1
// entries with entry j+1 (the Helmert contrasts).
func basis(n int) []float64 {
	q := make([]float64, n*(n-1))
	for j := range n - 1 {
		k := float64(j + 1)
		up, down := 1/math.Sqrt(k*(k+1)), -k/math.Sqrt(k*(k+1))
		for i := range j + 1 {
			q[i*(n-1)+j] = up
		}
		q[(j+1)*(n-1)+j] = down
	}
	return q
}

// vectorPlate declares the plate of a vector's entries; Scalar for one value.
func (l *lowering) vectorPlate(name string, n int) ops.Plate {
	if n == 1 {
		return ops.Scalar
	}
	return l.b.Plate(name, n)
}

// A yardstick is the location and width of a prior with fixed arguments, so
// that a coordinate between −2 and 2 is a plausible value whatever the unit.
type yardstick struct {
	middle, spread float64
}

// measure takes the quantiles of a prior at −1, 0 and 1 standard deviations of
// the normal; {0, 1} if the prior's arguments are not all numbers.
func measure(p *model.Prior) (yardstick, bool) {
	none := yardstick{0, 1}
	if p.Family == nil || p.Family.Quantile == nil {
		return none, false
	}
	args := make([]float64, len(p.Arguments))
	for i, e := range p.Arguments {
		x, ok := constant(e)
		if !ok {
			return none, false
		}
		args[i] = x
	}
	const atMinusOne = 0.15865525393145707 // Φ(−1)
	low, mid, high := p.Family.Quantile(atMinusOne, args), p.Family.Quantile(0.5, args), p.Family.Quantile(1-atMinusOne, args)
	y := yardstick{mid, (high - low) / 2}
	if !(y.spread > 0) || math.IsInf(y.spread, 0) || math.IsNaN(mid) || math.IsInf(mid, 0) {
		return none, false
	}
	return y, true
}

// constant evaluates a formula made of numbers.
func constant(e formula.Expr) (float64, bool) {
	x := model.Evaluate(e, func(formula.Expr) float64 { return math.NaN() })
	return x, !math.IsNaN(x)
}

// A placed parameter: its natural value, the value that its prior is about,
// and the log of the density of that value's measure under the coordinates
// (the Jacobian), a scalar.
type placed struct {
	natural  ops.Value
	about    ops.Value
	jacobian ops.Value
}

// onLine leaves coordinates on the line of reals: middle + spread · u.
func (l *lowering) onLine(u ops.Value, n int, y yardstick) placed {
	x := u
	if y != (yardstick{0, 1}) {
		x = l.b.Add(l.b.Const(y.middle), l.b.Mul(l.b.Const(y.spread), u))
	}
	return placed{x, x, l.b.Const(float64(n) * math.Log(y.spread))}
}

// positive takes coordinates to (0, ∞): middle · exp(u).
func (l *lowering) positive(u ops.Value, middle float64) placed {
	shift := math.Log(middle)
	log := u
	if shift != 0 {
		log = l.b.Add(l.b.Const(shift), u)
	}
	x := l.b.Exp(log)
	return placed{x, x, l.b.Sum(log)}
}

// between takes coordinates to (low, high): low + (high − low) · logistic(u).
// The bounds are scalars; for the unit interval they are constants 0 and 1.
func (l *lowering) between(u ops.Value, n int, low, high ops.Value) placed {
	width := l.b.Sub(high, low)
	x := l.b.Add(low, l.b.Mul(width, l.b.InvLogit(u)))
	jacobian := l.b.Add(l.logisticSlope(u), l.b.Mul(l.b.Const(float64(n)), l.b.Log(width)))
	return placed{x, x, jacobian}
}

// logisticSlope is the sum of log(logistic(u) (1 − logistic(u))).
func (l *lowering) logisticSlope(u ops.Value) ops.Value {
	return l.b.Neg(l.b.Sum(l.b.Add(l.b.Softplus(u), l.b.Softplus(l.b.Neg(u)))))
}

// inverseRoot takes coordinates to k with 1/√k = exp(u), and has the prior
// look at 1/√k.
func (l *lowering) inverseRoot(u ops.Value) placed {
	return placed{
		natural:  l.b.Exp(l.b.Mul(l.b.Const(-2), u)),
		about:    l.b.Exp(u),
		jacobian: l.b.Sum(u),
	}
}

// inverseRootPlus takes coordinates to κ with 1/√(1+κ) = logistic(u), and has
// the prior look at that. κ = (1 + e)² − 1 with e = exp(−u), written so that
// nothing cancels.
func (l *lowering) inverseRootPlus(u ops.Value) placed {
	e := l.b.Exp(l.b.Neg(u))
	return placed{
		natural:  l.b.Mul(e, l.b.Add(l.b.Const(2), e)),
		about:    l.b.InvLogit(u),
		jacobian: l.logisticSlope(u),
	}
}

// zeroSum takes n-1 coordinates to n entries that sum to zero. The prior looks
// at √2 times each orthonormal coordinate, which has the distribution that the
// difference of any two entries has under a normal prior.
func (l *lowering) zeroSum(name string, u ops.Value, n int, spread float64) placed {
	about := u
	if spread != 1 {
		about = l.b.Mul(l.b.Const(spread), u)
	}
	q := basis(n)
	for i := range q {
		q[i] /= math.Sqrt2
	}
	return placed{
		natural:  l.b.Linear(l.b.Plate(name, n), q, about),
		about:    about,
		jacobian: l.b.Const(float64(n-1) * math.Log(spread)),
	}
}

// shares takes n-1 coordinates to the log of n positive shares with sum 1 (the
// softmax of a zero-sum vector; Egozcue et al. 2003, isometric log-ratio). The
// Jacobian against the first n-1 shares is √n ∏ share.
func (l *lowering) shares(plate ops.Plate, u ops.Value, n int) (log, jacobian ops.Value) {
	v := l.b.Linear(plate, basis(n), u)
	log = l.b.Sub(v, l.b.LogSumExp(v))
	return log, l.b.Add(l.b.Sum(log), l.b.Const(0.5*math.Log(float64(n))))
}

// simplex takes n-1 coordinates to n shares.
func (l *lowering) simplex(name string, u ops.Value, n int) placed {
	log, jacobian := l.shares(l.b.Plate(name, n), u, n)
	x := l.b.Exp(log)
	return placed{x, x, jacobian}
}

// rising takes n-2 coordinates to n entries that rise from 0 to 1 by n-1 shares.
// The prior looks at the shares.
func (l *lowering) rising(name string, u ops.Value, n int) placed {
	log, jacobian := l.shares(l.b.Plate(name+" rises", n-1), u, n-1)
	// The last entry is a constant and no sum of shares, which would differ
	// from 1 by rounding.
	upTo := make([]float64, n*(n-1))
	for i := range n - 1 {
		for j := range i {
			upTo[i*(n-1)+j] = 1
		}
	}
	plate := l.b.Plate(name, n)
	return placed{natural: l.b.Add(l.b.Linear(plate, upTo, l.b.Exp(log)), l.last(plate, n)), jacobian: jacobian}
}

// last is a vector of n entries of which the last is 1 and the others are 0.
func (l *lowering) last(plate ops.Plate, n int) ops.Value {
	one := make([]float64, n)
	one[n-1] = 1
	return l.b.Data(plate, one)
}

// cuts takes n-1 coordinates to the n-1 ordered cut points at which level
// shares on the logit scale add up: cut j = logit(share 0 + … + share j). The
// prior looks at the shares.
func (l *lowering) cuts(name string, u ops.Value, n int) placed {
	log, jacobian := l.shares(l.b.Plate(name+" shares", n), u, n)
	each := make([]ops.Value, n)
	for i := range each {
		each[i] = l.b.Element(log, i)
	}
	points := make([]ops.Value, n-1)
	for j := range points {
		points[j] = l.b.Sub(l.logSum(name, each[:j+1]), l.logSum(name, each[j+1:]))
	}
	natural := points[0]
	if n > 2 {
		natural = l.b.Stack(l.b.Plate(name, n-1), points...)
	}
	return placed{natural: natural, jacobian: jacobian}
}

// probitCuts takes n-1 coordinates to the n-1 ordered cut points at which level
// shares add up on the scale of the normal distribution function. The first is
// a coordinate, the others lie exp of one above; since share 0 + … + share j is
// Φ(cut j), a density over shares has the Jacobian ∏ φ(cut).
func (l *lowering) probitCuts(name string, u ops.Value, n int) placed {
	points := make([]ops.Value, n-1)
	points[0] = u
	jacobian := l.b.Const(0)
	for j := 1; j < n-1; j++ {
		step := l.b.Element(u, j)
		if j == 1 {
			points[0] = l.b.Element(u, 0)
		}
		points[j] = l.b.Add(points[j-1], l.b.Exp(step))
		jacobian = l.b.Add(jacobian, step)
	}
	natural := points[0]
	if n > 2 {
		natural = l.b.Stack(l.b.Plate(name, n-1), points...)
	}
	normal := l.b.Density(kernel.Normal, natural, l.b.Const(0), l.b.Const(1))
	return placed{natural: natural, jacobian: l.b.Add(jacobian, normal)}
}

func (l *lowering) logSum(name string, terms []ops.Value) ops.Value {
	if len(terms) == 1 {
		return terms[0]
	}
	return l.b.LogSumExp(l.b.Stack(l.b.Plate(name+" sum", len(terms)), terms...))
}
