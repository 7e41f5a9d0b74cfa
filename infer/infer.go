// Package infer draws from a log density with gradient by the No-U-Turn
// sampler (Hoffman & Gelman 2014, JMLR 15:1593; multinomial form: Betancourt
// 2017, arXiv:1701.02434). It knows nothing of diagrams.
//
// Read infer.go (what goes in and comes out), run.go (chains side by side, in
// rounds), chain.go (warm-up of one chain), tree.go (one iteration), metric.go
// and stepsize.go (what warm-up adapts), random.go (where randomness comes
// from).
package infer

import (
	"fmt"
	"time"
)

// A Target is an unnormalised log density on the whole of ℝⁿ. LogDensity
// writes the gradient at q into grad, both of length Dim, and returns the
// value; −Inf where the density is zero. A Target is used by one goroutine.
type Target interface {
	Dim() int
	LogDensity(grad, q []float64) float64
}

// A Problem is what to sample.
type Problem struct {
	Name   string                   // enters the seed key: the block's sorted names
	Target func() Target            // makes one for each chain
	Blame  func(q []float64) string // names the factor that is not finite at q; may be nil
}

// DefaultChains is how many chains run side by side if nobody says otherwise.
const DefaultChains = 4

// Settings of a run. The zero value means the defaults in the comments.
type Settings struct {
	Seed       uint64
	Chains     int     // 4
	Warmup     int     // 300 iterations, at least 20
	MaxDepth   int     // 10 doublings
	Acceptance float64 // 0.8, the target of the step-size adaptation
}

func (s Settings) withDefaults() Settings {
	if s.Chains <= 0 {
		s.Chains = DefaultChains
	}
	if s.Warmup <= 0 {
		s.Warmup = 300
	}
	s.Warmup = max(s.Warmup, 20)
	if s.MaxDepth <= 0 {
		s.MaxDepth = 10
	}
	if s.Acceptance <= 0 || s.Acceptance >= 1 {
		s.Acceptance = 0.8
	}
	return s
}

// Progress of a run, for people. Times come from the clock and never reach a
// decision of the sampler.
type Progress struct {
	Warming    bool
	Done       int // iterations, over all chains and blocks
	Total      int // iterations known to be wanted so far
	Divergent  int
	Round      int
	Elapsed    time.Duration
	Left       time.Duration // 0 = not known yet
	Worst      string        // the quantity that is furthest from its precision; "" in the first round
	WorstESS   float64
	TargetESS  float64
	Cancelling bool
}

// Draws are what a run has so far: every chain cut to the same length.
type Draws struct {
	Dim    int
	Steps  int // per chain, after warm-up
	Chains []Trace
	Warmup int // gradients spent in warm-up, over all chains
	Total  int // gradients in all
	Limit  int // the depth limit
}

// A Trace is one chain after warm-up.
type Trace struct {
	Q          []float64 // Steps × Dim, row after row
	LogDensity []float64
	Energy     []float64 // after the momentum was refreshed
	Depth      []int8
	Divergent  []bool
	StepSize   float64
	Accepted   float64 // mean acceptance statistic
}

// At is draw i of the chain, not a copy.
func (t *Trace) At(i, dim int) []float64 { return t.Q[i*dim : (i+1)*dim] }

// A StartError means that no start with a finite log density was found.
type StartError struct {
	Factor string // what Blame said of the last try: "the law of bees gives no probability"; "" if nothing
	Tries  int
}

func (e *StartError) Error() string {
	text := fmt.Sprintf("there is no place to start: in %d tries the density was nowhere finite", e.Tries)
	if e.Factor != "" {
		text += "; " + e.Factor
	}
	return text
}
