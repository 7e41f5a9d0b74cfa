package model

import (
	"errors"
	"fmt"
	"slices"
	"strings"

	"arrowroot/compile/catalog"
	"arrowroot/compile/formula"
	"arrowroot/compile/study"
)

// A declaration is a prior that the user gave, for a canonical parameter or
// for a free one that exists because of it.
type declaration struct {
	id     string // canonical, "alpha_bees by farm" for what varies by a plate
	owner  string // variable of the law it was written at
	text   string
	phrase *formula.Phrase
	used   bool
}

// parse reads what the user typed: families, formulas, arguments, priors. It
// checks every name before any data are read.
func (b *builder) parse(string) {
	for _, d := range b.drafts {
		b.chooseFamily(d)
	}
	if b.broken {
		return
	}
	b.nameParameters()
	b.declare()
	for _, d := range b.drafts {
		b.parseFormula(d)
		b.parseArguments(d)
	}
}

// chooseFamily takes the user's family or the default of the scale.
func (b *builder) chooseFamily(d *draft) {
	v, scale := d.variable, scaleOf(d.variable)
	name := d.user.Family
	if name == "" {
		d.family = catalog.Default(string(scale))
		for _, a := range d.user.Arguments {
			if a.Name == "trials" && scale == study.Count {
				d.family = catalog.FamilyByName("binomial")
			}
		}
		return
	}
	d.family = catalog.FamilyByName(name)
	if d.family == nil {
		p := Problem{Code: "unknown-family", Variable: v.ID, Place: "law", Text: name, Span: formula.Span{End: len(name)}}
		p.Message = fmt.Sprintf("there is no distribution *%s*", name)
		var names []string
		for _, f := range catalog.Families() {
			names = append(names, f.Name)
		}
		if near := nearest(name, names); near != "" {
			p.Message += fmt.Sprintf("; did you mean *%s*?", near)
			p.Repairs = append(p.Repairs, Repair{Label: "Replace", Edit: b.changeLaw(v.ID, func(l *study.Law) { l.Family = near })})
		}
		p.Repairs = append(p.Repairs, b.defaultFamily(v, scale))
		p.part = "distribution"
		b.stop(p)
		return
	}
	if v.Scale != "" && !Suits(d.family, scale) {
		p := Problem{Code: "family-scale", Variable: v.ID, Place: "law",
			Message: fmt.Sprintf("%s ~ %s: %s is %s, and %s is for %s.", v.ID, d.family.Name, v.ID, a(scale), article(d.family.Name), supportWords(d.family.Support))}
		p.Repairs = append(p.Repairs, b.defaultFamily(v, scale))
		if s := scaleFor(d.family); s != "" {
			to := *v
			to.Scale = s
			p.Repairs = append(p.Repairs, Repair{Label: fmt.Sprintf("Take %s as %s", v.ID, a(s)), Edit: changeVariable(to)})
		}
		b.stop(p)
	}
}

func (b *builder) defaultFamily(v *study.Variable, scale study.Scale) Repair {
	f := catalog.Default(string(scale))
	return Repair{Label: "Use " + f.Name, Edit: b.changeLaw(v.ID, func(l *study.Law) { l.Family = f.Name })}
}

func article(name string) string {
	switch name[0] {
	case 'o', 'e', 'i', 'O', 'E', 'I':
		return "an " + name + " law"
	}
	return "a " + name + " law"
}

// Suits reports whether values of a scale can have a family.
func Suits(f *catalog.Family, scale study.Scale) bool {
	var scales []study.Scale
	switch f.Support {
	case catalog.Turn:
		scales = []study.Scale{study.Real}
	case catalog.Reals, catalog.Between:
		scales = []study.Scale{study.Real, study.Positive, study.Proportion, study.Count}
	case catalog.Positives, catalog.NonNegatives, catalog.Above:
		scales = []study.Scale{study.Real, study.Positive, study.Proportion}
	case catalog.Unit:
		scales = []study.Scale{study.Real, study.Proportion}
	case catalog.Counts, catalog.UpTo:
		scales = []study.Scale{study.Count}
	case catalog.ZeroOne:
		scales = []study.Scale{study.Binary}
	case catalog.Levels:
		scales = []study.Scale{study.Ordered}
		if !f.Link.Cumulative() {
			scales = append(scales, study.Category)
		}
	}
	return slices.Contains(scales, scale)
}

func scaleFor(f *catalog.Family) study.Scale {
	for _, s := range study.Scales {
		if catalog.Default(string(s)).Support == f.Support {
			return s
		}
	}
	return ""
}

func supportWords(s catalog.Support) string {
	switch s {
	case catalog.Positives:
		return "positive numbers"
	case catalog.NonNegatives:
		return "numbers from 0 on"
	case catalog.Unit:
		return "proportions between 0 and 1"
	case catalog.Counts:
		return "counts"
	case catalog.UpTo:
		return "counts out of known trials"
	case catalog.ZeroOne:
		return "yes or no"
	case catalog.Levels:
		return "levels"
	case catalog.Above:
		return "numbers from a minimum on"
	case catalog.Turn:
		return "angles in radians"
	}
	return "real numbers"
}

// declare collects the priors that the sheet states, of all its laws: a free
// parameter may be shared.
func (b *builder) declare() {
	for _, n := range b.rival.Diagram.Nodes {
		if n.Law == nil {
			continue
		}
		d := b.draftOf(n.Variable)
		for _, p := range n.Law.Priors {
			id := canonicalParameter(p.Parameter)
			if m, ok := b.scope[id]; ok && aboutArrows(m.role) && b.otherSlopes(id) {
				continue
			} else if ok && b.trimmed && m.role == baseline {
				b.aside[id] = "the stated prior is for a formula with terms that this law leaves out"
				continue
			}
			if d == nil && b.kind == Full && b.scope[id] == (meaning{}) && b.variable(n.Variable).Computed != "" {
				continue
			}
			b.declareOne(n.Variable, id, p.Text)
		}
	}
	for _, d := range b.drafts {
		for _, a := range d.arrows {
			if a.Prior == "" {
				continue
			}
			role := slope
			if b.takesSteps(a) {
				role = steps
			}
			id := b.names[meaning{role: role, child: d.variable.ID, parent: a.From}]
			if !b.otherSlopes(id) {
				b.declareOne(d.variable.ID, id, a.Prior)
			}
		}
	}
}

// otherSlopes reports whether the coefficients of this model are of other
// effects than the drawn ones, since a mediator was left out, and notes it for
// the parameter whose stated prior does not hold then.
func (b *builder) otherSlopes(id string) bool {
	if len(b.without) == 0 {
		return false
	}
	b.aside[id] = fmt.Sprintf("the stated prior is for a law with %s, which this one leaves out", list(b.without))
	return true
}

func aboutArrows(r role) bool {
	switch r {
	case slope, slopeBy, slopeSD, steps, product, stepsProduct, shares, threshold, halfway:
		return true
	}
	return false
}

// canonicalParameter reads "α_bees" as alpha_bees, and "theta by school".
func canonicalParameter(text string) string {
	name, plate, by := strings.Cut(strings.TrimSpace(text), " by ")
	id := formula.Canonical(strings.TrimSpace(name))
	if by {
		id += " by " + strings.TrimSpace(plate)
	}
	return id
}

func (b *builder) declareOne(owner, id, text string) {
	at := Problem{Variable: owner, Place: "prior", part: "prior of " + id, Text: text, Span: formula.Span{End: len(text)}}
	if name, _, _ := strings.Cut(id, " by "); !formula.IsName(name) {
		at.Code = "prior-name"
		at.Message = fmt.Sprintf("“%s” cannot be the name of a parameter", id)
		b.stop(at)
		return
	}
	if have := b.declared[id]; have != nil {
		if have.text != text {
			at.Code = "prior-twice"
			at.Message = fmt.Sprintf("%s has a different prior already, at %s: “%s”", id, have.owner, have.text)
			at.Repairs = []Repair{{Label: "Drop the one at " + have.owner, Edit: b.dropPrior(have.owner, id)}}
			b.stop(at)
		}
		return
	}
	phrase, err := formula.ParsePhrase(text)
	if err != nil {
		at = b.parseProblem(at, err, func(text string) study.Edit { return b.changePrior(owner, id, text) })
		at.Repairs = append(at.Repairs, Repair{Label: "Go back to the default", Edit: b.dropPrior(owner, id)})
		b.stop(at)
		return
	}
	b.declared[id] = &declaration{id: id, owner: owner, text: text, phrase: phrase}
}

// changePrior rewrites a prior where it stands, at the law or at the arrow.
func (b *builder) changePrior(owner, id, text string) study.Edit {
	for _, p := range b.userLaw(owner).Priors {
		if canonicalParameter(p.Parameter) == id {
			return b.changeLaw(owner, func(l *study.Law) {
				for i := range l.Priors {
					if canonicalParameter(l.Priors[i].Parameter) == id {
						l.Priors[i].Text = text
					}
				}
			})
		}
	}
	for _, a := range b.rival.Diagram.Arrows {
		if a.To == owner && (id == b.names[meaning{role: slope, child: owner, parent: a.From}] || id == b.names[meaning{role: steps, child: owner, parent: a.From}]) {
			return b.changeArrow(a, func(a *study.Arrow) { a.Prior = text })
		}
	}
	return b.changeLaw(owner, func(l *study.Law) { l.Priors = append(l.Priors, study.Prior{Parameter: id, Text: text}) })
}

// parseProblem turns a mistake in typed text into a problem with its place.
func (b *builder) parseProblem(at Problem, err error, fix func(text string) study.Edit) Problem {
	at.Code, at.Message = "formula", err.Error()
	var e *formula.Error
	if errors.As(err, &e) {
		at.Span = e.Span
		if e.Repair != "" {
			at.Repairs = []Repair{{Label: "Replace", Edit: fix(at.Text[:e.Span.Start] + e.Repair + at.Text[e.Span.End:])}}
		}
	}
	return at
}

// parseFormula reads the typed predictor.
func (b *builder) parseFormula(d *draft) {
	v, text := d.variable, d.user.Formula
	if text == "" {
		return
	}
	at := Problem{Variable: v.ID, Place: "formula", Text: text}
	fix := func(text string) study.Edit {
		return b.changeLaw(v.ID, func(l *study.Law) { l.Formula = text })
	}
	drop := Repair{Label: "Go back to the arrows", Edit: fix("")}
	p, err := formula.Parse(text)
	if err != nil {
		at = b.parseProblem(at, err, fix)
		at.Repairs = append(at.Repairs, drop)
		b.stop(at)
		return
	}
	f := d.family
	switch {
	case f.Predicted < 0:
		at.Code, at.Span = "formula-family", formula.Span{End: len(text)}
		at.Message = fmt.Sprintf("%s has no argument that a formula could predict", article(f.Name))
	case f.Link == catalog.Softmax:
		at.Code, at.Span = "formula-family", formula.Span{End: len(text)}
		at.Message = fmt.Sprintf("%s is a category: its law is made from the arrows, this version reads no formula for it", v.ID)
	case p.Subject != "" && p.Link != string(f.Link):
		at.Code, at.Span = "link", formula.Span{End: strings.Index(text, "=")}
		at.Message = fmt.Sprintf("%s predicts %s, so the left side is *%s*", article(f.Name), linkWords(f), leftSide(f, p.Subject))
		at.Repairs = []Repair{{Label: "Replace", Edit: fix(leftSide(f, p.Subject) + " " + text[strings.Index(text, "="):])}}
	}
	if at.Code != "" {
		at.Repairs = append(at.Repairs, drop)
		b.stop(at)
		return
	}
	if b.checkNames(d, p.Right, at, fix) {
		d.formula = p.Right
		if b.kind == Full {
			b.unusedArrows(d, at, fix)
			b.unusedPlates(d, at, fix)
		}
	}
}

// unusedPlates finds plates over which the baseline is said to vary while the
// typed formula has one baseline for all.
func (b *builder) unusedPlates(d *draft, at Problem, fix func(string) study.Edit) {
	_, varies := typedParts(at.Text, d.variable.ID)
	alpha := b.names[meaning{role: baseline, child: d.variable.ID}]
	for _, plate := range d.user.VariesBy {
		if slices.Contains(varies, plate) {
			continue
		}
		p := at
		p.Code = "unused-plate"
		p.Message = fmt.Sprintf("the baseline of %s is said to vary by %s, but its formula does not say so", d.variable.ID, plate)
		if span := spanOf(d.formula, alpha); span.End > 0 && len(varies) == 0 {
			p.Span = span
			p.Repairs = append(p.Repairs, Repair{Label: "Let it vary", Edit: fix(at.Text[:span.End] + " by " + plate + at.Text[span.End:])})
		} else {
			p.Span = formula.Span{Start: len(at.Text), End: len(at.Text)}
		}
		p.Repairs = append(p.Repairs, Repair{Label: "Keep one baseline", Edit: b.changeLaw(d.variable.ID, func(l *study.Law) {
			l.VariesBy = slices.DeleteFunc(l.VariesBy, func(p string) bool { return p == plate })
		})})
		b.report(p)
	}
}

func leftSide(f *catalog.Family, subject string) string {
	return strings.TrimSpace(string(f.Link) + " " + subject)
}

func linkWords(f *catalog.Family) string {
	name := f.Arguments[f.Predicted].Name
	if f.Link == catalog.Identity {
		return "its " + name + " itself"
	}
	return "the " + string(f.Link) + " of its " + name
}

// unusedArrows finds drawn arrows that a typed formula leaves out.
func (b *builder) unusedArrows(d *draft, at Problem, fix func(string) study.Edit) {
	used := formula.Names(d.formula)
	for _, a := range d.user.Arguments {
		if e, err := formula.ParseExpr(a.Text); err == nil {
			used = append(used, formula.Names(e)...)
		}
	}
	v := d.variable.ID
	for _, a := range d.arrows {
		if slices.Contains(used, a.From) {
			continue
		}
		p := at
		p.Code, p.Span = "unused-arrow", formula.Span{Start: len(at.Text), End: len(at.Text)}
		p.Message = fmt.Sprintf("the arrow %s → %s is drawn, but the formula of %s does not use %s", a.From, v, v, a.From)
		p.Repairs = []Repair{
			{Label: "Add the term", Edit: fix(at.Text + " + " + b.typedTerm(a))},
			{Label: "Delete the arrow", Edit: removeArrow(b.rival.Name, a.From, v)},
		}
		b.report(p)
	}
}

// parseArguments reads the arguments given as text.
func (b *builder) parseArguments(d *draft) {
	v, f := d.variable, d.family
	d.given = make([]formula.Expr, len(f.Arguments))
	for n, arg := range d.user.Arguments {
		at := Problem{Variable: v.ID, Place: "argument", part: arg.Name, Text: arg.Text, Span: formula.Span{End: len(arg.Text)}}
		fix := func(text string) study.Edit {
			return b.changeLaw(v.ID, func(l *study.Law) { l.Arguments[n].Text = text })
		}
		drop := Repair{Label: "Drop it", Edit: b.changeLaw(v.ID, func(l *study.Law) { l.Arguments = slices.Delete(l.Arguments, n, n+1) })}
		i := f.Argument(arg.Name)
		if i < 0 {
			at.Code = "unknown-argument"
			at.Message = fmt.Sprintf("%s ~ %s: %s has no argument *%s*; it has %s.", v.ID, f.Name, article(f.Name), arg.Name, list(argumentNames(f)))
			at.Text, at.Span = "", formula.Span{}
			at.Repairs = []Repair{drop}
			b.stop(at)
			continue
		}
		e, err := formula.ParseExpr(arg.Text)
		if err != nil {
			at = b.parseProblem(at, err, fix)
			at.Repairs = append(at.Repairs, drop)
			b.stop(at)
			continue
		}
		if i == f.Predicted && len(formula.Names(e)) == 1 {
			if n, ok := e.(*formula.Name); ok && b.scope[n.ID] == (meaning{}) && b.declared[n.ID] == nil && b.variable(n.ID) == nil {
				continue // only a word for what the formula predicts: "mean rate"
			}
		}
		if i == f.Predicted && (d.formula != nil || len(d.arrows) > 0) {
			at.Code = "predicted-argument"
			at.Message = fmt.Sprintf("the %s of %s is what its arrows or its formula predict; say it there", f.Arguments[i].Name, v.ID)
			at.Repairs = []Repair{drop}
			b.stop(at)
			continue
		}
		if own, ok := e.(*formula.Name); ok && b.scope[own.ID] == (meaning{role: argument, child: v.ID, at: i}) {
			continue // its own default parameter by name
		}
		if f.Arguments[i].Support == catalog.Positives {
			if x, ok := e.(*formula.Number); ok && x.Value <= 0 {
				at.Code = "argument-range"
				at.Message = fmt.Sprintf("the %s of %s must be positive", f.Arguments[i].Name, v.ID)
				at.Repairs = []Repair{drop}
				b.stop(at)
				continue
			}
		}
		if b.checkNames(d, e, at, fix) {
			d.given[i] = e
		}
	}
	for i, a := range f.Arguments {
		switch {
		case !a.Given || d.given[i] != nil || b.broken:
		case a.Name == "trials":
			b.stop(Problem{Code: "no-trials", Variable: v.ID, Place: "argument",
				Message: fmt.Sprintf("%s ~ %s: out of how many trials? Give a number or a column.", v.ID, f.Name),
				Repairs: b.trialRepairs(v)})
		default:
			b.stop(Problem{Code: "no-argument", Variable: v.ID, Place: "argument",
				Message: fmt.Sprintf("%s ~ %s: what is its *%s*? It is %s.", v.ID, f.Name, a.Name, a.Doc),
				Repairs: []Repair{b.defaultFamily(v, scaleOf(v))}})
		}
	}
}

// trialRepairs offers the columns of whole numbers that are never smaller than
// the count.
func (b *builder) trialRepairs(v *study.Variable) []Repair {
	var repairs []Repair
	own := b.table.Column(v.Column)
	if own == nil {
		return nil
	}
	for _, c := range b.table.Columns {
		if c == own || len(c.Numbers) == 0 || len(own.Numbers) == 0 || !formula.IsName(c.Name) {
			continue
		}
		fits := true
		for i, n := range c.Numbers {
			fits = fits && (n != n || n == float64(int64(n)) && !(own.Numbers[i] > n))
		}
		if fits && len(repairs) < 3 {
			repairs = append(repairs, Repair{Label: "Out of " + c.Name, Edit: b.changeLaw(v.ID, func(l *study.Law) {
				l.Arguments = append(l.Arguments, study.Argument{Name: "trials", Text: c.Name})
			})})
		}
	}
	return repairs
}

func argumentNames(f *catalog.Family) []string {
	var names []string
	for _, a := range f.Arguments {
		names = append(names, a.Name)
	}
	return names
}
