package ops

import (
	"cmp"
	"slices"

	"arrowroot/compile/kernel"
)

// A schedule is the order in which a graph is evaluated, and where each value
// lies. It never changes.
//
// Work comes in stages. A blocked stage belongs to one plate of more than
// BlockRows rows and runs all its instructions on one block of rows before it
// goes to the next, so that what passes between them stays in the cache. A
// whole stage runs its instructions once each: scalars, small plates, and
// operations that need their arguments complete. Level 0 is a whole stage;
// then, level by level, the blocked stages come before the whole one. A node
// is on the lowest level where what it needs is there: rows from the same
// blocked stage are, while complete columns and totals of a blocked stage are
// there for the whole stage of its level, and results of a whole stage for
// the blocked stages of the next level.
type schedule struct {
	g      *graph
	stages []stage
	slots  []place
	roots  []int32 // slots
	into   []int   // for a gradient: offset of roots[i+1]

	dim           int
	totals, arena int   // numbers: added up over blocks; all other values
	calls         []int // values of each density
}

type stage struct {
	level  int
	plate  Plate // Scalar for a whole stage
	rows   int
	instrs []instr
}

// An instr is one instruction.
type instr struct {
	run  func(f *frame, in *instr)
	id   id
	more []id // other values that it makes
	node *node
	rows int // of the domain, for a whole stage
	dst  int32
	args []int32

	affine affinePlan // Affine
	shared []int32    // dots: the other factors, -1 for the sum
	sums   []int32    // dots: the totals
	hasSum bool       // dots: the first is the sum

	// Density
	call     int
	partials []int32 // slot of the derivative by each value, -1 if not wanted
	added    []bool  // that slot is a total
	aux      []float64
	auxByRow bool
}

// A place says where a slot's numbers come from.
type place struct {
	from  source
	start int
	n     int
	data  []float64
	mask  int
	one   bool
}

type source uint8

const (
	fromData   source = iota
	fromQ             // the position
	fromTotals        // cleared before each evaluation
	fromArena
)

// frame makes work space.
func (s *schedule) frame() *frame {
	f := &frame{
		s:       s,
		slots:   make([]slot, len(s.slots)),
		q:       make([]float64, s.dim),
		totals:  make([]float64, s.totals),
		scratch: make([]float64, scratchLen),
		calls:   make([]call, len(s.calls)),
	}
	arena := make([]float64, s.arena)
	memory := [...][]float64{fromQ: f.q, fromTotals: f.totals, fromArena: arena}
	for i, p := range s.slots {
		f.slots[i] = slot{base: p.data, mask: p.mask, one: p.one}
		if p.from != fromData {
			f.slots[i].base = memory[p.from][p.start : p.start+p.n : p.start+p.n]
		}
	}
	for i, n := range s.calls {
		f.calls[i] = call{make([][]float64, n), make([][]float64, n)}
	}
	return f
}

// scratchLen is what the kernels' contract promises them.
const scratchLen = 4 * kernel.BlockRows

// A planner makes a schedule.
type planner struct {
	*schedule
	live     []bool
	readers  [][]id // of each node; those of a Partial are readers of its density's stage
	level    []int
	slot     []int32
	partials map[id][]id // of a density, by argument; 0 = not wanted
}

// plan schedules what roots need.
func plan(g *graph, roots []id, into []int, dim int) *schedule {
	p := &planner{
		schedule: &schedule{g: g, into: into, dim: dim},
		live:     g.live(roots),
		readers:  make([][]id, len(g.nodes)),
		level:    make([]int, len(g.nodes)),
		slot:     make([]int32, len(g.nodes)),
		partials: map[id][]id{},
	}
	for i := range p.slot {
		p.slot[i] = -1
	}
	p.read()
	p.levels()
	p.sink()
	p.stage(roots)
	for _, r := range roots {
		p.roots = append(p.roots, p.slotOf(r))
	}
	return p.schedule
}

// read collects the readers of each node and the partials of each density.
func (p *planner) read() {
	for i := range p.g.nodes {
		if !p.live[i] {
			continue
		}
		n := &p.g.nodes[i]
		for _, a := range n.args {
			p.readers[a] = append(p.readers[a], id(i))
		}
		if n.op == opPartial {
			d := n.args[0]
			if p.partials[d] == nil {
				p.partials[d] = make([]id, len(p.g.nodes[d].args))
			}
			p.partials[d][n.at] = id(i)
		}
	}
}

// source tells whether a node is there from the start.
func (p *planner) source(n id) bool {
	return p.g.nodes[n].op == opParameter || p.g.nodes[n].op == opConst || p.g.nodes[n].op == opData
}

// domain is the plate whose rows an operation goes through.
func (g *graph) domain(n id) Plate {
	nd := &g.nodes[n]
	switch nd.op {
	case opSumOver, opSum:
		return g.nodes[nd.args[0]].plate
	case opDensity, opDot, opSumOverDot:
		p, _ := joined(g, nd)
		return p
	case opPartial:
		return g.domain(nd.args[0])
	}
	return nd.plate
}

// blocked tells whether a node belongs in a blocked stage.
func (p *planner) blocked(n id) bool {
	nd := &p.g.nodes[n]
	return !p.source(n) && !table[nd.op].whole && p.g.rows(p.g.domain(n)) > kernel.BlockRows
}

// byRow tells whether reader needs of its argument a only the rows in hand.
func (p *planner) byRow(reader, a id) bool {
	n := &p.g.nodes[reader]
	made := &table[p.g.nodes[a].op]
	if p.g.nodes[a].plate != p.g.domain(reader) || table[n.op].whole || made.whole || made.adds {
		return false
	}
	switch n.op {
	case opGather:
		return false
	case opPartial:
		return true
	case opAffine:
		for _, t := range n.terms {
			if t.index != nil && n.args[t.x] == a {
				return false
			}
		}
	}
	return true
}

// levels gives each node the lowest level it can have.
func (p *planner) levels() {
	for i := range p.g.nodes {
		n := id(i)
		if !p.live[n] || p.source(n) {
			continue
		}
		blocked := p.blocked(n)
		level := 0
		if blocked {
			level = 1
		}
		if p.g.nodes[n].op == opPartial {
			p.level[n] = p.level[p.g.nodes[n].args[0]]
			continue
		}
		for _, a := range p.g.nodes[n].args {
			if p.source(a) {
				continue
			}
			l := p.level[a]
			if blocked && !(p.blocked(a) && p.byRow(n, a)) {
				l++
			}
			level = max(level, l)
		}
		p.level[n] = level
	}
}

// sink moves a node of a blocked stage down to the stage of its readers where
// they all read its rows in one later stage of the same plate: its value then
// stays in a block.
func (p *planner) sink() {
	for n := id(len(p.g.nodes) - 1); n > 0; n-- {
		if !p.live[n] || !p.blocked(n) || p.g.nodes[n].op == opPartial || p.g.nodes[n].op == opDensity || len(p.readers[n]) == 0 {
			continue
		}
		lowest := -1
		for _, r := range p.readers[n] {
			if !p.blocked(r) || !p.byRow(r, n) || p.g.domain(r) != p.g.domain(n) {
				lowest = -1
				break
			}
			if lowest < 0 || p.level[r] < lowest {
				lowest = p.level[r]
			}
		}
		if lowest > p.level[n] {
			p.level[n] = lowest
		}
	}
}

// stage makes the stages, gives every value a place and writes the
// instructions.
func (p *planner) stage(roots []id) {
	isRoot := make([]bool, len(p.g.nodes))
	for _, r := range roots {
		isRoot[r] = true
	}
	type stageKey struct {
		level int
		whole bool
		plate Plate
	}
	members := map[stageKey][]id{}
	for i := range p.g.nodes {
		n := id(i)
		if !p.live[n] || p.source(n) || p.g.nodes[n].op == opPartial {
			continue
		}
		k := stageKey{level: p.level[n], whole: true}
		if p.blocked(n) {
			k = stageKey{level: p.level[n], plate: p.g.domain(n)}
		}
		members[k] = append(members[k], n)
	}
	var keys []stageKey
	for k := range members {
		keys = append(keys, k)
	}
	slices.SortFunc(keys, func(a, b stageKey) int {
		if c := cmp.Compare(a.level, b.level); c != 0 {
			return c
		}
		if a.whole != b.whole {
			if a.whole {
				return 1
			}
			return -1
		}
		return cmp.Compare(a.plate, b.plate)
	})
	for _, k := range keys {
		st := stage{level: k.level, plate: k.plate, rows: p.g.rows(k.plate)}
		groups := p.dots(members[k])
		if k.whole {
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
