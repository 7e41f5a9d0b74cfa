// Package summary turns draws into numbers that a person can read, with a
// verdict on whether the computation behind them can be trusted. Definitions:
// Vehtari, Gelman, Simpson, Carpenter & Bürkner (2021), Bayesian Analysis
// 16(2):667–718.
//
// Read summary.go (one quantity), trust.go (the verdict), then the diagnostics:
// rhat.go, ess.go and energy.go, over sample.go, chains.go, scores.go,
// quantile.go and autocovariance.go.
package summary

import (
	"math"
	"slices"
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
	slices.Sort(all)
	var variance float64
	s.Centre, variance = meanVariance(all)
	s.Spread = math.Sqrt(variance)
	s.Median = Quantile(all, 0.5)
	s.Low, s.High = Quantile(all, (1-level)/2), Quantile(all, (1+level)/2)
	if all[0] == all[len(all)-1] {
		s.Centre, s.Spread = all[0], 0
		s.Constant = len(all) >= constantDraws
	}
	of := sampleOf(chains)
	s.RHat, s.BulkESS, s.TailESS = of.rHat(), of.bulkESS(), of.tailESS()
	s.MeanError = s.Spread / math.Sqrt(of.meanESS())
	if s.Constant {
		s.MeanError = 0
	}
	return s
}
