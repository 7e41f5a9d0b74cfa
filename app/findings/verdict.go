package findings

import (
	"fmt"
	"slices"

	"arrowroot/app/words"
	"arrowroot/compile/causal"
)

// judge gives the verdict where that of the reading alone will not do: on
// several exposures or outcomes, on a direct effect, on rows chosen by
// something. It reads off the adjustment, of what counts as the exposures.
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
	case f.Reading == nil:
		f.judgeSeveral(valid)
	case len(f.Selected) > 0:
		f.judgeSelected(valid)
	}
	if f.Verdict.HasProposal {
		f.Verdict.Propose = minus(f.Verdict.Propose, f.Selected)
	}
}

// heldIsEnough reports whether the held set, with what limits the rows, is one
// that gives the effect.
func (f *Findings) heldIsEnough(exposures []int) bool {
	held := union(minus(f.Held, slices.Concat(f.Exposures, f.Outcomes)), f.Selected)
	held = minus(held, exposures)
	only := causal.Adjust(f.Graph, causal.Aim{Exposures: exposures, Outcomes: f.Outcomes, Forced: held, MaxSets: 1})
	return len(only.Sets) > 0 && len(only.Sets[0]) == len(held)
}

func (f *Findings) judgeDirect(valid bool) {
	d := causal.ReadDirect(f.Graph, f.Exposures[0], f.Outcomes[0], minus(f.Adjustment.Aim.Exposures, f.Exposures))
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
		f.Verdict = causal.Verdict{Kind: causal.Readable, Sentence: fmt.Sprintf("The effect of %s on %s can be read from these data, holding %s, if the arrows drawn and not drawn are right.", x, y, words.List(f.names(f.Held)))}
	case len(wrong) > 0:
		f.Verdict = causal.Verdict{
			Kind: causal.OverHeld, HasProposal: true, Propose: set,
			Sentence: fmt.Sprintf("Holding %s would distort the effect of %s on %s.", words.List(f.names(wrong)), x, y),
			Way:      fmt.Sprintf("Leave %s free, and hold %s.", words.List(f.names(wrong)), words.List(f.names(set))),
		}
	default:
		f.Verdict = causal.Verdict{Kind: causal.Confounded, HasProposal: true, Propose: set, Sentence: fmt.Sprintf("The effect of %s on %s is confounded. Hold %s.", x, y, words.List(f.names(set)))}
	}
}

// judgeSelected says what the choice of rows does to one exposure and outcome.
// Where it changes nothing the verdict of the reading stands.
func (f *Findings) judgeSelected(valid bool) {
	a, r := f.Adjustment, f.Reading
	pair := f.Ask.Exposures[0] + " → " + f.Ask.Outcomes[0]
	switch set := proposalOf(a.Adjustment); {
	case !a.Effect || r.Verdict.Kind == causal.NoSet && r.Sets == nil:
	case a.Sets == nil:
		v := causal.Verdict{Kind: causal.NoSet, Sentence: fmt.Sprintf("%s cannot be read from these rows by holding anything: they were chosen by %s", pair, f.rowsBy())}
		if why := f.whySelected(); why != "" {
			v.Sentence += ", " + why
		}
		v.Sentence += "."
		v.Way = "The rows that were left out, or what is known of them from elsewhere, would help."
		f.Verdict = v
	case valid:
		f.Verdict.Kind, f.Verdict.HasProposal = causal.Readable, false
		f.Verdict.Sentence = fmt.Sprintf("%s can be read from these rows, holding %s, if the arrows drawn and not drawn are right.", pair, words.List(f.names(f.Held)))
	case r.Verdict.Kind == causal.Confounded:
		f.Verdict = causal.Verdict{Kind: causal.Confounded, HasProposal: true, Propose: set, Sentence: fmt.Sprintf("%s is confounded in these rows. Hold %s.", pair, words.List(f.names(set)))}
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

// whySelected says what the choice of rows spoils: it is an effect of what
// carries the effect, or opens a path.
func (f *Findings) whySelected() string {
	for _, one := range f.Reading.Forbidden {
		if slices.Contains(f.Selected, one.Node) {
			shown := one.Path
			if one.Node >= f.Sheet {
				shown = one.Path[:len(one.Path)-1]
			}
			if len(shown) < 2 {
				return "which is the outcome or an effect of it"
			}
			return "an effect of what is asked about, by " + f.arrows(shown)
		}
	}
	for i := range f.Reading.Paths {
		p := &f.Reading.Paths[i]
		for _, o := range p.OpenedAt {
			if p.Open && slices.Contains(f.Selected, o.By) {
				return "and that opens " + p.Text(f.Graph)
			}
		}
	}
	return ""
}

// arrows writes nodes as a way along arrows.
func (f *Findings) arrows(nodes []int) string {
	text := f.Graph.Names[nodes[0]]
	for _, v := range nodes[1:] {
		text += " → " + f.Graph.Names[v]
	}
	return text
}
