package effect

import (
	"math"
	"math/rand/v2"
)

// A bench is one goroutine's work space.
type bench struct {
	*simulation
	rows     *rowset   // the simulation's, filled in by each draw where entries are missing
	unknowns []unknown // these entries
	w        *worker
	weights  [][]float64 // of rows, for targets at the level of a row and then of each plate; nil where there are none
	uniforms [][]float64 // per simulated step
	changed  [][]float64 // per step: the column under the intervention
	set      [][]float64 // per pin: the column under the intervention
	would    [][]float64 // per pin: the column as it would have been
	fitted   []float64   // the draw
	drawn    []float64   // the draw with fresh groups; nil where groups are the fitted ones
	groups   [][]float64 // uniforms, per fresh vector: of each level one for each replicate
	part     []float64
	sides    [][]float64 // a round's averages, by arm
	plain    [][]float64 // likewise, without mirror images
}

func newBench(s *simulation) *bench {
	b := &bench{simulation: s, unknowns: s.rows.unknowns(s.resolver), weights: make([][]float64, 1+len(s.m.Plates))}
	b.rows = s.rows.own(b.unknowns)
	b.w = newWorker(b.rows, s.slots)
	for k, pin := range s.plan.pins {
		b.set = append(b.set, make([]float64, s.rows.n))
		b.would = append(b.would, nil)
		for i := range b.set[k] {
			b.set[k][i] = pin.at
		}
	}
	for _, f := range s.fresh {
		b.groups = append(b.groups, make([]float64, f.size*s.replicates()))
	}
	for _, st := range s.plan.steps {
		b.changed = append(b.changed, make([]float64, s.rows.n))
		n := s.rows.n
		if st.law != nil && st.law.Plate >= 0 {
			n = len(s.m.Plates[st.law.Plate].Levels)
		}
		b.uniforms = append(b.uniforms, make([]float64, n))
	}
	b.weights[0] = make([]float64, s.rows.n)
	for _, t := range s.plan.targets {
		if at := 1 + s.m.Variables[t.variable].Plate; b.weights[at] == nil {
			b.weights[at] = make([]float64, s.rows.n)
		}
	}
	k := s.plan.parts
	b.part = make([]float64, k)
	for range s.arms {
		b.sides = append(b.sides, make([]float64, k))
		b.plain = append(b.plain, make([]float64, k))
	}
	return b
}

// round adds one round of draw i: all arms, with the same uniforms and, if asked
// for, with their mirror images (antithetic variates), which cancel what is
// linear in the noise of mediators. Where groups are drawn anew a round has
// several replicates, over which the effects of each group are stratified.
func (b *bench) round(i, round int) {
	b.fitted = b.draws[b.picked[i]]
	b.w.draw = b.fitted
	b.rows.fill(b.unknowns, b.fitted)
	b.weigh(b.seeds[i])
	for a := range b.sides {
		clear(b.sides[a])
		clear(b.plain[a])
	}
	var rng *rand.Rand
	if b.chance() {
		rng = rand.New(rand.NewPCG(b.seeds[i], uint64(round)+1))
	}
	n := b.replicates()
	for _, u := range b.groups {
		for level := range len(u) / n {
			stratified(u[level*n:(level+1)*n], rng)
		}
	}
	for replicate := range n {
		if rng != nil {
			for _, u := range b.uniforms {
				stratified(u, rng)
			}
		}
		b.replicate(replicate)
	}
	k := len(b.part)
	for a := range b.sides {
		for j, x := range b.sides[a] {
			b.sums[(len(b.arms)*i+a)*k+j] += x
		}
	}
	if b.summary != nil {
		b.rounds[i*b.perDraw+round] = b.summary(b.sides)
	}
	if b.simulation.plain != nil {
		at := b.simulation.plain[(i*b.perDraw+round)*(1+len(b.arms)):]
		at[0] = b.summary(b.plain)
		for a := range b.plain {
			at[1+a] = b.plain[a][0]
		}
	}
}

// replicate adds one set of uniforms to the round.
func (b *bench) replicate(which int) {
	share := 1 / float64(b.replicates())
	for a, arm := range b.arms {
		if b.plan.exposure != none {
			arm.apply(b.set[0], b.rows.columns[b.plan.exposure])
		}
		for mirror := range b.mirrors {
			if len(b.fresh) > 0 {
				b.regroup(which, mirror == 1)
			}
			b.expect(mirror == 1)
			for k, x := range b.part {
				b.sides[a][k] += x * share / float64(b.mirrors)
				if mirror == 0 {
					b.plain[a][k] += x * share
				}
			}
		}
	}
}

// stratified fills u with uniform numbers, one in each of len(u) equal strata,
// in random order (Latin hypercube: McKay, Beckman & Conover 1979): averages
// over rows that resemble each other then hardly depend on chance.
func stratified(u []float64, rng *rand.Rand) {
	for j := range u {
		k := rng.IntN(j + 1)
		u[j] = u[k]
		u[k] = float64(j)
	}
	n := float64(len(u))
	for j, stratum := range u {
		u[j] = math.Min((stratum+open(rng))/n, 1-0x1p-53)
	}
}

// open is a uniform number strictly between 0 and 1.
func open(rng *rand.Rand) float64 { return (float64(rng.Uint64()>>11) + 0.5) / (1 << 53) }

// expect fills part with the targets' averages under the columns that are set.
func (b *bench) expect(mirrored bool) {
	w, p := b.w, b.plan
	copy(w.columns, b.rows.columns)
	for k, pin := range p.pins {
		b.would[k] = b.rows.columns[pin.variable]
	}
	for i, st := range p.steps {
		b.look(st.variable)
		if st.law == nil {
			values := w.eval(st.computed)
			for j := range b.changed[i] {
				b.changed[i][j] = at(values, j)
			}
		} else {
			w.simulate(b.changed[i], st.law, b.uniforms[i], mirrored)
		}
		if k := p.pinned(st.variable); k >= 0 {
			b.would[k] = b.changed[i]
		} else {
			w.columns[st.variable] = b.changed[i]
		}
	}
	for _, t := range p.targets {
		weights := b.weights[1+b.m.Variables[t.variable].Plate]
		part := b.part[t.at : t.at+t.scale.parts()]
		b.look(t.variable)
		if t.computed != nil {
			averageOf(part, w.eval(t.computed), weights)
			continue
		}
		w.expected(part, t.law, t.scale, weights)
	}
}

// look shows a law what it reads of the variables that are set: the value they
// are set to, or the one they would have had.
func (b *bench) look(variable int) {
	for k, pin := range b.plan.pins {
		b.w.columns[pin.variable] = b.set[k]
		if pin.observed[variable] {
			b.w.columns[pin.variable] = b.would[k]
		}
	}
}
