package findings

import (
	"fmt"

	"arrowroot/app/words"
	"arrowroot/compile/causal"
)

// direct reads the controlled direct effect.
func (r *reader) direct(f *Findings) {
	d := &Direct{Section: Section{Name: DirectSection}}
	var fixed []int
	if f.direct() {
		fixed = minus(f.Adjustment.Aim.Exposures, f.Exposures)
	}
	d.Direct = f.directEffect(fixed)
	d.Summary = d.Sentence
	kind := "not identified"
	switch {
	case !d.Effect:
		kind = "none drawn"
	case d.Direct.Adjustment.Sets != nil:
		kind = "by holding"
	case d.Identification.Identified && len(f.Selected) == 0:
		kind = "by a formula"
	}
	f.add(&d.Section, Finding{
		Key: "direct " + f.Ask.Exposures[0] + " " + f.Ask.Outcomes[0] + " | " + joined(f.names(d.Fixed)), Kind: kind, Sentence: d.Sentence,
		Nodes: union(d.Fixed, []int{d.Exposure, d.Outcome}),
	})
	f.Direct = d
}

// directEffect reads the controlled direct effect in the rows that there are;
// nil fixes all that carries the effect.
func (f *Findings) directEffect(fixed []int) *causal.Direct {
	d := causal.ReadDirect(f.Graph, f.Exposures[0], f.Outcomes[0], fixed)
	if !d.Effect {
		return d
	}
	x, y := f.Ask.Exposures[0], f.Ask.Outcomes[0]
	if id := f.unmeasured(); id != "" {
		d.Adjustment = &causal.Adjustment{Graph: d.Adjustment.Graph, Aim: d.Adjustment.Aim, Effect: true}
		d.Sentence = fmt.Sprintf("The direct effect of %s on %s cannot be read: %s was not measured.", x, y, id)
		return d
	}
	if len(f.Selected) == 0 {
		return d
	}
	d.Adjustment = f.freed(causal.Adjust(f.Graph, causal.Aim{Exposures: union(f.Exposures, d.Fixed), Outcomes: f.Outcomes, Forced: f.Selected}))
	effect := fmt.Sprintf("The direct effect of %s on %s with %s kept as set", x, y, words.List(f.names(d.Fixed)))
	if len(d.Fixed) == 0 {
		effect = fmt.Sprintf("The direct effect of %s on %s", x, y)
	}
	if d.Adjustment.Sets == nil {
		d.Sentence = fmt.Sprintf("%s cannot be read by holding anything from rows that were chosen by %s.", effect, f.rowsBy())
	} else {
		d.Sentence = fmt.Sprintf("%s among rows chosen by %s can be read: hold %s.", effect, f.rowsBy(), words.List(f.names(union(d.Fixed, d.Adjustment.Sets[0]))))
	}
	return d
}
