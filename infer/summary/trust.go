package summary

import (
	"fmt"
	"math"
	"strings"

	"arrowroot/infer"
)

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
