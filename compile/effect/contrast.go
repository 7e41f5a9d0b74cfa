package effect

import (
	"context"
	"fmt"
	"math"
	"math/rand/v2"
	"slices"

	"arrowroot/compile/causal"
	"arrowroot/compile/model"
	"arrowroot/compile/study"
)

// Simulate gives the contrast of a full model: expected outcomes with the
// exposure set, what descends from it simulated from the fitted laws in order,
// everything else at row values (SEMANTICS B1–B7). What a controlled direct
// effect fixes is set together with the exposure. The case and the districts
// come from Districts; in case (c) the error is a *NotSimulated. Rows are the
// fitted ones, or those of them that the question asks about; for a question
// about a population like these, each draw weighs the outermost groups by a
// Bayesian bootstrap; for one about new groups, what varies by a plate is drawn
// anew. The same source gives the same values.
func Simulate(ctx context.Context, m *model.Model, c causal.Case, districts map[string][]string, q study.Question, draws [][]float64, src rand.Source, opt Options) (*Contrast, error) {
	if c == causal.NotSimulated {
		return nil, &NotSimulated{q.Exposure, q.Outcome}
	}
	return contrast(ctx, m, districts, q, draws, src, opt, false)
}

// FromLaw gives the contrast of a held or crude model: the outcome's law with
// the exposure set, mediators left out, averaged over the same rows.
func FromLaw(ctx context.Context, m *model.Model, q study.Question, draws [][]float64, src rand.Source, opt Options) (*Contrast, error) {
	return contrast(ctx, m, nil, q, draws, src, opt, true)
}

// FromLawThrough is FromLaw for an outcome that is computed from the variable
// whose law m holds: that law is simulated, since the formula may bend its
// noise, and the outcome worked out of it. Steps are the computed variables in
// between and the outcome, each after those it reads.
func FromLawThrough(ctx context.Context, m *model.Model, steps []*model.Variable, q study.Question, draws [][]float64, src rand.Source, opt Options) (*Contrast, error) {
	with := *m
	with.Variables = slices.Clip(m.Variables)
	for _, v := range steps {
		bare := *v
		bare.Plate, bare.Values = -1, nil // worked out at every row
		with.Variables = append(with.Variables, &bare)
	}
	return contrast(ctx, &with, nil, q, draws, src, opt, false)
}

// NoChange gives the contrast where no arrows lead from exposure to outcome:
// the expected outcome as it is, and exactly no change.
func NoChange(ctx context.Context, m *model.Model, q study.Question, draws [][]float64, src rand.Source, opt Options) (*Contrast, error) {
	p, err := newPlanner(m)
	if err != nil {
		return nil, err
	}
	outcome, ok := p.variables[q.Outcome]
	if !ok {
		return nil, &unknownError{q.Outcome}
	}
	c, err := p.compare(ctx, nil, outcome, [2]arm{}, q, draws, src, opt, false)
	if err != nil {
		return nil, err
	}
	c.Exact = true
	copy(c.Expected.To, c.Expected.From)
	for i := range c.Values {
		c.Values[i] = 0
		if q.As == study.Ratio {
			c.Values[i] = 1
		}
	}
	return c, nil
}

func contrast(ctx context.Context, m *model.Model, districts map[string][]string, q study.Question, draws [][]float64, src rand.Source, opt Options, alone bool) (*Contrast, error) {
	p, err := newPlanner(m)
	if err != nil {
		return nil, err
	}
	exposure, outcome, err := p.ends(&q)
	if err != nil {
		return nil, err
	}
	from, to, err := arms(m.Variables[exposure], &q)
	if err != nil {
		return nil, err
	}
	pins, err := p.pins(exposure, districts, &q)
	if err != nil {
		return nil, err
	}
	return p.compare(ctx, pins, outcome, [2]arm{from, to}, q, draws, src, opt, alone)
}

// pins sets the exposure and what the question fixes. What no law reads need
// not be set.
func (p *planner) pins(exposure int, districts map[string][]string, q *study.Question) ([]pin, error) {
	out := []pin{p.pin(exposure, 0, p.indices(districts[q.Exposure]))}
	for _, f := range q.Fixed {
		v, ok := p.variables[f.Variable]
		if !ok {
			continue
		}
		at, err := setting(p.m.Variables[v], &f.At)
		if err != nil {
			return nil, err
		}
		out = append(out, p.pin(v, *at, p.indices(districts[f.Variable])))
	}
	return out, nil
}

// compare averages the outcome under two arms.
func (p *planner) compare(ctx context.Context, pins []pin, outcome int, arms [2]arm, q study.Question, draws [][]float64, src rand.Source, opt Options, alone bool) (*Contrast, error) {
	s, err := p.scaleOf(outcome, q.OutcomeLevels)
	if err != nil {
		return nil, err
	}
	plan, err := p.plan(pins, alone, target{variable: outcome, scale: s})
	if err != nil {
		return nil, err
	}
	if s.parts() > 1 {
		return nil, fmt.Errorf("%s has levels; say the probability of which of them is asked for", q.Outcome)
	}
	sim := &simulation{
		planner: p, plan: plan, arms: arms[:], draws: draws, opt: opt,
		bootstrap: q.Over == study.PopulationAlike, newGroups: q.Groups == study.NewGroups, byGroups: q.Weigh == study.ByGroups,
		summary: func(sides [][]float64) float64 {
			if q.As == study.Ratio {
				return sides[1][0] / sides[0][0]
			}
			return sides[1][0] - sides[0][0]
		},
	}
	if err := sim.run(ctx, src); err != nil {
		return nil, err
	}
	c := &Contrast{Values: sim.values, Draws: sim.picked, Rows: sim.rows.n, Error: sim.noise, Words: sim.words(), New: sim.freshPlates()}
	for i := range sim.values {
		c.Expected.From = append(c.Expected.From, sim.mean(i, 0)[0])
		c.Expected.To = append(c.Expected.To, sim.mean(i, 1)[0])
	}
	return c, nil
}

// ends finds a question's exposure and outcome.
func (p *planner) ends(q *study.Question) (exposure, outcome int, err error) {
	for _, end := range []struct {
		id string
		to *int
	}{{q.Exposure, &exposure}, {q.Outcome, &outcome}} {
		v, ok := p.variables[end.id]
		if !ok {
			return 0, 0, fmt.Errorf("%s is not in this fit", end.id)
		}
		*end.to = v
	}
	return exposure, outcome, nil
}

func (p *planner) indices(ids []string) []int {
	var out []int
	for _, id := range ids {
		if v, ok := p.variables[id]; ok { // the unmeasured members have no law here
			out = append(out, v)
		}
	}
	return out
}

// change is the difference between two averages or, of several levels, the
// total variation between them.
func change(s *scale, low, high []float64) float64 {
	if s.parts() == 1 {
		return high[0] - low[0]
	}
	total := 0.0
	for k := range low {
		total += math.Abs(high[k]-low[k]) / 2
	}
	return total
}
