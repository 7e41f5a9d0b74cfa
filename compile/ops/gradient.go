package ops

// A sweep differentiates a scalar by everything it depends on, going backwards
// through the graph and adding the adjoints to it as nodes like any other
// (reverse accumulation; Griewank & Walther, Evaluating Derivatives, 2008,
// chapter 3). Hash-consing shares what adjoints and values have in common.
type sweep struct {
	g        *graph
	adjoints map[id][]id // contributions, summed when a node's turn comes
}

func (s *sweep) arg(n id, i int) id { return s.g.nodes[n].args[i] }

// full gives adj the rows of n where a scalar serves all of them.
func (s *sweep) full(adj, n id) id {
	p := s.g.nodes[n].plate
	if s.g.nodes[adj].plate == p {
		return adj
	}
	return s.g.make(opMul, adj, s.g.ones(p))
}

// passGradient replaces the unit's roots by the log density and its
// derivatives by each parameter node.
func passGradient(u *unit) {
	s := &sweep{g: u.g, adjoints: map[id][]id{}}
	root := u.roots[0]
	u.roots = []id{root}
	if u.g.fixed[root] {
		return
	}
	s.adjoints[root] = []id{u.g.constant(1)}
	for n := root; n > 0; n-- {
		parts := s.adjoints[n]
		if len(parts) == 0 {
			continue
		}
		adj := parts[0]
		if len(parts) > 1 {
			adj = u.g.make(opAdd, parts...)
		}
		if u.g.nodes[n].op == opParameter {
			u.roots = append(u.roots, s.full(adj, n))
			u.into = append(u.into, u.g.nodes[n].at)
			continue
		}
		for i := range u.g.nodes[n].args {
			if a := s.arg(n, i); !u.g.fixed[a] {
				part := table[u.g.nodes[n].op].grad(s, n, adj, i)
				s.adjoints[a] = append(s.adjoints[a], s.narrowed(part, n, a))
			}
		}
	}
}

// narrowed sums a contribution of n over its rows where a is a scalar that
// served them all.
func (s *sweep) narrowed(part, n, a id) id {
	op, rows := s.g.nodes[n].op, s.g.nodes[n].plate
	if !table[op].elementwise || s.g.nodes[a].plate != Scalar || rows == Scalar {
		return part
	}
	if s.g.nodes[part].plate == Scalar {
		return s.g.make(opMul, s.g.constant(float64(s.g.rows(rows))), part)
	}
	return s.g.make(opSum, part)
}
