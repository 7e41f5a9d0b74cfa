package ops

// fold evaluates what depends on data alone, once, with the executor that also
// runs the program, and puts Data and Const in its place.
func fold(u *unit) {
	// The last nodes that are fixed: those that something else reads.
	wanted := make([]bool, len(u.g.nodes))
	source := func(n id) bool { o := u.g.nodes[n].op; return o == opConst || o == opData }
	live := u.g.live(u.roots)
	for i := range u.g.nodes {
		if !live[i] || u.g.fixed[i] {
			continue
		}
		for _, a := range u.g.nodes[i].args {
			wanted[a] = u.g.fixed[a] && !source(a)
		}
	}
	for _, r := range u.roots {
		wanted[r] = u.g.fixed[r] && !source(r)
	}
	var last []id
	for i, ok := range wanted {
		if ok {
			last = append(last, id(i))
		}
	}
	if len(last) == 0 {
		return
	}
	f := plan(u.g, last, nil, 0).frame()
	f.run(nil)
	folded := map[id][]float64{}
	for i, n := range last {
		folded[n] = append([]float64(nil), f.root(i)...)
	}
	u.rewrite(func(next *graph, old id, n node) id {
		v, ok := folded[old]
		switch {
		case !ok:
			return next.add(n)
		case n.plate == Scalar:
			return next.constant(v[0])
		}
		return next.column(n.plate, v)
	})
}
