package effect

import (
	"context"
	"fmt"
	"math"
	"math/rand/v2"
	"slices"

	"arrowroot/compile/catalog"
	"arrowroot/compile/model"
	"arrowroot/compile/study"
)

// paintShare is the part of the budget that one arrow or node may use.
const paintShare = 32

// Arrows gives every drawn arrow of the model's laws (SEMANTICS G): the mean
// change in the child's expectation as the parent moves over its central 80 %,
// other parents and carriers at row values, in plausible widths of the child.
// A parent of levels moves between the two that differ most on average over
// the draws, the same two in every draw.
func Arrows(ctx context.Context, m *model.Model, draws [][]float64, opt Options) ([]ArrowEffect, error) {
	p, err := newPlanner(m)
	if err != nil {
		return nil, err
	}
	var out []ArrowEffect
	for _, l := range m.Laws {
		for _, parent := range l.Drawn {
			a, err := p.arrow(ctx, parent, l.Variable, draws, opt)
			if err != nil {
				return nil, err
			}
			out = append(out, *a)
		}
	}
	return out, nil
}

func (p *planner) arrow(ctx context.Context, parent, child int, draws [][]float64, opt Options) (*ArrowEffect, error) {
	from, to := p.m.Variables[parent], p.m.Variables[child]
	s, err := p.paintScale(child)
	if err != nil {
		return nil, err
	}
	plan, err := p.plan([]pin{p.pin(parent, 0, nil)}, true, target{variable: child, scale: s})
	if err != nil {
		return nil, err
	}
	out := &ArrowEffect{From: from.ID, To: to.ID, Unsigned: s.parts() > 1}
	sim := &simulation{planner: p, plan: plan, draws: draws, opt: opt.share(), every: true}
	sim.summary = func(sides [][]float64) float64 { return change(s, sides[0], sides[1]) }

	levels := levelsOf(from)
	if levels > 0 {
		for k := range levels {
			x := float64(k)
			sim.arms = append(sim.arms, arm{set: &x})
		}
	} else {
		out.Low, out.High = central(rowsOf(p.m, nil, 0).columns[parent])
		out.Per = niceStep(from.High - from.Low)
		sim.arms = []arm{{set: &out.Low}, {set: &out.High}, {}, {shift: out.Per}}
	}
	if err := sim.run(ctx, rand.NewPCG(0, 0)); err != nil { // nothing is simulated here
		return nil, err
	}
	low, high := 0, 1
	if levels > 2 {
		low, high = sim.widest()
		out.Low, out.High = float64(low), float64(high)
	} else if levels == 2 {
		out.High = 1
	}
	width := p.width(child)
	for i := range sim.values {
		out.Values = append(out.Values, change(s, sim.mean(i, low), sim.mean(i, high))/width)
	}
	p.describe(out, sim, from, to, low, high, levels, opt)
	return out, nil
}

// describe fills Words, and PerUnit where a unit means the same throughout.
func (p *planner) describe(out *ArrowEffect, sim *simulation, from, to *model.Variable, low, high, levels int, opt Options) {
	s := sim.plan.targets[0].scale
	bent := p.bent(from, to)
	if levels == 0 && !bent {
		low, high = 2, 3
	}
	law := p.laws[p.variables[to.ID]]
	out.Ratio = s.parts() == 1 && law != nil && law.Family.Link == catalog.Log
	per := make([]float64, len(sim.values))
	for i := range per {
		a, b := sim.mean(i, low), sim.mean(i, high)
		if out.Ratio {
			per[i] = b[0] / a[0]
		} else {
			per[i] = change(s, a, b)
		}
	}
	level := opt.Level
	if level == 0 {
		level = defaultLevel
	}
	what := ""
	switch {
	case s.parts() > 1:
		what = " of the probability of " + to.ID
	case s.levels > 0:
		what = fmt.Sprintf(" in P(%s or above)", name(to, s.levels/2))
	case !out.Ratio && to.Unit != "" && law != nil && law.Family.Support != catalog.UpTo:
		what = " " + to.Unit
	}
	if levels > 0 {
		out.Words = amountWords(per, out.Ratio, level) + what + ", " + name(from, high) + " against " + name(from, low)
		return
	}
	if bent { // a unit of it does not do the same everywhere
		out.Words = amountWords(per, out.Ratio, level) + what + " from " + short(out.Low) + " to " + short(out.High)
		if from.Unit != "" {
			out.Words += " " + from.Unit
		}
		return
	}
	out.PerUnit = per
	out.Words = amountWords(per, out.Ratio, level) + what + " per " + short(out.Per)
	if from.Unit != "" {
		out.Words += " " + from.Unit
	}
}

// bent reports whether a parent acts by a form that is no straight line in the
// default predictor of a child.
func (p *planner) bent(from, to *model.Variable) bool {
	return slices.ContainsFunc(p.m.Laws, func(l *model.Law) bool {
		return p.m.Variables[l.Variable] == to && slices.ContainsFunc(l.Terms, func(t model.Term) bool {
			return t.Variable >= 0 && p.m.Variables[t.Variable] == from && (t.Kind == model.Log || t.Kind == model.Threshold || t.Kind == model.Saturating)
		})
	})
}

// name is the word of a level.
func name(v *model.Variable, k int) string {
	if k < len(v.Levels) {
		return v.Levels[k]
	}
	return fmt.Sprint(k)
}

// widest finds the two arms that differ most on average over the draws, the
// lower numbered first.
func (s *simulation) widest() (low, high int) {
	most := -1.0
	for a := range s.arms {
		for b := a + 1; b < len(s.arms); b++ {
			mean := 0.0
			for i := range s.values {
				mean += change(s.plan.targets[0].scale, s.mean(i, a), s.mean(i, b))
			}
			if math.Abs(mean) > most {
				most, low, high = math.Abs(mean), a, b
			}
		}
	}
	return low, high
}

// levelsOf is the number of levels of a parent that steps between them; 0 for
// a number.
func levelsOf(v *model.Variable) int {
	switch v.Scale {
	case study.Binary:
		return 2
	case study.Category, study.Ordered:
		return len(v.Levels)
	}
	return 0
}

// central gives the bounds of the central 80 % of values, or all of them where
// that is one point.
func central(values []float64) (low, high float64) {
	sorted := slices.Clone(values)
	slices.Sort(sorted)
	low, high = quantile(sorted, 0.1), quantile(sorted, 0.9)
	if low == high && len(sorted) > 0 {
		low, high = sorted[0], sorted[len(sorted)-1]
	}
	return low, high
}

// paintScale is what paint averages of a variable: an ordered one's
// probability of the middle level or above, a category's levels each apart, a
// number's expectation.
func (p *planner) paintScale(variable int) (*scale, error) {
	s, err := p.scaleOf(variable, nil)
	if err == nil && s.levels > 0 && p.m.Variables[variable].Scale == study.Ordered {
		s.event = upperHalf(s.levels)
	}
	return s, err
}

// width is the plausible width of a variable in the unit of what is painted: 1
// for probabilities.
func (p *planner) width(variable int) float64 {
	v := p.m.Variables[variable]
	if l := p.laws[variable]; l != nil && (l.levels > 0 || l.Family.Support == catalog.UpTo || l.Family.Support == catalog.ZeroOne) {
		return 1
	}
	return v.High - v.Low
}

// share is the options of one arrow or node.
func (o Options) share() Options {
	if o.Budget <= 0 {
		o.Budget = defaultBudget
	}
	return Options{Budget: o.Budget / paintShare}
}
