package mistake

import (
	"fmt"
	"slices"

	"arrowroot/compile/study"
)

// againstTime finds arrows whose cause is of a later tier than their effect
// (M19).
func againstTime(l *look) []Mistake {
	var all []Mistake
	for _, a := range l.rival.Diagram.Arrows {
		from, to := l.study.Variable(a.From), l.study.Variable(a.To)
		if from.Tier == 0 || to.Tier == 0 || from.Tier <= to.Tier {
			continue
		}
		turned := *a
		turned.From, turned.To = a.To, a.From
		turned.With = nil
		all = append(all, Mistake{
			Code: AgainstTime, Key: key(AgainstTime, a.From, a.To), Path: []string{a.From, a.To}, Nodes: []string{a.From, a.To},
			Sentence: fmt.Sprintf("The arrow %s → %s runs against time: %s is of tier %d, %s of tier %d.", a.From, a.To, a.From, from.Tier, a.To, to.Tier),
			Why:      fmt.Sprintf("What comes later cannot act on what came before; if an earlier %s is meant, it is a variable of its own.", a.From),
			Repairs: []Repair{
				{"Turn it round", study.ChangeArrow{Rival: l.rival.Name, From: a.From, To: a.To, Arrow: turned}},
				{"Delete it", study.RemoveArrow{Rival: l.rival.Name, From: a.From, To: a.To}},
			},
		})
	}
	return all
}

// afterExposure finds held variables that came after the exposure and are not
// caught as its effects otherwise (M4; Montgomery, Nyhan & Torres 2018): by
// the arrows, by their tiers, or by varying where the exposure does not.
func afterExposure(l *look) []Mistake {
	if !l.asked() {
		return nil
	}
	var all []Mistake
	x, y := l.g.Names[l.x], l.g.Names[l.y]
	below, above := l.g.Descendants(l.x), l.g.Ancestors(l.x)
	exposure := l.variable(l.x)
	for _, v := range l.held {
		if l.blamed[v] || v == l.x || v == l.y {
			continue
		}
		id, held := l.g.Names[v], l.variable(v)
		m := Mistake{Code: AfterExposure, Severity: Warn, Key: key(AfterExposure, x, y, id), Nodes: []string{x, id}, Repairs: l.leaveFree(v)}
		if !below[v] && !above[v] {
			m.Repairs = append([]Repair{l.draw(l.x, v)}, m.Repairs...)
		}
		switch {
		case below[v]:
			way := walk(l.g, l.x, v)
			m.Key, m.Path = key(AfterExposure, x, id), l.ids(way)
			m.Sentence = fmt.Sprintf("%s is held, but it is an effect of %s, by %s.", id, x, l.arrows(way))
			m.Why = fmt.Sprintf("By these arrows that costs only precision; were anything undrawn to act on both %s and %s, it would mislead.", id, y)
		case exposure.Tier > 0 && held.Tier > exposure.Tier:
			m.Sentence = fmt.Sprintf("%s is held and came after %s (tier %d after %d), but no arrow says whether %s acted on it.", id, x, held.Tier, exposure.Tier, x)
			m.Why = fmt.Sprintf("If %s did, holding %s hides part of the effect or opens a path.", x, id)
		case !above[v] && l.laterByLevel(exposure, held) && len(l.g.Parents[v]) > 0:
			m.Severity = Note
			m.Sentence = fmt.Sprintf("%s is held and varies within %s, where %s does not: was it recorded after %s?", id, names(exposure.Plates), x, x)
			m.Why = fmt.Sprintf("What came after %s can be its effect, and the tiers do not say which came first.", x)
			m.Repairs = append(m.Repairs, l.before(held, exposure)...)
		default:
			continue
		}
		l.blame(v)
		all = append(all, m)
	}
	return all
}

// laterByLevel reports whether a variable varies within the groups at whose
// level the exposure lives, and no tiers say which came first.
func (l *look) laterByLevel(exposure, v *study.Variable) bool {
	if len(exposure.Plates) == 0 || exposure.Tier > 0 && v.Tier > 0 {
		return false
	}
	return !slices.ContainsFunc(v.Plates, func(p string) bool { return slices.Contains(exposure.Plates, p) })
}

// before is the repair that says by tiers that a variable came before another.
func (l *look) before(v, exposure *study.Variable) []Repair {
	early, late := *v, *exposure
	switch {
	case late.Tier == 0 && early.Tier == 0:
		early.Tier, late.Tier = 1, 2
	case late.Tier == 0:
		late.Tier = early.Tier + 1
	case late.Tier > 1:
		early.Tier = late.Tier - 1
	default:
		return nil
	}
	return []Repair{{v.ID + " came first", study.Several{Name: "Let " + v.ID + " come before " + exposure.ID, Edits: []study.Edit{
		study.ChangeVariable{ID: v.ID, To: early}, study.ChangeVariable{ID: exposure.ID, To: late},
	}}}}
}
