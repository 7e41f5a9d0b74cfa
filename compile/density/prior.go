package density

import (
	"fmt"
	"math"
	"slices"

	"arrowroot/compile/catalog"
	"arrowroot/compile/formula"
	"arrowroot/compile/kernel"
	"arrowroot/compile/model"
	"arrowroot/compile/ops"
)

// A factor is one additive part of a block's log density, with the name by
// which people know it.
type factor struct {
	what  string // "the law of bees", "the prior of beta_hedge_bees in the law of bees"
	value ops.Value
	law   *model.Law      // nil for a prior
	form  *kernel.Density // of the law, with the arguments it takes
	args  []ops.Value
	units []int32 // of the law, where some are left out; nil = all
}

// place lowers parameter i, whose coordinates start at offset: its natural
// value goes to l.natural, its prior with the Jacobian comes back. Parameters
// that its prior reads must have been placed before.
func (l *lowering) place(i, offset int) (ops.Value, error) {
	p := l.m.Parameters[i]
	n := coordinates(l.m, p)
	fail := func(err error) (ops.Value, error) { return 0, &priorError{p.Name, err} }
	if n == 0 { // one level only: nothing can move
		only := 0.0
		if p.Shape == model.Simplex {
			only = 1
		}
		l.natural[i] = l.b.Const(only)
		if p.Shape == model.Rising && p.Size == 2 {
			l.natural[i] = l.last(l.b.Plate(p.Name, p.Size), p.Size)
		}
		return l.b.Const(0), nil
	}
	switch p.Shape {
	case model.ByPlate:
		return l.placeByPlate(i, offset)
	case model.Unrecorded:
		return l.placeUnrecorded(i, offset)
	}
	u := l.b.Parameter(offset, l.vectorPlate(p.Name, n))
	switch p.Shape {
	case model.Simplex, model.Cuts, model.Rising:
		if p.Prior.Family != nil {
			return fail(fmt.Errorf("%s can only be uniform over the shares", p.Name))
		}
		var x placed
		shares := p.Size
		switch {
		case p.Shape == model.Simplex:
			x = l.simplex(p.Name, u, shares)
		case p.Shape == model.Rising:
			shares--
			x = l.rising(p.Name, u, p.Size)
		case l.probit(p.Name):
			shares++
			x = l.probitCuts(p.Name, u, shares)
		default:
			shares++
			x = l.cuts(p.Name, u, shares)
		}
		l.natural[i] = x.natural
		uniform, _ := math.Lgamma(float64(shares)) // Dirichlet(1, …, 1) has density (K-1)!
		return l.b.Add(x.jacobian, l.b.Const(uniform)), nil
	}
	if p.Prior.Family == nil {
		return fail(fmt.Errorf("it has none"))
	}
	args := make([]ops.Value, len(p.Prior.Arguments))
	fixed := true
	for j, e := range p.Prior.Arguments {
		x, err := l.express(e)
		if err != nil {
			return fail(err)
		}
		if x.at != everywhere {
			return fail(fmt.Errorf("its %s differs by %s", p.Prior.Family.Arguments[j].Name, l.word(x.at)))
		}
		_, number := constant(e)
		fixed = fixed && number
		args[j] = x.v
	}
	x, err := l.transform(p, u, n, args, fixed)
	if err != nil {
		return fail(err)
	}
	l.natural[i] = x.natural
	prior := l.b.Density(p.Prior.Family.Natural, x.about, args...)
	return l.b.Add(prior, x.jacobian), nil
}

// probit reports whether cut points belong to a law on the probit scale.
func (l *lowering) probit(cutpoints string) bool {
	return slices.ContainsFunc(l.m.Laws, func(law *model.Law) bool {
		return law.Cutpoints == cutpoints && law.Family.Link == catalog.Probit
	})
}

// transform chooses the way from coordinates to natural values by what the
// prior is about, the shape, and where both the parameter and its prior allow
// values.
func (l *lowering) transform(p *model.Parameter, u ops.Value, n int, args []ops.Value, fixed bool) (placed, error) {
	y, measured := measure(&p.Prior)
	if p.Shape == model.ZeroSum {
		if y.middle != 0 {
			y = yardstick{0, 1}
		}
		return l.zeroSum(p.Name, u, p.Size, y.spread), nil
	}
	switch p.Prior.On {
	case model.InverseRoot:
		return l.inverseRoot(u), nil
	case model.InverseRootPlus:
		return l.inverseRootPlus(u), nil
	}
	support, cut := narrower(p.Support, p.Prior.Family.Support)
	if cut && !fixed {
		// A prior that is cut off has a norming constant; it may only be left
		// out while it cannot change.
		return placed{}, fmt.Errorf("%s reaches beyond where %s can lie; choose a distribution that does not, or fixed numbers", p.Prior.Family.Name, p.Name)
	}
	switch support {
	case catalog.Reals:
		return l.onLine(u, n, y), nil
	case catalog.Positives, catalog.NonNegatives:
		middle := 1.0
		if measured && y.middle > 0 {
			middle = y.middle
		}
		return l.positive(u, middle), nil
	case catalog.Unit:
		return l.between(u, n, l.b.Const(0), l.b.Const(1)), nil
	case catalog.Between:
		low, high := args[0], args[1]
		switch p.Support {
		case catalog.Positives, catalog.NonNegatives:
			low = l.b.Max(low, l.b.Const(0))
		case catalog.Unit:
			low, high = l.b.Max(low, l.b.Const(0)), l.b.Min(high, l.b.Const(1))
		}
		return l.between(u, n, low, high), nil
	case catalog.Above:
		x := l.positive(u, 1)
		x.natural = l.b.Add(args[0], x.natural)
		x.about = x.natural
		return x, nil
	case catalog.Turn:
		half := l.b.Const(math.Pi)
		return l.between(u, n, l.b.Sub(args[0], half), l.b.Add(args[0], half)), nil
	}
	return placed{}, fmt.Errorf("%s is for whole numbers, and %s is none", p.Prior.Family.Name, p.Name)
}

// narrower is the smaller of where a parameter and its prior allow values; cut
// says that the prior allows values that the parameter does not.
func narrower(parameter, prior catalog.Support) (support catalog.Support, cut bool) {
	room := map[catalog.Support]int{catalog.Reals: 3, catalog.NonNegatives: 2, catalog.Positives: 2, catalog.Unit: 1}
	switch {
	case prior == catalog.Between:
		return prior, parameter != catalog.Reals // its ends are clipped
	case prior == catalog.Above: // its minimum is positive
		return prior, parameter == catalog.Unit
	case prior == catalog.Turn:
		return prior, parameter != catalog.Reals
	case room[prior] > room[parameter]:
		return parameter, true
	}
	return prior, false
}

// placeByPlate lowers the entries of a parameter that varies by a plate:
// normal around its mean with its spread, either themselves (centred) or by
// their standard scores.
func (l *lowering) placeByPlate(i, offset int) (ops.Value, error) {
	p := l.m.Parameters[i]
	plate := l.plate(level(p.Plate))
	n := len(l.m.Plates[p.Plate].Levels)
	mean, middle, err := l.hyper(p.Mean, 0)
	if err != nil {
		return 0, &priorError{p.Name, err}
	}
	sd, scale, err := l.hyper(p.SD, 1)
	if err != nil {
		return 0, &priorError{p.Name, err}
	}
	u := l.b.Parameter(offset, plate)
	if !p.Centred {
		l.natural[i] = l.b.Add(mean, l.b.Mul(sd, u))
		return l.b.Density(l.normal, u, l.b.Const(0), l.b.Const(1)), nil
	}
	x := l.onLine(u, n, yardstick{middle, scale})
	l.natural[i] = x.natural
	return l.b.Add(l.b.Density(l.normal, x.natural, mean, sd), x.jacobian), nil
}

// hyper is the value of a by-plate parameter's mean or sd, and about where its
// prior expects it; both are as given if nobody named a parameter.
func (l *lowering) hyper(name string, given float64) (ops.Value, float64, error) {
	if name == "" {
		return l.b.Const(given), given, nil
	}
	x, err := l.express(&formula.Name{ID: name})
	if err != nil || x.at != everywhere {
		return 0, 0, fmt.Errorf("%s is no single parameter", name)
	}
	if i, ok := l.params[name]; ok && l.m.Parameters[i].Prior.On == model.Itself {
		if y, ok := measure(&l.m.Parameters[i].Prior); ok {
			return x.v, y.middle, nil
		}
	}
	return x.v, given, nil
}
