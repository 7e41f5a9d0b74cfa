package infer

import (
	"math"
)

const (
	startTries = 30
	startReach = 1.0 // first starts are uniform on ±startReach in every coordinate

	// Shares of the warm-up (measured: see DEVELOPERS.md).
	earlyShare  = 0.30 // short trajectories, short windows
	frozenShare = 0.15 // the metric stands still at the end

	earlyWindow = 10
)

// A chain is one Markov chain with everything it needs to go on.
type chain struct {
	walker  *walker
	random  *random
	metric  *metric
	steps   *stepSize
	at      *point
	started bool
	done    int // warm-up iterations
	trace   Trace
	warmed  int // gradients spent in warm-up
	limit   int
}

func newChain(p Problem, s Settings, number int, stop func() bool) *chain {
	t := p.Target()
	r := newRandom(s.Seed, number, "sample", p.Name)
	m := newMetric(t.Dim())
	return &chain{
		walker: newWalker(t, r, m, s.MaxDepth, stop),
		random: r, metric: m, steps: newStepSize(s.Acceptance), at: newPoint(t.Dim()), limit: s.MaxDepth,
	}
}

// start finds a point with a finite log density and gradient: uniform around
// zero, closer to it with every try.
func (c *chain) start(blame func([]float64) string) error {
	reach := startReach
	for range startTries {
		for i := range c.at.q {
			c.at.q[i] = reach * (2*c.random.uniform() - 1)
		}
		c.at.value = c.walker.target.LogDensity(c.at.g, c.at.q)
		c.walker.gradients++
		if finite(c.at.value) && allFinite(c.at.g) {
			c.metric.start(c.at.g)
			c.steps.restart(c.walker.firstStep(c.at))
			c.started = true
			return nil
		}
		reach *= 0.8
	}
	e := &StartError{Tries: startTries}
	if blame != nil {
		e.Factor = blame(c.at.q)
	}
	return e
}

// warm makes one warm-up iteration; false if it was stopped, and then nothing
// has changed, not even the generator.
func (c *chain) warm(warmup int) bool {
	early := int(earlyShare * float64(warmup))
	frozen := warmup - int(frozenShare*float64(warmup))
	window := max(warmup/6, earlyWindow)
	switch {
	case c.done < early/2:
		c.walker.depth = min(6, c.limit)
	case c.done < early:
		c.walker.depth = min(8, c.limit)
	default:
		c.walker.depth = c.limit
	}
	c.walker.step = c.steps.step
	it, ok := c.iterate()
	if !ok {
		return false
	}
	c.steps.learn(it.accept)
	if c.done < frozen {
		c.metric.learn(c.at.q, c.at.g)
		n := c.done + 1
		if n < early && n%earlyWindow == 0 || n >= early && (n-early)%window == 0 {
			c.metric.turn()
		}
		if n == frozen {
			c.steps.settle()
			c.steps.restart(c.steps.step)
		}
	}
	c.done++
	if c.done == warmup {
		c.steps.settle()
		c.walker.depth = c.limit
		c.warmed = c.walker.gradients
	}
	return true
}

// sample makes one iteration and keeps it.
func (c *chain) sample() bool {
	c.walker.step = c.steps.step
	it, ok := c.iterate()
	if !ok {
		return false
	}
	t := &c.trace
	n := float64(len(t.Energy))
	t.Accepted = (t.Accepted*n + it.accept) / (n + 1)
	t.StepSize = c.steps.step
	t.Q = append(t.Q, c.at.q...)
	t.LogDensity = append(t.LogDensity, c.at.value)
	t.Energy = append(t.Energy, it.energy)
	t.Depth = append(t.Depth, int8(it.depth))
	t.Divergent = append(t.Divergent, it.divergent)
	return true
}

// iterate puts the generator back if the iteration was stopped in the middle,
// so that a resumed chain equals an uninterrupted one.
func (c *chain) iterate() (iteration, bool) {
	before := *c.random
	it, ok := c.walker.iterate(c.at)
	if !ok {
		*c.random = before
	}
	return it, ok
}

func finite(x float64) bool { return !math.IsNaN(x) && !math.IsInf(x, 0) }

func allFinite(x []float64) bool {
	for _, v := range x {
		if !finite(v) {
			return false
		}
	}
	return true
}
