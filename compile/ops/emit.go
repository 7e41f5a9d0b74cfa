package ops

import (
	"cmp"
	"maps"
	"slices"

	"arrowroot/compile/kernel"
)

// A stageKey names a stage; the plate of a whole one is Scalar.
type stageKey struct {
	level int
	plate Plate
}

// compare orders stages: by level, the whole stage of a level last.
func (k stageKey) compare(other stageKey) int {
	whole := func(k stageKey) int {
		if k.plate == Scalar {
			return 1
		}
		return 0
	}
	return cmp.Or(cmp.Compare(k.level, other.level), cmp.Compare(whole(k), whole(other)), cmp.Compare(k.plate, other.plate))
}

// stage makes the stages, gives every value a place and writes the
// instructions.
func (p *planner) stage(roots []id) {
	isRoot := make([]bool, len(p.g.nodes))
	for _, r := range roots {
		isRoot[r] = true
	}
	members := map[stageKey][]id{}
	for i := range p.g.nodes {
		n := id(i)
		if !p.live[n] || p.source(n) || p.g.nodes[n].op == opPartial {
			continue
		}
		k := stageKey{level: p.level[n]}
		if p.blocked(n) {
			k.plate = p.g.domain(n)
		}
		members[k] = append(members[k], n)
	}
	keys := slices.SortedFunc(maps.Keys(members), stageKey.compare)
	for _, k := range keys {
		st := stage{level: k.level, plate: k.plate, rows: p.g.rows(k.plate)}
		groups := p.dots(members[k])
		if k.plate == Scalar {
			for _, group := range groups {
				for _, v := range p.results(group) {
					p.own(v)
				}
				st.instrs = append(st.instrs, p.instr(group))
			}
		} else {
			st.instrs = p.blockedInstrs(groups, isRoot)
		}
		p.stages = append(p.stages, st)
	}
}

// results lists the values that an instruction makes.
func (p *planner) results(group []id) []id {
	out := slices.Clone(group)
	for _, n := range group {
		for _, v := range p.partials[n] {
			if v != 0 {
				out = append(out, v)
			}
		}
	}
	return out
}

// dots puts sums and dot products over the same rows that share a factor
// together, the sum first, behind everything else: nothing in their stage
// reads them if it is blocked. In a whole stage all stay where they are.
func (p *planner) dots(members []id) [][]id {
	var groups, last [][]id
	at := map[id]int{}
	for _, n := range members {
		nd := &p.g.nodes[n]
		if !p.blocked(n) || nd.op != opSum && nd.op != opDot {
			groups = append(groups, []id{n})
			continue
		}
		shared := nd.args[0]
		i, known := at[shared]
		switch {
		case !known:
			at[shared] = len(last)
			last = append(last, []id{n})
		case nd.op == opSum:
			last[i] = append([]id{n}, last[i]...)
		default:
			last[i] = append(last[i], n)
		}
	}
	return append(groups, last...)
}

// blockedInstrs writes a blocked stage. A value that only this stage reads
// lies in a block, which a later value takes over after the last reader.
func (p *planner) blockedInstrs(groups [][]id, isRoot []bool) []instr {
	turn := map[id]int{}
	for t, group := range groups {
		for _, v := range p.results(group) {
			turn[v] = t
		}
	}
	release := make([][]int32, len(groups))
	var free []int32
	var instrs []instr
	for t, group := range groups {
		for _, v := range p.results(group) {
			last, stays := t, !isRoot[v] && p.g.nodes[v].plate == p.g.domain(v) && !table[p.g.nodes[v].op].adds
			for _, r := range p.readers[v] {
				when, here := turn[r]
				stays = stays && here
				last = max(last, when)
			}
			if !stays {
				p.own(v)
				continue
			}
			if len(free) == 0 {
				p.slots = append(p.slots, place{from: fromArena, start: p.arena, n: kernel.BlockRows})
				p.arena += kernel.BlockRows
				free = append(free, int32(len(p.slots)-1))
			}
			p.slot[v] = free[len(free)-1]
			free = free[:len(free)-1]
			release[last] = append(release[last], p.slot[v])
		}
		instrs = append(instrs, p.instr(group))
		free = append(free, release[t]...)
	}
	return instrs
}

// own gives a value memory of its own, for all its rows.
func (p *planner) own(n id) {
	nd := &p.g.nodes[n]
	rows := p.g.rows(nd.plate)
	s := place{from: fromArena, start: p.arena, n: rows, mask: -1, one: nd.plate == Scalar}
	if p.total(n) {
		s.from, s.start = fromTotals, p.totals
		p.totals += rows
	} else {
		p.arena += rows
	}
	p.slots = append(p.slots, s)
	p.slot[n] = int32(len(p.slots) - 1)
}

// total tells whether a value is added up over blocks.
func (p *planner) total(n id) bool {
	nd := &p.g.nodes[n]
	return table[nd.op].adds || nd.op == opPartial && nd.plate == Scalar
}

// slotOf is the slot of a value that is there: a source gets one now.
func (p *planner) slotOf(n id) int32 {
	if p.slot[n] >= 0 {
		return p.slot[n]
	}
	nd := &p.g.nodes[n]
	s := place{mask: -1, one: nd.plate == Scalar, n: p.g.rows(nd.plate)}
	switch nd.op {
	case opParameter:
		s.from, s.start = fromQ, nd.at
	case opConst:
		s.data = []float64{nd.c}
	case opData:
		s.data = nd.data
	default:
		panic("ops: " + table[nd.op].name + " is read before it is made")
	}
	p.slots = append(p.slots, s)
	p.slot[n] = int32(len(p.slots) - 1)
	return p.slot[n]
}

// instr writes the instruction of a group: one node, or dots.
func (p *planner) instr(group []id) instr {
	n := group[0]
	nd := &p.g.nodes[n]
	in := instr{id: n, more: p.results(group)[1:], node: nd, run: table[nd.op].run, rows: p.g.rows(p.g.domain(n)), dst: p.slot[n]}
	for _, a := range nd.args {
		in.args = append(in.args, p.slotOf(a))
	}
	switch {
	case len(group) > 1:
		in.run = runDots
		for _, d := range group {
			other := int32(-1)
			if p.g.nodes[d].op == opDot {
				other = p.slotOf(p.g.nodes[d].args[1])
			} else {
				in.hasSum = true
			}
			in.shared = append(in.shared, other)
			in.sums = append(in.sums, p.slot[d])
		}
	case nd.op == opAffine:
		in.affine = p.affine(nd, in.args)
	case nd.op == opDensity:
		p.density(&in)
	}
	return in
}

func (p *planner) affine(nd *node, args []int32) affinePlan {
	var plan affinePlan
	at := func(i int) int32 {
		if i < 0 {
			return -1
		}
		return args[i]
	}
	for _, t := range nd.terms {
		switch {
		case t.x < 0:
			plan.scalars = append(plan.scalars, at(t.scale))
		case t.index == nil && t.w < 0:
			plan.plain = append(plan.plain, factorPair{at(t.scale), at(t.x)})
		default:
			plan.others = append(plan.others, product{at(t.scale), at(t.x), at(t.w), t.index})
		}
	}
	return plan
}

func (p *planner) density(in *instr) {
	nd := in.node
	in.call = len(p.calls)
	p.calls = append(p.calls, len(nd.args))
	in.partials = make([]int32, len(nd.args))
	in.added = make([]bool, len(nd.args))
	for i := range nd.args {
		in.partials[i] = -1
		if of := p.partials[in.id]; of != nil && of[i] != 0 {
			in.partials[i] = p.slot[of[i]]
			in.added[i] = p.total(of[i])
		}
	}
	if in.aux = nd.data; in.aux != nil || nd.kernel.Prepare == nil {
		return
	}
	y := p.numbers(nd.args[0])
	if y == nil {
		return
	}
	args := make([][]float64, len(nd.args)-1)
	for i, a := range nd.args[1:] {
		args[i] = p.numbers(a)
	}
	in.aux = nd.kernel.Prepare(y, args)
	in.auxByRow = len(in.aux) == in.rows && in.rows > 1
}

// numbers are those of a value that is data, nil for others.
func (p *planner) numbers(n id) []float64 {
	switch nd := &p.g.nodes[n]; nd.op {
	case opConst:
		return []float64{nd.c}
	case opData:
		return nd.data
	}
	return nil
}
