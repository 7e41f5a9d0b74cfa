package model

import (
	"fmt"
	"slices"

	"arrowroot/compile/catalog"
	"arrowroot/compile/formula"
)

// typed prints the model in the language of formulas: a sentence and a formula
// for each law, then a prior for each parameter.
func (w *writer) typed() {
	m := w.m
	for _, l := range slices.Backward(m.Laws) {
		v := m.Variables[l.Variable]
		subject := subjectOf(l)
		text := v.ID + " ~ " + l.Family.Name
		join := " with "
		for i, a := range l.Family.Arguments {
			value := ""
			switch {
			case i == l.Family.Predicted && len(l.Predictors) > 0:
				value = subject
			case i < len(l.Arguments) && l.Arguments[i] != nil:
				value = w.typedExpr(l.Arguments[i])
			case l.Cutpoints != "":
				value = l.Cutpoints
			default:
				continue
			}
			text += join + a.Name + " " + value
			join = ", "
		}
		w.out.Typed = append(w.out.Typed, text)
		for k, e := range l.Predictors {
			left := subject
			switch l.Family.Link {
			case catalog.Softmax:
				left = fmt.Sprintf("# log share of %s", v.Levels[k])
			case catalog.Identity:
			default:
				left = string(l.Family.Link) + " " + subject
			}
			w.out.Typed = append(w.out.Typed, left+" = "+w.typedExpr(e))
		}
	}
	for _, v := range m.Variables {
		if v.Computed != nil {
			w.out.Typed = append(w.out.Typed, v.ID+" = "+formula.Format(v.Computed))
		}
	}
	for _, p := range m.Parameters {
		w.out.Typed = append(w.out.Typed, w.typedPrior(p))
	}
}

// subjectOf is the word by which a formula calls what it predicts.
func subjectOf(l *Law) string {
	if l.Family.Predicted < 0 {
		return ""
	}
	if l.Family.Link == catalog.Log {
		return "rate"
	}
	return l.Family.Arguments[l.Family.Predicted].Greek
}

// typedExpr prints an expression as it can be typed: what varies by a plate
// around a parameter reads "alpha_bees by farm".
func (w *writer) typedExpr(e formula.Expr) string {
	return formula.Format(rewrite(e, func(e formula.Expr) formula.Expr {
		switch e := e.(type) {
		case *formula.By:
			if _, i := w.m.Name(e.Name.ID); i >= 0 {
				return &formula.By{Name: named(w.m.Parameters[i].Stem), Plates: e.Plates}
			}
			return e
		case *formula.Element:
			return named(w.element(e, func(id string) string { return id }))
		case *formula.Of:
			return e
		}
		return nil
	}))
}

func (w *writer) typedPrior(p *Parameter) string {
	left := p.Name
	switch p.Shape {
	case ByPlate:
		mean := "0"
		if p.Mean != "" {
			mean = p.Mean
		}
		return fmt.Sprintf("%s by %s ~ normal with mean %s, sd %s", p.Stem, w.m.Plates[p.Plate].Name, mean, p.SD)
	case Unrecorded:
		return fmt.Sprintf("# %s: %s of %s, unknowns of its law", p.Name, entriesOf(p.Size), w.m.Variables[p.Of].ID)
	case Cuts:
		return "# " + p.Name + ": log odds of the running sums of shares, which are Dirichlet with all 1"
	}
	if p.Shape == Rising {
		return left + " ~ uniform with low 0, high 1 # in rising order, the first 0 and the last 1"
	}
	switch p.Prior.On {
	case InverseRoot:
		left = "1 / sqrt(" + p.Name + ")"
	case InverseRootPlus:
		left = "1 / sqrt(1 + " + p.Name + ")"
	}
	phrase := &formula.Phrase{Family: p.Prior.Family.Name}
	for i, a := range p.Prior.Family.Arguments {
		phrase.Arguments = append(phrase.Arguments, formula.PhraseArgument{Name: a.Name, Value: p.Prior.Arguments[i]})
	}
	text := left + " ~ " + phrase.String()
	if p.Shape == ZeroSum {
		text += " # of differences; the entries sum to 0"
	}
	return text
}
