package findings

import (
	"fmt"
	"slices"

	"arrowroot/app/words"
	"arrowroot/compile/causal"
)

const controlNodes = 300 // variables on a sheet up to which each is judged

// controls judges each measured variable beside the held ones, or beside the set
// that is proposed in their stead.
func (r *reader) controls(f *Findings) {
	c := &Controls{Section: Section{Name: ControlSection}}
	defer func() { f.Controls = c }()
	if f.Sheet > controlNodes {
		c.Summary = "Single variables are not judged on a sheet of this size."
		c.LeftOut = fmt.Sprintf("Verdicts on %s variables are left out: more than %d.", words.Whole(float64(f.Sheet)), controlNodes)
		return
	}
	counts := map[causal.ControlKind]int{}
	if id := f.unmeasured(); id != "" {
		c.Summary = fmt.Sprintf("No control makes the comparison fair while %s is not measured.", id)
		return
	}
	c.Beside = f.Held
	if f.Verdict.HasProposal { // beside what is not enough, everything that is idle would look bad
		c.Beside = f.Verdict.Propose
	}
	if below := f.givenBelow(f.Adjustment.Aim.Exposures); len(below) > 0 {
		c.Summary = fmt.Sprintf("No control gives the effect among rows alike in %s.", words.List(f.names(below)))
		return
	}
	known := union(f.Selected, f.Given) // held whatever else is
	for _, one := range causal.JointControls(f.within(), f.Adjustment.Aim.Exposures, f.Outcomes, union(c.Beside, known), nil) {
		if slices.Contains(known, one.Node) {
			continue
		}
		counts[one.Kind]++
		c.List = append(c.List, one)
		f.add(&c.Section, Finding{
			Key: "control " + f.Graph.Names[one.Node], Kind: one.Kind.String(), Sentence: one.Sentence,
			Nodes: union([]int{one.Node}, one.Path), Edges: along(f.Graph, one.Path),
		})
	}
	good, idle, bad := counts[causal.GoodControl]+counts[causal.PartOfControl], counts[causal.SharpensControl]+counts[causal.NeutralControl]+counts[causal.BluntsControl], counts[causal.BadControl]
	beside := ""
	if len(c.Beside) > 0 {
		beside = "Beside " + words.List(f.names(c.Beside)) + ": "
	}
	c.Summary = words.Upper(fmt.Sprintf("%sof %s, %s to be held, %s not needed and %s to be left free.", beside, words.Plural(len(c.List), "measured variable"), beMany(good), beMany(idle), beMany(bad)))
	if len(c.List) == 0 {
		c.Summary = "No measured variable besides exposure and outcome could be held."
	}
}
