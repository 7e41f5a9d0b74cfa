package density

import (
	"fmt"

	"arrowroot/compile/catalog"
	"arrowroot/compile/formula"
	"arrowroot/compile/kernel"
	"arrowroot/compile/model"
	"arrowroot/compile/ops"
)

// law lowers one law to a factor: one term per unit of its level, in the
// link-scale form of its family where the law has a predictor.
func (l *lowering) law(law *model.Law) (factor, error) {
	v := l.m.Variables[law.Variable]
	fail := func(err error) (factor, error) { return factor{}, &lawError{v.ID, err} }
	if law.Family == nil {
		return fail(fmt.Errorf("no family"))
	}
	if v.Plate != law.Plate {
		return fail(fmt.Errorf("its values and its law are at different levels"))
	}
	exprs, form, err := l.arguments(law)
	if err != nil {
		return fail(err)
	}
	at := level(law.Plate)
	y, on, observed := l.explained(law.Variable)
	args := make([]ops.Value, len(exprs))
	for i, e := range exprs {
		x, err := l.express(e)
		if err != nil {
			return fail(err)
		}
		if args[i], err = l.spread(x, at); err != nil {
			return fail(err)
		}
		if observed != nil && x.at != everywhere {
			args[i] = l.b.Gather(args[i], on, observed)
		}
	}
	if law.Family.Link.Cumulative() {
		kind, p, err := l.name(law.Cutpoints)
		if err != nil {
			return fail(err)
		}
		if kind != isParameter {
			return fail(fmt.Errorf("%s is no vector of cut points", law.Cutpoints))
		}
		for j := range l.m.Parameters[p].Size {
			args = append(args, l.b.Element(l.natural[p], j))
		}
	}
	value := l.b.Density(form, y, args...)
	return factor{what: "the law of " + v.ID, value: value, law: law, form: form, args: args, units: observed}, nil
}

// arguments lists a law's arguments in the order of the form that takes them:
// the linked form with the predictors first, or the natural one.
func (l *lowering) arguments(law *model.Law) ([]formula.Expr, *kernel.Density, error) {
	f := law.Family
	argument := func(i int) (formula.Expr, error) {
		if i < len(law.Arguments) && law.Arguments[i] != nil {
			return law.Arguments[i], nil
		}
		return nil, fmt.Errorf("its %s is missing", f.Arguments[i].Name)
	}
	if f.Link == catalog.Softmax || f.Link.Cumulative() {
		if len(law.Predictors) == 0 {
			return nil, nil, fmt.Errorf("it has no predictor")
		}
		return law.Predictors, f.Linked, nil
	}
	predicted := len(law.Predictors) > 0
	var exprs []formula.Expr
	form := f.Natural
	if predicted && f.Linked != nil {
		exprs, form = append(exprs, law.Predictors...), f.Linked
	}
	for i := range f.Arguments {
		if predicted && i == f.Predicted {
			if f.Linked == nil {
				exprs = append(exprs, law.Predictors[0])
			}
			continue
		}
		e, err := argument(i)
		if err != nil {
			return nil, nil, err
		}
		exprs = append(exprs, e)
	}
	return exprs, form, nil
}
