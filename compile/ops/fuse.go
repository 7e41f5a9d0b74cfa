package ops

// passFuse replaces common groups of operations by one that goes through the
// rows once: sums of products become dot products, sums by groups of products
// likewise, and linear predictors become one Affine node. It only takes in
// nodes that nothing else reads.
func passFuse(u *unit) {
	uses := u.g.uses(u.roots)
	old := u.g
	u.rewrite(func(next *graph, was id, n node) id {
		f := &fuser{g: next}
		f.alone = func(i int) bool { return uses[old.nodes[was].args[i]] == 1 }
		f.aloneBelow = func(i, j int) bool { return uses[old.nodes[old.nodes[was].args[i]].args[j]] == 1 }
		switch n.op {
		case opSum, opSumOver:
			return f.total(n)
		case opAdd:
			if n.plate != Scalar {
				return f.affine(n)
			}
		}
		return next.add(n)
	})
}

type fuser struct {
	g          *graph
	alone      func(i int) bool    // nothing else reads argument i
	aloneBelow func(i, j int) bool // nothing else reads argument j of argument i
}

func (f *fuser) total(n node) id {
	x := f.g.nodes[n.args[0]]
	if !f.alone(0) {
		return f.g.add(n)
	}
	var pair []id
	switch {
	case x.op == opSquare:
		pair = []id{x.args[0], x.args[0]}
	case x.op == opMul && len(x.args) == 2:
		pair = f.pair(x.args[0], x.args[1])
	case x.op == opMul:
		k := len(x.args) - 1
		pair = f.pair(f.g.make(opMul, x.args[:k]...), x.args[k])
	default:
		return f.g.add(n)
	}
	for _, a := range pair {
		if f.g.nodes[a].plate == Scalar {
			return f.g.add(n)
		}
	}
	if n.op == opSum {
		return f.g.make(opDot, pair...)
	}
	n.op, n.args = opSumOverDot, pair
	return f.g.add(n)
}

// pair puts what depends on parameters first: dot products that share it are
// taken together.
func (f *fuser) pair(x, y id) []id {
	if f.g.fixed[x] && !f.g.fixed[y] {
		x, y = y, x
	}
	return []id{x, y}
}

// affine takes in products of at most a scalar and two columns, one of which
// may be gathered.
func (f *fuser) affine(n node) id {
	out := node{op: opAffine, plate: n.plate}
	use := func(a id) int {
		out.args = append(out.args, a)
		return len(out.args) - 1
	}
	taken := 0
	for i, a := range n.args {
		if f.alone(i) {
			if t, ok := f.term(i, a, use); ok {
				out.terms = append(out.terms, t)
				taken++
				continue
			}
		}
		t := term{scale: -1, x: -1, w: -1}
		if f.g.nodes[a].plate == Scalar {
			t.scale = use(a)
		} else {
			t.x = use(a)
		}
		out.terms = append(out.terms, t)
	}
	if taken == 0 && len(n.args) < 3 {
		return f.g.add(n)
	}
	return f.g.add(out)
}

// term makes a term of argument i, the node a; use notes an argument and gives
// its position.
func (f *fuser) term(i int, a id, use func(id) int) (term, bool) {
	t := term{scale: -1, x: -1, w: -1}
	an := f.g.nodes[a]
	switch an.op {
	case opGather:
		t.index = an.index
		t.x = use(an.args[0])
		return t, true
	case opMul:
	default:
		return t, false
	}
	scale, gathered := id(0), id(0)
	var columns []id
	for j, b := range an.args {
		bn := &f.g.nodes[b]
		switch {
		case bn.plate == Scalar && scale == 0:
			scale = b
		case bn.plate == Scalar:
			return t, false
		case bn.op == opGather && gathered == 0 && f.aloneBelow(i, j):
			gathered = b
		default:
			columns = append(columns, b)
		}
	}
	switch {
	case gathered != 0 && len(columns) <= 1:
		t.index = f.g.nodes[gathered].index
		t.x = use(f.g.nodes[gathered].args[0])
		if len(columns) == 1 {
			t.w = use(columns[0])
		}
	case gathered == 0 && len(columns) == 1:
		t.x = use(columns[0])
	case gathered == 0 && len(columns) == 2:
		t.x, t.w = use(columns[0]), use(columns[1])
	default:
		return t, false
	}
	if scale != 0 {
		t.scale = use(scale)
	}
	return t, true
}
