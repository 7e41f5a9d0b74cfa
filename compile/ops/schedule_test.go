package ops

import "testing"

// TestSink: a value that only a later stage reads is computed there, block by
// block, and not kept for all rows. Here the mean of a column within groups
// must be there before the density, and the column itself is needed again for
// the gradient, so it alone is kept; exp(s x) could be computed early, and is not.
func TestSink(t *testing.T) {
	b := newBench()
	early := b.InvLogit(b.Mul(b.s2, b.x))
	mean := b.MeanWithin(early, b.groups, b.toGroup)
	v := b.Density(testMixed, b.x, b.Exp(b.Mul(b.s, b.x)), mean, b.Const(1))
	p, err := b.Program(v)
	if err != nil {
		t.Fatal(err)
	}
	kept := 0
	for _, s := range p.gradient.slots {
		if s.from == fromArena && s.n == manyRows {
			kept++
		}
	}
	if kept != 1 {
		t.Errorf("%d columns are kept for all rows, want 1\n%s", kept, p.Dump())
	}
	compare(t, b.Builder, v, ratioPoint(benchDim), nil)
}

// TestBlocksBoundMemory: however many rows, the work space of a model whose
// predictor runs in one stage is a handful of blocks.
func TestBlocksBoundMemory(t *testing.T) {
	small, _ := ratioM3(2000)
	large, _ := ratioM3(20_000)
	if small.gradient.arena != large.gradient.arena {
		t.Errorf("%d numbers for 2000 rows, %d for 20000", small.gradient.arena, large.gradient.arena)
	}
}
