package fit

import (
	"math"
	"slices"

	"arrowroot/compile/formula"
	"arrowroot/compile/model"
	"arrowroot/compile/sensitivity"
	"arrowroot/compile/study"
	"arrowroot/infer/summary"
)

// howWrong says how strong an unmeasured cause of exposure and outcome would
// have to be to explain the answer away, beside the held variables: of the held
// number, which they belong to, or of the full model's where that is the only
// one that can be read.
func (e *Effect) howWrong(q study.Question, m *model.Model) {
	n := e.Adjusted
	if n == nil || !e.HeldValid || n.Trust.Verdict >= summary.Unusable {
		n = e.Full
	}
	switch {
	case e.None:
		e.NoSensitivity = "no arrows lead from exposure to outcome, so there is no effect to explain away"
	case e.Cut:
		e.NoSensitivity = stopped
	case n == nil || e.answer() == nil && !e.LawsDisagree:
		e.NoSensitivity = "there is no effect yet that an unmeasured cause could explain away"
	case q.Effect != "" && q.Effect != study.TotalEffect:
		e.NoSensitivity = "it is said of total effects only"
	default:
		in, reason := sensitivityInput(q, m, n, e.Held)
		if e.NoSensitivity = reason; in != nil {
			e.Sensitivity = sensitivity.Of(in)
		}
	}
}

// sensitivityInput reads exposure, outcome and held variables from the rows of
// a model; where the exposure has one value for each level of a plate, all are
// averaged by level, since so many independent values of it there are.
func sensitivityInput(q study.Question, m *model.Model, n *Number, held []string) (*sensitivity.Input, string) {
	x, _ := m.Name(q.Exposure)
	y, _ := m.Name(q.Outcome)
	if x < 0 || y < 0 || m.Variables[x].Values == nil || m.Variables[y].Values == nil {
		return nil, "exposure or outcome has no column of its own in the fitted rows"
	}
	exposure, outcome := m.Variables[x], m.Variables[y]
	if len(exposure.Levels) > 2 && exposure.Scale == study.Ordered {
		plain := *exposure
		plain.Scale = study.Real
		exposure = &plain
	}
	in := &sensitivity.Input{
		ExposureName: q.Exposure, OutcomeName: q.Outcome, Estimate: n.Centre, Low: n.Low, High: n.High, Level: n.Level,
		Spread: n.Spread, Ratio: q.As == study.Ratio, Scale: outcome.Scale, Baseline: n.From.Centre,
	}
	if in.Ratio {
		in.Spread = spreadOfLog(n.Draws)
	}
	by := func(values []float64) []float64 { return values }
	if p := exposure.Plate; p >= 0 {
		by = func(values []float64) []float64 { return averages(values, m.Plates[p]) }
	}
	columns := func(v *model.Variable) [][]float64 {
		all := columnsOf(v, inRows(m, v))
		for i := range all {
			all[i] = by(all[i])
		}
		return all
	}
	ys := inRows(m, outcome)
	switch trials := trialsOf(m, y); {
	case trials != nil:
		in.Chance = true
		for i := range ys {
			ys[i] /= trials[i]
		}
	case outcome.Scale == study.Category || outcome.Scale == study.Ordered:
		in.Chance = true
		for i, code := range ys {
			ys[i] = 0
			if k := int(code); k < len(outcome.Levels) && slices.Contains(q.OutcomeLevels, outcome.Levels[k]) {
				ys[i] = 1
			}
		}
	default:
		ys = sensitivity.OnLinkScale(ys, outcome.Scale)
	}
	in.OutcomeSD = spreadOf(inRows(m, outcome))
	in.Exposure, in.Outcome = columns(exposure), by(ys)
	for _, id := range held {
		if v, _ := m.Name(id); v >= 0 && m.Variables[v].Values != nil {
			in.Covariates = append(in.Covariates, sensitivity.Covariate{Name: id, Columns: columns(m.Variables[v])})
			continue
		}
		in.NotCompared = append(in.NotCompared, id)
	}
	return in, ""
}

// inRows gives one value for each used row; the slice is the caller's.
func inRows(m *model.Model, v *model.Variable) []float64 {
	if v.Plate < 0 {
		return slices.Clone(v.Values)
	}
	out := make([]float64, m.Rows.Used)
	for i, level := range m.Plates[v.Plate].Of {
		out[i] = v.Values[level]
	}
	return out
}

// columnsOf gives a variable as columns of a regression: itself, or an
// indicator of every level but the first of a category.
func columnsOf(v *model.Variable, values []float64) [][]float64 {
	if v.Scale != study.Category && v.Scale != study.Ordered || len(v.Levels) < 3 {
		return [][]float64{values}
	}
	var all [][]float64
	for level := 1; level < len(v.Levels); level++ {
		x := make([]float64, len(values))
		for i, code := range values {
			if int(code) == level {
				x[i] = 1
			}
		}
		all = append(all, x)
	}
	return all
}

// averages gives the mean of each level of a plate.
func averages(values []float64, p *model.Plate) []float64 {
	sum, count := make([]float64, len(p.Levels)), make([]float64, len(p.Levels))
	for i, level := range p.Of {
		sum[level] += values[i]
		count[level]++
	}
	for i := range sum {
		sum[i] /= count[i]
	}
	return sum
}

// trialsOf gives the number of trials in each row; nil where the outcome's law
// has none.
func trialsOf(m *model.Model, outcome int) []float64 {
	for _, l := range m.Laws {
		if l.Variable != outcome || l.Trials == nil {
			continue
		}
		rows := make(map[string][]float64)
		for _, name := range formula.Names(l.Trials) {
			if v, _ := m.Name(name); v >= 0 {
				rows[name] = inRows(m, m.Variables[v])
			}
		}
		out := make([]float64, m.Rows.Used)
		for i := range out {
			out[i] = model.Evaluate(l.Trials, func(e formula.Expr) float64 {
				if name, ok := e.(*formula.Name); ok && rows[name.ID] != nil {
					return rows[name.ID][i]
				}
				return math.NaN()
			})
		}
		return out
	}
	return nil
}

func spreadOfLog(draws []float64) float64 {
	logs := make([]float64, len(draws))
	for i, x := range draws {
		logs[i] = math.Log(x)
	}
	return spreadOf(logs)
}

func spreadOf(values []float64) float64 {
	mean, s := 0.0, 0.0
	for _, x := range values {
		mean += x
	}
	mean /= float64(len(values))
	for _, x := range values {
		s += (x - mean) * (x - mean)
	}
	return math.Sqrt(s / float64(len(values)-1))
}
