package causal

import (
	"math"
	"math/rand/v2"
	"testing"

	"arrowroot/compile/graph"
)

// A joint is an exact distribution of binary variables: bit v of the index is
// the value of node v.
type joint []float64

// among gives the probability that v is 1 among states that agree with at on a set of bits.
func (p joint) among(v int, at, bits int) float64 {
	one, all := 0.0, 0.0
	for s, w := range p {
		if (s^at)&bits == 0 {
			all += w
			if s>>v&1 == 1 {
				one += w
			}
		}
	}
	return one / all
}

// pin is the exact outcome of simulating fitted laws with x pinned: the rows
// are p itself, what precedes x keeps the row's value.
func (p joint) pin(g *graph.Graph, laws []Fitted, x, value, y int, c Case, district []int) float64 {
	below := g.Descendants(x)
	keeps := 0
	for v := range below {
		if !below[v] || v == x {
			keeps |= 1 << v
		}
	}
	reads := mark(g.Len(), nil)
	if c == ObservedForDistrict {
		reads = mark(g.Len(), district)
	}
	rows := make(joint, len(p)) // by what rows keep, the observed x included
	for s, w := range p {
		rows[s&keeps] += w
	}
	expected := 0.0
	for row, w := range rows {
		if w == 0 {
			continue
		}
		var follow func(i, state int) float64
		follow = func(i, state int) float64 {
			if i == len(laws) {
				return float64(state >> y & 1)
			}
			v := laws[i].Node
			bits := 0
			for _, q := range laws[i].conditions() {
				bits |= 1 << q
			}
			at := state
			if reads[v] {
				at = at&^(1<<x) | row&(1<<x)
			}
			one := p.among(v, at, bits)
			return one*follow(i+1, state|1<<v) + (1-one)*follow(i+1, state&^(1<<v))
		}
		expected += w * follow(0, row&^(1<<x)|value<<x)
	}
	return expected
}

// Table 3.1 of Pearl, Causality (2nd ed., 2009), from memory, arithmetic
// rechecked: smoking, tar, cancer. The answers stand in the text, p. 84, from
// memory; the crude ones follow from the table.
func TestFrontDoorTable(t *testing.T) {
	g, err := graph.New(graph.Spec{
		Names:  []string{"smoking", "tar", "cancer"},
		Arrows: [][2]int{{0, 1}, {1, 2}},
		Arcs:   [][2]int{{0, 2}},
	})
	if err != nil {
		t.Fatal(err)
	}
	const smoking, tar, cancer = 0, 1, 2
	p := make(joint, 8)
	for at, cell := range map[int][2]float64{0b00: {.475, .10}, 0b01: {.025, .90}, 0b10: {.025, .05}, 0b11: {.475, .85}} {
		p[at], p[at|1<<cancer] = cell[0]*(1-cell[1]), cell[0]*cell[1]
	}
	c, district, _ := InterventionCase(g, smoking, cancer)
	if c != ObservedForDistrict || len(district) != 1 || district[0] != cancer {
		t.Fatalf("case %v, district %v", c, district)
	}
	drawnOnly := []Fitted{{Node: tar, Parents: []int{smoking}}, {Node: cancer, Parents: []int{tar}}}
	laws := onlyBelow(g, CarriersFor(g, smoking, cancer), smoking)
	for _, check := range []struct {
		what          string
		laws          []Fitted
		c             Case
		with, without float64
	}{
		{"rule (b)", laws, c, .4525, .4975},
		{"carriers, pinned", laws, PinAndSimulate, .8525, .0975},
		{"drawn laws", drawnOnly, PinAndSimulate, .7765, .1735},
	} {
		with := p.pin(g, check.laws, smoking, 1, cancer, check.c, district)
		without := p.pin(g, check.laws, smoking, 0, cancer, check.c, district)
		if math.Abs(with-check.with) > 1e-4 || math.Abs(without-check.without) > 1e-4 {
			t.Errorf("%s: %.4f and %.4f, want %.4f and %.4f", check.what, with, without, check.with, check.without)
		}
	}
}

// The same rule on random binary models, against the truncated factorisation.
func TestCasesInBinaryModels(t *testing.T) {
	r := rand.New(rand.NewPCG(8, 2026))
	var byCase [3]int
	carriers := 0
	for byCase[PinAndSimulate] < 300 || byCase[ObservedForDistrict] < 30 {
		s := sketch{nodes: 3 + r.IntN(3), arrows: 0.2 + 0.4*r.Float64(), unmeasured: 0.3, arcs: 0.25 * r.Float64()}
		g := s.draw(t, r)
		const x, y = 0, 1
		if !newComparison(g, []int{x}, []int{y}).effect() || g.Len()+len(g.Arcs) > 9 {
			continue
		}
		c, district, _ := InterventionCase(g, x, y)
		byCase[c]++
		if c == NotSimulated {
			continue
		}
		named, _ := nameArcs(g)
		law := make([]map[int]float64, named.Len()) // chance of 1 by state of the parents
		for v := range law {
			law[v] = map[int]float64{}
		}
		chance := func(v, state int) float64 {
			bits := 0
			for _, q := range named.Parents[v] {
				bits |= state & (1 << q)
			}
			if _, known := law[v][bits]; !known {
				law[v][bits] = 0.1 + 0.8*r.Float64()
			}
			return law[v][bits]
		}
		weight := func(state, pinned int) float64 {
			w := 1.0
			for v := range named.Len() {
				if v == pinned {
					continue
				}
				if one := chance(v, state); state>>v&1 == 1 {
					w *= one
				} else {
					w *= 1 - one
				}
			}
			return w
		}
		p, truth := make(joint, 1<<g.Len()), [2]float64{}
		hidden := 0
		for v, m := range g.Measured {
			if !m {
				hidden |= 1 << v
			}
		}
		for state := range 1 << named.Len() {
			p[state&(1<<g.Len()-1)&^hidden] += weight(state, -1)
			if state>>y&1 == 1 {
				truth[state>>x&1] += weight(state, x)
			}
		}
		earlier := 0
		for _, f := range CarriersFor(g, x, y) { // given its carriers, a variable is unrelated to all that is earlier
			for at := range 1 << g.Len() {
				if got, want := p.among(f.Node, at, bitsOf(f.conditions())), p.among(f.Node, at, earlier); math.Abs(got-want) > 1e-9 && at&hidden == 0 {
					t.Fatalf("%s: the law of %d given %v: %g, given all that is earlier: %g", describe(g), f.Node, f.conditions(), got, want)
				}
			}
			earlier |= 1 << f.Node
			carriers++
		}
		laws := onlyBelow(g, CarriersFor(g, x, y), x)
		for value := range 2 {
			if got := p.pin(g, laws, x, value, y, c, district); math.Abs(got-truth[value]) > 1e-9 {
				t.Fatalf("%s: case %d, pinned at %d: %g, truth %g", describe(g), c, value, got, truth[value])
			}
		}
	}
	if byCase[0]+byCase[1] < 1000 {
		t.Errorf("only %v diagrams", byCase)
	}
	t.Logf("cases a %d, b %d, c %d; %d laws with carriers", byCase[0], byCase[1], byCase[2], carriers)
}
