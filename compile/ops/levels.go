package ops

import "arrowroot/compile/kernel"

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
