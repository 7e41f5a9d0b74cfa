package model

import (
	"fmt"
	"slices"

	"arrowroot/compile/causal"
	"arrowroot/compile/formula"
	"arrowroot/compile/study"
)

// A grouped is what a draft carries at the level of a plate (SEMANTICS A6): a
// baseline that varies by it, and the means of variables within its groups.
type grouped struct {
	plate string
	ids   []string
	sake  []string // the unmeasured causes it stands in for; nil = the question holds the plate
	means []int    // variables of the model, once they are there
}

// A groupMean is a variable of the model alone: the mean of another one within
// the groups of a plate, or the share of one of its levels.
type groupMean struct {
	of, plate string
	level     string // of a category or ordered variable; "" = the mean
}

// share puts what left-out causes at the level of plates call for into the
// drafts of a full model.
func (b *builder) share() {
	x, y := b.graph.Index(b.question.Exposure), b.graph.Index(b.question.Outcome)
	for _, s := range causal.SharedCarriers(b.graph, x, y) {
		d := b.draftOf(b.graph.Names[s.Node])
		if d == nil {
			continue
		}
		for _, c := range s.Carried {
			d.carried = append(d.carried, b.carrier(c))
		}
		for _, p := range s.Plates {
			w := grouped{plate: b.graph.Plates[p.Plate].Name, sake: b.carrier(causal.Carried{For: p.For, Node: s.Node}).sake}
			for _, v := range p.Means {
				if id := b.graph.Names[v]; !d.offset(id) {
					w.ids = append(w.ids, id)
				}
			}
			d.within = append(d.within, w)
		}
	}
}

// hold puts a held plate into the draft of the outcome's law.
func (b *builder) hold(d *draft, plate string) {
	w := grouped{plate: plate}
	for _, a := range d.arrows {
		if !d.offset(a.From) {
			w.ids = append(w.ids, a.From)
		}
	}
	d.within = append(d.within, w)
}

// offset reports whether a variable enters a draft with no coefficient: its
// mean within a group then explains nothing of the coefficients.
func (d *draft) offset(id string) bool {
	offsets, _ := typedParts(d.user.Formula, d.variable.ID)
	return slices.Contains(offsets, id) ||
		slices.ContainsFunc(d.arrows, func(a *study.Arrow) bool { return a.From == id && a.Form == study.Offset })
}

// varies adds the baselines that a draft's plates call for, so far as it has
// none yet.
func (d *draft) varies() {
	for _, w := range d.within {
		if !slices.Contains(d.user.VariesBy, w.plate) {
			d.user.VariesBy = append(slices.Clip(d.user.VariesBy), w.plate)
		}
	}
}

// nameMeans gives the means that a draft may read their names, so that a typed
// formula can use them.
func (b *builder) nameMeans(d *draft) {
	for _, w := range d.within {
		for _, id := range w.ids {
			v := b.variable(id)
			if v == nil || v.ID == d.variable.ID {
				continue
			}
			levels := v.Levels
			if !b.takesSteps(&study.Arrow{From: id}) {
				b.nameMean(d, groupMean{of: id, plate: w.plate})
				continue
			}
			for k := 1; k < len(levels); k++ {
				b.nameMean(d, groupMean{of: id, plate: w.plate, level: levels[k]})
			}
		}
	}
}

// nameMean is the name of a mean, "mean_hedge_farm", and of its slope in the
// law of a draft.
func (b *builder) nameMean(d *draft, g groupMean) string {
	id := ""
	for have, known := range b.means {
		if known == g {
			id = have
		}
	}
	if id == "" {
		stem := "mean_" + g.of
		if g.level != "" {
			stem = "share_" + clean(g.level) + "_" + g.of
		}
		stem += "_" + clean(g.plate)
		id = stem
		for n := 2; b.variable(id) != nil || b.scope[id] != (meaning{}); n++ {
			id = fmt.Sprintf("%s_%d", stem, n)
		}
		b.means[id] = g
		b.ledger[id] = &study.Variable{ID: id, Label: g.String(), Unit: g.unit(b.variable(g.of)), Scale: study.Real}
	}
	b.name("beta_"+id+"_"+d.variable.ID, meaning{role: slope, child: d.variable.ID, parent: id})
	return id
}

// String names the mean for people: "mean of hedge within farm".
func (g groupMean) String() string {
	if g.level != "" {
		return fmt.Sprintf("share of %s in %s within %s", g.level, g.of, g.plate)
	}
	return fmt.Sprintf("mean of %s within %s", g.of, g.plate)
}

// brief is the mean in symbols: "mean hedge".
func (g groupMean) brief() string {
	if g.level != "" {
		return "share " + g.level + " of " + g.of
	}
	return "mean " + g.of
}

func (g groupMean) unit(of *study.Variable) string {
	if g.level != "" {
		return ""
	}
	return of.Unit
}

// groupMeans puts the means that a draft reads into the model, and counts
// them. What does not change within the groups has none.
func (b *builder) groupMeans(d *draft) {
	m := b.model
	for i := range d.within {
		w := &d.within[i]
		plate, _ := b.levelsOf(w.plate)
		if plate < 0 {
			continue
		}
		if !b.changes(d.law.Plate, plate) {
			b.stop(Problem{Code: "within", Variable: d.variable.ID, Place: "question",
				Message: fmt.Sprintf("%s cannot be compared within each %s: its own values are no finer than that.", d.variable.ID, w.plate)})
			return
		}
		for _, id := range w.ids {
			at, ok := b.at[id]
			if !ok || id == d.variable.ID || !b.changes(m.Variables[at].Plate, plate) {
				continue
			}
			v := m.Variables[at]
			if !b.takesSteps(&study.Arrow{From: id}) {
				b.keepMean(d, w, groupMean{of: id, plate: w.plate}, plate, func(x float64) float64 { return x })
				continue
			}
			for k := 1; k < len(v.Levels); k++ {
				b.keepMean(d, w, groupMean{of: id, plate: w.plate, level: v.Levels[k]}, plate, func(x float64) float64 {
					if int(x) == k {
						return 1
					}
					return 0
				})
			}
		}
		d.terms += len(w.means)
	}
}

// changes reports whether what lives at a level (−1 = the row) can change
// within the groups of a plate.
func (b *builder) changes(at, plate int) bool {
	if at < 0 {
		return true
	}
	_, same := b.model.LevelOf(plate, at)
	return !same
}

// keepMean works out a mean over the units of the draft's law.
func (b *builder) keepMean(d *draft, w *grouped, g groupMean, plate int, value func(float64) float64) {
	m := b.model
	of := m.Variables[b.at[g.of]]
	id := b.nameMean(d, g)
	if at, ok := b.at[id]; ok {
		w.means = append(w.means, at)
		return
	}
	out := &Variable{ID: id, Label: g.String(), Unit: b.variable(id).Unit, Scale: study.Real, Plate: plate,
		Low: of.Low, High: of.High, RangeGiven: of.RangeGiven, MeanOf: of.ID, ShareOf: g.level}
	if g.level != "" {
		out.Low, out.High, out.RangeGiven = 0, 1, true
	}
	if of.Values != nil {
		groups, _ := m.LevelOf(d.law.Plate, plate)
		own := b.evaluateAt(named(g.of), d.law.Plate, len(groups))
		out.Values = make([]float64, len(m.Plates[plate].Levels))
		units := make([]float64, len(out.Values))
		moves := false
		first := make([]float64, len(out.Values))
		for i, j := range groups {
			if units[j] == 0 {
				first[j] = own[i]
			}
			moves = moves || own[i] != first[j]
			out.Values[j] += value(own[i])
			units[j]++
		}
		for j := range out.Values {
			out.Values[j] /= units[j]
		}
		if !moves {
			b.unmoved(of, g.plate)
			return
		}
		if low, high := extent(out.Values); low == high {
			return // all groups are alike: the baseline has it
		}
	}
	b.at[id] = len(m.Variables)
	w.means = append(w.means, len(m.Variables))
	m.Variables = append(m.Variables, out)
}

// unmoved reports an exposure that nowhere changes within a held group. Other
// variables of the kind are part of what the groups are held for.
func (b *builder) unmoved(v *Variable, plate string) {
	if v.ID != b.question.Exposure {
		return
	}
	to := *b.variable(v.ID)
	to.Plates = []string{plate}
	repairs := []Repair{{Label: "Say that " + v.ID + " has one value per " + plate, Edit: changeVariable(to)}}
	if slices.Contains(b.question.Held, plate) {
		repairs = append(repairs, b.reask("Do not hold "+plate, func(q *study.Question) {
			q.Held = slices.DeleteFunc(append([]string{}, q.Held...), func(h string) bool { return h == plate })
		})...)
	}
	b.stop(Problem{Code: "within", Variable: v.ID, Place: "question", Repairs: repairs,
		Message: fmt.Sprintf("%s has one value throughout each %s in these data, so that nothing is left to compare within it.", v.ID, plate)})
}

// meanTerms are the means' part of a predictor, those left aside that a typed
// formula reads itself.
func (b *builder) meanTerms(d *draft) []formula.Expr {
	var terms []formula.Expr
	var typed []string
	if d.formula != nil {
		typed = formula.Names(d.formula)
	}
	for _, w := range d.within {
		for _, at := range w.means {
			id := b.model.Variables[at].ID
			if slices.Contains(typed, id) {
				continue
			}
			terms = append(terms, b.term(d, &study.Arrow{From: id, To: d.variable.ID}, true, -1))
			d.law.Terms[len(d.law.Terms)-1].Kind = GroupMean
		}
	}
	return terms
}

// readsMean reports whether a draft carries the mean of that name.
func (b *builder) readsMean(d *draft, id string) bool {
	g, known := b.means[id]
	return known && slices.ContainsFunc(d.within, func(w grouped) bool { return w.plate == g.plate && slices.Contains(w.ids, g.of) })
}

// around are the baselines by plate that a typed formula lacks, as deviations
// from what it has.
func (b *builder) around(d *draft) []formula.Expr {
	_, has := typedParts(d.user.Formula, d.variable.ID)
	var terms []formula.Expr
	for _, w := range d.within {
		if slices.Contains(has, w.plate) {
			continue
		}
		m := meaning{role: baselineBy, child: d.variable.ID, plate: w.plate}
		d.around0 = append(d.around0, m)
		terms = append(terms, by(b.model.Parameters[b.parameter(m)].Name, w.plate))
	}
	return terms
}
