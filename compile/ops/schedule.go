package ops

import "arrowroot/compile/kernel"

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

	dim    int
	totals int   // numbers that are added up over blocks
	arena  int   // numbers of all other values
	calls  []int // how many values each density has
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
	start int       // in that memory
	n     int       // how many
	data  []float64 // fromData
	mask  int       // see slot
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
