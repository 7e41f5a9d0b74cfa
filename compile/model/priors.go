package model

import (
	"fmt"
	"math"
	"slices"
	"strings"

	"arrowroot/compile/catalog"
)

// parameter finds or makes the parameter with a meaning, and gives its place
// in the model. What its prior refers to is made before it.
func (b *builder) parameter(m meaning) int {
	id := b.parameterName(m)
	for i, p := range b.model.Parameters {
		if p.Name == id {
			return i
		}
	}
	p := &Parameter{Name: id, Symbol: b.symbol(m), Shape: Scalar, Size: 1, Plate: -1, Of: -1}
	d := b.draftOf(m.child)
	if d != nil {
		p.Of = d.law.Variable
		b.defaultPrior(d, m, p)
		if why := b.aside[id]; why != "" {
			p.Why += "; " + why
		}
	} else {
		b.freePrior(m, p)
	}
	if own := b.declaredFor(m, p); own != nil {
		own.used = true
		b.userPrior(p, own)
	}
	b.model.Parameters = append(b.model.Parameters, p)
	return len(b.model.Parameters) - 1
}

// parameterName is the canonical name; of free ones and of the steps of a
// category child it is made here.
func (b *builder) parameterName(m meaning) string {
	if id, ok := b.names[m]; ok {
		return id
	}
	switch m.role {
	case freeBy:
		return b.name(m.name+"_"+clean(m.plate), m)
	case freeSD:
		return b.name("tau_"+m.name+"_"+clean(m.plate), m)
	case steps, stepsProduct: // of a category child, one for each of its levels
		return b.name("step_"+m.parent+"_"+m.child+"_"+clean(b.levelOf(m)), m)
	}
	return m.name
}

// defaultPrior gives a law's own parameter its shape and its prior by
// SEMANTICS C.
func (b *builder) defaultPrior(d *draft, m meaning, p *Parameter) {
	v := b.model.Variables[d.law.Variable]
	w := d.span.width()
	root := math.Sqrt(float64(max(d.terms, 1)))
	levels := d.family.Link == catalog.Softmax
	vector := func(entries []string) {
		p.Shape, p.Size, p.Entries = ZeroSum, len(entries), entries
	}
	switch m.role {
	case baseline: // C3, C6
		sd := round(w / 3.92)
		p.Unit = b.unit(d)
		p.Why = middleOf(d.span.words)
		mean := 0.0
		if levels {
			vector(v.Levels)
		} else {
			shift, words := b.medianOffset(d)
			mean = roundTo(d.span.middle()-shift, w/3.92)
			p.Why += words
		}
		p.Prior = b.normal(mean, sd)
		p.Prior.FromData = d.span.fromData
	case slope: // C3
		parent := b.model.Variables[b.at[m.parent]]
		p.Unit = b.unit(d, m.parent)
		if levels {
			vector(v.Levels)
		}
		form := d.formTo(m.parent)
		p.Prior = b.normal(0, round(w/(1.96*root*b.reach(form, parent))))
		p.Prior.FromData = d.span.fromData || seenFor(form, parent) != ""
		p.Why = d.reason() + b.formReason(form, parent) + seenFor(form, parent)
	case steps: // C4
		parent := b.model.Variables[b.at[m.parent]]
		p.Unit = b.unit(d)
		vector(parent.Levels)
		sd := w / (1.96 * root)
		p.Why = d.reason() + "; of the difference of any two levels"
		if levels {
			// Two predictors move apart by the difference of two independent
			// steps; between them the change is to have the sd of C4.
			sd /= math.Sqrt2
			p.Why += fmt.Sprintf(", in the log odds of any two of %s", m.child)
		}
		p.Prior = b.normal(0, round(sd))
		p.Prior.FromData = d.span.fromData
	case product, stepsProduct:
		// The product of two centred parents of ranges R and S is itself a
		// parent, of range R S / 2; a category's steps multiply the other
		// parent as it stands.
		first, second := b.model.Variables[b.at[m.parent]], b.model.Variables[b.at[m.with]]
		p.Prior.FromData = d.span.fromData || !second.RangeGiven
		reach := b.reach(d.formTo(m.with), second)
		p.Unit = b.unit(d, m.with)
		if m.role == stepsProduct {
			vector(first.Levels)
		} else {
			p.Unit = b.unit(d, m.parent, m.with)
			reach *= b.reach(d.formTo(m.parent), first) / 2
			p.Prior.FromData = p.Prior.FromData || !first.RangeGiven
			if levels {
				vector(v.Levels)
			}
		}
		fromData := p.Prior.FromData
		p.Prior = b.normal(0, round(w/(1.96*root*reach)))
		p.Prior.FromData = fromData
		p.Why = d.reason() + "; the product taken as a parent" + seenRange(second)
		if m.role == product {
			p.Why += seenRange(first)
		}
	case baselineBy, slopeBy:
		p.Shape = ByPlate
		p.Plate, p.Entries = b.levelsOf(m.plate)
		p.Size = len(p.Entries)
		mean, sd := meaning{role: baseline, child: m.child}, meaning{role: baselineSD, child: m.child, plate: m.plate}
		p.Unit = b.unit(d)
		if m.role == slopeBy {
			mean = meaning{role: slope, child: m.child, parent: m.parent}
			sd = meaning{role: slopeSD, child: m.child, parent: m.parent, plate: m.plate}
			p.Unit = b.unit(d, m.parent)
		}
		p.Stem = p.Name
		if b.anchors(mean, m, d) {
			p.Mean = b.model.Parameters[b.parameter(mean)].Name
			p.Stem = p.Mean
		}
		p.SD = b.model.Parameters[b.parameter(sd)].Name
	case baselineSD: // C5
		p.Unit, p.Support = b.unit(d), catalog.Positives
		p.Prior = b.halfNormal(round(w / 4))
		p.Prior.FromData = d.span.fromData
		p.Why = "a quarter of the width; " + d.span.words
	case slopeSD: // C5
		parent := b.model.Variables[b.at[m.parent]]
		p.Unit, p.Support = b.unit(d, m.parent), catalog.Positives
		p.Prior = b.halfNormal(round(w / (1.96 * root * b.reach(d.formTo(m.parent), parent)) / 2))
		p.Prior.FromData = d.span.fromData || !parent.RangeGiven
		p.Why = "half the default sd of " + b.symbol(meaning{role: slope, child: m.child, parent: m.parent}) + "; " + d.span.words + seenRange(parent)
	case cutPoints: // C4
		p.Shape, p.Size = Cuts, max(len(v.Levels)-1, 0)
		for k := 1; k < len(v.Levels); k++ {
			p.Entries = append(p.Entries, v.Levels[k-1]+" | "+v.Levels[k])
		}
		p.Why = "any shares of the levels equally plausible, parents at mid-range"
	case shares, threshold, halfway:
		b.shapePrior(m, p)
	case argument: // C5
		p.Support = d.family.Arguments[m.at].Support
		b.argumentPrior(d, d.family.Arguments[m.at].Greek, p)
	}
}

// argumentPrior is the default of an argument that nobody gave, by the stem of
// its name in the catalogue.
func (b *builder) argumentPrior(d *draft, stem string, p *Parameter) {
	switch stem {
	case "k":
		p.Prior = b.halfNormal(1)
		p.Prior.On = InverseRoot
		p.Why = "at 0 the counts vary as chance alone would make them (Poisson)"
	case "shape":
		p.Prior = b.halfNormal(1)
		p.Prior.On = InverseRoot
		p.Why = "1/√shape is the spread relative to the mean"
		if d.family.Name == "Weibull" {
			p.Why = "below 1 the risk falls with age, above 1 it rises"
		}
	case "kappa":
		p.Prior = b.prior("uniform", 0, 1)
		p.Prior.On = InverseRootPlus
		p.Why = "the spread relative to the largest that a proportion can have"
		if d.family.Support == catalog.Turn {
			p.Why = "from all directions alike to nearly one"
		}
	case "nu":
		p.Prior = b.prior("gamma", 20, 2) // shape 2, rate 0.1
		p.Why = "from heavy tails to nearly normal ones"
	case "zeros":
		p.Prior = b.prior("uniform", 0, 1)
		p.Why = "any share of zeros equally plausible"
	case "skew":
		p.Prior = b.prior("normal", 0, 2)
		p.Why = "no more likely skewed to one side than to the other"
	default: // sigma
		p.Unit = b.unit(d)
		p.Prior = b.halfNormal(round(d.span.width() / 4))
		p.Prior.FromData = d.span.fromData
		p.Why = "a quarter of the width; " + d.span.words
	}
}

// anchors reports whether the entries of a plate vary around the parameter
// itself. Only those of the first plate do; the mean would count twice
// otherwise.
func (b *builder) anchors(mean, own meaning, d *draft) bool {
	if slices.Contains(d.around0, own) || mean.role == baseline && d.family.Link.Cumulative() {
		return false
	}
	if d.anchor == nil {
		d.anchor = make(map[meaning]string)
	}
	if _, taken := d.anchor[mean]; !taken {
		d.anchor[mean] = own.plate
	}
	return d.anchor[mean] == own.plate
}

// reason is why a slope's default sd is what it is: "4 parents; range of bees
// 0–120 read as ½–120 on the log scale".
func (d *draft) reason() string {
	carried := 0
	for _, c := range d.carried {
		if !hasArrow(d.arrows, c.id) {
			carried++
		}
	}
	parts := []string{}
	means := 0
	for _, w := range d.within {
		means += len(w.means)
	}
	if n := d.terms - carried - d.products - means; n > 0 || d.terms == 0 {
		parts = append(parts, count(n, "parent"))
	}
	if d.products > 0 {
		parts = append(parts, count(d.products, "product"))
	}
	if carried > 0 {
		parts = append(parts, count(carried, "carried term"))
	}
	if means > 0 {
		parts = append(parts, count(means, "group mean"))
	}
	return list(parts) + "; " + d.span.words
}

func middleOf(words string) string {
	if strings.HasPrefix(words, "probabilities") {
		return words
	}
	return "middle of the " + words
}

// seenRange says that a parent's range was not given.
func seenRange(v *Variable) string {
	if v.RangeGiven {
		return ""
	}
	return fmt.Sprintf("; range of %s %s seen in the data", v.ID, span(v.Low, v.High))
}

// rangeOf is the width of a parent's plausible range. A parent without one
// stops the fit elsewhere; 1 keeps the numbers finite until then.
func (b *builder) rangeOf(v *Variable) float64 {
	if r := v.High - v.Low; r > 0 {
		return r
	}
	return 1
}

// medianOffset is by how much offsets raise the predictor at their medians: a
// range is per median offset (SEMANTICS C6).
func (b *builder) medianOffset(d *draft) (shift float64, words string) {
	typed, _ := typedParts(d.user.Formula, d.variable.ID)
	var offsets []string
	for _, a := range d.arrows {
		if a.Form == "offset" && d.formula == nil || slices.Contains(typed, a.From) {
			offsets = append(offsets, a.From)
		}
	}
	for _, id := range offsets {
		v := b.model.Variables[b.at[id]]
		at := median(v.Values)
		if v.Values == nil {
			at = (v.Low + v.High) / 2
		}
		if at > 0 {
			shift += math.Log(at)
			words += fmt.Sprintf(", at the median of %s (%s)", id, short(at))
		}
	}
	return shift, words
}

func (b *builder) levelsOf(plate string) (int, []string) {
	i := b.plateAt(plate)
	if i < 0 || b.plates[i].index < 0 {
		return -1, nil
	}
	p := b.plates[i].index
	return p, b.model.Plates[p].Levels
}

// freePrior shapes a parameter that the user declared. A vector is read by a
// category's levels; what varies by a plate does so around the declared
// parameter, with a spread of its own.
func (b *builder) freePrior(m meaning, p *Parameter) {
	owner := b.declared[m.name]
	if m.plate != "" {
		if own := b.declared[m.name+" by "+m.plate]; own != nil {
			owner = own
		}
	}
	d := (*draft)(nil)
	if owner != nil {
		d = b.draftOf(owner.owner)
	}
	if d != nil {
		p.Of = d.law.Variable
	}
	switch m.role {
	case free:
		if v := b.variable(m.parent); v != nil {
			levels := b.model.Variables[b.at[m.parent]].Levels
			p.Shape, p.Size, p.Entries = ZeroSum, len(levels), levels
		}
	case freeBy:
		p.Shape, p.Stem = ByPlate, m.name
		p.Plate, p.Entries = b.levelsOf(m.plate)
		p.Size = len(p.Entries)
		if b.declared[m.name+" by "+m.plate] == nil {
			p.Mean = b.model.Parameters[b.parameter(meaning{role: free, name: m.name})].Name
			p.SD = b.model.Parameters[b.parameter(meaning{role: freeSD, name: m.name, plate: m.plate})].Name
		}
	case freeSD:
		p.Support = catalog.Positives
		if d != nil {
			p.Prior = b.halfNormal(round(d.span.width() / 4))
			p.Prior.FromData = d.span.fromData
			p.Why = "a quarter of the width; " + d.span.words
		} else {
			p.Prior = b.halfNormal(1)
		}
	}
}

func (b *builder) prior(family string, args ...float64) Prior {
	p := Prior{Family: catalog.FamilyByName(family)}
	for _, a := range args {
		p.Arguments = append(p.Arguments, number(a))
	}
	return p
}

func (b *builder) normal(mean, sd float64) Prior { return b.prior("normal", mean, sd) }

func (b *builder) halfNormal(scale float64) Prior { return b.prior("half-normal", scale) }
