// Package summary turns draws into numbers that a person can read, with a
// verdict on whether the computation behind them can be trusted. Definitions:
// Vehtari, Gelman, Simpson, Carpenter & Bürkner (2021), Bayesian Analysis
// 16(2):667–718.
package summary

import (
	"fmt"
	"math"
	"sort"
	"strings"

	"arrowroot/infer"
)

// A Summary is what is said of one quantity.
type Summary struct {
	Centre    float64 // posterior mean
	Median    float64
	Spread    float64 // posterior sd
	Low, High float64 // the central interval of Level
	Level     float64
	RHat      float64 // NaN for a constant
	BulkESS   float64
	TailESS   float64
	MeanError float64 // Monte Carlo standard error of Centre
	Constant  bool    // every draw is the same, of enough draws to say so
	NotFinite int     // draws that are no finite number; if any, nothing else is said
}

// constantDraws is how many equal draws make a constant: one draw is equal to
// itself, which says nothing.
const constantDraws = 50

// Of summarises the draws of one quantity, one slice for each chain, all of
// the same length. Where a draw is no finite number, or there is none, every
// number of the summary is NaN.
func Of(chains [][]float64, level float64) Summary {
	all := pooled(chains)
	s := Summary{Level: level}
	for _, x := range all {
		if math.IsNaN(x) || math.IsInf(x, 0) {
			s.NotFinite++
		}
	}
	if len(all) == 0 || s.NotFinite > 0 {
		nan := math.NaN()
		return Summary{Level: level, NotFinite: s.NotFinite, Centre: nan, Median: nan, Spread: nan, Low: nan, High: nan, RHat: nan, BulkESS: nan, TailESS: nan, MeanError: nan}
	}
	sort.Float64s(all)
	var variance float64
	s.Centre, variance = meanVariance(all)
	s.Spread = math.Sqrt(variance)
	s.Median = Quantile(all, 0.5)
	s.Low, s.High = Quantile(all, (1-level)/2), Quantile(all, (1+level)/2)
	if all[0] == all[len(all)-1] {
		s.Centre, s.Spread = all[0], 0
		s.Constant = len(all) >= constantDraws
	}
	s.RHat, s.BulkESS, s.TailESS = RHat(chains), BulkESS(chains), TailESS(chains)
	s.MeanError = s.Spread / math.Sqrt(MeanESS(chains))
	if s.Constant {
		s.MeanError = 0
	}
	return s
}

// A Verdict is trust in one word.
type Verdict int

// The verdicts, best first.
const (
	Sound Verdict = iota
	Caution
	Unusable
)

func (v Verdict) String() string { return [...]string{"sound", "caution", "unusable"}[v] }

// Trust is the verdict on a computation, with its reasons.
type Trust struct {
	Verdict Verdict
	Reasons []string // why it is not sound; empty if it is
}

// Sampling is what the sampler itself reported, over all chains.
type Sampling struct {
	Chains     int
	Draws      int // over all chains
	Divergent  int
	AtLimit    int     // iterations at the depth limit
	WorstEBFMI float64 // smallest over chains; NaN if it cannot be said
}

// SamplingOf reads the sampler's report off its draws.
func SamplingOf(d *infer.Draws) Sampling {
	s := Sampling{Chains: len(d.Chains), Draws: d.Steps * len(d.Chains), WorstEBFMI: math.Inf(1)}
	for _, c := range d.Chains {
		for i := range d.Steps {
			if c.Divergent[i] {
				s.Divergent++
			}
			if int(c.Depth[i]) >= d.Limit {
				s.AtLimit++
			}
		}
		if b := EBFMI(c.Energy[:d.Steps]); b < s.WorstEBFMI {
			s.WorstEBFMI = b
		}
	}
	if math.IsInf(s.WorstEBFMI, 1) || d.Dim == 0 {
		s.WorstEBFMI = math.NaN()
	}
	return s
}

// Thresholds of SEMANTICS E; the first two after Vehtari et al. 2021, section 5.
const (
	soundRHat      = 1.01
	soundESS       = 400
	soundEBFMI     = 0.3
	soundAtLimit   = 0.01
	cautionRHat    = 1.05
	cautionESS     = 100
	cautionDiverge = 0.005
	wantedChains   = 4
	leastPerHalf   = 4 // draws of each half chain, without which nothing can be judged
)

// Judge gives the verdict on one quantity computed from a sampling. A
// constant is exempt from what speaks of its draws alone.
func Judge(q Summary, s Sampling) Trust {
	var t Trust
	worsen := func(v Verdict, format string, args ...any) {
		t.Verdict = max(t.Verdict, v)
		t.Reasons = append(t.Reasons, fmt.Sprintf(format, args...))
	}
	if s.Draws == 0 {
		worsen(Unusable, "there are no draws after warm-up")
		return t
	}
	if !q.Constant && s.Draws < 2*leastPerHalf*s.Chains {
		worsen(Unusable, "too few draws to judge")
		return t
	}
	if s.Chains < wantedChains {
		worsen(Caution, "only %d of %d chains were run", s.Chains, wantedChains)
	}
	if share := float64(s.Divergent) / float64(s.Draws); share > cautionDiverge {
		worsen(Unusable, "%d of %d draws diverged", s.Divergent, s.Draws)
	} else if s.Divergent > 0 {
		worsen(Caution, "%d of %d draws diverged", s.Divergent, s.Draws)
	}
	if s.WorstEBFMI < soundEBFMI {
		worsen(Caution, "the energy moves slowly (E-BFMI %.2f)", s.WorstEBFMI)
	}
	if float64(s.AtLimit) >= soundAtLimit*float64(s.Draws) {
		worsen(Caution, "%d of %d trajectories were cut at the depth limit", s.AtLimit, s.Draws)
	}
	if q.NotFinite > 0 {
		worsen(Unusable, "%d of %d draws are not a finite number", q.NotFinite, s.Draws)
		return t
	}
	if q.Constant {
		return t
	}
	if math.IsNaN(q.RHat) || math.IsNaN(q.BulkESS) || math.IsNaN(q.TailESS) {
		worsen(Unusable, "too few draws to judge")
		return t
	}
	switch {
	case math.IsInf(q.RHat, 1):
		worsen(Unusable, "chains disagree: none of them moves")
	case q.RHat >= cautionRHat:
		worsen(Unusable, "chains disagree (R-hat %.2f)", q.RHat)
	case q.RHat >= soundRHat:
		worsen(Caution, "chains do not quite agree (R-hat %.3f)", q.RHat)
	}
	worst := math.Min(q.BulkESS, q.TailESS)
	switch {
	case worst < cautionESS:
		worsen(Unusable, "too few effective draws (%.0f)", worst)
	case worst < soundESS:
		worsen(Caution, "few effective draws (%.0f)", worst)
	}
	return t
}

// Worst joins verdicts: the worst counts, reasons are kept once each.
func Worst(all ...Trust) Trust {
	var t Trust
	seen := make(map[string]bool)
	for _, x := range all {
		t.Verdict = max(t.Verdict, x.Verdict)
		for _, r := range x.Reasons {
			if !seen[r] {
				seen[r] = true
				t.Reasons = append(t.Reasons, r)
			}
		}
	}
	return t
}

func (t Trust) String() string {
	if len(t.Reasons) == 0 {
		return t.Verdict.String()
	}
	return t.Verdict.String() + ": " + strings.Join(t.Reasons, "; ")
}
