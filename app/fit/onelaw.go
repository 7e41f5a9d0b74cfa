package fit

import (
	"context"
	"errors"
	"fmt"
	"slices"
	"strings"

	"arrowroot/compile/effect"
	"arrowroot/compile/formula"
	"arrowroot/compile/model"
	"arrowroot/compile/study"
	"arrowroot/infer"
)

// A oneLaw makes crude and held numbers: the outcome's law fitted alone.
type oneLaw struct {
	req   *Request
	full  *Fitted
	watch func(infer.Progress)
}

// number fits the outcome's law and gives its contrast, or why there is none.
// Sampling stops with ctx; what was sampled by then is averaged until late.
//
// A computed outcome has no law to fit: that of the one variable it is
// computed from is, and its values go through the formula.
func (o *oneLaw) number(ctx, late context.Context, q study.Question, kind model.Kind, purpose string) (*Number, string, error) {
	if ctx.Err() != nil {
		return nil, stopped, nil
	}
	fitted := q
	if direct(&q) { // what is fixed stands in the law beside the exposure
		fitted.Held = slices.Clone(q.Held)
		for _, f := range q.Fixed {
			fitted.Held = append(fitted.Held, f.Variable)
		}
	}
	computed := computedFrom(o.full.Model, q.Outcome)
	if computed != nil {
		if len(computed.roots) != 1 || computed.roots[0] == q.Exposure {
			return nil, fmt.Sprintf("%s is computed from %s, so that no single law of it can be fitted", q.Outcome, strings.Join(computed.roots, " and ")), nil
		}
		fitted.Outcome, fitted.OutcomeLevels = computed.roots[0], nil
		if slices.Contains(fitted.Held, fitted.Outcome) {
			return nil, fmt.Sprintf("holding %s leaves nothing of %s to change", fitted.Outcome, q.Outcome), nil
		}
	}
	m, problems := model.Build(o.req.Study, o.req.Rival, fitted, o.req.Table, kind)
	if m == nil || model.Stops(problems) {
		return nil, strings.TrimSuffix((&Blocked{problems}).Error(), "."), nil
	}
	f, err := o.fit(ctx, m, purpose)
	if errors.Is(err, ErrNoDraws) {
		return nil, stopped, nil
	}
	if err != nil {
		return nil, "", err
	}
	var c *effect.Contrast
	if computed == nil {
		c, err = effect.FromLaw(late, m, q, f.Pooled(), source(o.req, purpose), options(o.req))
	} else {
		c, err = effect.FromLawThrough(late, m, computed.steps, q, f.Pooled(), source(o.req, purpose), options(o.req))
	}
	if err != nil && late.Err() != nil {
		return nil, stopped, nil
	}
	if err != nil {
		return nil, "", err
	}
	n, refusal := number(c, f, o.req, q.Exposure+" → "+q.Outcome+", "+purpose)
	return n, refusal, nil
}

// fit samples a model, unless the full model is the same one: then it has been.
func (o *oneLaw) fit(ctx context.Context, m *model.Model, purpose string) (*Fitted, error) {
	if m.Fingerprint() == o.full.Model.Fingerprint() {
		return o.full, nil
	}
	return sampleModel(ctx, m, o.req, purpose, o.watch)
}

// A computation is what a computed variable hangs on.
type computation struct {
	roots []string          // the variables that are not computed themselves, in order of reading
	steps []*model.Variable // the computed ones, each after those it reads
}

// computedFrom follows the formulas behind a variable; nil if it has none.
func computedFrom(m *model.Model, id string) *computation {
	c := &computation{}
	var visit func(id string)
	visit = func(id string) {
		v, _ := m.Name(id)
		switch {
		case v < 0 || slices.Contains(c.roots, id) || slices.Contains(c.steps, m.Variables[v]):
		case m.Variables[v].Computed == nil:
			c.roots = append(c.roots, id)
		default:
			for _, parent := range formula.Names(m.Variables[v].Computed) {
				visit(parent)
			}
			c.steps = append(c.steps, m.Variables[v])
		}
	}
	visit(id)
	if len(c.steps) == 0 {
		return nil
	}
	return c
}
