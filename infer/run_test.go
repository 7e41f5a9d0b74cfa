package infer

import (
	"context"
	"errors"
	"math"
	"runtime"
	"slices"
	"testing"
)

// normalTarget is independent normal with the given standard deviations.
type normalTarget []float64

func (t normalTarget) Dim() int { return len(t) }

func (t normalTarget) LogDensity(grad, q []float64) float64 {
	value := 0.0
	for i, sd := range t {
		z := q[i] / sd
		value -= 0.5 * z * z
		grad[i] = -z / sd
	}
	return value
}

// funnelTarget is Neal's funnel (2003, Annals of Statistics 31:705): v is
// normal with sd 3, the others normal with sd exp(v/2).
type funnelTarget int

func (t funnelTarget) Dim() int { return int(t) }

func (t funnelTarget) LogDensity(grad, q []float64) float64 {
	v := q[0]
	precision := math.Exp(-v)
	sum := 0.0
	for i := 1; i < len(q); i++ {
		sum += q[i] * q[i]
		grad[i] = -q[i] * precision
	}
	n := float64(len(q) - 1)
	grad[0] = -v/9 + 0.5*sum*precision - 0.5*n
	return -v*v/18 - 0.5*sum*precision - 0.5*n*v
}

func problem(t Target) Problem {
	return Problem{Name: "test", Target: func() Target { return t }}
}

func scales(n int) normalTarget {
	t := make(normalTarget, n)
	for i := range t { // .1 to 10, geometric
		t[i] = math.Pow(10, -1+2*float64(i)/float64(max(n-1, 1)))
	}
	return t
}

func TestNormalMomentsAreRight(t *testing.T) {
	target := scales(20)
	r := NewRun(problem(target), Settings{Seed: 1})
	if err := r.Advance(context.Background(), 2000); err != nil {
		t.Fatal(err)
	}
	d := r.Draws()
	for i, sd := range target {
		var n, sum, squares float64
		for _, c := range d.Chains {
			for k := range d.Steps {
				x := c.At(k, d.Dim)[i]
				n++
				sum += x
				squares += x * x
			}
		}
		mean := sum / n
		// 8,000 draws with at least 2,000 effective ones: five standard errors.
		if math.Abs(mean) > 5*sd/math.Sqrt(2000) {
			t.Errorf("coordinate %d: mean %g, sd %g", i, mean, sd)
		}
		if got := math.Sqrt(squares / n); math.Abs(got/sd-1) > 0.06 {
			t.Errorf("coordinate %d: sd %g, want %g", i, got, sd)
		}
	}
	if share := float64(d.Warmup) / float64(d.Total); share > 0.25 {
		t.Errorf("warm-up took %.0f %% of all gradients", 100*share)
	}
	if r.Divergent() > 0 {
		t.Errorf("%d divergences on a normal target", r.Divergent())
	}
}

func TestFunnelDiverges(t *testing.T) {
	r := NewRun(problem(funnelTarget(10)), Settings{Seed: 2})
	if err := r.Advance(context.Background(), 1000); err != nil {
		t.Fatal(err)
	}
	if r.Divergent() == 0 {
		t.Error("no divergence in a centred funnel")
	}
}

func TestSameSeedSameDraws(t *testing.T) {
	target := scales(5)
	whole := NewRun(problem(target), Settings{Seed: 7})
	if err := whole.Advance(context.Background(), 300); err != nil {
		t.Fatal(err)
	}
	parts := NewRun(problem(target), Settings{Seed: 7})
	for range 3 {
		if err := parts.Advance(context.Background(), 100); err != nil {
			t.Fatal(err)
		}
	}
	other := NewRun(problem(target), Settings{Seed: 8})
	if err := other.Advance(context.Background(), 300); err != nil {
		t.Fatal(err)
	}
	for i := range whole.Draws().Chains {
		if !slices.Equal(whole.Draws().Chains[i].Q, parts.Draws().Chains[i].Q) {
			t.Errorf("chain %d: rounds change the draws", i)
		}
		if slices.Equal(whole.Draws().Chains[i].Q, other.Draws().Chains[i].Q) {
			t.Errorf("chain %d: the seed does not change the draws", i)
		}
	}
}

// stopping cancels its context after a number of gradients, which falls in the
// middle of an iteration, and goes on only when the run has heard of it.
type stopping struct {
	Target
	left   *int
	cancel func()
	run    **Run
}

func (s stopping) LogDensity(grad, q []float64) float64 {
	*s.left--
	if *s.left == 0 {
		s.cancel()
		for !(*s.run).stop.Load() {
			runtime.Gosched()
		}
	}
	return s.Target.LogDensity(grad, q)
}

func TestResumedEqualsUninterrupted(t *testing.T) {
	target := scales(5)
	whole := NewRun(problem(target), Settings{Seed: 3, Chains: 1})
	if err := whole.Advance(context.Background(), 200); err != nil {
		t.Fatal(err)
	}
	for _, after := range []int{50, 1501, 2503} {
		ctx, cancel := context.WithCancel(context.Background())
		left := after
		var r *Run
		r = NewRun(problem(stopping{target, &left, cancel, &r}), Settings{Seed: 3, Chains: 1})
		if err := r.Advance(ctx, 200); !errors.Is(err, context.Canceled) {
			t.Fatalf("stopped after %d gradients: %v", after, err)
		}
		have := r.Draws().Steps
		if have >= 200 {
			t.Fatalf("cancelled run has %d draws", have)
		}
		if err := r.Advance(context.Background(), 200-have); err != nil {
			t.Fatal(err)
		}
		if !slices.Equal(whole.Draws().Chains[0].Q, r.Draws().Chains[0].Q) {
			t.Errorf("stopped after %d gradients: the resumed run differs", after)
		}
	}
}

type nowhere struct{}

func (nowhere) Dim() int { return 1 }
func (nowhere) LogDensity(grad, _ []float64) float64 {
	grad[0] = 0
	return math.Inf(-1)
}

func TestNowhereFiniteNamesTheFactor(t *testing.T) {
	p := problem(nowhere{})
	p.Blame = func([]float64) string { return "the law of bees gives no probability" }
	err := NewRun(p, Settings{}).Advance(context.Background(), 10)
	var start *StartError
	if !errors.As(err, &start) || err.Error() != "there is no place to start: in 30 tries the density was nowhere finite; the law of bees gives no probability" {
		t.Fatalf("got %v", err)
	}
}

func TestIterationsDoNotAllocate(t *testing.T) {
	r := NewRun(problem(scales(30)), Settings{Seed: 1, Chains: 1})
	if err := r.Advance(context.Background(), 1); err != nil {
		t.Fatal(err)
	}
	c := r.chains[0]
	if n := testing.AllocsPerRun(50, func() { c.iterate() }); n > 0 {
		t.Errorf("%g allocations for each iteration", n)
	}
}
