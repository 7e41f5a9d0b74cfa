package model

import (
	"fmt"
	"strings"
	"unicode"

	"arrowroot/compile/catalog"
	"arrowroot/compile/formula"
	"arrowroot/compile/study"
)

// A role is what a parameter does in a law.
type role int

const (
	baseline     role = iota // α_bees
	baselineBy               // α_farm, around α_bees, or around 0 for a second plate
	baselineSD               // τ of either
	slope                    // β_hedge→bees
	slopeBy                  // by a plate
	slopeSD                  // τ of it
	steps                    // of a category or ordered parent
	product                  // of two parents
	stepsProduct             // a slope that differs by a category's level
	argument                 // sigma, k, shape, …
	cutPoints
	shares    // of a rise, at each level of an ordered parent
	threshold // of a parent, below which nothing changes
	halfway   // where a saturating effect has reached half its limit
	free      // declared by the user
	freeBy    // by a plate
	freeSD    // τ of it
)

// A meaning says which parameter of which law a canonical name is.
type meaning struct {
	role         role
	child        string // variable whose law it belongs to; "" if free
	parent, with string
	plate        string
	at           int    // argument of the family, or for steps 1 + level of a category child
	name         string // free ones
}

// nameParameters gives every parameter that a law could have its canonical
// name. Where underscores would make two of them alike (beta_a_b_c), the later
// one gets a number.
func (b *builder) nameParameters() {
	for _, d := range b.drafts {
		v := d.variable.ID
		b.name("alpha_"+v, meaning{role: baseline, child: v})
		b.name("cut_"+v, meaning{role: cutPoints, child: v})
		for i, a := range d.family.Arguments {
			if i != d.family.Predicted {
				b.name(a.Greek+"_"+v, meaning{role: argument, child: v, at: i})
			}
		}
		for _, p := range b.study.Plates {
			b.name("alpha_"+v+"_"+clean(p.Name), meaning{role: baselineBy, child: v, plate: p.Name})
			b.name("tau_"+v+"_"+clean(p.Name), meaning{role: baselineSD, child: v, plate: p.Name})
		}
		b.nameMeans(d)
		for _, p := range b.others(d) {
			b.name("beta_"+p+"_"+v, meaning{role: slope, child: v, parent: p})
			b.name("step_"+p+"_"+v, meaning{role: steps, child: v, parent: p})
		}
		for _, p := range d.arrows {
			switch p.Form {
			case study.OneWay:
				b.name("share_"+p.From+"_"+v, meaning{role: shares, child: v, parent: p.From})
			case study.Threshold:
				b.name("theta_"+p.From+"_"+v, meaning{role: threshold, child: v, parent: p.From})
			case study.Saturating:
				b.name("half_"+p.From+"_"+v, meaning{role: halfway, child: v, parent: p.From})
			}
			for _, l := range b.study.Plates {
				b.name("beta_"+p.From+"_"+v+"_"+clean(l.Name), meaning{role: slopeBy, child: v, parent: p.From, plate: l.Name})
				b.name("tau_"+p.From+"_"+v+"_"+clean(l.Name), meaning{role: slopeSD, child: v, parent: p.From, plate: l.Name})
			}
			for _, q := range d.arrows {
				if q.From != p.From {
					b.name("beta_"+p.From+"_"+q.From+"_"+v, meaning{role: product, child: v, parent: p.From, with: q.From})
					b.name("step_"+p.From+"_"+q.From+"_"+v, meaning{role: stepsProduct, child: v, parent: p.From, with: q.From})
				}
			}
		}
	}
}

// others lists what a law may have coefficients for: its drawn parents first,
// then the rest of the sheet, so that a formula that uses a variable without
// an arrow is told of the arrow and not of its coefficient.
func (b *builder) others(d *draft) []string {
	var all []string
	for _, a := range d.arrows {
		all = append(all, a.From)
	}
	// Where nothing is typed only carried ones can be met: on a large sheet the
	// rest would be a million names.
	typed := d.user.Formula != "" || len(d.user.Priors) > 0
	for _, n := range b.graph.Names {
		if n != d.variable.ID && !hasArrow(d.arrows, n) && (typed || carries(d, n)) {
			all = append(all, n)
		}
	}
	return all
}

func (b *builder) name(want string, m meaning) string {
	if have, ok := b.names[m]; ok {
		return have
	}
	id := want
	for n := 2; ; n++ {
		_, taken := b.scope[id]
		if !taken && b.variable(id) == nil {
			break
		}
		id = fmt.Sprintf("%s_%d", want, n)
	}
	b.scope[id], b.names[m] = m, id
	return id
}

// Symbols as they are printed.
func (b *builder) symbol(m meaning) string {
	switch m.role {
	case baseline:
		return "α_" + m.child
	case baselineBy:
		return "α_" + m.child + "," + m.plate
	case baselineSD:
		return "τ_" + m.child + "," + m.plate
	case slope:
		parent := m.parent
		if g, mean := b.means[parent]; mean {
			parent = g.brief() + "," + g.plate
		}
		return "β_" + parent + "→" + m.child
	case slopeBy:
		return "β_" + m.parent + "→" + m.child + "," + m.plate
	case slopeSD:
		return "τ_" + m.parent + "→" + m.child + "," + m.plate
	case steps:
		if m.at > 0 { // of one level of a category child
			return "step_" + m.parent + "→" + m.child + "," + b.levelOf(m)
		}
		return "step_" + m.parent + "→" + m.child
	case product:
		return "β_" + m.parent + "·" + m.with + "→" + m.child
	case stepsProduct:
		return "step_" + m.parent + "·" + m.with + "→" + m.child
	case argument:
		return formula.Symbol(b.draftOf(m.child).family.Arguments[m.at].Greek) + "_" + m.child
	case cutPoints:
		return "cut_" + m.child
	case shares:
		return "share_" + m.parent + "→" + m.child
	case threshold:
		return "θ_" + m.parent + "→" + m.child
	case halfway:
		return "half_" + m.parent + "→" + m.child
	case freeBy, freeSD:
		stem := formula.Symbol(m.name)
		if m.role == freeSD {
			return "τ_" + stem + "," + m.plate
		}
		return stem + "_" + m.plate
	}
	return formula.Symbol(m.name)
}

// levelOf is the level of a category child whose predictor a parameter is in.
func (b *builder) levelOf(m meaning) string {
	return b.model.Variables[b.at[m.child]].Levels[m.at-1]
}

func (b *builder) draftOf(id string) *draft {
	for _, d := range b.drafts {
		if d.variable.ID == id {
			return d
		}
	}
	return nil
}

// unit says what a coefficient is per, and on which scale: "per m/ha, log
// scale".
func (b *builder) unit(d *draft, parents ...string) string {
	scale := ""
	switch d.family.Link {
	case catalog.Log:
		scale = "log scale"
	case catalog.Logit, catalog.Softmax, catalog.Cumulate:
		scale = "log-odds"
	case catalog.Probit:
		scale = "probit scale"
	default:
		scale = d.variable.Unit
	}
	per := ""
	for _, id := range parents {
		p := b.variable(id)
		g, mean := b.means[id]
		if p == nil || p.Scale == study.Binary || g.level != "" {
			continue
		}
		if mean {
			id = g.of
		}
		u := p.Unit
		if u == "" {
			u = "unit of " + id
		}
		switch d.formTo(id) {
		case study.OneWay, study.Saturating: // per the whole change
			continue
		case study.Log:
			u = "log " + u
		}
		per += " per " + u
	}
	per = strings.TrimSpace(per)
	switch {
	case per == "" || scale == "":
		return per + scale
	case d.family.Link == catalog.Identity:
		return scale + " " + per
	}
	return per + ", " + scale
}

// clean makes a word fit to stand in a name.
func clean(word string) string {
	return strings.Map(func(r rune) rune {
		if r == '_' || unicode.IsLetter(r) || unicode.IsDigit(r) {
			return r
		}
		return '_'
	}, word)
}
