package infer

import (
	"context"
	"runtime"
	"sync"
	"sync/atomic"
)

// A Run samples one problem with several chains side by side, as far as it is
// told to each time. It is used by one goroutine; the chains have their own.
type Run struct {
	problem  Problem
	settings Settings
	dim      int
	chains   []*chain
	stop     atomic.Bool
	done     atomic.Int64
	diverged atomic.Int64
}

// NewRun prepares a run; nothing is computed yet.
func NewRun(p Problem, s Settings) *Run {
	s = s.withDefaults()
	r := &Run{problem: p, settings: s}
	for i := range s.Chains {
		r.chains = append(r.chains, newChain(p, s, i, r.stop.Load))
	}
	r.dim = r.chains[0].walker.target.Dim()
	return r
}

// Settings are the run's own, defaults filled in.
func (r *Run) Settings() Settings { return r.settings }

// Done counts iterations of all chains, warm-up included; safe to read while
// Advance works.
func (r *Run) Done() int { return int(r.done.Load()) }

// Divergent counts divergent iterations after warm-up; safe to read likewise.
func (r *Run) Divergent() int { return int(r.diverged.Load()) }

// Advance warms the chains up, the first time, and then adds steps draws to
// each. When ctx is cancelled it stops within one gradient, keeps what it has
// and returns ctx's error; called again, it goes on as if it had never been
// stopped. A *StartError means that a chain could not begin.
func (r *Run) Advance(ctx context.Context, steps int) error {
	r.stop.Store(false)
	unhook := context.AfterFunc(ctx, func() { r.stop.Store(true) })
	defer unhook()
	want := 0
	for _, c := range r.chains {
		want = max(want, len(c.trace.Energy))
	}
	want += steps
	errs := make([]error, len(r.chains))
	slots := make(chan struct{}, max(1, runtime.GOMAXPROCS(0)))
	var wait sync.WaitGroup
	for i, c := range r.chains {
		wait.Add(1)
		go func() {
			defer wait.Done()
			slots <- struct{}{}
			defer func() { <-slots }()
			errs[i] = r.advance(c, want)
		}()
	}
	wait.Wait()
	for _, err := range errs {
		if err != nil {
			return err
		}
	}
	return ctx.Err()
}

func (r *Run) advance(c *chain, want int) error {
	if r.stop.Load() {
		return nil
	}
	if r.dim == 0 { // nothing unknown: every draw is the same
		c.done = r.settings.Warmup
	}
	if !c.started && r.dim > 0 {
		if err := c.start(r.problem.Blame); err != nil {
			return err
		}
	}
	for c.done < r.settings.Warmup {
		if !c.warm(r.settings.Warmup) {
			return nil
		}
		r.done.Add(1)
	}
	for len(c.trace.Energy) < want {
		if !c.sample() {
			return nil
		}
		r.done.Add(1)
		if c.trace.Divergent[len(c.trace.Divergent)-1] {
			r.diverged.Add(1)
		}
	}
	return nil
}

// Draws are what the run has, every chain cut to the shortest. The slices are
// not copied and must not be changed.
func (r *Run) Draws() *Draws {
	d := &Draws{Dim: r.dim, Steps: len(r.chains[0].trace.Energy), Limit: r.settings.MaxDepth}
	for _, c := range r.chains {
		d.Steps = min(d.Steps, len(c.trace.Energy))
	}
	for _, c := range r.chains {
		d.Chains = append(d.Chains, c.trace.cut(d.Steps, r.dim))
		d.Total += c.walker.gradients
		if c.done >= r.settings.Warmup {
			d.Warmup += c.warmed
		} else {
			d.Warmup += c.walker.gradients
		}
	}
	return d
}

func (t Trace) cut(steps, dim int) Trace {
	t.Q = t.Q[: steps*dim : steps*dim]
	t.LogDensity = t.LogDensity[:steps:steps]
	t.Energy = t.Energy[:steps:steps]
	t.Depth = t.Depth[:steps:steps]
	t.Divergent = t.Divergent[:steps:steps]
	return t
}
