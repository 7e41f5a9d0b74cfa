package model

import (
	"fmt"
	"math"
	"slices"

	"arrowroot/compile/catalog"
	"arrowroot/compile/formula"
	"arrowroot/compile/study"
)

// Forms of arrows. An arrow's term is a coefficient times what its form makes
// of the parent, which is 0 at the middle of the parent's plausible range, so
// that the baseline is always the predictor there (SEMANTICS C1). How far the
// range then moves the term for a coefficient of 1 is the form's reach, and
// the coefficient's default sd is W/(1.96 √k) divided by it (SEMANTICS C3).

// formTo is the form of the drawn arrow from a parent in a draft's law; "" for
// a slope, and for what no arrow brings.
func (d *draft) formTo(parent string) string {
	for _, a := range d.arrows {
		if a.From == parent && a.Form != study.Slope {
			return a.Form
		}
	}
	return ""
}

// bends reports whether a form makes a parent into something else than itself.
func bends(form string) bool {
	switch form {
	case study.Log, study.OneWay, study.Threshold, study.Saturating:
		return true
	}
	return false
}

// extentOf is a parent's plausible range; for want of one, which stops the fit
// elsewhere, 1 from its low end.
func (b *builder) extentOf(v *Variable) (low, high float64) { return v.Low, v.Low + b.rangeOf(v) }

// logExtent is the range of a positive parent as the log reads it: its low end
// at least a hundredth of the high one, as in SEMANTICS C2.
func (b *builder) logExtent(v *Variable) (low, high float64) {
	low, high = b.extentOf(v)
	return math.Max(low, leastOfHigh*high), high
}

// formCenter is the middle at which a parent's term is 0: the geometric one
// for a log.
func (b *builder) formCenter(form string, v *Variable) float64 {
	if form == study.Log {
		low, high := b.logExtent(v)
		return roundTo(math.Sqrt(low*high), math.Sqrt(low*high))
	}
	return b.center(v)
}

// reach is by how much a form's term moves, in root mean square over the prior
// of what shapes it, as the parent crosses its plausible range with a
// coefficient of 1.
func (b *builder) reach(form string, v *Variable) float64 {
	low, high := b.extentOf(v)
	switch form {
	case study.Log:
		low, high = b.logExtent(v)
		return math.Log(high / low)
	case study.OneWay:
		return 1 // from the first level to the last
	case study.Threshold: // (high − θ)², θ uniform over the range, is R²/3 on average
		return (high - low) / math.Sqrt(3)
	case study.Saturating:
		return saturationReach(low, high)
	}
	return b.rangeOf(v)
}

// saturationReach is the root mean square of high/(high + h) − low/(low + h)
// for h uniform between low and high: √½ from 0, by the midpoint rule
// elsewhere.
func saturationReach(low, high float64) float64 {
	const n = 2000
	total := 0.0
	for i := range n {
		h := low + (high-low)*(float64(i)+0.5)/n
		move := high/(high+h) - low/(low+h)
		total += move * move
	}
	return math.Sqrt(total / n)
}

// formReason says what a form adds to the reason of its coefficient's prior.
func (b *builder) formReason(form string, v *Variable) string {
	switch form {
	case study.Log:
		low, high := b.logExtent(v)
		if low == v.Low {
			return fmt.Sprintf("; range of %s %s on the log scale", v.ID, span(low, high))
		}
		return fmt.Sprintf("; range of %s %s read as %s on the log scale", v.ID, span(v.Low, v.High), span(low, high))
	case study.OneWay:
		return fmt.Sprintf("; of the change from the first level of %s to the last", v.ID)
	case study.Threshold:
		return fmt.Sprintf("; the threshold lies anywhere in the range of %s", v.ID)
	case study.Saturating:
		return fmt.Sprintf("; half of it is reached anywhere in the range of %s", v.ID)
	}
	return ""
}

// seenFor is seenRange for what a form reads of a parent's range.
func seenFor(form string, v *Variable) string {
	if form == study.OneWay {
		return ""
	}
	return seenRange(v)
}

// bent is what a form makes of a parent, and the parameters inside it.
func (b *builder) bent(d *draft, form string, v *Variable) (x formula.Expr, inner []int) {
	c := b.formCenter(form, v)
	minus := func(x, y formula.Expr) formula.Expr { return &formula.Binary{Op: '-', X: x, Y: y} }
	over := func(x, y formula.Expr) formula.Expr { return &formula.Binary{Op: '/', X: x, Y: y} }
	make := func(r role) *formula.Name {
		i := b.parameter(meaning{role: r, child: d.variable.ID, parent: v.ID})
		inner = []int{i}
		return named(b.model.Parameters[i].Name)
	}
	switch form {
	case study.Log:
		return call("log", over(named(v.ID), number(c))), nil
	case study.OneWay:
		// All but the first and the last level lie anywhere between them.
		share := make(shares)
		return minus(of(share.ID, v.ID), number(0.5)), inner
	case study.Threshold:
		theta := make(threshold)
		above := func(x formula.Expr) formula.Expr {
			return &formula.Call{Function: "max", Args: []formula.Expr{number(0), minus(x, theta)}}
		}
		return minus(above(named(v.ID)), above(number(c))), inner
	case study.Saturating:
		half := make(halfway)
		part := func(x formula.Expr) formula.Expr {
			return over(x, &formula.Binary{Op: '+', X: x, Y: half})
		}
		return minus(part(named(v.ID)), part(number(c))), inner
	}
	return centred(v.ID, c), nil
}

// kindOf is the kind of the term that a form makes.
func kindOf(form string) TermKind {
	switch form {
	case study.Log:
		return Log
	case study.OneWay:
		return OneWay
	case study.Threshold:
		return Threshold
	case study.Saturating:
		return Saturating
	}
	return Slope
}

// formFault says why a parent cannot act by a form, and what may be done; ""
// where it can.
func (b *builder) formFault(d *draft, a *study.Arrow) (reason string, repairs []Repair) {
	parent := b.model.Variables[b.at[a.From]]
	numeric := parent.Scale == study.Real || parent.Scale == study.Positive || parent.Scale == study.Proportion || parent.Scale == study.Count
	slope := []Repair{{Label: "Use a slope", Edit: b.changeArrow(a, func(a *study.Arrow) { a.Form = study.Slope })}}
	inGroups := slices.ContainsFunc(d.within, func(w grouped) bool { return slices.Contains(w.ids, a.From) })
	switch a.Form {
	case "", study.Slope:
		return "", nil
	case study.Steps:
		if parent.Scale == study.Binary {
			return "", nil
		}
	case study.OneWay:
		if parent.Scale == study.Ordered {
			if len(a.VariesBy) > 0 {
				return fmt.Sprintf("one-way steps do not vary by %s in this version.", list(a.VariesBy)),
					[]Repair{{Label: "Use the same steps throughout", Edit: b.changeArrow(a, func(a *study.Arrow) { a.VariesBy = nil })}}
			}
			return "", nil
		}
		if parent.Scale == study.Binary {
			return fmt.Sprintf("%s has two levels, so that one-way steps are a plain slope.", a.From), slope
		}
		return fmt.Sprintf("one-way steps need ordered levels, and %s is %s.", a.From, scaleWords(parent.Scale)), slope
	case study.Log, study.Threshold, study.Saturating:
		switch {
		case !numeric:
			return fmt.Sprintf("the form “%s” needs a number, and %s is %s.", a.Form, a.From, scaleWords(parent.Scale)), slope
		case inGroups:
			return fmt.Sprintf("the law of %s compares within groups by group means, which this version knows for slopes and steps, not for the form “%s”.", a.To, a.Form), slope
		}
		if reason := b.notAbove0(a.Form, parent); reason != "" {
			return reason, append(slope, b.asPositive(parent)...)
		}
		return "", nil
	}
	return fmt.Sprintf("“%s” is not a form that %s can take.", a.Form, a.From), slope
}

func scaleWords(s study.Scale) string { return a(s) }

// stepsFault says why a parent with levels cannot act as the arrow says; ""
// where plain steps are meant.
func (b *builder) stepsFault(a *study.Arrow) (reason string, repairs []Repair) {
	scale := scaleWords(b.variable(a.From).Scale)
	plain := []Repair{{Label: "Use plain steps", Edit: b.changeArrow(a, func(a *study.Arrow) { a.Form, a.VariesBy = study.Steps, nil })}}
	switch {
	case a.Form == study.OneWay:
		to := *b.variable(a.From)
		to.Scale = study.Ordered
		return fmt.Sprintf("one-way steps need ordered levels, and %s is %s.", a.From, scale),
			append(plain, Repair{Label: "Take " + a.From + " as ordered", Edit: changeVariable(to)})
	case a.Form != "" && a.Form != study.Steps:
		return fmt.Sprintf("%s is %s and acts by steps, not by the form “%s”.", a.From, scale, a.Form), plain
	case len(a.VariesBy) > 0:
		return fmt.Sprintf("%s is %s and acts by steps, which this version does not vary by a plate.", a.From, scale), plain
	}
	return "", nil
}

// notAbove0 says why a parent's values are not all where a log or a saturating
// form needs them; "" where they are. A saturating form takes 0.
func (b *builder) notAbove0(form string, v *Variable) string {
	if form == study.Threshold {
		return ""
	}
	zero := form == study.Saturating
	below := func(x float64) bool { return x < 0 || x == 0 && !zero }
	need := fmt.Sprintf("the log of %s exists only where %s is positive", v.ID, v.ID)
	bound := "0 or less"
	if zero {
		need = fmt.Sprintf("the form “%s” needs %s to be 0 or more", form, v.ID)
		bound = "less than 0"
	}
	low, _ := extent(v.Values)
	if i := slices.Index(v.Values, low); i >= 0 && below(low) {
		return fmt.Sprintf("%s, but its smallest value is %s (row %d).", need, short(low), b.rowOf(v, i)+1)
	}
	// The low end 0 of a positive range is a bound and no value.
	open := v.Scale == study.Positive || v.Scale == study.Proportion
	if below(v.Low) && !(v.Low == 0 && open) {
		return fmt.Sprintf("%s, but its plausible range is %s.", need, span(v.Low, v.High))
	}
	if own := b.draftOf(v.ID); own != nil {
		switch own.family.Support {
		case catalog.Positives, catalog.Unit, catalog.Above:
		case catalog.NonNegatives, catalog.Counts, catalog.UpTo:
			if !zero {
				return fmt.Sprintf("%s, but its law, %s, can give 0.", need, own.family.Name)
			}
		default:
			return fmt.Sprintf("%s, but its law, %s, can give %s.", need, own.family.Name, bound)
		}
	}
	return ""
}

// asPositive offers to take a real variable as positive, where nothing that is
// known of it speaks against that.
func (b *builder) asPositive(v *Variable) []Repair {
	low, _ := extent(v.Values)
	own := b.draftOf(v.ID)
	if v.Scale != study.Real || low <= 0 || v.Low < 0 || own != nil && own.user.Family != "" {
		return nil
	}
	to := *b.variable(v.ID)
	to.Scale = study.Positive
	return []Repair{{Label: "Take " + v.ID + " as positive", Edit: changeVariable(to)}}
}

// formNeeds says why the forms of a variable's arrows cannot take a number; ""
// where they can.
func (b *builder) formNeeds(v *Variable, x float64) string {
	for _, d := range b.drafts {
		switch form := d.formTo(v.ID); {
		case d.formula != nil:
		case form == study.Log && x <= 0:
			return fmt.Sprintf("%s reads its log", d.variable.ID)
		case form == study.Saturating && x < 0:
			return fmt.Sprintf("it acts on %s by the form “%s”, which needs 0 or more", d.variable.ID, form)
		}
	}
	return ""
}

// typedTerm is the summand by which a formula would read an arrow, for a
// repair.
func (b *builder) typedTerm(a *study.Arrow) string {
	name := func(r role) string { return b.names[meaning{role: r, child: a.To, parent: a.From}] }
	beta := name(slope)
	switch {
	case b.takesSteps(a):
		return fmt.Sprintf("%s of %s", name(steps), a.From)
	case a.Form == study.Offset:
		return "log " + a.From
	case a.Form == study.Log:
		return fmt.Sprintf("%s * log %s", beta, a.From)
	case a.Form == study.OneWay:
		return fmt.Sprintf("%s * (%s of %s - 0.5)", beta, name(shares), a.From)
	case a.Form == study.Threshold:
		return fmt.Sprintf("%s * max(0, %s - %s)", beta, a.From, name(threshold))
	case a.Form == study.Saturating:
		return fmt.Sprintf("%s * %s / (%s + %s)", beta, a.From, a.From, name(halfway))
	}
	return fmt.Sprintf("%s * %s", beta, a.From)
}

// shapePrior is the default prior of a parameter inside a form: the rise's
// share at each level is uniform between those before and after, as the shares
// of the steps are Dirichlet(1) (SEMANTICS C4); a threshold, and where half of a
// saturating effect is reached, lie anywhere in the parent's plausible range.
func (b *builder) shapePrior(m meaning, p *Parameter) {
	v := b.model.Variables[b.at[m.parent]]
	if m.role == shares {
		p.Shape, p.Size, p.Entries = Rising, len(v.Levels), v.Levels
		p.Why = fmt.Sprintf("any shares of the whole change equally plausible between the levels of %s", v.ID)
		return
	}
	low, high := b.extentOf(v)
	p.Unit = v.Unit
	p.Prior = b.prior("uniform", round(low), round(high))
	p.Prior.FromData = !v.RangeGiven
	p.Why = fmt.Sprintf("anywhere in the range of %s", v.ID) + seenRange(v)
	if m.role == halfway {
		p.Support = catalog.Positives
	}
}
