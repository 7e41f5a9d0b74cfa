package findings

import (
	"fmt"
	"slices"

	"arrowroot/app/words"
	"arrowroot/compile/causal"
)

const (
	doorNodes       = 120 // variables on a sheet up to which all front doors are looked for
	instrumentNodes = 120 // likewise for instruments
)

// identification asks whether anything gives the effect, and by what formula.
func (r *reader) identification(f *Findings) {
	b := &Beyond{Section: Section{Name: BeyondSection}}
	exposures := union(f.Exposures, r.fixed(f))
	id := causal.Identify(f.Graph, exposures, f.Outcomes, f.Given)
	b.Identification = id
	b.ByHolding = byHolding(f, id)
	b.Summary = b.first()
	if h := b.ByHolding; h != nil {
		f.add(&b.Section, Finding{
			Key: "adjustment " + h.Query(), Kind: "identified by holding", Sentence: h.Sentence, Why: fmt.Sprintf("In symbols: %s = %s.", h.Query(), h.Symbols()),
			Nodes: union(causal.Free(h.Estimand), h.Given),
		})
	}
	one := Finding{Key: "identification " + id.Query(), Kind: "identified", Sentence: id.Sentence, Nodes: union(union(exposures, f.Outcomes), f.Given)}
	if id.Identified {
		one.Why = fmt.Sprintf("In symbols: %s = %s.", id.Query(), id.Symbols())
	} else {
		one.Kind = "not identified"
		if id.Whole != nil {
			one.Nodes = id.Whole
			one.Edges = inside(f, id.Whole)
			one.Why = fmt.Sprintf("The two parts that stand in the way are %s, and within them %s.", words.List(f.names(id.Whole)), words.List(f.names(id.Part)))
		}
	}
	f.add(&b.Section, one)
	if len(f.Selected) > 0 {
		f.add(&b.Section, Finding{Key: "identification supposes all rows", Kind: "supposes", Nodes: f.Selected, Sentence: fmt.Sprintf("This supposes data on all rows, where these were chosen by %s.", f.rowsBy())})
	}
	f.Beyond = b
}

// byHolding writes the estimand that the proposed set gives: the shortest to
// read, and the same number.
func byHolding(f *Findings, id *causal.Identification) *causal.Identification {
	if len(f.Adjustment.Sets) == 0 || !f.Adjustment.Effect || f.within() != f.Graph || len(id.Given) > 0 || len(f.Selected) > 0 {
		return nil
	}
	set := proposalOf(f.Adjustment.Adjustment)
	if f.Verdict.Kind == causal.Readable && len(f.Ask.Held) == len(f.Held) {
		set = f.Held
	}
	h := &causal.Identification{Graph: id.Graph, Exposures: id.Exposures, Outcomes: id.Outcomes, Given: id.Given, Identified: true}
	outcome := causal.Probability{Of: id.Outcomes, Given: union(id.Exposures, set)}
	h.Estimand = outcome
	if len(set) > 0 {
		h.Estimand = causal.Sum{Over: set, Body: causal.Product{Factors: []causal.Estimand{outcome, causal.Probability{Of: set, Given: []int{}}}}}
	}
	h.Sentence = fmt.Sprintf("With %s held, %s is %s.", words.List(f.names(set)), h.Query(), h.Words())
	return h
}

// first is what identification comes to, in the shortest words.
func (b *Beyond) first() string {
	if b.ByHolding != nil {
		return b.ByHolding.Sentence
	}
	return b.Identification.Sentence
}

// inside are all edges among some nodes.
func inside(f *Findings, nodes []int) []causal.Edge {
	in := map[int]bool{}
	for _, v := range nodes {
		in[v] = true
	}
	var edges []causal.Edge
	for _, a := range f.Graph.Arrows {
		if in[a[0]] && in[a[1]] {
			edges = append(edges, causal.Edge{From: a[0], To: a[1]})
		}
	}
	for _, a := range f.Graph.Arcs {
		if in[a[0]] && in[a[1]] {
			edges = append(edges, causal.Edge{From: a[0], To: a[1], Arc: true})
		}
	}
	return edges
}

// more is the section so far, to be added to.
func (b *Beyond) more() *Beyond {
	next := *b
	next.Findings = append([]Finding{}, b.Findings...)
	return &next
}

// leave says what else a limit cut off.
func (s *Section) leave(sentence string) {
	if s.LeftOut != "" {
		sentence = s.LeftOut + " " + sentence
	}
	s.LeftOut = sentence
}

func (r *reader) doors(f *Findings) {
	b := f.Beyond.more()
	defer func() { f.Beyond = b }()
	x, y := f.Exposures[0], f.Outcomes[0]
	more := false
	if f.Sheet <= doorNodes {
		b.Doors, more = causal.FrontDoors(f.Graph, x, y, r.limits.Sets)
	} else {
		if f.Reading.FrontDoor != nil {
			b.Doors = []causal.FrontDoor{*f.Reading.FrontDoor}
		}
		more = true
	}
	// Doors of what carries the effect come first: others need less given, but
	// mean less to the reader.
	below := f.Graph.Descendants(x)
	slices.SortStableFunc(b.Doors, func(a, c causal.FrontDoor) int { return strays(below, a.Through) - strays(below, c.Through) })
	for i := range b.Doors {
		d := &b.Doors[i]
		f.add(&b.Section, Finding{
			Key: "front door " + joined(f.names(d.Through)) + " | " + joined(f.names(d.Given)), Kind: "front door",
			Sentence: d.Sentence(f.Graph, x, y), Nodes: union(union(d.Through, d.Given), []int{x, y}),
		})
	}
	if more {
		b.leave("There may be more front doors than were looked for.")
	}
	f.ways(b)
}

// strays counts nodes that are not marked, as no more than one.
func strays(marked []bool, nodes []int) int {
	if slices.ContainsFunc(nodes, func(v int) bool { return !marked[v] }) {
		return 1
	}
	return 0
}

func (r *reader) instruments(f *Findings) {
	b := f.Beyond.more()
	defer func() { f.Beyond = b }()
	x, y := f.Exposures[0], f.Outcomes[0]
	if f.Sheet > instrumentNodes {
		for _, one := range f.Reading.Instruments {
			b.TotalInstruments = append(b.TotalInstruments, causal.InstrumentSets{Node: one.Node, Given: [][]int{one.Given}, More: true})
		}
		b.leave(fmt.Sprintf("There may be more instruments than were looked for: the sheet has more than %d variables.", instrumentNodes))
	} else {
		b.TotalInstruments = causal.TotalInstruments(f.Graph, x, y)
		if r.ctx.Err() == nil {
			b.ArrowInstruments = causal.ArrowInstruments(f.Graph, x, y)
		}
	}
	cut := false
	for _, kind := range []struct {
		list []causal.InstrumentSets
		name string
		of   string
	}{{b.TotalInstruments, "instrument", "the effect of %s on %s"}, {b.ArrowInstruments, "instrument for the arrow", "what the arrow %s → %s carries"}} {
		for i := range kind.list {
			z := &kind.list[i]
			name := f.Graph.Names[z.Node]
			if z.Node >= f.Sheet {
				continue
			}
			cut = cut || z.More && f.Sheet <= instrumentNodes
			f.add(&b.Section, Finding{
				Key: kind.name + " " + name, Kind: kind.name, Sentence: z.Sentence(f.Graph, x, y),
				Why: fmt.Sprintf("It gives "+kind.of+".", f.Graph.Names[x], f.Graph.Names[y]), Nodes: union(z.Given[0], []int{z.Node, x, y}),
			})
		}
	}
	if cut {
		b.leave("The search for what to give with an instrument was cut short; there may be more.")
	}
	f.ways(b)
}

// ways says beside identification which other ways were found.
func (f *Findings) ways(b *Beyond) {
	b.Summary = b.first()
	var found []string
	for _, way := range []struct {
		n         int
		what, use string
	}{{len(b.Doors), "front door", ""}, {len(b.TotalInstruments), "instrument", " for the effect"}, {len(b.ArrowInstruments), "instrument", " for the arrow"}} {
		if way.n > 0 {
			found = append(found, words.Plural(way.n, way.what)+way.use)
		}
	}
	if len(found) > 0 {
		b.Summary += fmt.Sprintf(" Found besides: %s.", words.List(found))
	}
}

func areOne(one bool) string {
	if one {
		return "is"
	}
	return "are"
}
