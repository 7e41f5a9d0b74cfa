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

// A pair of parents that act together.
type pairOf struct{ first, second string }

// products lists the products that arrows ask for, each pair once, in the
// order of the arrows. A category stands first.
func (b *builder) products(d *draft) []pairOf {
	var out []pairOf
	for _, a := range d.arrows {
		for _, w := range a.With {
			if w == a.From || !hasArrow(d.arrows, w) {
				continue
			}
			p := pairOf{a.From, w}
			if b.variable(w).Scale == study.Category {
				p = pairOf{w, a.From}
			}
			if !slices.Contains(out, p) && !slices.Contains(out, pairOf{p.second, p.first}) {
				out = append(out, p)
			}
		}
	}
	return out
}

// predict makes the predictor, K of them for a category child.
func (b *builder) predict(d *draft) {
	f := d.family
	if f.Predicted < 0 || d.given[f.Predicted] != nil {
		if len(d.arrows)+len(d.carried) > 0 {
			b.stop(Problem{Code: "not-predictable", Variable: d.variable.ID, Place: "law",
				Message: fmt.Sprintf("%s ~ %s: nothing can act on %s, since no argument of %s can be predicted.", d.variable.ID, f.Name, d.variable.ID, article(f.Name)),
				Repairs: []Repair{b.defaultFamily(d.variable, scaleOf(d.variable))}})
		}
		return
	}
	if d.formula != nil {
		terms := []formula.Expr{b.resolve(d, d.formula)}
		for _, c := range d.carried {
			if !slices.Contains(formula.Names(d.formula), c.id) {
				terms = append(terms, b.term(d, &study.Arrow{From: c.id, To: d.variable.ID}, true, -1))
			}
		}
		if b.kind != Full { // what the exposure or the held set adds to it
			for _, a := range d.arrows {
				if !slices.Contains(formula.Names(d.formula), a.From) {
					terms = append(terms, b.term(d, a, false, -1))
				}
			}
		}
		terms = append(append(terms, b.around(d)...), b.meanTerms(d)...)
		d.law.Terms = nil
		d.law.Predictors = []formula.Expr{sum(terms)}
		return
	}
	d.varies()
	if f.Link != catalog.Softmax {
		d.law.Predictors = []formula.Expr{b.linear(d, -1)}
		return
	}
	for k := range b.model.Variables[d.law.Variable].Levels {
		terms := d.law.Terms
		d.law.Predictors = append(d.law.Predictors, b.linear(d, k))
		if k > 0 {
			d.law.Terms = terms // one list of terms serves all levels
		}
	}
}

// linear is the default predictor: a baseline and one term for each arrow,
// product, carried variable and offset. level is the level of a category child
// whose predictor it is, −1 otherwise.
func (b *builder) linear(d *draft, level int) formula.Expr {
	var terms []formula.Expr
	if !d.family.Link.Cumulative() || len(d.user.VariesBy) > 0 {
		terms = append(terms, b.baseline(d, level)...)
	}
	var offsets []formula.Expr
	for _, a := range d.arrows {
		if a.Form == "offset" {
			offsets = append(offsets, b.offset(d, a))
			continue
		}
		terms = append(terms, b.term(d, a, false, level))
	}
	for _, p := range b.products(d) {
		terms = append(terms, b.productTerm(d, p, level))
	}
	for _, c := range d.carried {
		if !hasArrow(d.arrows, c.id) {
			terms = append(terms, b.term(d, &study.Arrow{From: c.id, To: d.variable.ID}, true, level))
		}
	}
	terms = append(terms, b.meanTerms(d)...)
	return sum(append(terms, offsets...))
}

// baseline is alpha, around which the entries of the first plate vary; the
// entries of further plates are deviations from it.
func (b *builder) baseline(d *draft, level int) []formula.Expr {
	v := d.variable.ID
	if level >= 0 {
		if len(d.within) > 0 {
			b.stop(Problem{Code: "varying-category", Variable: v, Place: "law",
				Message: fmt.Sprintf("%s is a category: this version does not compare one within the groups of %s.", v, d.within[0].plate)})
			return []formula.Expr{number(0)}
		}
		if len(d.user.VariesBy) > 0 {
			b.stop(Problem{Code: "varying-category", Variable: v, Place: "law",
				Message: fmt.Sprintf("%s is a category: this version fits no baseline that varies for it.", v),
				Repairs: []Repair{{Label: "Keep one baseline", Edit: b.changeLaw(v, func(l *study.Law) { l.VariesBy = nil })}}})
		}
		i := b.parameter(meaning{role: baseline, child: v})
		d.law.Terms = append(d.law.Terms, Term{Kind: Baseline, Variable: -1, With: -1, VariesBy: -1, Parameters: []int{i}})
		return []formula.Expr{&formula.Element{Vector: named(b.model.Parameters[i].Name), At: level}}
	}
	if len(d.user.VariesBy) == 0 {
		i := b.parameter(meaning{role: baseline, child: v})
		d.law.Terms = append(d.law.Terms, Term{Kind: Baseline, Variable: -1, With: -1, VariesBy: -1, Parameters: []int{i}})
		return []formula.Expr{named(b.model.Parameters[i].Name)}
	}
	var terms []formula.Expr
	for _, p := range d.user.VariesBy {
		i := b.parameter(meaning{role: baselineBy, child: v, plate: p})
		d.law.Terms = append(d.law.Terms, Term{Kind: Baseline, Variable: -1, With: -1, VariesBy: b.model.Parameters[i].Plate, Parameters: []int{i}})
		terms = append(terms, by(b.model.Parameters[i].Name, p))
	}
	return terms
}

// term is one arrow's or carried variable's part of the predictor.
func (b *builder) term(d *draft, a *study.Arrow, carried bool, level int) (part formula.Expr) {
	v, p := d.variable.ID, a.From
	parent := b.model.Variables[b.at[p]]
	t := Term{Kind: Slope, Variable: b.at[p], With: -1, VariesBy: -1, Carried: carried}
	defer func() {
		t.Part = part
		d.law.Terms = append(d.law.Terms, t)
	}()
	if b.takesSteps(a) {
		t.Kind = Steps
		if reason, repairs := b.stepsFault(a); reason != "" {
			b.stop(Problem{Code: "form", Variable: v, Place: "arrow", From: p, Message: fmt.Sprintf("%s → %s: %s", p, v, reason), Repairs: repairs})
			return number(0)
		}
		i := b.parameter(meaning{role: steps, child: v, parent: p, at: level + 1})
		t.Parameters = []int{i}
		return of(b.model.Parameters[i].Name, p)
	}
	if reason, repairs := b.formFault(d, a); reason != "" {
		b.stop(Problem{Code: "form", Variable: v, Place: "arrow", From: p, Message: fmt.Sprintf("%s → %s: %s", p, v, reason), Repairs: repairs})
		return number(0)
	}
	t.Kind, t.Center = kindOf(a.Form), b.formCenter(a.Form, parent)
	x, inner := b.bent(d, a.Form, parent)
	defer func() {
		t.Parameters = append(t.Parameters, inner...)
		t.Inner = inner
	}()
	if level >= 0 {
		i := b.parameter(meaning{role: slope, child: v, parent: p})
		t.Parameters = []int{i}
		return times(&formula.Element{Vector: named(b.model.Parameters[i].Name), At: level}, x)
	}
	if len(a.VariesBy) == 0 {
		i := b.parameter(meaning{role: slope, child: v, parent: p})
		t.Parameters = []int{i}
		return times(named(b.model.Parameters[i].Name), x)
	}
	var coefficients []formula.Expr
	for _, plate := range a.VariesBy {
		i := b.parameter(meaning{role: slopeBy, child: v, parent: p, plate: plate})
		t.Parameters = append(t.Parameters, i)
		t.VariesBy = b.model.Parameters[i].Plate
		coefficients = append(coefficients, by(b.model.Parameters[i].Name, plate))
	}
	return times(sum(coefficients), x)
}

// productTerm is the part in which two parents act together.
func (b *builder) productTerm(d *draft, p pairOf, level int) formula.Expr {
	v := d.variable.ID
	first, second := b.model.Variables[b.at[p.first]], b.model.Variables[b.at[p.second]]
	t := Term{Kind: Product, Variable: b.at[p.first], With: b.at[p.second], VariesBy: -1}
	defer func() { d.law.Terms = append(d.law.Terms, t) }()
	if second.Scale == study.Category || level >= 0 && first.Scale == study.Category {
		b.stop(Problem{Code: "form", Variable: v, Place: "arrow",
			Message: fmt.Sprintf("%s and %s act on %s as a product, which this version knows for numbers, and for one category with a number.", p.first, p.second, v)})
		return number(0)
	}
	for _, p := range [2]string{p.first, p.second} {
		if form := d.formTo(p); bends(form) && form != study.Log {
			a := d.arrows[slices.IndexFunc(d.arrows, func(a *study.Arrow) bool { return a.From == p })]
			b.stop(Problem{Code: "form", Variable: v, Place: "arrow", From: p,
				Message: fmt.Sprintf("%s → %s is of the form “%s”, of which this version knows no product.", p, v, form),
				Repairs: []Repair{{Label: "Use a slope", Edit: b.changeArrow(a, func(a *study.Arrow) { a.Form = study.Slope })}}})
			return number(0)
		}
	}
	t.WithCenter = b.formCenter(d.formTo(p.second), second)
	y, _ := b.bent(d, d.formTo(p.second), second)
	if first.Scale == study.Category {
		i := b.parameter(meaning{role: stepsProduct, child: v, parent: p.first, with: p.second})
		t.Parameters = []int{i}
		return times(of(b.model.Parameters[i].Name, p.first), y)
	}
	t.Center = b.formCenter(d.formTo(p.first), first)
	x, _ := b.bent(d, d.formTo(p.first), first)
	i := b.parameter(meaning{role: product, child: v, parent: p.first, with: p.second})
	t.Parameters = []int{i}
	var coefficient formula.Expr = named(b.model.Parameters[i].Name)
	if level >= 0 {
		coefficient = &formula.Element{Vector: named(b.model.Parameters[i].Name), At: level}
	}
	return times(times(coefficient, x), y)
}

// center is the middle of a parent's plausible range (SEMANTICS C1).
func (b *builder) center(v *Variable) float64 {
	return roundTo((v.Low+v.High)/2, v.High-v.Low)
}

// offset is the log of a parent, with no coefficient.
func (b *builder) offset(d *draft, a *study.Arrow) formula.Expr {
	v, parent := d.variable.ID, b.model.Variables[b.at[a.From]]
	use := Repair{Label: "Use a slope", Edit: b.changeArrow(a, func(a *study.Arrow) { a.Form = "slope" })}
	if d.family.Link != catalog.Log {
		b.stop(Problem{Code: "offset-link", Variable: v, Place: "arrow", From: a.From,
			Message: fmt.Sprintf("%s → %s is an offset, which multiplies the mean; that needs a law with a log link, and %s has none.", a.From, v, article(d.family.Name)),
			Repairs: []Repair{use}})
		return number(0)
	}
	low, _ := extent(parent.Values)
	if parent.Scale == study.Category || parent.Scale == study.Ordered || low <= 0 {
		text := fmt.Sprintf("%s → %s is an offset, so %s must be positive", a.From, v, a.From)
		if i := slices.Index(parent.Values, low); i >= 0 && parent.Scale != study.Category && parent.Scale != study.Ordered {
			text += fmt.Sprintf("; its smallest value is %s (row %d)", short(low), b.rowOf(parent, i)+1)
		}
		b.stop(Problem{Code: "offset-positive", Variable: a.From, Place: "data", Message: text + ".", Repairs: []Repair{use}})
		return number(0)
	}
	d.law.Terms = append(d.law.Terms, Term{Kind: Offset, Variable: b.at[a.From], With: -1, VariesBy: -1})
	return call("log", named(a.From))
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

// resolve rewrites typed text into the form that Law.Predictors promises:
// every parameter made, every "by" one plate of one vector.
func (b *builder) resolve(d *draft, e formula.Expr) formula.Expr {
	switch e := e.(type) {
	case *formula.Name:
		if _, variable := b.at[e.ID]; !variable {
			b.use(d, e.ID)
		}
	case *formula.By:
		var terms []formula.Expr
		for _, plate := range e.Plates {
			terms = append(terms, b.resolveBy(d, e.Name.ID, plate))
		}
		return sum(terms)
	case *formula.Of:
		b.useVector(d, e.Vector.ID, e.Variable.ID)
	case *formula.Unary:
		return &formula.Unary{Span: e.Span, Op: e.Op, X: b.resolve(d, e.X)}
	case *formula.Binary:
		return &formula.Binary{Span: e.Span, Op: e.Op, X: b.resolve(d, e.X), Y: b.resolve(d, e.Y)}
	case *formula.Call:
		out := &formula.Call{Span: e.Span, Function: e.Function}
		for _, a := range e.Args {
			out.Args = append(out.Args, b.resolve(d, a))
		}
		return out
	}
	return e
}

func (b *builder) resolveBy(d *draft, id, plate string) formula.Expr {
	m, canonical := b.scope[id]
	switch {
	case canonical && m.role == baseline:
		m.role, m.plate = baselineBy, plate
	case canonical && m.role == slope:
		m.role, m.plate = slopeBy, plate
	case canonical: // "alpha_bees_year by year": deviations around 0
		d.around0 = append(d.around0, m)
	default:
		m = meaning{role: freeBy, name: id, plate: plate}
	}
	return by(b.model.Parameters[b.parameter(m)].Name, plate)
}

// use makes the scalar parameter that a name means.
func (b *builder) use(d *draft, id string) {
	if m, ok := b.scope[id]; ok {
		b.parameter(m)
		return
	}
	b.parameter(meaning{role: free, name: id})
}

// useVector makes the steps that "vector of variable" reads.
func (b *builder) useVector(d *draft, id, variable string) {
	if m, ok := b.scope[id]; ok {
		b.parameter(m)
		return
	}
	b.parameter(meaning{role: free, name: id, parent: variable})
}
