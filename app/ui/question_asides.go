package ui

import (
	"slices"

	"arrowroot/app/words"
	"arrowroot/compile/study"
	"arrowroot/compile/table"
)

// The parts of a question that most questions do without: which rows are asked
// about, what is fixed besides the exposure, which groups, and how they weigh.
// Each is offered only where the study has what it needs.

// heldPlate is what stands before a plate's name among what can be held.
const heldPlate = "within each "

// again fills the popover anew, with what was typed taken over.
func (a *asker) again() {
	a.read()
	a.fill()
	a.body.Refresh()
	if a.pop != nil {
		a.pop.resize()
	}
}

// relatives are the variables of the sheet that the exposure acts on, by any
// way, and those of them that act on the outcome.
func (a *asker) relatives() (descendants, between []string) {
	g := a.d.view.Graph
	if g == nil {
		return nil, nil
	}
	x, y := g.Index(a.draft.Exposure), g.Index(a.draft.Outcome)
	if x < 0 || y < 0 {
		return nil, nil
	}
	below, above := g.Descendants(x), g.Ancestors(y)
	for v, id := range g.Names {
		if v == x || !below[v] {
			continue
		}
		descendants = append(descendants, id)
		if v != y && above[v] {
			between = append(between, id)
		}
	}
	slices.Sort(between)
	return descendants, between
}

// subset are the variables by which rows can be chosen: measured, and not acted
// on by the exposure, since an effect on who is counted is no effect on them.
func (a *asker) subset() []string {
	descendants, _ := a.relatives()
	var out []string
	for _, v := range a.d.view.Study.Variables {
		if v.Column != "" && !v.Unmeasured && v.ID != a.draft.Exposure && v.ID != a.draft.Outcome && !slices.Contains(descendants, v.ID) {
			out = append(out, v.ID)
		}
	}
	return out
}

// tidy drops from the draft what the new ends of the question do not allow.
func (a *asker) tidy() {
	q := &a.draft
	for _, end := range []string{q.Exposure, q.Outcome} {
		q.Held = drop(q.Held, end)
	}
	_, between := a.relatives()
	q.Fixed = slices.DeleteFunc(slices.Clone(q.Fixed), func(f study.Fix) bool { return !slices.Contains(between, f.Variable) })
	if len(q.Fixed) == 0 {
		q.Fixed, q.Effect = nil, ""
	}
	may := a.subset()
	a.where.list = slices.DeleteFunc(a.where.list, func(c study.Condition) bool { return !slices.Contains(may, c.Variable) })
}

// asides adds those parts, or one button that names those there are.
func (a *asker) asides(s *sheaf) {
	q := &a.draft
	if a.d.view.Study.Variable(q.Exposure) == nil || a.d.view.Study.Variable(q.Outcome) == nil {
		return
	}
	may, plates := a.subset(), a.d.view.Study.Plates
	_, between := a.relatives()
	var parts []string
	if len(between) > 0 {
		parts = append(parts, "a direct effect")
	}
	if len(may) > 0 {
		parts = append(parts, "a subset")
	}
	if len(plates) > 0 {
		parts = append(parts, "groups")
	}
	if len(parts) == 0 {
		return
	}
	if !a.more {
		b := a.d.quiet("More: "+words.List(parts)+" …", func() { a.more = true; a.again() })
		s.keys["more"] = b
		s.add(row(0, b))
		return
	}
	s.add(hairline())
	if len(between) > 0 {
		a.direct(s, between)
	}
	if len(may) > 0 {
		a.where.among = may
		s.add(muted("Among which rows"))
		a.where.add(s, "where")
	}
	if len(plates) > 0 {
		a.groups(s, outer(plates))
	}
}

// direct asks whether something between exposure and outcome is set as well.
func (a *asker) direct(s *sheaf, between []string) {
	q := &a.draft
	a.fixed = make(map[string]*field)
	s.choice("effect", "Which effect", []string{"all of it", "direct, with others fixed"}, map[bool]string{false: "all of it", true: "direct, with others fixed"}[q.Effect == study.DirectEffect], func(w string) {
		a.read()
		q.Effect, q.Fixed = "", nil
		if w != "all of it" {
			q.Effect = study.DirectEffect
			for _, id := range a.children(between) {
				a.fix(id, true)
			}
		}
		a.again()
	})
	if q.Effect != study.DirectEffect {
		return
	}
	s.toggles("fix", "Fixed", between, func(w string) bool {
		return slices.ContainsFunc(q.Fixed, func(f study.Fix) bool { return f.Variable == w })
	}, func(w string, on bool) {
		a.read()
		a.fix(w, on)
		a.again()
	})
	for i := range q.Fixed {
		f := &q.Fixed[i]
		v := a.d.view.Study.Variable(f.Variable)
		if v == nil {
			continue
		}
		if len(v.Levels) > 0 {
			s.choice("at "+f.Variable, f.Variable+" at", v.Levels, f.At.Word, func(w string) { a.fixAt(v.ID, study.Setting{Word: w}) })
			continue
		}
		at := a.d.field(words.Given(f.At.Number), "", nil)
		at.OnSubmitted = func(string) { a.ask() }
		a.fixed[f.Variable], s.keys["at "+f.Variable] = at, at
		s.add(labelled(f.Variable+" at", row(6, stretch(at), muted(v.Unit))))
	}
	s.add(newProse(sizeSmall, span{text: "A controlled direct effect: what " + q.Exposure + " does to " + q.Outcome + " while " + orNone(fixedNames(q)) + " is set, whatever " + q.Exposure + " is.", token: tokenMuted}))
}

func fixedNames(q *study.Question) []string {
	var out []string
	for _, f := range q.Fixed {
		out = append(out, f.Variable)
	}
	return out
}

// children are those of some variables on which the exposure acts directly:
// fixing them closes every way around.
func (a *asker) children(between []string) []string {
	var out []string
	for _, id := range between {
		if v := a.d.view.Study.Variable(id); a.d.view.Rival.Diagram.Arrow(a.draft.Exposure, id) != nil && v != nil && !v.Unmeasured {
			out = append(out, id)
		}
	}
	return out
}

// fix sets a variable at a usual value, or leaves it to what acts on it.
func (a *asker) fix(id string, on bool) {
	q := &a.draft
	q.Fixed = slices.DeleteFunc(slices.Clone(q.Fixed), func(f study.Fix) bool { return f.Variable == id })
	if on {
		q.Fixed = append(q.Fixed, study.Fix{Variable: id, At: a.d.usualValue(id)})
		q.Held = drop(q.Held, id)
	}
}

func (a *asker) fixAt(id string, at study.Setting) {
	for i := range a.draft.Fixed {
		if a.draft.Fixed[i].Variable == id {
			a.draft.Fixed[i].At = at
		}
	}
}

// usualValue is a middle value of a variable, until the user says another: the
// median of the data, the middle of the range, the first level.
func (d *desk) usualValue(id string) study.Setting {
	v := d.view.Study.Variable(id)
	switch {
	case v == nil:
		return study.Setting{}
	case len(v.Levels) > 0:
		return study.Setting{Word: v.Levels[0]}
	}
	if c := d.view.Table.Column(v.Column); v.Column != "" && c != nil && c.Kind == table.Numeric {
		if q := table.Quantiles(divided(c.Numbers, v.Divide), 3); len(q) == 3 && q[0] < q[2] {
			return study.Setting{Number: rounded(q[1], q[2]-q[0])}
		}
	}
	if v.Range != nil {
		return study.Setting{Number: (v.Range.Low + v.Range.High) / 2}
	}
	return study.Setting{}
}

// groups asks which groups are meant and how they weigh.
func (a *asker) groups(s *sheaf, group string) {
	q := &a.draft
	these, fresh := "those in the data", "new ones of the same kind"
	s.choice("groups", "Which groups", []string{these, fresh}, map[bool]string{false: these, true: fresh}[q.Groups == study.NewGroups], func(w string) {
		q.Groups = map[bool]string{true: study.NewGroups}[w == fresh]
	})
	rows, groups := "every row the same", "every "+group+" the same"
	s.choice("weigh", "What counts", []string{rows, groups}, map[bool]string{false: rows, true: groups}[q.Weigh == study.ByGroups], func(w string) {
		q.Weigh = map[bool]string{true: study.ByGroups}[w == groups]
	})
}

// outer names a level of the outermost plate; of several it says only "group".
func outer(plates []*study.Plate) string {
	name := ""
	for _, p := range plates {
		if p.Within != "" {
			continue
		}
		if name != "" {
			return "group"
		}
		name = p.Name
	}
	return or(name, "group")
}
