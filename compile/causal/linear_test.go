package causal

import (
	"math"
	"math/rand/v2"
	"slices"
	"testing"

	"arrowroot/compile/graph"
)

// Everything here is checked against the population covariance of a linear
// structural model drawn at random over the graph: V = B V + e with
// independent e, so that covariances and total effects are exact
// ("common practice, no source"; Wright 1934 for the path rules).

// linear is such a model; a node stands behind every arc.
type linear struct {
	total [][]float64 // [v][w]: what one unit of w's error does to v
	cov   [][]float64
}

func drawLinear(g *graph.Graph, r *rand.Rand) *linear {
	named, _ := nameArcs(g)
	n := named.Len()
	m := &linear{total: make([][]float64, n), cov: make([][]float64, n)}
	spread := make([]float64, n)
	for _, v := range named.Order {
		m.total[v] = make([]float64, n)
		m.total[v][v] = 1
		for _, p := range named.Parents[v] {
			b := 0.3 + 1.2*r.Float64()
			if r.IntN(2) == 0 {
				b = -b
			}
			for w, t := range m.total[p] {
				m.total[v][w] += b * t
			}
		}
		if !named.Computed[v] {
			spread[v] = 0.5 + 1.5*r.Float64()
		}
	}
	for v := range n {
		m.cov[v] = make([]float64, n)
		for w := range n {
			for e := range n {
				m.cov[v][w] += m.total[v][e] * spread[e] * m.total[w][e]
			}
		}
	}
	return m
}

// regress gives the population coefficients of v on the nodes of on. Nodes
// that earlier ones determine get 0.
func (m *linear) regress(v int, on []int) []float64 {
	k := len(on)
	a := make([][]float64, k)
	for i, p := range on {
		a[i] = make([]float64, k+1)
		for j, q := range on {
			a[i][j] = m.cov[p][q]
		}
		a[i][k] = m.cov[p][v]
	}
	used := make([]bool, k)
	for i := range k { // symmetric elimination keeps the diagonal as pivot
		if a[i][i] < 1e-9 {
			continue
		}
		used[i] = true
		for j := range k {
			if j != i {
				f := a[j][i] / a[i][i]
				for c := i; c <= k; c++ {
					a[j][c] -= f * a[i][c]
				}
			}
		}
	}
	b := make([]float64, k)
	for i := range k {
		if used[i] {
			b[i] = a[i][k] / a[i][i]
		}
	}
	return b
}

func near(a, b float64) bool { return math.Abs(a-b) < 1e-7*(1+math.Abs(a)+math.Abs(b)) }

// conditions lists all that a fitted law conditions on.
func (f *Fitted) conditions() []int {
	on := slices.Clone(f.Parents)
	for _, c := range f.Carried {
		on = append(on, c.Node)
	}
	slices.Sort(on)
	return on
}

// simulate is the change of y per unit of x in the fitted laws under the case.
func (m *linear) simulate(laws []Fitted, x, y int, c Case, district []int) float64 {
	change := map[int]float64{x: 1}
	for i := range laws {
		v := laws[i].Node
		on := laws[i].conditions()
		moved := slices.ContainsFunc(on, func(p int) bool { return change[p] != 0 })
		if !moved {
			continue
		}
		for j, b := range m.regress(v, on) {
			if on[j] == x && c == ObservedForDistrict && slices.Contains(district, v) {
				continue // reads what was observed, which the pinning leaves alone
			}
			change[v] += b * change[on[j]]
		}
	}
	return change[y]
}

// onlyBelow keeps the laws of what the exposure acts on: earlier variables keep their values.
func onlyBelow(g *graph.Graph, laws []Fitted, x int) []Fitted {
	below := g.Descendants(x)
	return slices.DeleteFunc(slices.Clone(laws), func(f Fitted) bool { return !below[f.Node] || f.Node == x })
}

func TestCarriersInLinearModels(t *testing.T) {
	r := rand.New(rand.NewPCG(5, 2026))
	var diagrams, laws, drawnWrong, cases int
	var byCase [3]int
	var plainWrong, pinnedWrong int
	for diagrams < 3000 {
		s := sketch{nodes: 3 + r.IntN(6), arrows: 0.2 + 0.4*r.Float64(), unmeasured: 0.2 + 0.3*r.Float64(), arcs: 0.1 * r.Float64()}
		g := s.draw(t, r)
		x, y := 0, 1
		if !newComparison(g, []int{x}, []int{y}).effect() {
			continue
		}
		diagrams++
		m := drawLinear(g, r)
		for _, fitted := range [][]Fitted{Carriers(g, x), CarriersFor(g, x, y)} {
			var earlier []int
			for i := range fitted {
				f := &fitted[i]
				on := f.conditions()
				if !within(on, earlier) {
					t.Fatalf("%s: the law of %d conditions on %v before they are there", describe(g), f.Node, minus(on, earlier))
				}
				full, short := m.regress(f.Node, earlier), m.regress(f.Node, on)
				for k, p := range earlier {
					want := 0.0
					if at := slices.Index(on, p); at >= 0 {
						want = short[at]
					}
					if !near(full[k], want) {
						t.Fatalf("%s: given its carriers %v, %d still depends on %d", describe(g), on, f.Node, p)
					}
				}
				laws++
				bare := m.regress(f.Node, f.Parents)
				for k, p := range f.Parents {
					if !near(bare[k], full[slices.Index(earlier, p)]) {
						drawnWrong++
						break
					}
				}
				earlier = append(earlier, f.Node)
			}
		}

		c, district, reason := InterventionCase(g, x, y)
		byCase[c]++
		if reason == "" {
			t.Fatalf("%s: no reason", describe(g))
		}
		if c == NotSimulated {
			continue
		}
		if !Identifiable(g, x, y) {
			t.Fatalf("%s: simulated, yet not identifiable", describe(g))
		}
		cases++
		truth := m.total[y][x]
		if got := m.simulate(onlyBelow(g, CarriersFor(g, x, y), x), x, y, c, district); !near(got, truth) {
			t.Fatalf("%s: case %d, simulated effect %g, truth %g", describe(g), c, got, truth)
		}
		if got := m.simulate(onlyBelow(g, Carriers(g, x), x), x, y, c, district); !near(got, truth) {
			plainWrong++
		}
		if got := m.simulate(onlyBelow(g, CarriersFor(g, x, y), x), x, y, PinAndSimulate, nil); !near(got, truth) {
			pinnedWrong++
		}
	}
	if pinnedWrong == 0 || byCase[ObservedForDistrict] == 0 {
		t.Errorf("rule (b) was never needed")
	}
	t.Logf("%d diagrams, %d laws (drawn parents alone wrong in %d); cases a %d, b %d, c %d; right in %d of %d",
		diagrams, laws, drawnWrong, byCase[0], byCase[1], byCase[2], cases, cases)
	t.Logf("without the outcome's ancestors first: wrong in %d; without rule (b): wrong in %d", plainWrong, pinnedWrong)
}

// A set is valid exactly when the regression coefficient is the effect, in a
// model whose coefficients were drawn at random.
func TestAdjustmentInLinearModels(t *testing.T) {
	r := rand.New(rand.NewPCG(6, 2026))
	var sets int
	for range rounds(1000, 10000) {
		s := sketch{nodes: 3 + r.IntN(5), arrows: 0.2 + 0.5*r.Float64(), unmeasured: 0.3 * r.Float64(), arcs: 0.2 * r.Float64()}
		g := s.draw(t, r)
		x, y := 0, 1
		m := drawLinear(g, r)
		var candidates []int
		for v := 2; v < g.Len(); v++ {
			if g.Measured[v] {
				candidates = append(candidates, v)
			}
		}
		for bits := range 1 << len(candidates) {
			z := subset(candidates, bits)
			sets++
			right := near(m.regress(y, append([]int{x}, z...))[0], m.total[y][x])
			if got := ValidAdjustment(g, x, y, z); got != right {
				t.Fatalf("%s: %v valid: got %v, want %v", describe(g), z, got, right)
			}
		}
	}
	t.Logf("%d sets", sets)
}

// With computed nodes the covariance is singular; what is separated must still
// be uncorrelated, and a set called valid must still give the effect.
func TestComputedInLinearModels(t *testing.T) {
	r := rand.New(rand.NewPCG(7, 2026))
	var byTrial, separations int
	for range rounds(2000, 20000) {
		s := sketch{nodes: 3 + r.IntN(5), arrows: 0.2 + 0.4*r.Float64(), unmeasured: 0.3 * r.Float64(), arcs: 0.1 * r.Float64(), computed: 0.4}
		g := s.draw(t, r)
		x, y := 0, 1
		m := drawLinear(g, r)
		everyone := list(everything(g))
		z := minus(subset(everyone, r.IntN(1<<g.Len())), []int{x, y})
		if Separated(g, []int{x}, []int{y}, z) {
			separations++
			b := m.regress(y, append(slices.Clone(z), x)) // x last: 0 if z determines it
			if !near(b[len(z)], 0) {
				t.Fatalf("%s: given %v, separated but related by %g", describe(g), z, b[len(z)])
			}
		}
		sets, _ := Minimal(g, x, y, nil, 1e4)
		for _, z := range sets {
			if b := m.regress(y, append(slices.Clone(z), x)); !near(b[len(z)], m.total[y][x]) {
				t.Fatalf("%s: set %v gives %g, effect %g", describe(g), z, b[len(z)], m.total[y][x])
			}
			if held := mark(g.Len(), z); slices.Equal(held, fixed(g, held)) {
				continue
			}
			byTrial++
		}
		if newComparison(g, []int{x}, []int{y}).exists(nil) != (sets != nil) {
			t.Fatalf("%s: exists disagrees with %v", describe(g), sets)
		}
	}
	t.Logf("%d separations, %d sets that fix a computed node", separations, byTrial)
}

// What is offered when no set exists gives the effect too: a front door by the
// product of coefficients, an instrument by the ratio.
func TestWaysInLinearModels(t *testing.T) {
	r := rand.New(rand.NewPCG(9, 2026))
	var doors, conditional, ratios int
	for range rounds(20000, 200000) {
		s := sketch{nodes: 4 + r.IntN(4), arrows: 0.2 + 0.4*r.Float64(), unmeasured: 0.3 * r.Float64(), arcs: 0.15 * r.Float64()}
		g := s.draw(t, r)
		const x, y = 0, 1
		pair := newComparison(g, []int{x}, []int{y})
		if !pair.effect() {
			continue
		}
		m := drawLinear(g, r)
		if f := pair.frontDoor(); f != nil {
			doors++
			if len(f.Given) > 0 {
				conditional++
			}
			if !Identifiable(g, x, y) {
				t.Fatalf("%s: a front door %v, yet not identifiable", describe(g), *f)
			}
			got := 0.0
			outer := m.regress(y, slices.Concat(f.Through, []int{x}, f.Given))
			for i, v := range f.Through {
				got += outer[i] * m.regress(v, append([]int{x}, f.Given...))[0]
			}
			if !near(got, m.total[y][x]) {
				t.Fatalf("%s: front door %v gives %g, effect %g", describe(g), *f, got, m.total[y][x])
			}
		}
		for _, z := range pair.instruments() {
			ratios++
			on := append([]int{z.Node}, z.Given...)
			if got := m.regress(y, on)[0] / m.regress(x, on)[0]; math.Abs(got-m.total[y][x]) > 1e-5*(1+math.Abs(got)) {
				t.Fatalf("%s: instrument %v gives %g, effect %g", describe(g), z, got, m.total[y][x])
			}
		}
	}
	t.Logf("%d front doors, %d of them given something; %d instruments", doors, conditional, ratios)
}
