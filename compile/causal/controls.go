package causal

import (
	"fmt"
	"slices"

	"arrowroot/compile/graph"
)

// ControlKind says what holding a variable does to the reading of an effect.
type ControlKind int

// The kinds of control. The last two are to be left alone.
const (
	GoodControl     ControlKind = iota // the effect is readable with it, not without it
	PartOfControl                      // it closes something, but others are needed too
	SharpensControl                    // not needed; can only make the answer more precise
	NeutralControl                     // not needed; no general claim on precision
	BluntsControl                      // not needed; can only make the answer less precise
	BadControl                         // it spoils the reading, or closes nothing while the effect is confounded
)

// A Control is the verdict on one measured variable, beyond those that are held
// besides.
type Control struct {
	Node     int
	Kind     ControlKind
	Path     []int // the path that makes it so; nil = none to show
	Sentence string
}

const (
	controlPaths = 500 // paths looked at for one that shows the reason
	helpfulSets  = 64  // sets looked at for one that needs a variable
)

// Controls gives a verdict for every available variable but exposure and
// outcome, in the order of the nodes; of a held one, beside the rest of held.
// Claims on precision hold in every model of the graph (Henckel, Perković &
// Maathuis 2022; Rotnitzky & Smucler 2020).
func Controls(g *graph.Graph, exposure, outcome int, held []int) []Control {
	return ControlsAmong(g, exposure, outcome, held, nil)
}

// ControlsAmong gives the verdicts among the rows that some nodes kept, which
// are held whatever else is and get none.
func ControlsAmong(g *graph.Graph, exposure, outcome int, held, selected []int) []Control {
	return JointControls(g, []int{exposure}, []int{outcome}, held, selected)
}

// JointControls gives the verdicts for the joint effect of several exposures,
// as of one exposure and what a direct effect keeps fixed.
func JointControls(g *graph.Graph, exposures, outcomes, held, selected []int) []Control {
	c := newComparison(g, exposures, outcomes)
	c.keep(selected)
	held = minus(tidy(held), c.selected)
	walks := firstPaths(g, exposures, outcomes)
	left := searchBudget
	reasons := map[int]Forbidden{}
	if len(exposures) == 1 && len(outcomes) == 1 {
		for _, f := range c.whyForbidden() {
			reasons[f.Node] = f
		}
	} else {
		for _, v := range list(c.forbidden) {
			reasons[v] = Forbidden{Node: v, Reason: "it carries part of the effect, or is an effect of what does"}
		}
	}
	var all []Control
	for v, can := range available(g) {
		if !can || slices.Contains(exposures, v) || slices.Contains(outcomes, v) || slices.Contains(c.selected, v) {
			continue
		}
		j := judgement{c: c, walks: walks, base: minus(held, []int{v}), node: v, budget: &left}
		if f, no := reasons[v]; no {
			all = append(all, Control{v, BadControl, f.Path, fmt.Sprintf("Leave %s free: %s.", g.Names[v], f.Reason)})
			continue
		}
		all = append(all, j.verdict())
	}
	return all
}

// firstPaths are the paths looked at for reasons.
func firstPaths(g *graph.Graph, exposures, outcomes []int) []*Path {
	var walks []*Path
	left := searchBudget
	for p := range between(g, exposures, outcomes, nil) {
		if walks = append(walks, &p); len(walks) == controlPaths || !left.spend(g, len(p.Edges)) {
			break
		}
	}
	return walks
}

// A judgement weighs one variable that may be held beside a base.
type judgement struct {
	c     *comparison
	walks []*Path
	base  []int
	node  int

	budget *budget // for all variables of one listing
}

func (j judgement) verdict() Control {
	g, name := j.c.g, j.c.g.Names[j.node]
	with := union(j.base, []int{j.node})
	validWithout, validWith := j.c.valid(j.base), j.c.valid(with)
	v := Control{Node: j.node}
	switch {
	case !validWithout && validWith:
		v.Kind = GoodControl
		v.Sentence = fmt.Sprintf("Hold %s: it makes the comparison fair.", name)
		if p := j.changed(j.base, with); p != nil {
			v.Path = p.Nodes
			v.Sentence = fmt.Sprintf("Hold %s: it closes %s.", name, p.Text(g))
		}
	case validWithout && !validWith:
		v.Kind = BadControl
		v.Sentence = fmt.Sprintf("Leave %s free: held, it makes the comparison misleading.", name)
		if p := j.changed(with, j.base); p != nil {
			v.Path = p.Nodes
			v.Sentence = fmt.Sprintf("Leave %s free: held, it opens %s.", name, p.Text(g))
		}
	case validWithout && validWith:
		better, worse := j.c.asPrecise(with, j.base), j.c.asPrecise(j.base, with)
		switch {
		case !j.c.effect() || better == worse:
			v.Kind = NeutralControl
			v.Sentence = fmt.Sprintf("Holding %s is not needed and does no harm.", name)
		case better:
			v.Kind = SharpensControl
			v.Sentence = fmt.Sprintf("Holding %s is not needed, but can only make the answer more precise.", name)
		default:
			v.Kind = BluntsControl
			v.Sentence = fmt.Sprintf("Holding %s is not needed and can only make the answer less precise.", name)
		}
	}
	if v.Sentence != "" {
		return v
	}
	switch helps, known := j.helps(with); {
	case helps:
		v.Kind = PartOfControl
		v.Sentence = fmt.Sprintf("Hold %s, though not alone.", name)
		if p := j.changed(j.base, with); p != nil {
			v.Path = p.Nodes
			v.Sentence = fmt.Sprintf("Hold %s, though not alone: it closes %s.", name, p.Text(g))
		}
	case !known:
		v.Kind = NeutralControl
		v.Sentence = fmt.Sprintf("Whether holding %s could help beside others was not settled: there are too many sets.", name)
	default:
		v.Kind = BadControl
		v.Sentence = fmt.Sprintf("Leave %s free: it does not make the comparison fair, and held it can make the bias larger.", name)
		if p := j.open(with); p != nil {
			v.Path = p.Nodes
			v.Sentence = fmt.Sprintf("Leave %s free: %s stays open all the same, and with %s held the bias can be larger.", name, p.Text(g), name)
		}
	}
	return v
}

// helps reports whether some valid set that contains the base needs the node,
// as far as the first minimal ones tell; known says whether that settles it.
func (j judgement) helps(with []int) (helps, known bool) {
	needs := func(z []int) bool { return !j.c.valid(minus(z, []int{j.node})) }
	if slices.Contains(j.c.g.Computed, true) {
		sets, more := j.c.minimal(with, helpfulSets)
		helps = slices.ContainsFunc(sets, needs)
		return helps, helps || !more
	}
	if !j.c.exists(with) {
		return false, true
	}
	left := helpfulSets
	for z := range j.c.moral(union(with, j.c.selected)).separators {
		if needs(union(z, with)) {
			return true, true
		}
		if left--; left == 0 || j.budget.spent() {
			return false, false
		}
		j.budget.spend(j.c.g, 3*(len(z)+1))
	}
	return false, true
}

// changed finds a path that is no part of the effect, open while one set is
// held and closed while the other is.
func (j judgement) changed(open, closed []int) *Path {
	before, after := newStatus(j.c.g, union(open, j.c.selected)), newStatus(j.c.g, union(closed, j.c.selected))
	for _, p := range j.walks {
		if before.judge(p); p.Open && p.Kind != Causal {
			if after.judge(p); !p.Open {
				return p
			}
		}
	}
	return nil
}

// open finds a path that is no part of the effect and open while a set is held.
func (j judgement) open(held []int) *Path {
	s := newStatus(j.c.g, union(held, j.c.selected))
	for _, p := range j.walks {
		if s.judge(p); p.Open && p.Kind != Causal {
			return p
		}
	}
	return nil
}

// String is a word or two for the kind.
func (k ControlKind) String() string {
	return [...]string{"good", "good with others", "neutral, sharpens", "neutral", "neutral, blunts", "bad"}[k]
}
