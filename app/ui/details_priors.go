package ui

import (
	"errors"
	"slices"
	"strings"

	"arrowroot/app/words"
	"arrowroot/compile/formula"
	"arrowroot/compile/model"
	"arrowroot/compile/study"
)

// priors is the tab of the parameters of a variable's law.
func (x *details) priors(s *sheaf, v *study.Variable) {
	m := x.d.view.Model
	if m == nil {
		s.text("The priors show as soon as the laws are complete.", tokenMuted)
		return
	}
	at, _ := m.Name(v.ID)
	n := 0
	for _, p := range m.Parameters {
		if p.Of == at && at >= 0 {
			if n > 0 {
				s.add(hairline())
			}
			x.parameter(s, v.ID, p)
			n++
		}
	}
	if n == 0 {
		s.text(v.ID+" is given: it has no law, and so no priors.", tokenMuted)
	}
}

// parameter shows one parameter: prior and posterior as a picture first, then
// the number, where the prior comes from, and the prior as text to change.
func (x *details) parameter(s *sheaf, of string, p *model.Parameter) {
	d := x.d
	s.add(newProse(sizeBody, span{text: p.Symbol, bold: true}, span{text: "  " + p.Unit, token: tokenMuted}))
	if label := d.coefficient(p); label != "" {
		s.add(newProse(sizeSmall, span{text: "may be read as: " + label, token: tokenMuted}))
	}
	if p.Shape == model.Scalar {
		draws := d.posterior(p.Name)
		low, high, level := d.interval(p.Name)
		s.add(stack(bordered(tokenCard, tokenHairline, 5), d.priorPicture(p, draws, low, high, level)))
		if said, trust := d.posteriorWords(p.Name); said != "" {
			spans := []span{{text: "prior ┄  ", token: tokenMuted}, {text: "posterior  ", token: tokenConfound}, {text: said, bold: true}}
			if trust != "sound" {
				spans = append(spans, span{text: " · " + trust, token: tokenConfound})
			}
			if d.view.Stale {
				spans = append(spans, span{text: " · of an earlier version", token: tokenMuted})
			}
			s.add(newProse(sizeSmall, spans...))
		}
	} else {
		s.add(newProse(sizeSmall, span{text: shapeWords(p), token: tokenMuted}))
		x.vector(s, d.view.Model, p)
	}
	if p.Shape == model.ByPlate || p.Shape == model.Unrecorded {
		return // its prior is the law of the levels, or of the variable: that stands by itself
	}
	if p.Shape == model.Rising { // no other prior can be given
		s.add(newProse(sizeSmall, span{text: p.Why, token: tokenMuted}))
		return
	}
	text, own := d.priorText(of, p.Name)
	f := d.field(text, priorPhrase(p), func(text string) { d.setPrior(of, p.Name, text) })
	s.keys["prior "+p.Name] = f
	wrong := newProse(sizeSmall)
	f.typing = func(text string) {
		wrong.set(caretPhrase(text)...)
		x.pane.arrange()
	}
	if own {
		wrong.set(caretPhrase(text)...)
	}
	s.add(f, wrong)
	if p.Why != "" && !own {
		why := p.Why
		if p.Prior.FromData {
			why = strings.TrimSuffix(why, ".") + ". Some of these ranges were seen in the data, not given."
		}
		s.add(newProse(sizeSmall, span{text: why, token: tokenMuted}))
	}
}

func caretPhrase(text string) []span {
	if strings.TrimSpace(text) == "" {
		return nil
	}
	_, err := formula.ParsePhrase(text)
	var e *formula.Error
	if !errors.As(err, &e) {
		return nil
	}
	return caretOf(text, e.Span, e.Message)
}

// interval is that of one quantity of the result; zeros without one.
func (d *desk) interval(name string) (low, high, level float64) {
	if d.view.Result == nil || d.view.Result.Full == nil {
		return 0, 0, 0
	}
	for _, q := range d.view.Result.Full.Quantities {
		if q.Name == name {
			return q.Low, q.High, q.Level
		}
	}
	return 0, 0, 0
}

func shapeWords(p *model.Parameter) string {
	switch p.Shape {
	case model.ByPlate:
		return "one for each level, around " + or(p.Mean, "0") + " with spread " + p.SD
	case model.ZeroSum:
		return times(p.Size, "entry", "entries") + " that sum to zero: " + words.List(p.Entries)
	case model.Simplex:
		return times(p.Size, "share", "shares") + " that sum to one"
	case model.Rising:
		return "how much of the whole change is reached at each level, from 0 to 1: " + words.List(p.Entries)
	case model.Unrecorded:
		return times(p.Size, "missing entry", "missing entries") + ", drawn with the rest"
	case model.Cuts:
		return times(p.Size, "cut point", "cut points") + " in rising order"
	}
	return times(p.Size, "entry", "entries") + ": " + words.List(p.Entries)
}

// priorPhrase is a prior as one could type it.
func priorPhrase(p *model.Parameter) string {
	if p.Prior.Family == nil {
		return ""
	}
	var parts []string
	for i, a := range p.Prior.Arguments {
		if i < len(p.Prior.Family.Arguments) && a != nil {
			text := formula.Format(a)
			if x, ok := constants(p.Prior.Arguments[i : i+1]); ok {
				text = words.Number(x[0])
			}
			parts = append(parts, p.Prior.Family.Arguments[i].Name+" "+text)
		}
	}
	phrase := p.Prior.Family.Name
	if len(parts) > 0 {
		phrase += " with " + strings.Join(parts, ", ")
	}
	switch p.Prior.On {
	case model.InverseRoot:
		phrase = "1/√" + p.Symbol + " ~ " + phrase
	case model.InverseRootPlus:
		phrase = "1/√(1+" + p.Symbol + ") ~ " + phrase
	}
	return phrase
}

// priorText is the prior that the user gave a parameter, with its arrow or its
// law; own is false where it is the default.
func (d *desk) priorText(of, name string) (text string, own bool) {
	if n := d.view.Rival.Diagram.Node(of); n != nil && n.Law != nil {
		for _, p := range n.Law.Priors {
			if p.Parameter == name {
				return p.Text, true
			}
		}
	}
	if a := d.arrowOf(of, name); a != nil && a.Prior != "" {
		return a.Prior, true
	}
	return "", false
}

// arrowOf is the arrow whose coefficient a parameter is; nil if it is none.
func (d *desk) arrowOf(to, parameter string) *study.Arrow {
	for _, a := range d.view.Rival.Diagram.Arrows {
		if a.To == to && (parameter == "beta_"+a.From+"_"+to || parameter == "step_"+a.From+"_"+to) {
			return a
		}
	}
	return nil
}

// setPrior gives a parameter another prior; an empty text is the default.
func (d *desk) setPrior(of, name, text string) {
	inLaw := false
	if n := d.view.Rival.Diagram.Node(of); n != nil && n.Law != nil {
		inLaw = slices.ContainsFunc(n.Law.Priors, func(p study.Prior) bool { return p.Parameter == name })
	}
	if a := d.arrowOf(of, name); a != nil && !inLaw {
		d.changeArrow(a.From, a.To, func(a *study.Arrow) { a.Prior = text })
		return
	}
	d.changeLaw(of, func(l *study.Law) {
		l.Priors = slices.DeleteFunc(slices.Clone(l.Priors), func(p study.Prior) bool { return p.Parameter == name })
		if text != "" {
			l.Priors = append(l.Priors, study.Prior{Parameter: name, Text: text})
		}
	})
}
