package causal

import (
	"fmt"
	"math/rand/v2"
	"slices"
	"testing"

	"arrowroot/compile/graph"
)

// What oracle_test.go does for one exposure, one outcome and what is held, this
// does for the other questions, again from the definitions: enumeration of paths
// and subsets, separation by the moral graph.

// properPaths are those from one of x to one of y that meet x only at the start.
func properPaths(g *graph.Graph, x, y []int) []Path {
	var all []Path
	for _, a := range x {
		for _, b := range y {
			for _, p := range oraclePaths(g, a, b) {
				if !slices.ContainsFunc(p.Nodes[1:], func(v int) bool { return slices.Contains(x, v) }) {
					all = append(all, p)
				}
			}
		}
	}
	return all
}

// oracleFrontDoor is the criterion on paths (Pearl 1995), given w: through
// meets every causal path, no back door is open between x and through, and x
// and w close every one between through and y once no arrow leaves through.
func oracleFrontDoor(g *graph.Graph, x, y int, through, w []int) bool {
	for _, p := range oraclePaths(g, x, y) {
		if forward(&p) && !slices.ContainsFunc(p.Nodes[1:len(p.Nodes)-1], func(v int) bool { return slices.Contains(through, v) }) {
			return false
		}
	}
	cut := g.Keep(func(from, _ int) bool { return !slices.Contains(through, from) }, nil)
	opens := func(of *graph.Graph, a, b int, given []int) bool {
		return slices.ContainsFunc(oraclePaths(of, a, b), func(p Path) bool {
			return p.Edges[0].into(a) && oracleOpen(g, &p, given)
		})
	}
	for _, m := range through {
		if opens(g, x, m, w) || opens(cut, m, y, union(w, []int{x})) {
			return false
		}
	}
	return len(through) > 0
}

func TestQuestionsAgainstOracle(t *testing.T) {
	r := rand.New(rand.NewPCG(12, 2026))
	var joint, controls, doors, instruments, identified, failed, pairs int
	for i := range rounds(2000, 22000) {
		s := sketch{nodes: 4 + r.IntN(3), arrows: 0.2 + 0.5*r.Float64()}
		if i%2 == 1 {
			s.unmeasured, s.arcs = 0.3*r.Float64(), 0.25*r.Float64()
		}
		g := s.draw(t, r)
		fail := func(format string, args ...any) {
			t.Helper()
			t.Fatalf("graph %d:%s\n%s", i, describe(g), fmt.Sprintf(format, args...))
		}
		x, y := []int{0}, []int{1}
		var free, held, given []int
		for v := 2; v < g.Len(); v++ {
			switch where := r.IntN(10); {
			case !g.Measured[v]:
			case where < 2 && len(x) == 1:
				x = append(x, v)
			case where < 4 && len(y) == 1:
				y = append(y, v)
			default:
				free = append(free, v)
				if where == 9 {
					held = append(held, v)
				}
				if where > 7 {
					given = append(given, v)
				}
			}
		}

		// The joint effect of several exposures on several outcomes.
		all := properPaths(g, x, y)
		forbidden := oracleForbidden(g, all)
		valid := func(z []int) bool { return oracleValid(g, all, forbidden, z) }
		a := Adjust(g, Aim{Exposures: x, Outcomes: y, Forced: held, MaxSets: 1e4})
		want := oracleMinimal(free, held, valid)
		if !slices.Equal(spelled(g, a.Sets), spelled(g, want)) || a.MoreSets {
			fail("%v on %v with %v: sets %v, want %v", x, y, held, a.Sets, want)
		}
		if !slices.Equal(a.Forbidden, list(forbidden)) {
			fail("%v on %v: forbidden %v, want %v", x, y, a.Forbidden, list(forbidden))
		}
		least := -1.0
		for _, z := range want {
			if least < 0 || float64(len(z)) < least {
				least = float64(len(z))
			}
		}
		if len(want) > 0 && a.Cost != least {
			fail("%v on %v with %v: cheapest %v, want size %g", x, y, held, a.Cheapest, least)
		}
		joint += len(want)

		// Identification, with values of others known.
		id := Identify(g, x, y, given)
		if want := oracleConditional(g, x, y, given); id.Identified != want {
			fail("%s: identified %v", id.Query(), id.Identified)
		}
		if id.Identified {
			identified++
		} else {
			failed++
			checkWitness(t, describe(g), g, id)
		}

		// One exposure and one outcome.
		const from, to = 0, 1
		var others []int
		for v := 2; v < g.Len(); v++ {
			if g.Measured[v] {
				others = append(others, v)
			}
		}
		base := minus(held, []int{from, to})
		single := oraclePaths(g, from, to)
		barred := oracleForbidden(g, single)
		works := func(z []int) bool { return oracleValid(g, single, barred, z) }
		m := drawLinear(g, r)
		for _, c := range Controls(g, from, to, base) {
			controls++
			without, with := minus(base, []int{c.Node}), union(base, []int{c.Node})
			before, after := works(without), works(with)
			part := false
			if !before && !after && !barred[c.Node] {
				part = slices.ContainsFunc(oracleMinimal(others, with, works), func(z []int) bool { return !works(minus(z, []int{c.Node})) })
			}
			ok := false
			switch c.Kind {
			case GoodControl:
				ok = !before && after
			case PartOfControl:
				ok = part
			case BadControl:
				ok = barred[c.Node] || before && !after || !before && !after && !part
			case SharpensControl:
				ok = before && after && m.spread(from, to, with) <= m.spread(from, to, without)*(1+1e-7)
			case BluntsControl:
				ok = before && after && m.spread(from, to, with) >= m.spread(from, to, without)*(1-1e-7)
			case NeutralControl:
				ok = before && after
			}
			if !ok || c.Sentence == "" {
				fail("%d beside %v: %s: %s; valid without %v, with %v, part %v", c.Node, base, c.Kind, c.Sentence, before, after, part)
			}
		}

		found, more := FrontDoors(g, from, to, 1000)
		var plain [][]int
		for _, d := range found {
			if len(d.Given) == 0 {
				plain = append(plain, d.Through)
			}
			if !oracleFrontDoor(g, from, to, d.Through, d.Given) {
				fail("no front door: %v", d)
			}
		}
		want = oracleMinimal(others, nil, func(z []int) bool { return oracleFrontDoor(g, from, to, z, nil) })
		if !slices.Equal(spelled(g, plain), spelled(g, want)) || more {
			fail("front doors %v, want %v", plain, want)
		}
		doors += len(want)

		var causal []int
		for v := range barred {
			if barred[v] && g.Ancestors(to)[v] {
				causal = append(causal, v)
			}
		}
		backDoor := g.Keep(func(a, b int) bool { return a != from || !slices.Contains(causal, b) }, nil)
		instruments += checkInstruments(t, g, backDoor, TotalInstruments(g, from, to), others, func(v int) bool { return barred[v] }, len(causal) > 0)
		arrowless := g.Keep(func(a, b int) bool { return a != from || b != to }, nil)
		instruments += checkInstruments(t, g, arrowless, ArrowInstruments(g, from, to), others, func(v int) bool { return g.Descendants(to)[v] }, g.HasArrow(from, to))

		if i%5 != 0 {
			continue
		}
		for _, p := range Separations(g, 1e4) {
			pairs++
			rest := minus(union(others, []int{from, to}), tidy([]int{p.A, p.B}))
			want := oracleMinimal(rest, nil, func(z []int) bool { return oracleSeparated(g, p.A, p.B, z) })
			if !slices.Equal(spelled(g, p.Given), spelled(g, want)) || p.More {
				fail("%d and %d: separators %v, want %v", p.A, p.B, p.Given, want)
			}
		}
	}
	t.Logf("%d joint sets, %d controls, %d front doors, %d instruments, %d identified and %d not, %d pairs", joint, controls, doors, instruments, identified, failed, pairs)
}

// checkInstruments compares with all sets tried; it gives their number.
func checkInstruments(t *testing.T, g, cut *graph.Graph, got []InstrumentSets, others []int, barred func(int) bool, any bool) int {
	t.Helper()
	const x, y = 0, 1
	at := map[int]InstrumentSets{}
	for _, z := range got {
		at[z.Node] = z
	}
	n := 0
	for _, z := range others {
		usable := slices.DeleteFunc(minus(others, []int{z}), barred)
		var want [][]int
		if any && !barred(z) {
			want = oracleMinimal(usable, nil, func(w []int) bool {
				return oracleSeparated(cut, z, y, w) && !oracleSeparated(g, z, x, w)
			})
		}
		n += len(want)
		if !slices.Equal(spelled(g, at[z].Given), spelled(g, want)) || at[z].More {
			t.Fatalf("%s: instrument %d given %v, want %v", describe(g), z, at[z].Given, want)
		}
	}
	return n
}

// oracleConditional is algorithm IDC on top of ID (Shpitser & Pearl 2006b).
func oracleConditional(g *graph.Graph, x, y, given []int) bool {
	for _, z := range given {
		rest := minus(given, []int{z})
		cut := g.Keep(func(from, to int) bool { return from != z && !slices.Contains(x, to) },
			func(a, b int) bool { return !slices.Contains(x, a) && !slices.Contains(x, b) })
		apart := !slices.ContainsFunc(y, func(v int) bool { return !oracleSeparated(cut, z, v, union(rest, x)) })
		if apart {
			return oracleConditional(g, union(x, []int{z}), y, rest)
		}
	}
	return oracleIdentifiable(g, x, union(y, given))
}

// spread is the asymptotic variance of the slope of y on x with z held, by the
// number of rows (common practice for linear laws).
func (m *linear) spread(x, y int, z []int) float64 {
	return m.residual(y, union(z, []int{x})) / m.residual(x, z)
}

func (m *linear) residual(v int, on []int) float64 {
	left := m.cov[v][v]
	for i, b := range m.regress(v, on) {
		left -= b * m.cov[v][on[i]]
	}
	return left
}
