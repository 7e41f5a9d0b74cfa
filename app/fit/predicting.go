package fit

import (
	"context"
	"fmt"
	"math"
	"slices"

	"gonum.org/v1/gonum/floats"

	"arrowroot/compile/effect"
	"arrowroot/infer"
	"arrowroot/infer/score"
	"arrowroot/infer/summary"
)

// Limits of scoring.
const (
	scoredCells   = 8e6 // units × draws kept at a time
	fewestScored  = 400 // draws, whatever the limit says
	scoredForESS  = 200 // units whose effective number of draws is looked at
	newGroupDraws = 1000
)

// A predicting scores one fitted rival.
type predicting struct {
	*contender
	req   *CompareRequest
	run   *Request
	units *leaving
}

// fill scores every unit by reweighting, and those that hang on a few draws by
// leaving them out for true.
func (p *predicting) fill(ctx context.Context, s *Scored, tell func(string) func(infer.Progress)) error {
	n := len(p.units.names)
	predicted, chains, err := p.predict(ctx, s.Fitted, effect.Units{Of: p.units.of, Count: n, New: p.units.plate != ""})
	if err != nil {
		return err
	}
	s.Draws, s.Replicates, s.Simulation = len(predicted.Log[0]), predicted.Replicates, predicted.Error
	by := score.LeaveOneOut(predicted.Log, relative(predicted.Log, chains))
	wide, shaky := score.Widely(predicted.Log)
	s.WideScore, _ = wide.Total()
	s.WideShaky = shaky
	s.K, s.Limit = by.K, by.Relied
	bad := by.Unreliable()
	if len(bad) > mostRefits || s.Trust.Verdict == summary.Unusable {
		for _, u := range bad {
			s.Doubtful = append(s.Doubtful, p.units.names[u])
		}
		bad = nil
	}
	for _, u := range bad {
		exact, err := p.leaveOut(ctx, s, u, tell(fmt.Sprintf("fitting %s without %s", p.rival, p.name(u))))
		if err != nil {
			return err
		}
		if math.IsNaN(exact) {
			s.Doubtful = append(s.Doubtful, p.units.names[u])
			continue
		}
		s.Refitted = append(s.Refitted, p.units.names[u])
		by.Parameters += by.Unit[u] - exact
		by.Unit[u] = exact
	}
	s.Unit, s.Parameters = by.Unit, by.Parameters
	s.Score, s.Error = by.Total()
	return nil
}

func (p *predicting) name(unit int) string {
	if p.units.plate != "" {
		return p.units.plate + " " + p.units.names[unit]
	}
	return p.units.names[unit]
}

// predict gives log densities by unit and draw, of as many draws as there is
// room for, evenly from each chain, and how many chains they come from.
func (p *predicting) predict(ctx context.Context, f *Fitted, units effect.Units) (*effect.Predicted, int, error) {
	most := max(fewestScored, int(scoredCells)/max(units.Count, 1))
	if units.New && len(p.variedBy()) > 0 {
		most = min(most, newGroupDraws)
	}
	each := max(1, most/len(f.Chains))
	step := max(1, (f.Steps()+each-1)/each)
	var draws [][]float64
	for _, c := range f.Chains {
		for i := 0; i < f.Steps(); i += step {
			draws = append(draws, c[i])
		}
	}
	out, err := effect.Predict(ctx, f.Model, p.req.question().Outcome, draws, units, sourceOf(p.req.Seed), effect.Options{})
	return out, len(f.Chains), err
}

// leaveOut fits the rival without one unit and predicts it; NaN where that
// cannot be done or trusted.
func (p *predicting) leaveOut(ctx context.Context, s *Scored, unit int, watch func(infer.Progress)) (float64, error) {
	of := slices.Repeat([]int32{-1}, len(p.units.of))
	var entries []int32
	for i, u := range p.units.of {
		if int(u) == unit {
			of[i], entries = 0, append(entries, int32(i))
		}
	}
	m, err := p.model.Without(p.outcome, entries)
	if err != nil {
		return math.NaN(), nil
	}
	run := *p.run
	run.Chains, run.Draws = len(s.Fitted.Chains), s.Fitted.Steps()
	f, err := whole(sampleModel(ctx, m, &run, "without "+p.units.names[unit], watch))
	if err != nil {
		return 0, err
	}
	if f.Trust.Verdict == summary.Unusable && s.Trust.Verdict != summary.Unusable {
		return math.NaN(), nil
	}
	predicted, _, err := p.predict(ctx, f, effect.Units{Of: of, Count: 1, New: p.units.plate != ""})
	if err != nil {
		return 0, err
	}
	return logMean(predicted.Log[0]), nil
}

// relative is the effective number of draws behind each unit's density, by
// their number; of many units the median of some.
func relative(log [][]float64, chains int) []float64 {
	out := make([]float64, len(log))
	step := max(1, len(log)/scoredForESS)
	var seen []float64
	for u := 0; u < len(log); u += step {
		most := slices.Max(log[u])
		series := make([][]float64, chains)
		each := len(log[u]) / chains
		for c := range series {
			for _, x := range log[u][c*each : (c+1)*each] {
				series[c] = append(series[c], math.Exp(x-most))
			}
		}
		out[u] = 1
		if r := summary.MeanESS(series) / float64(len(log[u])); r > 0 {
			out[u] = min(r, 1)
		}
		seen = append(seen, out[u])
	}
	if step > 1 {
		slices.Sort(seen)
		for u := range out {
			if u%step != 0 {
				out[u] = seen[len(seen)/2]
			}
		}
	}
	return out
}

// logMean is the log of the mean of numbers given by their logs.
func logMean(log []float64) float64 {
	return floats.LogSumExp(log) - math.Log(float64(len(log)))
}
