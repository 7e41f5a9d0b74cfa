package model

import (
	"arrowroot/compile/study"
	"arrowroot/compile/table"
	"reflect"
	"slices"
)

// Edits that repairs are made of.

func changeVariable(to study.Variable) study.Edit {
	return study.ChangeVariable{ID: to.ID, To: to}
}

// bindTo binds a variable to a column, with the scale and levels that the column
// proposes where the user has said nothing yet.
func (b *builder) bindTo(v *study.Variable, column string) study.Edit {
	source := b.table.Column(column)
	if v.Scale != "" || source == nil {
		return study.Bind{Variable: v.ID, Data: v.Data, Column: column}
	}
	guess := table.Propose(source)
	to := *v
	to.Column, to.Scale = column, study.Scale(guess.Scale)
	if len(to.Levels) == 0 {
		to.Levels = guess.Levels
	}
	return changeVariable(to)
}

func addArrow(rival, from, to string) study.Edit {
	return study.AddArrow{Rival: rival, Arrow: study.Arrow{From: from, To: to}}
}

func removeArrow(rival, from, to string) study.Edit {
	return study.RemoveArrow{Rival: rival, From: from, To: to}
}

// changeLaw edits a copy of what the user said of a law.
func (b *builder) changeLaw(id string, change func(*study.Law)) study.Edit {
	l := b.userLaw(id)
	l.Arguments = append([]study.Argument(nil), l.Arguments...)
	l.Priors = append([]study.Prior(nil), l.Priors...)
	l.VariesBy = append([]string(nil), l.VariesBy...)
	change(&l)
	return study.ChangeLaw{Rival: b.rival.Name, Variable: id, Law: &l}
}

// changeArrow edits a copy of an arrow.
func (b *builder) changeArrow(a *study.Arrow, change func(*study.Arrow)) study.Edit {
	to := *a
	change(&to)
	return study.ChangeArrow{Rival: b.rival.Name, From: a.From, To: a.To, Arrow: to}
}

// rangeSeen gives up a stated range for the one that the data show.
func (b *builder) rangeSeen(v *study.Variable) Repair {
	to := *v
	to.Range = nil
	return Repair{Label: "Use the range seen", Edit: changeVariable(to)}
}

// fromArrows gives up a typed formula for the one that the arrows make.
func (b *builder) fromArrows(id string) Repair {
	return Repair{Label: "Go back to the arrows", Edit: b.changeLaw(id, func(l *study.Law) { l.Formula = "" })}
}

// offSheet takes a variable off the rival's sheet; it stays in the ledger.
func (b *builder) offSheet(id string) Repair {
	return Repair{Label: "Take " + id + " off the sheet", Edit: study.RemoveNodes{Rival: b.rival.Name, Variables: []string{id}}}
}

// questionAt is the place of the question in the study; -1 if it is not there.
func (b *builder) questionAt() int {
	return slices.IndexFunc(b.study.Questions, func(q *study.Question) bool {
		return reflect.DeepEqual(*q, b.question)
	})
}

// onto puts a variable on the sheet with an arrow.
func (b *builder) onto(from, to string) study.Edit {
	if b.onSheet(from) {
		return addArrow(b.rival.Name, from, to)
	}
	return study.Several{Name: "Draw " + from + " → " + to, Edits: []study.Edit{
		study.AddNode{Rival: b.rival.Name, Variable: from},
		addArrow(b.rival.Name, from, to),
	}}
}

// treatAsMissing lets text in a numeric column stand for missing entries.
func treatAsMissing(v *study.Variable, odd []table.Strange) Repair {
	to := *v
	to.Missing = append([]string(nil), v.Missing...)
	for _, s := range odd {
		if !slices.Contains(to.Missing, s.Text) {
			to.Missing = append(to.Missing, s.Text)
		}
	}
	return Repair{Label: "Treat as missing", Edit: changeVariable(to)}
}
