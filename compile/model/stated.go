package model

import (
	"fmt"
	"math"
	"slices"

	"arrowroot/compile/catalog"
	"arrowroot/compile/formula"
	"arrowroot/compile/study"
)

// declaredFor finds the prior that the user gave. What varies by a plate is
// written "alpha_bees by farm".
func (b *builder) declaredFor(m meaning, p *Parameter) *declaration {
	if p.Shape != ByPlate {
		return b.declared[p.Name]
	}
	stem := m.name
	if m.role != freeBy {
		stem = b.stem(m)
	}
	return b.declared[stem+" by "+m.plate]
}

// userPrior puts what the user typed in the place of the default.
func (b *builder) userPrior(p *Parameter, own *declaration) {
	at := Problem{Code: "prior", Variable: own.owner, Place: "prior", part: "prior of " + own.id, Text: own.text, Span: own.phrase.Span}
	fault := func(format string, args ...any) {
		at.Message = fmt.Sprintf(format, args...)
		at.Repairs = []Repair{{Label: "Go back to the default", Edit: b.dropPrior(own.owner, own.id)}}
		b.stop(at)
	}
	f := catalog.FamilyByName(own.phrase.Family)
	if f == nil {
		var names []string
		for _, g := range catalog.Families() {
			names = append(names, g.Name)
		}
		if near := nearest(own.phrase.Family, names); near != "" {
			fault("there is no distribution *%s*; did you mean *%s*?", own.phrase.Family, near)
		} else {
			fault("there is no distribution *%s*", own.phrase.Family)
		}
		return
	}
	args, ok := b.phraseArguments(own.phrase, f, fault)
	if !ok {
		return
	}
	fixed := true
	for _, e := range args {
		fixed = fixed && len(formula.Names(e)) == 0
		for _, n := range formula.Names(e) {
			switch {
			case b.variable(n) != nil:
				fault("the prior of %s cannot depend on the variable *%s*", p.Name, n)
				return
			case n == p.Name:
				fault("the prior of %s refers to itself", p.Name)
				return
			case b.declared[n] == nil && b.scope[n] == (meaning{}):
				fault("*%s* in the prior of %s is no parameter; give it a prior of its own", n, p.Name)
				return
			}
		}
	}
	switch {
	case f.Discrete:
		fault("%s is for whole numbers, and %s is none", f.Name, p.Name)
		return
	case p.Shape == Cuts:
		fault("the cut points of an ordered law have equally plausible shares in this version; another prior cannot be given")
		return
	case p.Shape == Rising:
		fault("the shares of a rise are equally plausible in this version; another prior cannot be given")
		return
	case p.Shape == ZeroSum:
		if x, ok := args[0].(*formula.Number); f.Name != "normal" || !ok || x.Value != 0 || !fixed {
			fault("%s sums to zero: its prior is of the difference of two entries, normal with mean 0 and an sd", p.Name)
			return
		}
	case p.Shape == ByPlate:
		mean, isName := args[0].(*formula.Name)
		zero, isNumber := args[0].(*formula.Number)
		sd, spread := args[len(args)-1].(*formula.Name)
		if f.Name != "normal" || !spread || !isName && !(isNumber && zero.Value == 0) {
			fault("what varies by a plate is normal around a parameter or 0, with a parameter as its sd")
			return
		}
		b.use(nil, sd.ID)
		p.SD, p.Mean = sd.ID, ""
		if isName {
			b.use(nil, mean.ID)
			p.Mean = mean.ID
		}
		return
	case p.Support == catalog.Positives && nothingAbove0(f, args):
		fault("%s must be positive, and this prior lies below 0", p.Name)
		return
	case p.Support == catalog.Positives && f.Support == catalog.Reals && !fixed:
		fault("%s must be positive, and %s reaches below 0; half-normal does not", p.Name, f.Name)
		return
	}
	for _, e := range args {
		for _, n := range formula.Names(e) {
			if b.inProgress(n) {
				fault("the priors of %s and %s refer to each other", p.Name, n)
				return
			}
			b.making = append(b.making, p.Name)
			b.use(nil, n)
			b.making = b.making[:len(b.making)-1]
		}
	}
	p.Prior = Prior{Family: f, Arguments: args, FromUser: true}
	p.Why = ""
}

func (b *builder) inProgress(id string) bool { return slices.Contains(b.making, id) }

// phraseArguments puts a phrase's arguments into the family's order.
func (b *builder) phraseArguments(phrase *formula.Phrase, f *catalog.Family, fault func(string, ...any)) ([]formula.Expr, bool) {
	args := make([]formula.Expr, len(f.Arguments))
	for _, a := range phrase.Arguments {
		i := f.Argument(a.Name)
		if i < 0 {
			fault("%s has no argument *%s*; it has %s", article(f.Name), a.Name, list(argumentNames(f)))
			return nil, false
		}
		if x, fixed := constant(a.Value); fixed && !isNumber(x) {
			fault("the %s of %s is no number", f.Arguments[i].Name, article(f.Name))
			return nil, false
		} else if fixed && f.Arguments[i].Support == catalog.Positives && x <= 0 {
			fault("the %s of %s must be positive", f.Arguments[i].Name, article(f.Name))
			return nil, false
		} else if fixed && f.Arguments[i].Support == catalog.Unit && (x <= 0 || x >= 1) {
			fault("the %s of %s lies between 0 and 1", f.Arguments[i].Name, article(f.Name))
			return nil, false
		}
		args[i] = a.Value
	}
	for i, e := range args {
		if e == nil {
			fault("%s needs its %s", article(f.Name), f.Arguments[i].Name)
			return nil, false
		}
	}
	if f.Name == "uniform" {
		low, fixed := constant(args[0])
		high, also := constant(args[1])
		if fixed && also && low >= high {
			fault("low %s is not below high %s, so that no value is left", short(low), short(high))
			return nil, false
		}
	}
	return args, true
}

// constant works out an expression without names.
func constant(e formula.Expr) (value float64, ok bool) {
	if len(formula.Names(e)) > 0 {
		return 0, false
	}
	return Evaluate(e, func(formula.Expr) float64 { return math.NaN() }), true
}

// farBelow is how many sds below 0 a mean must lie for the part of a normal
// above 0 to be no more than a rounding error.
const farBelow = 8

// nothingAbove0 reports whether a prior leaves a positive parameter no value.
func nothingAbove0(f *catalog.Family, args []formula.Expr) bool {
	values := make([]float64, len(args))
	for i, e := range args {
		x, ok := constant(e)
		if !ok {
			return false
		}
		values[i] = x
	}
	switch f.Name {
	case "uniform":
		return values[1] <= 0
	case "normal":
		return values[0] < -farBelow*values[1]
	}
	return false
}

func (b *builder) dropPrior(owner, id string) study.Edit {
	for _, p := range b.userLaw(owner).Priors {
		if canonicalParameter(p.Parameter) == id {
			return b.changeLaw(owner, func(l *study.Law) {
				var kept []study.Prior
				for _, p := range l.Priors {
					if canonicalParameter(p.Parameter) != id {
						kept = append(kept, p)
					}
				}
				l.Priors = kept
			})
		}
	}
	return b.changePrior(owner, id, "")
}

// unusedPrior says that a prior is for nothing.
func (b *builder) unusedPrior(id string, own *declaration) {
	b.report(Problem{Code: "unused-prior", Variable: own.owner, Place: "prior", Text: own.text,
		Message: fmt.Sprintf("the prior of *%s* is not used: no law has this parameter", id),
		Repairs: []Repair{{Label: "Drop it", Edit: b.dropPrior(own.owner, own.id)}}})
}
