package fit

import (
	"context"
	"errors"
	"math"
	"runtime"
	"testing"
	"time"

	"arrowroot/infer"
)

// identical compares everything that is drawn or computed from draws, bit for
// bit; up to steps of each chain, all if steps is 0.
func identical(t *testing.T, what string, a, b *Result, steps int) {
	t.Helper()
	same := func(x, y float64) bool { return math.Float64bits(x) == math.Float64bits(y) }
	if len(a.Full.Chains) != len(b.Full.Chains) || steps == 0 && a.Full.Steps() != b.Full.Steps() {
		t.Fatalf("%s: %d × %d draws against %d × %d", what, len(a.Full.Chains), a.Full.Steps(), len(b.Full.Chains), b.Full.Steps())
	}
	part := steps
	if part == 0 {
		part = a.Full.Steps()
	}
	for c, rows := range a.Full.Chains {
		for i, row := range rows[:part] {
			for q, x := range row {
				if y := b.Full.Chains[c][i][q]; !same(x, y) {
					t.Fatalf("%s: %s of chain %d, draw %d: %v and %v", what, a.Full.Quantities[q].Name, c+1, i+1, x, y)
				}
			}
		}
	}
	if steps > 0 {
		return
	}
	for _, n := range [][2]*Number{{a.Effect.Crude, b.Effect.Crude}, {a.Effect.Adjusted, b.Effect.Adjusted}, {a.Effect.Full, b.Effect.Full}} {
		for i, x := range n[0].Draws {
			if y := n[1].Draws[i]; !same(x, y) {
				t.Fatalf("%s: contrast %d: %v and %v", what, i, x, y)
			}
		}
	}
	for i, x := range a.Arrows {
		if y := b.Arrows[i]; !same(x.Centre, y.Centre) || !same(x.Learned, y.Learned) {
			t.Fatalf("%s: paint of %s → %s", what, x.From, x.To)
		}
	}
	for i, x := range a.Nodes {
		if y := b.Nodes[i]; !same(x.Centre, y.Centre) {
			t.Fatalf("%s: paint of %s", what, x.Variable)
		}
	}
}

// SEMANTICS F: the same request gives the same draws, contrasts and paint, on
// one core as on two; the example has several blocks, groups and a simulated
// mediator. Not parallel: it sets the number of cores.
func TestSameSeedSameDraws(t *testing.T) {
	req := requestIn(t, examples, "hedgerows")
	if testing.Short() {
		req = request(t, "kidney_stones")
	}
	req.Draws = 40
	defer runtime.GOMAXPROCS(runtime.GOMAXPROCS(2))
	first := run(t, req)
	identical(t, "twice", first, run(t, req), 0)
	runtime.GOMAXPROCS(1)
	identical(t, "one core", first, run(t, req), 0)
	req.Seed++
	other := run(t, req)
	if other.Full.Chains[0][0][0] == first.Full.Chains[0][0][0] {
		t.Error("another seed gives the same draws")
	}
}

// A cancelled run is a prefix of the whole one, in every chain and block.
func TestCancelKeepsAPrefix(t *testing.T) {
	t.Parallel()
	req := request(t, "kidney_stones")
	req.Draws, req.grace = 600, time.Minute
	whole := run(t, req)
	settings := infer.NewRun(infer.Problem{Target: func() infer.Target { return nowhere{} }}, infer.Settings{}).Settings()
	blocks := len(whole.Full.Density.Blocks)
	if blocks < 2 {
		t.Fatal("the study should have two blocks")
	}
	perStep := blocks * settings.Chains
	req.Draws = 1_000_000
	ctx, cancel := context.WithCancel(context.Background())
	defer cancel()
	cut, err := Run(ctx, req, func(p infer.Progress) {
		if p.Done >= perStep*(settings.Warmup+roundSteps) {
			cancel()
		}
	})
	if err != nil {
		t.Fatal(err)
	}
	steps := cut.Full.Steps()
	if !cut.Cut || !cut.Full.Cut || steps < roundSteps {
		t.Fatalf("cut %v with %d steps", cut.Cut, steps)
	}
	identical(t, "cut", cut, whole, min(steps, whole.Full.Steps()))
	if cut.Effect == nil || cut.Effect.Full == nil || len(cut.Effect.Full.Draws) != steps*settings.Chains {
		t.Error("the draws that were kept should give the full model's number")
	}
	if cut.Effect.Crude != nil {
		t.Error("a cancelled run should not begin another fit")
	}
}

// nowhere is a target of no dimension.
type nowhere struct{}

func (nowhere) Dim() int                          { return 0 }
func (nowhere) LogDensity(_, _ []float64) float64 { return 0 }

func TestCancelInWarmup(t *testing.T) {
	t.Parallel()
	req := request(t, "kidney_stones")
	ctx, cancel := context.WithCancel(context.Background())
	cancel()
	if r, err := Run(ctx, req, nil); r != nil || !errors.Is(err, ErrNoDraws) {
		t.Errorf("%v, %v", r, err)
	}
}

// A cancel after the rival itself was fitted loses nothing of that fit.
func TestCancelBetweenFits(t *testing.T) {
	t.Parallel()
	req := request(t, "kidney_stones")
	req.Draws, req.grace = 300, time.Minute
	whole := run(t, req)
	ctx, cancel := context.WithCancel(context.Background())
	defer cancel()
	iterations := 0
	cut, err := Run(ctx, req, func(p infer.Progress) {
		if p.Done < iterations { // the count begins anew with the crude fit
			cancel()
		}
		iterations = p.Done
	})
	if err != nil {
		t.Fatal(err)
	}
	identical(t, "full model", cut, whole, req.Draws)
	if ctx.Err() != nil && (!cut.Cut || cut.Full.Cut || cut.Effect.Full == nil) {
		t.Errorf("cut %v, full model %v", cut.Cut, cut.Full.Cut)
	}
}
