package mistake

import (
	"fmt"
	"slices"

	"arrowroot/compile/causal"
	"arrowroot/compile/study"
	"arrowroot/compile/table"
)

// heldMistakes finds held variables that hide part of the effect (M1) or tie
// together what was not (M2). Whether one does is decided by the generalised
// adjustment criterion (Shpitser, VanderWeele & Robins 2010; Perković and
// others 2018); the sorting is that of Cinelli, Forney & Pearl (2024).
func heldMistakes(l *look) []Mistake {
	if l.read == nil {
		return nil
	}
	if l.direct {
		return l.heldDirect()
	}
	var all []Mistake
	for _, f := range l.read.HeldFaults {
		l.blame(f.Node)
		switch {
		case slices.ContainsFunc(l.read.Forbidden, func(x causal.Forbidden) bool { return x.Node == f.Node }):
			all = append(all, l.heldEffect(f))
		case f.Path != nil:
			all = append(all, l.heldCollider(f.Node, f.Path))
		}
	}
	if l.read.Sets == nil {
		all = append(all, l.collidersWithoutSet()...)
	}
	return all
}

// heldEffect is a held variable that the exposure acts on by way of the effect
// itself.
func (l *look) heldEffect(f causal.Fault) Mistake {
	id, x, y := l.g.Names[f.Node], l.g.Names[l.x], l.g.Names[l.y]
	m := Mistake{
		Code: HeldMediator, Key: key(HeldMediator, x, y, id), Path: l.ids(f.Path), Nodes: []string{id},
		Sentence: fmt.Sprintf("Holding %s would hide part of the effect: %s.", id, f.Reason),
		Repairs:  l.leaveFree(f.Node),
	}
	switch below := l.g.Descendants(l.y); {
	case below[f.Node]:
		m.Code, m.Key = HeldCollider, key(HeldCollider, x, y, id)
		m.Sentence = fmt.Sprintf("Holding %s would distort the effect: %s.", id, f.Reason)
		m.Why = fmt.Sprintf("Among rows with the same %s, whatever else moves %s makes up for %s, so the two go together otherwise than %s acts.", id, y, x, x)
	case l.g.Ancestors(l.y)[f.Node]:
		m.Why = fmt.Sprintf("Rows with the same %s no longer show what %s does through %s.", id, x, id)
		m.Repairs = append(m.Repairs, l.askDirect(f.Node)...)
	default:
		m.Why = fmt.Sprintf("Rows with the same %s differ less by what %s does on the way to %s.", id, x, y)
	}
	return m
}

// askDirect is the repair that asks for the direct effect around a variable.
func (l *look) askDirect(v int) []Repair {
	at, ok := middle(l.variable(v), l.table)
	if l.at < 0 || !ok {
		return nil
	}
	q := *l.ask
	q.Effect = study.DirectEffect
	q.Fixed = append(slices.Clone(q.Fixed), study.Fix{Variable: l.g.Names[v], At: at})
	q.Held = slices.DeleteFunc(append([]string{}, q.Held...), func(id string) bool { return id == l.g.Names[v] })
	return []Repair{{"Ask for the direct effect", study.ChangeQuestion{At: l.at, To: q}}}
}

// middle is a value at which a variable may be fixed until the user says
// another: the median of its column, the middle of its range, the first of its
// levels.
func middle(v *study.Variable, t *table.Table) (study.Setting, bool) {
	switch {
	case v == nil:
		return study.Setting{}, false
	case len(v.Levels) > 0:
		return study.Setting{Word: v.Levels[0]}, true
	case v.Scale == study.Binary:
		return study.Setting{}, true
	}
	if values := numbers(v, t); values != nil {
		if q := table.Quantiles(values, 1); len(q) == 1 {
			return study.Setting{Number: short(q[0], spread(values))}, true
		}
	}
	if v.Range != nil {
		return study.Setting{Number: short((v.Range.Low+v.Range.High)/2, v.Range.High-v.Range.Low)}, true
	}
	return study.Setting{}, false
}

// heldCollider is a held variable at which, or above which, two arrows meet.
func (l *look) heldCollider(v int, path []int) Mistake {
	id, x, y := l.g.Names[v], l.g.Names[l.x], l.g.Names[l.y]
	m := Mistake{
		Code: HeldCollider, Key: key(HeldCollider, x, y, id), Path: l.ids(path), Nodes: []string{id},
		Sentence: fmt.Sprintf("Holding %s makes the comparison misleading: it opens a path that was closed.", id),
	}
	for i := range l.read.Paths {
		p := &l.read.Paths[i]
		if !slices.Equal(p.Nodes, path) {
			continue
		}
		m.Sentence = fmt.Sprintf("Holding %s makes the comparison misleading: it opens %s.", id, p.Text(l.g))
		for _, o := range p.OpenedAt {
			if o.By != v {
				continue
			}
			k := slices.Index(p.Nodes, o.Node)
			a, b := l.g.Names[p.Nodes[k-1]], l.g.Names[p.Nodes[k+1]]
			m.Why = fmt.Sprintf("%s and %s meet at %s: among rows with the same %s they go together, whatever they do in all rows.", a, b, l.g.Names[o.Node], id)
			m.Nodes = []string{id, a, b}
		}
		break
	}
	m.Repairs = l.leaveFree(v)
	if sets, _ := causal.Minimal(l.inside, l.x, l.y, l.held, 1); len(sets) > 0 {
		m.Repairs = append(m.Repairs, l.holdToo(sets[0])...)
	}
	return m
}

// collidersWithoutSet looks at what is held where no set would do: a variable
// that only opens paths makes things worse all the same.
func (l *look) collidersWithoutSet() []Mistake {
	var all []Mistake
	for _, v := range l.held {
		if l.blamed[v] {
			continue
		}
		var opened *causal.Path
		for i := range l.read.Paths {
			p := &l.read.Paths[i]
			if p.Open && p.Kind != causal.Causal && slices.ContainsFunc(p.OpenedAt, func(o causal.Opening) bool { return o.By == v }) {
				opened = p
				break
			}
		}
		if opened == nil {
			continue
		}
		without := causal.Read(l.g, causal.Query{Exposure: l.x, Outcome: l.y, Held: minus(l.held, v), Within: l.plates, MaxPaths: len(l.read.Paths), MaxSets: 1})
		closes := false
		for i := range without.Paths {
			closes = closes || without.Paths[i].Open && !l.read.Paths[i].Open
		}
		if !closes {
			l.blame(v)
			all = append(all, l.heldCollider(v, opened.Nodes))
		}
	}
	return all
}

// heldDirect finds what may not be held beside the variables that a direct
// effect keeps fixed.
func (l *look) heldDirect() []Mistake {
	var all []Mistake
	x, y := l.g.Names[l.x], l.g.Names[l.y]
	forbidden := causal.Adjust(l.g, causal.Aim{Exposures: plus([]int{l.x}, l.fixed...), Outcomes: []int{l.y}, MaxSets: 1}).Forbidden
	for _, v := range l.held {
		if !slices.Contains(forbidden, v) {
			continue
		}
		l.blame(v)
		id := l.g.Names[v]
		way := walk(l.g, l.x, v, l.fixed...)
		for _, f := range l.fixed {
			if way == nil {
				way = walk(l.g, f, v)
			}
		}
		m := Mistake{
			Code: HeldMediator, Key: key(HeldMediator, x, y, id), Path: l.ids(way), Nodes: []string{id},
			Sentence: fmt.Sprintf("Holding %s would hide part of the direct effect: %s leads to it.", id, l.arrows(way)),
			Why:      fmt.Sprintf("Rows with the same %s no longer show what %s does through %s.", id, x, id),
			Repairs:  l.leaveFree(v),
		}
		if l.g.Descendants(l.y)[v] {
			m.Code, m.Key = HeldCollider, key(HeldCollider, x, y, id)
			m.Sentence = fmt.Sprintf("Holding %s would distort the direct effect: it is an effect of %s, by %s.", id, y, l.arrows(walk(l.g, l.y, v)))
			m.Path = l.ids(walk(l.g, l.y, v))
		} else {
			m.Repairs = append(m.Repairs, l.askDirect(v)...)
		}
		all = append(all, m)
	}
	return all
}
