package mistake

import (
	"fmt"

	"arrowroot/compile/causal"
	"arrowroot/compile/graph"
)

// heldInstruments finds held variables that move the exposure and reach the
// outcome in no other way (M5). Holding one widens the answer, and makes what
// confounding is left larger (Pearl 2010, "On a class of bias-amplifying
// variables that endanger effect estimates"; VanderWeele 2019).
func heldInstruments(l *look) []Mistake {
	if l.read == nil || l.direct || !l.read.Effect {
		return nil
	}
	var all []Mistake
	x, y := l.g.Names[l.x], l.g.Names[l.y]
	below, around := l.g.Descendants(l.x), l.around()
	for _, v := range l.held {
		rest := l.beside(v)
		if l.blamed[v] || below[v] ||
			!causal.Separated(around, []int{v}, []int{l.y}, rest) || causal.Separated(around, []int{v}, []int{l.x}, rest) {
			continue
		}
		id := l.g.Names[v]
		m := Mistake{
			Code: HeldInstrument, Severity: Warn, Key: key(HeldInstrument, x, y, id), Nodes: []string{id, x}, Repairs: l.leaveFree(v),
			Sentence: fmt.Sprintf("Holding %s only makes the answer less precise: it goes with %s, and with %s no other way.", id, x, y),
			Why:      fmt.Sprintf("Rows with the same %s leave less of %s to compare, and what is still confounded weighs more.", id, x),
		}
		if way := walk(l.g, v, l.x); way != nil {
			m.Path = l.ids(append(way, walk(l.g, l.x, l.y)[1:]...))
			m.Sentence = fmt.Sprintf("Holding %s only makes the answer less precise: it moves %s, and %s through %s alone.", id, x, y, x)
			if len(rest) > 0 {
				m.Sentence = fmt.Sprintf("Holding %s only makes the answer less precise: with %s held it moves %s through %s alone.", id, names(l.ids(rest)), y, x)
			}
		}
		if p := l.openPath(); p != nil {
			m.Sentence = fmt.Sprintf("Holding %s makes the bias larger: it moves %s, not %s, and %s stays open.", id, x, y, p.Text(l.g))
			m.Why = fmt.Sprintf("The less of %s is left to compare, the more of it goes with what was not measured.", x)
			m.Path = l.ids(p.Nodes)
		}
		l.blame(v)
		all = append(all, m)
	}
	return all
}

// around is the sheet, within the groups of held plates, without the arrows
// out of the exposure: what is related to the outcome there is so by some way
// that is no part of the effect.
func (l *look) around() *graph.Graph {
	return l.inside.Keep(func(from, _ int) bool { return from != l.x }, nil)
}

// openPath is the first listed path that confounds and is open; nil if the held
// set is enough.
func (l *look) openPath() *causal.Path {
	if l.read.HeldValid {
		return nil
	}
	for i := range l.read.Paths {
		if p := &l.read.Paths[i]; p.Open && p.Kind != causal.Causal {
			return p
		}
	}
	return nil
}
