package findings

import (
	"fmt"
	"slices"

	"arrowroot/app/words"
	"arrowroot/compile/causal"
)

// judge gives the verdict where that of the reading alone will not do: on
// several exposures or outcomes, and on a direct effect. It reads off the
// adjustment, of what counts as the exposures.
func (f *Findings) judge(exposures []int) {
	valid := f.heldIsEnough(exposures)
	switch {
	case f.unmeasured() != "" && f.Adjustment.Effect:
		f.Verdict = causal.Verdict{Kind: causal.NoSet, Sentence: f.Adjustment.Summary, Way: f.Verdict.Way}
		if f.Reading != nil && !f.direct() {
			f.Verdict.Sentence = f.Reading.Verdict.Sentence
		}
	case f.direct():
		f.judgeDirect(valid)
	case f.Reading == nil, len(f.Given) > 0, f.Verdict.HasProposal && len(f.Ask.Forced)+len(f.Ask.Unavailable) > 0:
		f.judgeSeveral(valid && len(f.givenBelow(exposures)) == 0)
	}
}

// heldIsEnough reports whether the held set, with what limits the rows, is one
// that gives the effect.
func (f *Findings) heldIsEnough(exposures []int) bool {
	held := union(union(minus(f.Held, slices.Concat(f.Exposures, f.Outcomes)), f.Selected), f.Given)
	held = minus(held, exposures)
	only := causal.Adjust(f.Graph, causal.Aim{Exposures: exposures, Outcomes: f.Outcomes, Forced: held, MaxSets: 1})
	return len(only.Sets) > 0 && len(only.Sets[0]) == len(held)
}

func (f *Findings) judgeDirect(valid bool) {
	d := f.directEffect(minus(f.Adjustment.Aim.Exposures, f.Exposures))
	f.Verdict = causal.Verdict{Sentence: d.Sentence}
	fixed := "nothing"
	if len(d.Fixed) > 0 {
		fixed = words.List(f.names(d.Fixed))
	}
	pair := fmt.Sprintf("The direct effect of %s on %s with %s kept as set", f.Graph.Names[d.Exposure], f.Graph.Names[d.Outcome], fixed)
	switch set := proposalOf(f.Adjustment.Adjustment); {
	case !d.Effect:
		f.Verdict.Kind = causal.NoEffect
	case f.Adjustment.Sets == nil:
		f.Verdict.Kind = causal.NoSet
	case valid:
		f.Verdict.Kind = causal.Readable
		f.Verdict.Sentence = fmt.Sprintf("%s can be read from these data, holding %s, if the arrows drawn and not drawn are right.", pair, words.List(f.names(f.Held)))
	default:
		f.Verdict = causal.Verdict{Kind: causal.Confounded, HasProposal: true, Propose: set, Sentence: fmt.Sprintf("%s can be read: hold %s.", pair, words.List(f.names(set)))}
		if wrong := f.overHeld(); len(wrong) > 0 {
			f.Verdict.Kind = causal.OverHeld
		}
	}
}

// overHeld are held variables that may be in no set.
func (f *Findings) overHeld() []int {
	var wrong []int
	for _, v := range f.Held {
		if slices.Contains(f.Adjustment.Forbidden, v) || slices.Contains(f.Exposures, v) || slices.Contains(f.Outcomes, v) || !f.Graph.Measured[v] {
			wrong = append(wrong, v)
		}
	}
	return wrong
}

func (f *Findings) judgeSeveral(valid bool) {
	a := f.Adjustment
	x, y := words.List(f.Ask.Exposures), words.List(f.Ask.Outcomes)
	switch set, wrong := proposalOf(a.Adjustment), f.overHeld(); {
	case !a.Effect:
		f.Verdict = causal.Verdict{Kind: causal.NoEffect, Sentence: fmt.Sprintf("No arrows lead from %s to %s: this diagram says that there is no effect.", x, y)}
	case a.Sets == nil:
		f.Verdict = causal.Verdict{Kind: causal.NoSet, Sentence: a.Summary}
	case valid:
		f.Verdict = causal.Verdict{Kind: causal.Readable, Sentence: fmt.Sprintf("%s can be read from these data, holding %s, if the arrows drawn and not drawn are right.", words.Upper(f.effectAsked()), words.List(f.names(union(f.Held, f.Given))))}
	case len(wrong) > 0:
		f.Verdict = causal.Verdict{
			Kind: causal.OverHeld, HasProposal: true, Propose: set,
			Sentence: fmt.Sprintf("Holding %s would distort %s.", words.List(f.names(wrong)), f.effectAsked()),
			Way:      fmt.Sprintf("Leave %s free, and hold %s.", words.List(f.names(wrong)), words.List(f.names(set))),
		}
	default:
		f.Verdict = causal.Verdict{Kind: causal.Confounded, HasProposal: true, Propose: set, Sentence: fmt.Sprintf("%s is confounded. Hold %s.", words.Upper(f.effectAsked()), words.List(f.names(set)))}
	}
}

// rowsBy names what the rows were chosen by.
func (f *Findings) rowsBy() string {
	var by []int
	for _, v := range f.Selected {
		if v < f.Sheet {
			by = append(by, v)
		} else {
			by = append(by, f.Graph.Parents[v]...)
		}
	}
	slices.Sort(by)
	return words.List(f.names(slices.Compact(by)))
}
