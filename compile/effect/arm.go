package effect

import (
	"fmt"
	"slices"

	"arrowroot/compile/model"
	"arrowroot/compile/study"
)

// An arm is one side of a contrast: what happens to the exposure. The zero arm
// is the natural course: every row keeps its own value.
type arm struct {
	set   *float64 // to this value
	shift float64  // by this amount
}

// arms gives the two sides of a question: from and to, or the rows' own values
// against the shifted ones. With only one of From and To, the other side is
// the natural course.
func arms(v *model.Variable, q *study.Question) (from, to arm, err error) {
	if q.From == nil && q.To == nil {
		if len(v.Levels) > 0 {
			return arm{}, arm{}, fmt.Errorf("%s has levels; a question about it compares two of them, not a shift", v.ID)
		}
		return arm{}, arm{shift: q.Shift}, nil
	}
	if from.set, err = setting(v, q.From); err != nil {
		return arm{}, arm{}, err
	}
	to.set, err = setting(v, q.To)
	return from, to, err
}

func setting(v *model.Variable, s *study.Setting) (*float64, error) {
	if s == nil {
		return nil, nil
	}
	if s.Word == "" {
		return &s.Number, nil
	}
	k := slices.Index(v.Levels, s.Word)
	if k < 0 {
		return nil, fmt.Errorf("%s has no level %q", v.ID, s.Word)
	}
	x := float64(k)
	return &x, nil
}

// apply writes the exposure's column under the arm.
func (a arm) apply(dst, own []float64) {
	for i, x := range own {
		if a.set != nil {
			dst[i] = *a.set
		} else {
			dst[i] = x + a.shift
		}
	}
}

// A step changes one variable below the exposure.
type step struct {
	variable int
	law      *law  // simulated …
	computed *node // … or worked out
}

// A target is a variable whose average is wanted under each arm.
type target struct {
	variable int
	law      *law  // averaged by its expectation …
	computed *node // … or as it is worked out
	scale    *scale
	at       int // first of its parts among those of all targets
}

// A plan says what changes, in which order, when the exposure is set, so far
// as the targets read it. Variables that do not change keep their row values.
type plan struct {
	exposure int // none = nothing is set
	pins     []pin
	steps    []step // what targets and other steps read
	random   int    // steps that are simulated
	targets  []target
	parts    int // of all targets
}

// A pin is a variable that is set: the exposure, which differs between arms,
// or what a controlled direct effect fixes. Some laws go on reading the value
// that it would have had: as it was observed, or as it follows from what else
// is set (SEMANTICS B2 b).
type pin struct {
	variable int
	at       float64 // not of the exposure
	observed []bool  // by variable: its law reads the value that this one would have had
}

// pinned finds the pin of a variable; -1 if it is not set.
func (p *plan) pinned(variable int) int {
	return slices.IndexFunc(p.pins, func(q pin) bool { return q.variable == variable })
}

// none stands for no variable.
const none = -1

// A planner knows the laws of a model.
type planner struct {
	*resolver
	laws     []*law  // by variable; nil = given
	computed []*node // by variable
}

func newPlanner(m *model.Model) (*planner, error) {
	p := &planner{resolver: newResolver(m), laws: make([]*law, len(m.Variables)), computed: make([]*node, len(m.Variables))}
	for _, l := range m.Laws {
		resolved, err := p.resolveLaw(l)
		if err != nil {
			return nil, err
		}
		p.laws[l.Variable] = resolved
	}
	for i, v := range m.Variables {
		if v.Computed == nil {
			continue
		}
		n, err := p.expr(v.Computed)
		if err != nil {
			return nil, fmt.Errorf("the formula of %s: %w", v.ID, err)
		}
		p.computed[i] = n
	}
	return p, nil
}

// pin sets a variable; district holds those whose laws read the value that it
// would have had.
func (p *planner) pin(variable int, at float64, district []int) pin {
	out := pin{variable: variable, at: at, observed: make([]bool, len(p.m.Variables))}
	for _, v := range district {
		out.observed[v] = v != variable
	}
	return out
}

// plan lists what changes between what is set, the exposure first, and the
// targets. With alone, no law but the targets' is used: variables in between
// keep their values.
func (p *planner) plan(pins []pin, alone bool, targets ...target) (*plan, error) {
	out := &plan{exposure: none, pins: pins}
	if len(pins) > 0 {
		out.exposure = pins[0].variable
	}
	changed := make(map[int]bool)
	var visit func(v int) bool
	follow := func(v int) (moved bool) { // adds the steps that v reads
		for _, r := range p.readsOf(v) {
			if k := out.pinned(r); k >= 0 && !pins[k].observed[v] || visit(r) {
				moved = true
			}
		}
		return moved
	}
	visit = func(v int) bool {
		if known, ok := changed[v]; ok {
			return known
		}
		changed[v] = false // a cycle cannot be: laws follow the arrows
		if alone && p.computed[v] == nil || !follow(v) {
			return false
		}
		changed[v] = true
		st := step{variable: v, computed: p.computed[v]}
		if st.computed == nil {
			st.law = p.laws[v]
			out.random++
		}
		out.steps = append(out.steps, st)
		return true
	}
	for _, t := range targets {
		id := p.m.Variables[t.variable].ID
		if out.pinned(t.variable) >= 0 {
			return nil, fmt.Errorf("%s cannot be set and be the outcome at once", id)
		}
		t.law, t.computed = p.laws[t.variable], p.computed[t.variable]
		if t.law == nil && t.computed == nil {
			return nil, fmt.Errorf("%s has no law in this fit", id)
		}
		follow(t.variable)
		t.at = out.parts
		out.parts += t.scale.parts()
		out.targets = append(out.targets, t)
	}
	return out, nil
}

// readsOf lists the variables that a variable's formula or law reads.
func (p *planner) readsOf(v int) []int {
	switch {
	case p.computed[v] != nil:
		return p.computed[v].reads(nil)
	case p.laws[v] != nil:
		return p.laws[v].reads
	}
	return nil
}

// scaleOf says what is averaged of a variable: the probability of the levels
// named, or its expectation, or (levels nil, law of levels) each level apart.
func (p *planner) scaleOf(variable int, levels []string) (*scale, error) {
	v := p.m.Variables[variable]
	s := &scale{trials: -1}
	l := p.laws[variable]
	if l == nil {
		return s, nil
	}
	s.levels = l.levels
	if len(l.Predictors) == 1 && l.levels == 0 {
		s.predicted = l.Family.Centred
		s.trials = l.Family.Argument("trials")
	}
	if len(levels) == 0 {
		return s, nil
	}
	k := l.levels
	if k == 0 && v.Scale == study.Binary {
		k = 2
	}
	if k == 0 {
		return nil, fmt.Errorf("%s has no levels to ask for", v.ID)
	}
	s.event = make([]bool, k)
	for _, word := range levels {
		at := slices.Index(v.Levels, word)
		if at < 0 || at >= k {
			return nil, fmt.Errorf("%s has no level %q", v.ID, word)
		}
		s.event[at] = true
	}
	return s, nil
}

// upperHalf is the event "the middle level or above" of an ordered variable
// (SEMANTICS G).
func upperHalf(k int) []bool {
	event := make([]bool, k)
	for i := k / 2; i < k; i++ {
		event[i] = true
	}
	return event
}
