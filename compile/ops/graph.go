package ops

import (
	"encoding/binary"
	"fmt"
	"math"
	"slices"
	"unsafe"

	"arrowroot/compile/kernel"
)

// An id is the number of a node. Arguments have smaller numbers than what
// reads them. 0 is no node.
type id int32

type plate struct {
	name string
	rows int
}

// An index maps the rows of a fine plate to those of a coarse one. There is
// one *index for one slice, so that pointers can be compared.
type index struct {
	to     []int32
	sorted bool // never falls: rows of one entry follow one another
	low    int32
	high   int32 // the entries it leads to lie between low and high
}

// A node is one operation. Which attributes it has depends on op.
type node struct {
	op    op
	plate Plate
	args  []id

	c      float64         // Const: the number
	at     int             // Parameter: offset; Element, Place: entry; Partial: argument; CumSum, Linear: 1 = transposed
	data   []float64       // Data: the column; Linear: the matrix; Density: auxiliary numbers in place of Prepare's
	index  *index          // Gather, SumOver, SumOverDot
	kernel *kernel.Density // Density
	terms  []term          // Affine
}

// A graph is a list of distinct nodes over a list of plates. Nodes are never
// changed once they are in; passes make a new graph.
type graph struct {
	plates  []plate
	nodes   []node // nodes[0] is not used
	known   map[key]id
	indices map[*int32]*index
	chained map[[2]*index]*index
	columns map[columnKey][]float64 // columns that passes made, so that the same one is made once
	fixed   []bool                  // node depends on no parameter
}

// A columnKey tells made columns apart: how often an index leads to each entry,
// or ones for a plate.
type columnKey struct {
	counts *index
	ones   Plate
}

// A key tells nodes apart. Data is known by identity and length, constants by
// their bits.
type key struct {
	op     op
	plate  Plate
	args   string
	c      uint64
	at     int
	data   *float64
	n      int
	index  *index
	kernel *kernel.Density
	terms  string
}

func newGraph() *graph {
	return &graph{
		plates:  []plate{{"scalar", 1}},
		nodes:   make([]node, 1),
		known:   map[key]id{},
		indices: map[*int32]*index{},
		chained: map[[2]*index]*index{},
		columns: map[columnKey][]float64{},
		fixed:   make([]bool, 1),
	}
}

// like starts an empty graph over the same plates and indices.
func (g *graph) like() *graph {
	next := newGraph()
	next.plates = g.plates
	next.indices = g.indices
	next.chained = g.chained
	next.columns = g.columns
	return next
}

func (g *graph) rows(p Plate) int { return g.plates[p].rows }

// index gives the one *index for a slice.
func (g *graph) index(to []int32) *index {
	first := unsafe.SliceData(to)
	if known := g.indices[first]; known != nil && len(known.to) == len(to) {
		return known
	}
	ix := &index{to: to, sorted: slices.IsSorted(to), low: slices.Min(to), high: slices.Max(to)}
	g.indices[first] = ix
	return ix
}

// chain is the index that leads through fine, then coarse.
func (g *graph) chain(fine, coarse *index) *index {
	pair := [2]*index{fine, coarse}
	if known := g.chained[pair]; known != nil {
		return known
	}
	to := make([]int32, len(fine.to))
	for i, j := range fine.to {
		to[i] = coarse.to[j]
	}
	g.chained[pair] = g.index(to)
	return g.chained[pair]
}

// add gives the number of n, which is new only if no equal node is there.
// n.plate must be what the shape rule says.
func (g *graph) add(n node) id {
	k := key{
		op: n.op, plate: n.plate, args: packed(n.args), c: math.Float64bits(n.c), at: n.at,
		data: unsafe.SliceData(n.data), n: len(n.data), index: n.index, kernel: n.kernel, terms: packedTerms(n.terms),
	}
	if known, ok := g.known[k]; ok {
		return known
	}
	fixed := n.op != opParameter
	for _, a := range n.args {
		fixed = fixed && g.fixed[a]
	}
	g.nodes = append(g.nodes, n)
	g.fixed = append(g.fixed, fixed)
	g.known[k] = id(len(g.nodes) - 1)
	return g.known[k]
}

// make adds an operation whose plate follows from its arguments. The passes
// use it; a wrong shape there is a fault of ours.
func (g *graph) make(o op, args ...id) id { return g.put(node{op: o, args: args}) }

func (g *graph) put(n node) id {
	p, err := g.shape(&n)
	if err != nil {
		panic("ops: " + table[n.op].name + ": " + err.Error())
	}
	n.plate = p
	return g.add(n)
}

func (g *graph) constant(c float64) id { return g.put(node{op: opConst, c: c}) }

func (g *graph) column(p Plate, data []float64) id {
	return g.put(node{op: opData, plate: p, data: data})
}

// newPlate adds a plate; graphs that came before keep theirs.
func (g *graph) newPlate(name string, rows int) Plate {
	g.plates = append(g.plates[:len(g.plates):len(g.plates)], plate{name, rows})
	return Plate(len(g.plates) - 1)
}

func (g *graph) gather(v id, to Plate, ix *index) id {
	if g.nodes[v].plate == Scalar {
		return v
	}
	return g.put(node{op: opGather, plate: to, args: []id{v}, index: ix})
}

func (g *graph) sumOver(v id, to Plate, ix *index) id {
	return g.put(node{op: opSumOver, plate: to, args: []id{v}, index: ix})
}

func (g *graph) negated(v id) id { return g.make(opMul, g.constant(-1), v) }

// ones is a column of ones.
func (g *graph) ones(p Plate) id {
	if p == Scalar {
		return g.constant(1)
	}
	k := columnKey{ones: p}
	if g.columns[k] == nil {
		c := make([]float64, g.rows(p))
		for i := range c {
			c[i] = 1
		}
		g.columns[k] = c
	}
	return g.column(p, g.columns[k])
}

// counts is how often ix leads to each row of the coarse plate p.
func (g *graph) counts(p Plate, ix *index) id {
	k := columnKey{counts: ix}
	if g.columns[k] == nil {
		c := make([]float64, g.rows(p))
		for _, i := range ix.to {
			c[i]++
		}
		g.columns[k] = c
	}
	return g.column(p, g.columns[k])
}

// shape applies the shape rule of n's row of the table.
func (g *graph) shape(n *node) (Plate, error) {
	row := &table[n.op]
	if row.arity >= 0 && len(n.args) != row.arity {
		return 0, fmt.Errorf("%d arguments, not %d", len(n.args), row.arity)
	}
	return row.shape(g, n)
}

// rebuild copies what roots need into a new graph, through f, which gets the old number of each
// node and the node with its arguments renumbered and adds it, or something equal
// to it, to the new graph. Dead nodes fall away. It returns the new roots.
func (g *graph) rebuild(roots []id, f func(next *graph, old id, n node) id) (*graph, []id) {
	next := g.like()
	moved := make([]id, len(g.nodes))
	live := g.live(roots)
	for i := 1; i < len(g.nodes); i++ {
		if !live[i] {
			continue
		}
		n := g.nodes[i]
		n.args = renumbered(n.args, moved)
		moved[i] = f(next, id(i), n)
	}
	return next, renumbered(roots, moved)
}

// live marks what roots need.
func (g *graph) live(roots []id) []bool {
	live := make([]bool, len(g.nodes))
	for _, r := range roots {
		live[r] = true
	}
	for i := len(g.nodes) - 1; i > 0; i-- {
		if live[i] {
			for _, a := range g.nodes[i].args {
				live[a] = true
			}
		}
	}
	return live
}

// uses counts the readers of each node, roots included.
func (g *graph) uses(roots []id) []int {
	uses := make([]int, len(g.nodes))
	for _, r := range roots {
		uses[r]++
	}
	for i, ok := range g.live(roots) {
		if ok {
			for _, a := range g.nodes[i].args {
				uses[a]++
			}
		}
	}
	return uses
}

func renumbered(args, moved []id) []id {
	if len(args) == 0 {
		return nil
	}
	out := make([]id, len(args))
	for i, a := range args {
		out[i] = moved[a]
	}
	return out
}

func packed(args []id) string {
	buf := make([]byte, 0, 4*len(args))
	for _, a := range args {
		buf = binary.LittleEndian.AppendUint32(buf, uint32(a))
	}
	return string(buf)
}
