package model

import (
	"fmt"
	"math"
	"slices"

	"arrowroot/compile/causal"
	"arrowroot/compile/study"
	"arrowroot/compile/table"
)

// asked looks at one condition of the rows that the question asks about. Rows
// are a fixed population only if setting the exposure cannot move them in or
// out (SEMANTICS B4): the exposure's own value, as it was, can be asked for.
func (b *builder) asked(c study.Condition) {
	q, id := b.question, c.Variable
	v, drop := b.variable(id), b.unasked(c)
	switch {
	case v == nil:
		b.asks("subset", id, fmt.Sprintf("The question asks about rows where %s, but the study has no such variable.", b.words(c)), drop...)
		return
	case v.Unmeasured:
		b.asks("subset", id, fmt.Sprintf("%s was not measured, so nobody can tell in which rows %s: choose rows by what was measured.", id, b.words(c)), drop...)
		return
	case id == q.Outcome:
		b.asks("subset", id, fmt.Sprintf("%s is the outcome: rows cannot be chosen by what the question is about.", id), drop...)
		return
	case !b.onSheet(id):
		put := Repair{Label: "Put " + id + " on the sheet", Edit: study.AddNode{Rival: b.rival.Name, Variable: id}}
		b.asks("subset", id, fmt.Sprintf("The question asks about rows where %s, but %s is not on the sheet of %s, so nothing says whether %s acts on it.",
			b.words(c), id, b.rival.Name, q.Exposure), append([]Repair{put}, drop...)...)
		return
	}
	set := []string{q.Exposure}
	for _, f := range q.Fixed {
		set = append(set, f.Variable)
	}
	at := b.graph.Index(id)
	for _, s := range set {
		x := b.graph.Index(s)
		if x < 0 || x == at || !b.graph.Descendants(x)[at] {
			continue
		}
		message := fmt.Sprintf("%s comes after %s, so setting %s would change in which rows %s: choose rows by something %s does not act on, or drop the condition.", id, s, s, b.words(c), s)
		if y := b.graph.Index(q.Outcome); y >= 0 && s == q.Exposure && causal.IdentifiableGiven(b.graph, x, y, []int{at}) {
			message += fmt.Sprintf(" Among the rows in which that is so once %s is set, the effect is identified; it is not computed by this version.", s)
		}
		b.asks("subset", id, message, drop...)
		return
	}
}

// fixedAsked looks at what a controlled direct effect fixes.
func (b *builder) fixedAsked() {
	q := b.question
	if q.Effect != study.DirectEffect {
		return
	}
	total := b.reask("Ask for the total effect", func(q *study.Question) { q.Effect, q.Fixed = study.TotalEffect, nil })
	if len(q.Fixed) == 0 {
		var repairs []Repair
		x, y := b.graph.Index(q.Exposure), b.graph.Index(q.Outcome)
		if x >= 0 && y >= 0 && x != y {
			for _, m := range causal.ReadDirect(b.graph, x, y, nil).Fixed {
				if at, _ := b.model.Name(b.graph.Names[m]); at >= 0 && len(repairs) < 4 {
					repairs = append(repairs, b.fixAtMiddle(b.model.Variables[at])...)
				}
			}
		}
		b.asks("fixed", q.Exposure, fmt.Sprintf("A controlled direct effect of %s needs at least one variable on the way that is kept at a value: say which, and at which value.", q.Exposure), append(repairs, total...)...)
		return
	}
	for _, f := range q.Fixed {
		at, _ := b.model.Name(f.Variable)
		if at < 0 || b.model.Variables[at].Values == nil {
			continue // no law reads it
		}
		v := b.model.Variables[at]
		if x, ok := b.setting(v, &f.At, b.fixAtMiddle(v)); ok {
			b.overlap(v, x, b.fixAtMiddle(v))
		}
	}
}

// fixAtMiddle offers to keep a variable at its median, or its most frequent
// level.
func (b *builder) fixAtMiddle(v *Variable) []Repair {
	if len(v.Values) == 0 {
		return nil
	}
	var to study.Setting
	if len(v.Levels) > 0 {
		count := make([]int, len(v.Levels))
		for _, x := range v.Values {
			count[int(x)]++
		}
		most := slices.Index(count, slices.Max(count))
		if v.Scale == study.Binary && zeroOne(v.Levels) {
			to.Number = float64(most)
		} else {
			to.Word = v.Levels[most]
		}
	} else {
		low, high := extent(v.Values)
		to.Number = roundTo(table.Quantiles(v.Values, 1)[0], high-low)
		if v.Scale == study.Count {
			to.Number = math.Round(to.Number)
		}
	}
	words := to.Word
	if words == "" {
		words = short(to.Number)
	}
	return b.reask(fmt.Sprintf("Keep %s at %s", v.ID, words), func(q *study.Question) {
		q.Fixed = slices.DeleteFunc(slices.Clone(q.Fixed), func(f study.Fix) bool { return f.Variable == v.ID })
		q.Fixed = append(q.Fixed, study.Fix{Variable: v.ID, At: to})
	})
}

// groupsAsked looks for the plates that new groups and weights by groups need
// (SEMANTICS B5).
func (b *builder) groupsAsked() {
	q, m := b.question, b.model
	if q.Groups == study.NewGroups {
		these := b.reask("Ask about these groups", func(q *study.Question) { q.Groups = study.TheseGroups })
		varies := false
		for _, p := range m.Parameters {
			if p.Shape != ByPlate {
				continue
			}
			varies = true
			if plate := m.Plates[p.Plate]; len(plate.Levels) == 1 {
				b.asks("groups", m.Variables[p.Of].ID, fmt.Sprintf("%s has one level in the used rows, %s: how far levels lie apart cannot be learned from one, so nothing can be said of new ones.", plate.Name, plate.Levels[0]), these...)
				return
			}
		}
		switch {
		case !varies && len(m.Plates) == 0:
			b.asks("groups", "", "The question asks about new groups, but there is no plate over which groups could be new.", these...)
		case !varies:
			b.asks("groups", q.Outcome, fmt.Sprintf("The question asks about new groups, but nothing in this rival varies by %s: let the baseline of %s vary by it, or ask about these groups.", m.Plates[m.Outermost()[0]].Name, q.Outcome), these...)
		}
	}
	if q.Weigh == study.ByGroups {
		rows := b.reask("Weigh by rows", func(q *study.Question) { q.Weigh = study.ByRows })
		switch outer := m.Outermost(); {
		case len(outer) == 0:
			b.asks("weigh", "", "Groups are to count the same, but there is no plate that would make groups of the rows.", rows...)
		case len(outer) > 1:
			var names []string
			for _, p := range outer {
				names = append(names, m.Plates[p].Name)
			}
			b.asks("weigh", "", fmt.Sprintf("Groups are to count the same, but %s cross each other: weighing by groups needs one plate that holds all others.", list(names)), rows...)
		}
	}
}
