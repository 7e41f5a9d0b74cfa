package ops

import "fmt"

// verify checks what must hold between passes. An error here is a fault of a
// pass, never of the caller.
func verify(u *unit) error {
	g := u.g
	for i := 1; i < len(g.nodes); i++ {
		n := &g.nodes[i]
		fail := func(format string, args ...any) error {
			return fmt.Errorf("node %d, %s: "+format, append([]any{i, table[n.op].name}, args...)...)
		}
		if n.op == opNone || n.op >= numOps {
			return fail("no such operation")
		}
		for _, a := range n.args {
			if a <= 0 || a >= id(i) {
				return fail("argument %d is not made before it", a)
			}
		}
		p, err := g.shape(n)
		if err != nil {
			return fail("%v", err)
		}
		if p != n.plate || p < 0 || int(p) >= len(g.plates) {
			return fail("on plate %d, but its rule says %d", n.plate, p)
		}
		if err := g.attributes(n); err != nil {
			return fail("%v", err)
		}
	}
	for i, r := range u.roots {
		if r <= 0 || int(r) >= len(g.nodes) {
			return fmt.Errorf("root %d: no node %d", i, r)
		}
	}
	if u.into != nil && len(u.into) != len(u.roots)-1 {
		return fmt.Errorf("%d derivatives for %d places", len(u.roots)-1, len(u.into))
	}
	return nil
}

// attributes checks that a node has what its operation needs, and nothing out
// of range.
func (g *graph) attributes(n *node) error {
	fine, coarse := n.plate, n.plate
	switch n.op {
	case opData:
		if len(n.data) != g.rows(n.plate) {
			return fmt.Errorf("%d numbers for %d rows", len(n.data), g.rows(n.plate))
		}
		return nil
	case opDensity:
		if n.kernel == nil {
			return fmt.Errorf("no kernel")
		}
		return nil
	case opAffine:
		return g.affineTerms(n)
	case opPlace:
		if n.at < 0 || n.at >= g.rows(n.plate) {
			return fmt.Errorf("no entry %d", n.at)
		}
		return nil
	case opGather:
		coarse = g.nodes[n.args[0]].plate
	case opSumOver, opSumOverDot:
		fine = g.nodes[n.args[0]].plate
	default:
		return nil
	}
	return g.leads(n.index, fine, coarse)
}

func (g *graph) affineTerms(n *node) error {
	for _, t := range n.terms {
		for _, at := range []int{t.scale, t.x, t.w} {
			if at < -1 || at >= len(n.args) {
				return fmt.Errorf("no factor %d", at)
			}
		}
		plateOf := func(at int) Plate { return g.nodes[n.args[at]].plate }
		switch {
		case t.scale >= 0 && plateOf(t.scale) != Scalar:
			return fmt.Errorf("scale is not a scalar")
		case t.w >= 0 && plateOf(t.w) != n.plate:
			return fmt.Errorf("second column is on plate %d", plateOf(t.w))
		case t.x < 0 && (t.scale < 0 || t.w >= 0):
			return fmt.Errorf("a term without a factor")
		case t.x >= 0 && t.index == nil && plateOf(t.x) != n.plate:
			return fmt.Errorf("column is on plate %d", plateOf(t.x))
		}
		if t.index != nil {
			if err := g.leads(t.index, n.plate, plateOf(t.x)); err != nil {
				return err
			}
		}
	}
	return nil
}

// leads checks that ix leads from the rows of fine to rows of coarse.
func (g *graph) leads(ix *index, fine, coarse Plate) error {
	if ix == nil || len(ix.to) != g.rows(fine) {
		return fmt.Errorf("no index for the %d rows of plate %q", g.rows(fine), g.plates[fine].name)
	}
	if ix.low < 0 || int(ix.high) >= g.rows(coarse) {
		return fmt.Errorf("index leads to rows %d to %d of the %d of plate %q", ix.low, ix.high, g.rows(coarse), g.plates[coarse].name)
	}
	return nil
}
