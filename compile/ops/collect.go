package ops

import "slices"

// passSimplify folds and collects until nothing changes any more. Every step
// makes sums and products flatter, moves work to a coarser plate or out of a
// sum, or removes it; none undoes another, so this ends.
func passSimplify(u *unit) {
	for {
		before := u.g.text()
		fold(u)
		collect(u)
		if u.g.text() == before {
			return
		}
	}
}

// collect brings sums and products into one form (differences, quotients and
// nested sums become flat sums and products of few factors), does work on
// scalars and coarse plates before it is spread over rows, and moves factors
// that are the same for all rows out of sums.
func collect(u *unit) {
	uses := u.g.uses(u.roots)
	old := u.g
	u.rewrite(func(next *graph, was id, n node) id {
		c := &collector{g: next}
		c.inline = func(i int) bool { return uses[old.nodes[was].args[i]] == 1 }
		return c.node(n)
	})
}

type collector struct {
	g      *graph
	inline func(i int) bool // argument i has no other reader
}

func (c *collector) node(n node) id {
	g := c.g
	switch n.op {
	case opSub:
		if n.plate != Scalar {
			return g.make(opAdd, n.args[0], g.negated(n.args[1]))
		}
	case opNeg:
		return g.negated(n.args[0])
	case opDiv:
		x, y := n.args[0], n.args[1]
		if g.fixed[y] || g.nodes[y].plate == Scalar && n.plate != Scalar {
			return g.make(opMul, x, g.make(opDiv, g.constant(1), y))
		}
	case opPow:
		if v, ok := c.power(n.args[0], n.args[1]); ok {
			return v
		}
	case opAdd:
		return c.sum(n)
	case opMul:
		return c.product(n)
	case opGather:
		if a := &g.nodes[n.args[0]]; a.op == opGather {
			return g.gather(a.args[0], n.plate, g.chain(n.index, a.index))
		}
	case opElement:
		if v, ok := c.element(n.args[0], n.at); ok {
			return v
		}
	case opSum, opSumOver:
		return c.total(n)
	}
	if table[n.op].elementwise {
		return c.lifted(n)
	}
	return g.add(n)
}

// power writes the powers that formulas have most without the general one.
func (c *collector) power(x, y id) (id, bool) {
	g := c.g
	if g.nodes[y].op != opConst {
		return 0, false
	}
	switch g.nodes[y].c {
	case 1:
		return x, true
	case 2:
		return g.make(opSquare, x), true
	case 3:
		return g.make(opMul, x, g.make(opSquare, x)), true
	case -1:
		return g.make(opDiv, g.constant(1), x), true
	}
	return 0, false
}

// coarser tells whether work on the gathered value's plate is worth less than
// work on the rows of p.
func (c *collector) coarser(gather id, p Plate) bool {
	return 2*c.g.rows(c.g.nodes[c.g.nodes[gather].args[0]].plate) <= c.g.rows(p)
}

// lifted does an elementwise operation before the gather where its arguments
// are gathered by the same index, or scalars.
func (c *collector) lifted(n node) id {
	g := c.g
	var by *node
	for _, a := range n.args {
		an := &g.nodes[a]
		switch {
		case an.plate == Scalar:
		case an.op == opGather && c.coarser(a, n.plate) && (by == nil || by.index == an.index && g.nodes[by.args[0]].plate == g.nodes[an.args[0]].plate):
			by = an
		default:
			return g.add(n)
		}
	}
	if by == nil {
		return g.add(n)
	}
	index := by.index
	args := make([]id, len(n.args))
	for i, a := range n.args {
		args[i] = a
		if g.nodes[a].plate != Scalar {
			args[i] = g.nodes[a].args[0]
		}
	}
	return g.gather(g.make(n.op, args...), n.plate, index)
}

// flat lists the arguments of an n-ary operation, with those of nested ones of
// the same kind in their place. What is fixed stays together: it gets folded.
func (c *collector) flat(n node) []id {
	var out []id
	for i, a := range n.args {
		an := &c.g.nodes[a]
		if an.op == n.op && an.plate == n.plate && !c.g.fixed[a] && c.inline(i) {
			out = append(out, an.args...)
			continue
		}
		out = append(out, a)
	}
	return out
}

func (c *collector) sum(n node) id {
	args := c.flat(n)
	if n.plate != Scalar {
		// A sum times a number becomes a sum, to be flattened into this one.
		var spread []id
		for _, a := range args {
			spread = append(spread, c.spread(a)...)
		}
		args = spread
	}
	return c.grouped(opAdd, n.plate, args, 0)
}

// spread turns k(x + y + …), k a constant, into kx, ky, …
func (c *collector) spread(a id) []id {
	g := c.g
	an := g.nodes[a]
	if an.op != opMul || len(an.args) != 2 {
		return []id{a}
	}
	for i, k := range an.args {
		inner := g.nodes[an.args[1-i]]
		if g.nodes[k].op == opConst && inner.op == opAdd && inner.plate != Scalar && !g.fixed[an.args[1-i]] {
			var out []id
			for _, x := range inner.args {
				out = append(out, g.make(opMul, k, x))
			}
			return out
		}
	}
	return []id{a}
}

func (c *collector) product(n node) id {
	return c.grouped(opMul, n.plate, c.flat(n), 1)
}

// grouped makes the sum or product of args on plate p so that scalars come
// together, what is fixed does, and what is gathered by one index does, before
// anything is done to all rows. nothing is the number that makes no difference.
func (c *collector) grouped(o op, p Plate, args []id, nothing float64) id {
	g := c.g
	var scalars, fixed, rest, gathered []id
	for _, a := range args {
		an := &g.nodes[a]
		switch {
		case an.op == opConst && an.c == nothing:
		case p != Scalar && an.plate == Scalar:
			scalars = append(scalars, a)
		case g.fixed[a]:
			fixed = append(fixed, a)
		case an.op == opGather && c.coarser(a, p):
			gathered = append(gathered, a)
		default:
			rest = append(rest, a)
		}
	}
	for len(gathered) > 0 {
		first := g.nodes[gathered[0]]
		from := g.nodes[first.args[0]].plate
		var same, others []id
		for _, a := range gathered {
			if an := &g.nodes[a]; an.index == first.index && g.nodes[an.args[0]].plate == from {
				same = append(same, an.args[0])
			} else {
				others = append(others, a)
			}
		}
		gathered = others
		same = append(same, scalars...) // they ride along with the first gather
		scalars = nil
		rest = append(rest, g.gather(c.joined(o, same), p, first.index))
	}
	if len(fixed) > 0 {
		rest = append(rest, c.joined(o, fixed))
	}
	if len(scalars) > 0 {
		if s := c.joined(o, scalars); len(rest) == 0 || g.nodes[s].op != opConst || g.nodes[s].c != nothing {
			rest = append(rest, s)
		}
	}
	slices.Sort(rest)
	if len(rest) == 0 {
		rest = append(rest, g.constant(nothing))
	}
	v := c.joined(o, rest)
	if g.nodes[v].plate != p { // only neutral numbers were left beside the scalars
		v = g.make(opMul, v, g.ones(p))
	}
	return v
}

func (c *collector) joined(o op, args []id) id {
	if len(args) == 1 {
		return args[0]
	}
	return c.g.make(o, args...)
}

// element finds entry i of v without making v.
func (c *collector) element(v id, i int) (id, bool) {
	g := c.g
	n := &g.nodes[v]
	switch {
	case n.plate == Scalar:
		return v, true
	case n.op == opParameter:
		return g.put(node{op: opParameter, plate: Scalar, at: n.at + i}), true
	case n.op == opStack:
		return n.args[i], true
	}
	return 0, false
}

// total moves out of a sum, or a sum by groups, the factors that are the same
// for all rows summed, and sums gathered values by counting.
func (c *collector) total(n node) id {
	g := c.g
	x := n.args[0]
	factors := []id{x}
	if g.nodes[x].op == opMul {
		factors = g.nodes[x].args
	}
	var out, in []id
	for _, a := range factors {
		an := &g.nodes[a]
		switch {
		case an.plate == Scalar:
			out = append(out, a)
		case n.op == opSumOver && an.op == opGather && an.index == n.index && g.nodes[an.args[0]].plate == n.plate:
			out = append(out, an.args[0])
		default:
			in = append(in, a)
		}
	}
	if n.op == opSum && len(in) == 1 && g.nodes[in[0]].op == opGather {
		an := g.nodes[in[0]]
		from := g.nodes[an.args[0]].plate
		out = append(out, g.make(opSum, g.make(opMul, an.args[0], g.counts(from, an.index))))
		return c.joined(opMul, out)
	}
	if len(out) == 0 {
		return g.add(n)
	}
	switch {
	case len(in) > 0:
		rest := n
		rest.args = []id{c.joined(opMul, in)}
		out = append(out, g.put(rest))
	case n.op == opSum:
		out = append(out, g.constant(float64(g.rows(g.nodes[x].plate))))
	default:
		out = append(out, g.counts(n.plate, n.index))
	}
	return c.joined(opMul, out)
}
