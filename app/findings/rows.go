package findings

import (
	"fmt"
	"slices"

	"arrowroot/app/words"
	"arrowroot/compile/causal"
)

// rows reads what limits the rows, what is missing in them and what is recorded
// with error.
func (r *reader) rows(f *Findings) {
	s := &Rows{Section: Section{Name: RowSection}, Indicators: r.sheet.indicators, Records: r.sheet.records}
	f.Rows = s
	r.selection(f)
	r.missing(f)
	f.records()
	switch len(s.Findings) {
	case 0:
		s.Summary = "Nothing limits the rows, nothing is said to be missing, and nothing is a record of something else."
		if lacking := r.lacking(f); len(lacking) > 0 {
			s.Summary = fmt.Sprintf("Nothing limits the rows. %s %s entries missing, which the question can do without; the sheet does not say what they depend on.", words.List(lacking), hasHave(len(lacking)))
		}
	case 1:
		s.Summary = s.Findings[0].Sentence
	default:
		s.Summary = fmt.Sprintf("%s on how the rows came about.", words.Upper(words.Plural(len(s.Findings), "finding")))
	}
}

// lacking lists the variables of the sheet with missing entries.
func (r *reader) lacking(f *Findings) []string {
	return slices.DeleteFunc(slices.Clone(f.Ask.Incomplete), func(id string) bool { return f.Graph.Index(id) < 0 })
}

func (r *reader) selection(f *Findings) {
	s := f.Rows
	for _, id := range r.sheet.filtered {
		f.add(&s.Section, Finding{Key: "filter " + id, Kind: "row filter", Sentence: fmt.Sprintf("Rows are kept by %s, which is not on the sheet of “%s”: what that does to the question cannot be read until it is drawn.", id, f.Rival)})
	}
	if len(f.Selected) == 0 || f.Lacks != "" || len(f.Exposures) != 1 || len(f.Outcomes) != 1 {
		for _, v := range f.Selected {
			f.add(&s.Section, Finding{Key: "rows by " + f.Graph.Names[v], Kind: "selection", Nodes: f.Selected, Sentence: fmt.Sprintf("Rows are chosen by %s, which is held whatever else is.", f.rowsBy())})
			break
		}
		return
	}
	s.Kept = f.Reading.Kept
	f.add(&s.Section, Finding{
		Key: "selection " + joined(f.names(f.Selected)), Kind: "selection, " + s.Kept.All.String(), Sentence: s.Kept.Sentence,
		Nodes: union(f.Selected, union(union(f.Exposures, f.Outcomes), s.Kept.Reason)), Edges: along(f.Graph, s.Kept.Reason),
	})
	var external []int
	for v := range f.Sheet {
		if f.Graph.Measured[v] {
			external = append(external, v)
		}
	}
	s.Selection = causal.ReadSelection(f.Graph, f.Exposures[0], f.Outcomes[0], f.Selected, external)
	if len(s.Selection.Sets) > 0 && s.Kept.All != causal.Valid {
		set := s.Selection.Sets[0]
		text := "The effect in all rows follows from these with nothing held."
		if len(set) > 0 {
			text = fmt.Sprintf("The effect in all rows follows from these with %s held, if how %s spread in all rows is known from elsewhere.", words.List(f.names(set)), theyOr(f.names(set)))
		}
		f.add(&s.Section, Finding{Key: "selection weighed by " + joined(f.names(set)), Kind: "selection adjustment", Nodes: set, Sentence: text})
	}
}

func theyOr(names []string) string {
	if len(names) == 1 {
		return "it is"
	}
	return "they are"
}

// missing reads the indicators that are drawn and says of the law that gives
// the effect whether complete rows will do.
func (r *reader) missing(f *Findings) {
	s, g := f.Rows, f.Graph
	drawn := map[int]bool{}
	if len(s.Indicators) > 0 && f.Sheet <= controlNodes {
		s.Missing = causal.ReadMissing(r.sheet.drawn, s.Indicators)
		var of []int
		for _, i := range s.Indicators {
			drawn[i.Of] = true
			of = append(of, i.Of, i.Node)
		}
		f.add(&s.Section, Finding{Key: "missing", Kind: "missing, " + s.Missing.Kind.String(), Sentence: s.Missing.Sentence, Nodes: of})
	}
	if f.Lacks != "" {
		return
	}
	// Of the held set, or of the proposed one where that is not enough: else the
	// rows would be blamed for what the set leaves open.
	on := union(f.Exposures, f.Held)
	if set := proposalOf(f.Adjustment.Adjustment); set != nil && f.Verdict.Kind != causal.Readable {
		on = union(f.Exposures, set)
	}
	on = slices.DeleteFunc(on, func(v int) bool { return slices.Contains(f.Outcomes, v) || !g.Measured[v] || v >= f.Sheet })
	var lacking []string
	known := false
	for _, v := range union(on, f.Outcomes) {
		switch {
		case drawn[v]:
			known = true
		case slices.Contains(f.Ask.Incomplete, g.Names[v]):
			lacking = append(lacking, g.Names[v])
		}
	}
	if len(lacking) > 0 {
		s.Undecided = true
		f.add(&s.Section, Finding{
			Key: "complete rows", Kind: "complete rows, undecided", Nodes: union(on, f.Outcomes),
			Sentence: fmt.Sprintf("Whether complete rows will do is undecided: %s %s entries missing, and the sheet does not say what they depend on.", words.List(lacking), hasHave(len(lacking))),
		})
		return
	}
	if !known || len(f.Outcomes) != 1 {
		return
	}
	y := f.Outcomes[0]
	s.CompleteCase = causal.ReadCompleteCase(r.sheet.drawn, s.Indicators, y, on)
	if f.Reading == nil || f.Adjustment.Sets == nil || f.direct() {
		kind := "complete rows, valid"
		if !s.CompleteCase.Valid {
			kind = "complete rows, not valid"
		}
		f.add(&s.Section, Finding{Key: "complete rows", Kind: kind, Sentence: s.CompleteCase.Sentence, Nodes: union(on, f.Outcomes)})
		return
	}
	marks := slices.Clone(f.Selected)
	for _, i := range s.Indicators {
		if i.Of == y || slices.Contains(on, i.Of) {
			marks = union(marks, []int{i.Node})
		}
	}
	s.Complete = causal.ReadKept(f.Graph, f.Exposures[0], y, minus(on, f.Exposures), marks)
	f.add(&s.Section, Finding{
		Key: "complete rows", Kind: "complete rows, " + s.Complete.All.String(), Sentence: "With incomplete rows left out: " + lower(s.Complete.Sentence),
		Why: s.CompleteCase.Sentence, Nodes: union(union(on, f.Outcomes), union(marks, s.Complete.Reason)), Edges: along(f.Graph, s.Complete.Reason),
	})
}

func hasHave(n int) string {
	if n == 1 {
		return "has"
	}
	return "have"
}

// records says what an error of measurement does to the question.
func (f *Findings) records() {
	s, g := f.Rows, f.Graph
	for _, one := range s.Records {
		record, of := g.Names[one.Node], g.Names[one.Of]
		kind, text := "record", fmt.Sprintf("%s is a record of %s with error", record, of)
		if !g.HasArrow(one.Of, one.Node) {
			text += fmt.Sprintf(", but no arrow leads from %s to it", of)
		}
		switch {
		case slices.Contains(f.Held, one.Node):
			text += fmt.Sprintf(": holding it closes only part of what runs through %s", of)
		case slices.Contains(f.Exposures, one.Node):
			text += fmt.Sprintf(": its effect is not that of %s", of)
		case slices.Contains(f.Outcomes, one.Node):
			text += fmt.Sprintf(": an effect on it is one on %s only where the error has nothing to do with the exposure", of)
		default:
			text += fmt.Sprintf(": held, it would close only part of what runs through %s", of)
		}
		text += "."
		if one.Differential {
			kind = "record, differential"
		}
		finding := Finding{Key: "record " + record, Kind: kind, Sentence: text, Nodes: []int{one.Of, one.Node}, Edges: along(g, []int{one.Of, one.Node})}
		if !g.HasArrow(one.Of, one.Node) {
			finding.Edges = nil
		}
		if one.Differential {
			finding.Why = fmt.Sprintf("Something besides %s bears on %s, so its error is not the same for all.", of, record)
		}
		f.add(&s.Section, finding)
	}
}
