package kernel

import "math"

// A standard is a density on the line before it gets a location and a scale;
// located and folded make kernels of it.
type standard struct {
	// at returns the log density at z without its constant, and its
	// derivatives in z and in the shape a (0 for a curve without one).
	at func(z, a float64) (value, dz, da float64)

	// constant is what depends on the shape alone, with its derivative.
	constant func(a float64) (value, slope float64)

	shaped bool // whether there is a shape argument; it must be positive unless signed
	signed bool
}

// always is the constant of a standard without a shape.
func always(v float64) func(float64) (float64, float64) {
	return func(float64) (float64, float64) { return v, 0 }
}

// located is the density of location + scale z: arguments location, scale
// and, where there is one, shape.
func (c *standard) located(name string) *Density {
	args := 2
	if c.shaped {
		args++
	}
	return &Density{Name: name, Args: args, Block: func(n int, y []float64, args [][]float64, dy []float64, dargs [][]float64, _, _ []float64) float64 {
		if dargs == nil {
			return c.sum(n, y, dy, args[0], nil, args[1:], nil)
		}
		return c.sum(n, y, dy, args[0], dargs[0], args[1:], dargs[1:])
	}}
}

// folded is the density of scale |z|, for a curve that is even: arguments
// scale and, where there is one, shape.
func (c *standard) folded(name string) *Density {
	args := 1
	if c.shaped {
		args++
	}
	centre := []float64{0}
	return &Density{Name: name, Args: args, Block: func(n int, y []float64, args [][]float64, dy []float64, dargs [][]float64, _, _ []float64) float64 {
		for i := range min(n, len(y)) {
			if y[i] < 0 {
				return math.Inf(-1)
			}
		}
		return c.sum(n, y, dy, centre, nil, args, dargs) + float64(n)*math.Ln2
	}}
}

// sum is the block of both: rest is the scale, then the shape.
func (c *standard) sum(n int, y, dy, location, dlocation []float64, rest, drest [][]float64) float64 {
	scale, dscale := rest[0], wanted(drest, 0)
	shape, dshape := []float64(nil), []float64(nil)
	if c.shaped {
		shape, dshape = rest[1], wanted(drest, 1)
	}
	iy, il, is, ia := mask(y), mask(location), mask(scale), mask(shape)
	last, inv, logscale := math.NaN(), 0.0, 0.0
	lastShape, con, dcon := math.NaN(), 0.0, 0.0
	if !c.shaped {
		lastShape = 0
		con, _ = c.constant(0)
	}
	sum := 0.0
	for i := range n {
		if s := scale[i&is]; s != last {
			if s <= 0 {
				return math.Inf(-1)
			}
			last, inv, logscale = s, 1/s, math.Log(s)
		}
		if c.shaped {
			if a := shape[i&ia]; a != lastShape {
				if a <= 0 && !c.signed {
					return math.Inf(-1)
				}
				lastShape = a
				con, dcon = c.constant(a)
			}
		}
		z := (y[i&iy] - location[i&il]) * inv
		v, dz, da := c.at(z, lastShape)
		sum += v + con - logscale
		if dy != nil {
			dy[i&iy] += dz * inv
		}
		if dlocation != nil {
			dlocation[i&il] -= dz * inv
		}
		if dscale != nil {
			dscale[i&is] -= (dz*z + 1) * inv
		}
		if dshape != nil {
			dshape[i&ia] += da + dcon
		}
	}
	return sum
}
