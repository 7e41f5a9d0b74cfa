package causal

import (
	"fmt"
	"math"
	"math/bits"
	"math/rand/v2"
	"slices"

	"arrowroot/compile/graph"
)

// A Tetrad is a product of covariances that equals another if all laws are
// linear: cov(A, C) cov(B, D) = cov(A, D) cov(B, C) (Spearman 1904).
type Tetrad struct {
	A, B, C, D int
}

const tetradQuartets = 5_000_000 // sets of four variables looked at

// Tetrads lists the tetrads that vanish in every linear model of the graph,
// at most max (0 = 1000): one node lies on all treks between the two pairs
// (Sullivant, Talaska & Draisma 2010). A tetrad of which both products are zero
// is left out, being no more than independences. Those that do not vanish in
// one model are told apart by it first, which costs next to nothing.
func Tetrads(g *graph.Graph, max int) (all []Tetrad, more bool) {
	max = limit(max, 1000)
	named, _ := nameArcs(g)
	nodes := list(available(g))
	cov, treks := residueModel(named), newTrekNetwork(named)
	budget := searchBudget
	looked := 0
	for i, a := range nodes {
		for j, b := range nodes[i+1:] {
			for k, c := range nodes[i+j+2:] {
				for _, d := range nodes[i+j+k+3:] {
					if looked++; looked > tetradQuartets {
						return all, true
					}
					for _, t := range []Tetrad{{a, b, c, d}, {a, c, b, d}, {a, d, b, c}} {
						first := timesResidue(cov[t.A][t.C], cov[t.B][t.D])
						if first == 0 || first != timesResidue(cov[t.A][t.D], cov[t.B][t.C]) || treks.count(t) > 1 {
							continue
						}
						if len(all) == max || !budget.spend(named, 30) {
							return all, true
						}
						all = append(all, t)
					}
				}
			}
		}
	}
	return all, false
}

// residuePrime is the modulus of a model in which what is zero is zero exactly.
const residuePrime = 1<<61 - 1

func timesResidue(a, b uint64) uint64 {
	high, low := bits.Mul64(a, b)
	return bits.Rem64(high, low, residuePrime)
}

// residueModel gives the covariances of one linear model of the graph, whose
// coefficients and variances are residues modulo a prime. What is zero in
// every model is zero in it; what is not is very rarely so (Schwartz 1980), and
// zero in it is never taken for proof. All of its nodes have errors of their own,
// computed ones too, as their laws need not be linear.
func residueModel(g *graph.Graph) [][]uint64 {
	r := rand.New(rand.NewPCG(1904, 1980)) // fixed: the answer depends on the graph alone
	draw := func() uint64 { return 1 + r.Uint64N(residuePrime-1) }
	cov := make([][]uint64, g.Len())
	for v := range cov {
		cov[v] = make([]uint64, g.Len())
	}
	var earlier []int
	for _, v := range g.Order {
		for _, p := range g.Parents[v] {
			b := draw()
			for _, w := range earlier {
				cov[v][w] = (cov[v][w] + timesResidue(b, cov[p][w])) % residuePrime
			}
		}
		for _, w := range earlier {
			cov[w][v] = cov[v][w]
		}
		earlier = append(earlier, v)
		cov[v][v] = draw() // its error can bring its variance to anything
	}
	return cov
}

// A trekNetwork counts treks: a node is entered and left on the way up, then on
// the way down, once on each.
type trekNetwork struct {
	*network
	empty         []float64 // capacities with no pair chosen
	starts, stops []int     // by node: the edges from the source and to the sink
	source, sink  int
}

func newTrekNetwork(g *graph.Graph) *trekNetwork {
	n := g.Len()
	const up, upOut, down, downOut = 0, 1, 2, 3
	at := func(v, side int) int { return 4*v + side }
	t := &trekNetwork{network: newNetwork(4*n + 2), source: 4 * n, sink: 4*n + 1}
	for v := range n {
		t.starts = append(t.starts, len(t.to))
		t.edge(t.source, at(v, up), 0)
		t.stops = append(t.stops, len(t.to))
		t.edge(at(v, downOut), t.sink, 0)
	}
	for v := range n {
		t.edge(at(v, up), at(v, upOut), 1)
		t.edge(at(v, down), at(v, downOut), 1)
		t.edge(at(v, upOut), at(v, down), math.Inf(1))
		for _, c := range g.Children[v] {
			t.edge(at(c, upOut), at(v, up), math.Inf(1))
			t.edge(at(v, downOut), at(c, down), math.Inf(1))
		}
	}
	t.empty = slices.Clone(t.room)
	return t
}

// count gives the number of treks, up to two, from A and B to C and D no two of
// which share a node on the same side: a smallest set that t-separates the pairs
// has as many members.
func (t *trekNetwork) count(q Tetrad) int {
	copy(t.room, t.empty)
	for _, v := range []int{q.A, q.B} {
		t.room[t.starts[v]] = 1
	}
	for _, v := range []int{q.C, q.D} {
		t.room[t.stops[v]] = 1
	}
	total, _ := t.most(t.source, t.sink)
	return int(total)
}

// Sentence says the constraint.
func (t *Tetrad) Sentence(g *graph.Graph) string {
	a, b, c, d := g.Names[t.A], g.Names[t.B], g.Names[t.C], g.Names[t.D]
	return fmt.Sprintf("If all laws are linear, cov(%s, %s) cov(%s, %s) = cov(%s, %s) cov(%s, %s): one variable carries all that ties %s and %s to %s and %s.",
		a, c, b, d, a, d, b, c, a, b, c, d)
}
