package findings

import (
	"fmt"
	"slices"

	"arrowroot/app/words"
	"arrowroot/compile/causal"
	"arrowroot/compile/graph"
)

// fixed are the variables that a direct effect keeps at set values.
func (r *reader) fixed(f *Findings) []int {
	if !f.direct() {
		return nil
	}
	if f.Ask.Fixed == nil {
		return causal.ReadDirect(f.Graph, f.Exposures[0], f.Outcomes[0], nil).Fixed
	}
	out := []int{}
	for _, id := range f.Ask.Fixed {
		out = union(out, []int{f.Graph.Index(id)})
	}
	return out
}

func (r *reader) adjustment(f *Findings) {
	exposures := union(f.Exposures, r.fixed(f))
	a := &Adjustment{Section: Section{Name: AdjustmentSection}}
	g := f.within()
	found := causal.Adjust(g, causal.Aim{
		Exposures: exposures, Outcomes: f.Outcomes, Forced: slices.Concat(f.Selected, f.Given, f.nodes(f.Ask.Forced)), Unavailable: f.nodes(f.Ask.Unavailable),
		Costs: r.sheet.costs, MaxSets: r.limits.Sets,
	})
	if len(f.givenBelow(exposures)) > 0 { // holding averages over values that the exposure changes
		found.Sets, found.MoreSets, found.Cheapest, found.Optimal, found.BestMinimal, found.BestSmallest = nil, false, nil, nil, nil, nil
	}
	a.Adjustment = found
	a.Summary = found.Sentence
	if len(f.Given) > 0 {
		a.Summary = f.givenSummary(a.Adjustment)
	}
	if len(f.Selected) > 0 {
		a.Adjustment = f.freed(found)
		a.Summary = f.selectedSummary(a.Adjustment)
	}
	if id := f.unmeasured(); id != "" {
		a.Adjustment = &causal.Adjustment{Graph: found.Graph, Aim: found.Aim, Effect: found.Effect, Forbidden: found.Forbidden}
		a.Summary = fmt.Sprintf("The effect of %s on %s cannot be read: %s was not measured.", words.List(f.Ask.Exposures), words.List(f.Ask.Outcomes), id)
	} else if len(f.Given) > 0 {
		// What would help the effect in all rows need not help among some.
	} else if found.Sets == nil && f.Reading != nil && !f.direct() {
		a.Culprits, a.CulpritArcs, a.CulpritsAll = f.Reading.Culprits, f.Reading.CulpritArcs, f.Reading.CulpritsAll
	} else if found.Sets == nil && len(f.Selected) == 0 {
		a.Culprits, a.CulpritArcs, a.CulpritsAll = causal.Culprits(g, exposures, f.Outcomes)
	}
	f.Adjustment = a
	f.setFindings(a, r.sheet.costs != nil)
	f.groupFindings(a)
	f.forbiddenFindings(a)
	f.unavailableFindings(a)
	if a.MoreSets {
		a.LeftOut = fmt.Sprintf("The first %s sets are listed; there are more.", words.Whole(float64(len(a.Sets))))
	}
	f.judge(exposures)
}

// within is the graph as it is within the groups of the plates that are held,
// the graph itself if none is or none can be.
func (f *Findings) within() *graph.Graph {
	if r := f.Reading; r != nil && len(r.Query.Within) > 0 && len(r.PlateFaults) == 0 {
		return causal.Within(f.Graph, r.Query.Within)
	}
	return f.Graph
}

// groupFindings says what comparing within groups gives.
func (f *Findings) groupFindings(a *Adjustment) {
	if f.Reading == nil || f.direct() {
		return
	}
	for _, one := range f.Reading.Groups {
		plate := f.Graph.Plates[one.Plate].Name
		switch {
		case one.Refused != "":
			f.add(&a.Section, Finding{Key: "within " + plate, Kind: "not within groups", Sentence: fmt.Sprintf("%s cannot be held: %s.", plate, one.Refused)})
		case one.Sets == nil:
			f.add(&a.Section, Finding{Key: "within " + plate, Kind: "not within groups", Sentence: fmt.Sprintf("Comparing within each %s does not give the effect either, whatever else is held.", plate)})
		case len(one.Sets[0]) == 0:
			f.add(&a.Section, Finding{Key: "within " + plate, Kind: "within groups", Sentence: fmt.Sprintf("Comparing within each %s gives the effect, with nothing else held.", plate)})
		default:
			f.add(&a.Section, Finding{Key: "within " + plate, Kind: "within groups", Nodes: one.Sets[0], Sentence: fmt.Sprintf("Comparing within each %s gives the effect, with %s held besides.", plate, words.List(f.names(one.Sets[0])))})
		}
	}
}

// givenBelow lists what is given though it descends from what is set.
func (f *Findings) givenBelow(exposures []int) []int {
	var below []int
	for v, is := range f.Graph.Descendants(exposures...) {
		if is && slices.Contains(f.Given, v) {
			below = append(below, v)
		}
	}
	return below
}

// effectAsked names the effect with what is given.
func (f *Findings) effectAsked() string {
	effect := fmt.Sprintf("the effect of %s on %s", words.List(f.Ask.Exposures), words.List(f.Ask.Outcomes))
	if len(f.Given) > 0 {
		effect += fmt.Sprintf(" among rows alike in %s", words.List(f.names(f.Given)))
	}
	return effect
}

func (f *Findings) givenSummary(a *causal.Adjustment) string {
	below := f.givenBelow(a.Aim.Exposures)
	switch {
	case len(below) > 0:
		return fmt.Sprintf("Holding anything cannot give %s: %s acts on %s.", f.effectAsked(), words.List(f.names(a.Aim.Exposures)), words.List(f.names(below)))
	case a.Sets == nil:
		return fmt.Sprintf("No set of measured variables gives %s.", f.effectAsked())
	case len(minus(a.Sets[0], union(f.Given, f.Selected))) == 0:
		return fmt.Sprintf("Nothing more need be held to read %s.", f.effectAsked())
	}
	return fmt.Sprintf("Hold %s to read %s.", words.List(f.names(minus(proposalOf(a), union(f.Given, f.Selected)))), f.effectAsked())
}

// freed is an adjustment whose sets leave out what limits the rows.
func (f *Findings) freed(found *causal.Adjustment) *causal.Adjustment {
	a := *found
	a.Sets = nil
	for _, set := range found.Sets {
		a.Sets = append(a.Sets, minus(set, f.Selected))
	}
	for _, set := range []*[]int{&a.Cheapest, &a.Optimal, &a.BestMinimal, &a.BestSmallest} {
		if *set != nil {
			*set = minus(*set, f.Selected)
		}
	}
	return &a
}

func (f *Findings) selectedSummary(a *causal.Adjustment) string {
	rows := f.rowsBy()
	switch {
	case a.Sets == nil:
		return fmt.Sprintf("No set of measured variables gives the effect of %s on %s from rows that were chosen by %s.", words.List(f.Ask.Exposures), words.List(f.Ask.Outcomes), rows)
	case len(a.Sets[0]) == 0:
		return fmt.Sprintf("Nothing need be held to read the effect of %s on %s among rows that were chosen by %s.", words.List(f.Ask.Exposures), words.List(f.Ask.Outcomes), rows)
	}
	return fmt.Sprintf("Hold %s to read the effect of %s on %s among rows that were chosen by %s.",
		words.List(f.names(proposalOf(a))), words.List(f.Ask.Exposures), words.List(f.Ask.Outcomes), rows)
}

// proposalOf is the set to offer: the most precise where that is known.
func proposalOf(a *causal.Adjustment) []int {
	switch {
	case len(a.Sets) == 0:
		return nil
	case a.Optimal != nil && slices.ContainsFunc(a.Sets, func(z []int) bool { return slices.Equal(z, a.Optimal) }):
		return a.Optimal
	case a.BestMinimal != nil:
		return a.BestMinimal
	}
	return a.Sets[0]
}

func (f *Findings) setFindings(a *Adjustment, priced bool) {
	effect := "the effect"
	if len(a.Aim.Exposures) > 1 {
		effect = "the joint effect"
	}
	for _, set := range a.Sets {
		one := Finding{Key: "set " + joined(f.names(set)), Kind: "set", Nodes: set}
		one.Sentence = fmt.Sprintf("Holding %s gives %s.", words.List(f.names(set)), effect)
		switch {
		case slices.Equal(set, a.Optimal):
			one.Why = "No other set is more precise."
		case slices.Equal(set, a.BestMinimal):
			one.Why = "No other set with nothing to spare is more precise."
		case slices.Equal(set, a.BestSmallest):
			one.Why = "No other set of so few variables is more precise."
		}
		f.add(&a.Section, one)
	}
	special := func(kind string, set []int, sentence string) {
		f.add(&a.Section, Finding{Key: kind, Kind: kind, Nodes: set, Sentence: sentence})
	}
	if a.Optimal != nil && !slices.ContainsFunc(a.Sets, func(z []int) bool { return slices.Equal(z, a.Optimal) }) {
		special("most precise", a.Optimal, fmt.Sprintf("Holding %s gives %s as precisely as can be, though not all of it is needed.", words.List(f.names(a.Optimal)), effect))
	}
	if a.BestMinimal != nil && a.MoreSets && !slices.ContainsFunc(a.Sets, func(z []int) bool { return slices.Equal(z, a.BestMinimal) }) {
		special("most precise with nothing to spare", a.BestMinimal, fmt.Sprintf("Of the sets with nothing to spare, %s is the most precise.", words.List(f.names(a.BestMinimal))))
	}
	if priced && a.Cheapest != nil {
		special("cheapest", a.Cheapest, fmt.Sprintf("The cheapest set is %s, at a cost of %s; variables whose cost is not said count as free.", words.List(f.names(a.Cheapest)), words.Given(a.Cost)))
	}
}

// Forbidden lists what on the sheet may be in no set, the outcomes among it,
// with the arrows that make it so; for several exposures, without them.
func (f *Findings) Forbidden() []causal.Forbidden {
	if f.Adjustment == nil {
		return nil
	}
	var all []causal.Forbidden
	if f.Reading != nil && len(f.Adjustment.Aim.Exposures) == 1 {
		for _, one := range f.Reading.Forbidden {
			if one.Node < f.Sheet {
				all = append(all, one)
			}
		}
		return all
	}
	for _, v := range f.onSheet(f.Adjustment.Forbidden) {
		reason := "it carries part of the effect, or is an effect of what does"
		if slices.Contains(f.Outcomes, v) {
			reason = "it is the outcome"
		}
		all = append(all, causal.Forbidden{Node: v, Reason: reason})
	}
	return all
}

func (f *Findings) forbiddenFindings(a *Adjustment) {
	for _, one := range f.Forbidden() {
		if name := f.Graph.Names[one.Node]; !slices.Contains(f.Outcomes, one.Node) {
			nodes := one.Path
			if nodes == nil {
				nodes = []int{one.Node}
			}
			f.add(&a.Section, Finding{
				Key: "forbidden " + name, Kind: "forbidden", Nodes: nodes, Edges: along(f.Graph, one.Path),
				Sentence: fmt.Sprintf("Leave %s free: %s.", name, one.Reason),
			})
		}
	}
}

func (f *Findings) unavailableFindings(a *Adjustment) {
	for v := range f.Sheet {
		if name := f.Graph.Names[v]; !f.Graph.Measured[v] {
			f.add(&a.Section, Finding{Key: "not measured " + name, Kind: "not measured", Nodes: []int{v}, Sentence: name + " was not measured, so no set can hold it."})
		}
	}
	for _, id := range f.elsewhere() {
		f.add(&a.Section, Finding{Key: "elsewhere " + id, Kind: "elsewhere", Sentence: fmt.Sprintf("%s is to be held, but it is not on the sheet of “%s”, so holding it says nothing there.", id, f.Rival)})
	}
	for _, v := range f.Selected {
		if v < f.Sheet {
			name := f.Graph.Names[v]
			f.add(&a.Section, Finding{Key: "limits " + name, Kind: "held by the rows", Nodes: []int{v}, Sentence: fmt.Sprintf("Only rows with one value of %s are in the data, so it is held whatever else is.", name)})
		}
	}
	together := ""
	if a.CulpritsAll {
		together = " together with the others named here"
	}
	for _, v := range a.Culprits {
		name := f.Graph.Names[v]
		f.add(&a.Section, Finding{Key: "would help " + name, Kind: "would help", Nodes: []int{v}, Sentence: fmt.Sprintf("Measuring %s%s would give a set to hold.", name, together)})
	}
	for _, arc := range a.CulpritArcs {
		x, y := f.Graph.Names[arc[0]], f.Graph.Names[arc[1]]
		f.add(&a.Section, Finding{
			Key: "would help " + x + " ↔ " + y, Kind: "would help", Nodes: arc[:], Edges: []causal.Edge{{From: arc[0], To: arc[1], Arc: true}},
			Sentence: fmt.Sprintf("Measuring what %s and %s share%s would give a set to hold.", x, y, together),
		})
	}
}
