package model

import (
	"fmt"
	"maps"
	"math"
	"slices"

	"arrowroot/compile/catalog"
	"arrowroot/compile/formula"
	"arrowroot/compile/study"
)

// explain turns every draft into a law: its predictor as expressions, its
// arguments, and the parameters that these need.
func (b *builder) explain(string) {
	for _, d := range b.drafts {
		b.explainOne(d)
	}
	if b.broken {
		return
	}
	b.unrecorded()
	if len(b.model.Laws) == 0 {
		b.stop(Problem{Code: "nothing", Place: "sheet", Message: "There is nothing to fit on this sheet yet: draw an arrow into a measured variable."})
	}
	for _, id := range slices.Sorted(maps.Keys(b.declared)) {
		if own := b.declared[id]; !own.used && b.kind == Full && b.draftOf(own.owner) != nil {
			b.unusedPrior(id, own)
		}
	}
}

func (b *builder) explainOne(d *draft) {
	m := b.model
	at := b.at[d.variable.ID]
	v := m.Variables[at]
	d.law = &Law{Variable: at, Family: d.family, Plate: v.Plate, Typed: d.formula != nil}
	offsets, _ := typedParts(d.user.Formula, d.variable.ID)
	for _, a := range d.arrows {
		if b.kind == Full || b.drawn(a) {
			d.law.Drawn = append(d.law.Drawn, b.at[a.From])
		}
		if a.Form != "offset" && !slices.Contains(offsets, a.From) {
			d.terms++
		}
	}
	for _, c := range d.carried {
		if !hasArrow(d.arrows, c.id) {
			d.terms++
		}
		d.law.Carried = append(d.law.Carried, Carried{Variable: b.at[c.id], For: c.sake})
	}
	b.groupMeans(d)
	if b.broken {
		return
	}
	d.products = len(b.products(d))
	d.terms += d.products
	if !b.levels(d) {
		return
	}
	if i := d.family.Argument("trials"); i >= 0 {
		d.law.Trials = d.given[i]
	}
	faults := len(b.problems)
	b.support(d)
	b.spanOf(d, len(b.problems) > faults)
	if b.broken {
		return
	}
	m.Laws = append(m.Laws, d.law)
	for _, w := range d.within {
		plate, _ := b.levelsOf(w.plate)
		d.law.Within = append(d.law.Within, Within{Plate: plate, Means: w.means, For: w.sake})
	}
	b.predict(d)
	b.argue(d)
}

// drawn reports whether an arrow of a held or crude model is on the sheet.
func (b *builder) drawn(a *study.Arrow) bool {
	i, j := b.graph.Index(a.From), b.graph.Index(a.To)
	return i >= 0 && j >= 0 && b.graph.HasArrow(i, j)
}

// levels checks that everything a law reads is constant within its units: a
// law per farm cannot read what changes from row to row (SEMANTICS A5).
func (b *builder) levels(d *draft) bool {
	m, own := b.model, d.law.Plate
	fine := true
	check := func(id string, plate int) {
		if own < 0 || plate == own {
			return
		}
		if plate >= 0 {
			if _, ok := m.LevelOf(own, plate); ok {
				return
			}
		}
		fine = false
		b.stop(Problem{Code: "level", Variable: d.variable.ID, Place: "law",
			Message: fmt.Sprintf("%s has one value per %s, but %s changes within it, so the law of %s cannot read it.", d.variable.ID, m.Plates[own].Name, id, d.variable.ID)})
	}
	for _, i := range append(append([]int(nil), d.law.Drawn...), carriedVariables(d.law)...) {
		check(m.Variables[i].ID, m.Variables[i].Plate)
	}
	for _, e := range d.expressions() {
		for _, n := range formula.Names(e) {
			if i, ok := b.at[n]; ok && !slices.Contains(d.law.Drawn, i) {
				check(n, m.Variables[i].Plate)
			}
		}
	}
	return fine
}

func carriedVariables(l *Law) []int {
	var out []int
	for _, c := range l.Carried {
		out = append(out, c.Variable)
	}
	return out
}

// spanOf reads the child's plausible range on its predictor's scale. Where
// values were found that the law cannot take, nothing more is said of it.
func (b *builder) spanOf(d *draft, faulty bool) {
	m := b.model
	v := m.Variables[d.law.Variable]
	low, high, shares := v.Low, v.High, false
	if d.law.Trials != nil {
		shares = true
		trials := b.evaluateAt(d.law.Trials, d.law.Plate, len(v.Values))
		if v.RangeGiven {
			n := median(trials)
			if math.IsNaN(n) || n <= 0 {
				n = high
			}
			low, high = low/n, high/n
		} else {
			share := make([]float64, len(v.Values))
			for i, k := range v.Values {
				share[i] = k / trials[i]
			}
			low, high = extent(share)
		}
	}
	d.span = onLink(v, d.family, low, high, shares)
	if w := d.span.width(); !(w > 0) || math.IsInf(w, 0) {
		switch {
		case faulty:
			b.broken = true
		case v.RangeGiven:
			b.stop(Problem{Code: "range", Variable: v.ID, Place: "range",
				Repairs: []Repair{b.rangeSeen(d.variable)},
				Message: fmt.Sprintf("The plausible range of %s, %s, leaves nothing that %s can take.", v.ID, span(v.Low, v.High), article(d.family.Name))})
		default:
			b.stop(Problem{Code: "constant", Variable: v.ID, Place: "data",
				Message: fmt.Sprintf("%s is %s in every used row: nothing can be learned about it, and no prior can be made from its range.", v.ID, short(v.Low))})
		}
	}
}

// evaluateAt works out an expression of data for each unit of a plate.
func (b *builder) evaluateAt(e formula.Expr, plate, units int) []float64 {
	m := b.model
	out := make([]float64, units)
	of := make(map[int][]int32)
	for i := range out {
		out[i] = Evaluate(e, func(e formula.Expr) float64 {
			n, ok := e.(*formula.Name)
			if !ok {
				return math.NaN()
			}
			j, ok := b.at[n.ID]
			if !ok || m.Variables[j].Values == nil {
				return math.NaN()
			}
			v := m.Variables[j]
			if v.Plate < 0 || v.Plate == plate {
				return v.Values[i]
			}
			if of[v.Plate] == nil {
				of[v.Plate], _ = m.LevelOf(plate, v.Plate)
			}
			return v.Values[of[v.Plate][i]]
		})
	}
	return out
}

// takesSteps reports whether an arrow enters with a step for each level, free
// of each other. Those of an ordered parent go one way if it is asked for.
func (b *builder) takesSteps(a *study.Arrow) bool {
	switch b.variable(a.From).Scale {
	case study.Category:
		return true
	case study.Ordered:
		return a.Form == "" || a.Form == study.Steps
	}
	return false
}

// argue fills the arguments that no arrow predicts.
func (b *builder) argue(d *draft) {
	f := d.family
	d.law.Arguments = make([]formula.Expr, len(f.Arguments))
	for i, a := range f.Arguments {
		predicted := i == f.Predicted && len(d.law.Predictors) > 0
		switch {
		case predicted:
		case d.given[i] != nil:
			d.law.Arguments[i] = b.resolve(d, d.given[i])
			if n, ok := d.given[i].(*formula.Name); ok && a.Support == catalog.Positives {
				b.keepPositive(d, n.ID)
			}
		case f.Link.Cumulative():
			d.law.Cutpoints = b.model.Parameters[b.parameter(meaning{role: cutPoints, child: d.variable.ID})].Name
		case f.Predicted < 0:
			b.stop(Problem{Code: "no-argument", Variable: d.variable.ID, Place: "argument",
				Message: fmt.Sprintf("%s ~ %s: its %s must be given.", d.variable.ID, f.Name, a.Name),
				Repairs: []Repair{b.defaultFamily(d.variable, scaleOf(d.variable))}})
		default:
			d.law.Arguments[i] = named(b.model.Parameters[b.parameter(meaning{role: argument, child: d.variable.ID, at: i})].Name)
		}
	}
}

// keepPositive has a user's parameter stay where the argument that it serves
// can be.
func (b *builder) keepPositive(d *draft, id string) {
	_, i := b.model.Name(id)
	if i < 0 || b.model.Parameters[i].Prior.Family == nil {
		return
	}
	p := b.model.Parameters[i]
	p.Support = catalog.Positives
	own := b.declared[id]
	fault := func(format string, args ...any) {
		p := Problem{Code: "prior", Variable: d.variable.ID, Place: "prior", Message: fmt.Sprintf("%s, prior of %s: ", d.variable.ID, id) + fmt.Sprintf(format, args...)}
		if own != nil {
			p.Repairs = []Repair{{Label: "Use half-normal with scale 1", Edit: b.changePrior(own.owner, id, "half-normal with scale 1")}}
		}
		b.stop(p)
	}
	if nothingAbove0(p.Prior.Family, p.Prior.Arguments) {
		fault("%s must be positive, and this prior lies below 0.", id)
		return
	}
	fixed := !slices.ContainsFunc(p.Prior.Arguments, func(e formula.Expr) bool { return len(formula.Names(e)) > 0 })
	if p.Prior.Family.Support == catalog.Reals && !fixed {
		fault("%s must be positive, and a %s prior reaches below 0; half-normal does not.", id, p.Prior.Family.Name)
	}
}
