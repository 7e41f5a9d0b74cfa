package kernel

import "math"

// Tails are the probabilities of lying below and above x, as logs, for a family
// whose distribution function has a closed form. d takes the derivatives, in x
// and then in each argument; it has room for one more than there are arguments.
// An argument outside its support gives -Inf.
type Tails struct {
	Below, Above func(x float64, args, d []float64) float64
}

// NormalTails have arguments mean and sd.
var NormalTails = Tails{Below: normalTail(1), Above: normalTail(-1)}

// LogNormalTails have arguments median and sd of logs; LogNormalLogTails have
// the log of the median in its place.
var (
	LogNormalTails    = logNormalTails(true)
	LogNormalLogTails = logNormalTails(false)
)

// LogisticTails have arguments mean and scale.
var LogisticTails = Tails{Below: logisticTail(1), Above: logisticTail(-1)}

// WeibullTails have arguments scale and shape; WeibullLogTails have the log of
// the scale in its place. ExponentialTails and ExponentialLogTails are those of
// shape 1, without the shape.
var (
	WeibullTails        = weibullTails(true)
	WeibullLogTails     = weibullTails(false)
	ExponentialTails    = exponentialTails(true)
	ExponentialLogTails = exponentialTails(false)
)

// standardised fills in the derivatives of a function of z = (x - location) /
// scale with slope s.
func standardised(s, z, scale float64, d []float64) {
	if s == 0 { // z may be infinite
		d[0], d[1], d[2] = 0, 0, 0
		return
	}
	d[0], d[1], d[2] = s/scale, -s/scale, -s*z/scale
}

func normalTail(sign float64) func(x float64, args, d []float64) float64 {
	return func(x float64, args, d []float64) float64 { return normalTailAt(sign, x, args[0], args[1], d) }
}

func normalTailAt(sign, x, mean, sd float64, d []float64) float64 {
	if sd <= 0 {
		return math.Inf(-1)
	}
	z := (x - mean) / sd
	value, slope := LogNormalCDF(sign * z)
	standardised(sign*slope, z, sd, d)
	return value
}

func logisticTail(sign float64) func(x float64, args, d []float64) float64 {
	return func(x float64, args, d []float64) float64 {
		if args[1] <= 0 {
			return math.Inf(-1)
		}
		z := (x - args[0]) / args[1]
		value, slope := softplusSigmoid(-sign * z)
		standardised(sign*slope, z, args[1], d)
		return -value
	}
}

func logNormalTails(natural bool) Tails {
	tail := func(sign, atZero float64) func(x float64, args, d []float64) float64 {
		return func(x float64, args, d []float64) float64 {
			if natural && args[0] <= 0 {
				return math.Inf(-1)
			}
			if x <= 0 {
				d[0], d[1], d[2] = 0, 0, 0
				return atZero
			}
			mean := args[0]
			if natural {
				mean = math.Log(args[0])
			}
			value := normalTailAt(sign, math.Log(x), mean, args[1], d)
			d[0] /= x
			if natural {
				d[1] /= args[0]
			}
			return value
		}
	}
	return Tails{Below: tail(1, math.Inf(-1)), Above: tail(-1, 0)}
}

func weibullTails(natural bool) Tails {
	return Tails{
		Below: func(x float64, args, d []float64) float64 {
			if natural && args[0] <= 0 {
				return math.Inf(-1)
			}
			dx, deta, dk := 0.0, 0.0, 0.0
			value := weibullBelow(x, logScale(args[0], natural), args[1], &dx, &deta, &dk)
			d[0], d[1], d[2] = dx, perScale(deta, args[0], natural), dk
			return value
		},
		Above: func(x float64, args, d []float64) float64 {
			if natural && args[0] <= 0 {
				return math.Inf(-1)
			}
			dx, deta, dk := 0.0, 0.0, 0.0
			value := weibullAbove(x, logScale(args[0], natural), args[1], &dx, &deta, &dk)
			d[0], d[1], d[2] = dx, perScale(deta, args[0], natural), dk
			return value
		},
	}
}

func exponentialTails(natural bool) Tails {
	return Tails{
		Below: func(x float64, args, d []float64) float64 {
			if natural && args[0] <= 0 {
				return math.Inf(-1)
			}
			dx, deta, dk := 0.0, 0.0, 0.0
			value := weibullBelow(x, logScale(args[0], natural), 1, &dx, &deta, &dk)
			d[0], d[1] = dx, perScale(deta, args[0], natural)
			return value
		},
		Above: func(x float64, args, d []float64) float64 {
			if natural && args[0] <= 0 {
				return math.Inf(-1)
			}
			dx, deta, dk := 0.0, 0.0, 0.0
			value := weibullAbove(x, logScale(args[0], natural), 1, &dx, &deta, &dk)
			d[0], d[1] = dx, perScale(deta, args[0], natural)
			return value
		},
	}
}

func logScale(scale float64, natural bool) float64 {
	if natural {
		return math.Log(scale)
	}
	return scale
}

func perScale(deta, scale float64, natural bool) float64 {
	if natural {
		return deta / scale
	}
	return deta
}

// weibullAbove is log P(> x) = -(x/scale)^k with its derivatives in x, the log
// of the scale and k.
func weibullAbove(x, eta, k float64, dx, deta, dk *float64) float64 {
	if k <= 0 {
		return math.Inf(-1)
	}
	if x <= 0 {
		return 0
	}
	t := math.Log(x) - eta
	h := math.Exp(k * t)
	*dx, *deta, *dk = -h*k/x, h*k, -h*t
	return -h
}

// weibullBelow is log P(≤ x).
func weibullBelow(x, eta, k float64, dx, deta, dk *float64) float64 {
	if x <= 0 || k <= 0 {
		return math.Inf(-1)
	}
	l := weibullAbove(x, eta, k, dx, deta, dk)
	ratio := -1 / math.Expm1(-l)
	*dx, *deta, *dk = *dx*ratio, *deta*ratio, *dk*ratio
	return log1mExp(l)
}

// between is log P(a < y ≤ b), from the two tails on the side where the
// difference keeps its digits; da and db take the derivatives in (a, args...)
// and (b, args...), to be added up for the arguments.
func (t Tails) between(a, b float64, args, da, db []float64) float64 {
	upper, lower := t.Below(b, args, db), t.Below(a, args, da)
	if lower > -math.Ln2 { // both beyond the median
		lower, upper = t.Above(b, args, db), t.Above(a, args, da)
		gap := lower - upper
		share := 1 / -math.Expm1(gap)
		for i := range da[:len(args)+1] {
			da[i] *= share
			db[i] *= -share * math.Exp(gap)
		}
		return upper + log1mExp(gap)
	}
	gap := lower - upper
	share := 1 / -math.Expm1(gap)
	for i := range da[:len(args)+1] {
		db[i] *= share
		if rest := math.Exp(gap); rest > 0 {
			da[i] *= -share * rest
		} else {
			da[i] = 0
		}
	}
	return upper + log1mExp(gap)
}
