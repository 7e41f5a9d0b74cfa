package main

import (
	"cmp"
	"context"
	"errors"
	"fmt"
	"math/big"
	"slices"
	"strings"

	"arrowroot/app/findings"
	"arrowroot/compile/causal"
	"arrowroot/compile/study"
)

// read prints everything that the arrows alone tell.
func read(ctx context.Context, j *job) (any, error) {
	ask, err := j.ask()
	if err != nil {
		return nil, err
	}
	f, err := findings.Read(ctx, j.study, j.rival, ask, findings.Limits{Paths: j.paths, Sets: j.sets})
	if f == nil {
		return nil, err
	}
	out := printFindings(j, f)
	out.mistakesOut = j.mistakesOf(ask)
	if err == nil && f.Lacks != "" {
		err = errors.New(strings.TrimSuffix(f.Lacks, "."))
	}
	return out, err
}

// ask is the study's question, with what the flags ask instead.
func (j *job) ask() (findings.Ask, error) {
	ask := findings.AskOf(j.question)
	if j.exposure != "" || j.outcome != "" {
		ask = findings.Ask{Exposures: ask.Exposures, Outcomes: ask.Outcomes} // what was held was for another question
	}
	for _, flag := range []struct {
		name, list string
		ids        *[]string
	}{{"exposure", j.exposure, &ask.Exposures}, {"outcome", j.outcome, &ask.Outcomes}, {"given", j.given, &ask.Given}, {"held", j.hold, &ask.Held}, {"with", j.with, &ask.Forced}, {"without", j.without, &ask.Unavailable}} {
		if flag.list == "" {
			continue
		}
		*flag.ids = []string{}
		for _, id := range strings.Split(flag.list, ",") {
			id = strings.TrimSpace(id)
			if j.study.Variable(id) == nil && (flag.name != "held" || j.study.Plate(id) == nil) {
				return ask, fmt.Errorf("%w: -%s %s: the study has no variable %q; it has %s", errUse, flag.name, flag.list, id, j.variables())
			}
			*flag.ids = append(*flag.ids, id)
		}
	}
	if t, err := j.table(); err == nil { // without data the arrows still speak
		ask.Incomplete = findings.Incomplete(j.study, t)
	}
	return ask, nil
}

// variables names some of the study's variables.
func (j *job) variables() string {
	const most = 20
	var ids []string
	for _, v := range j.study.Variables {
		if len(ids) == most {
			return strings.Join(ids, ", ") + " and others"
		}
		ids = append(ids, v.ID)
	}
	return strings.Join(ids, ", ")
}

type readingOut struct {
	Rival    string       `json:"rival"`
	Question *questionOut `json:"question"`
	Asked    askedOut     `json:"asked"`
	Verdict  string       `json:"verdict"`
	Way      string       `json:"way"`
	Lacks    string       `json:"lacks"`

	Identified bool       `json:"identified"`
	ByHolding  bool       `json:"heldIsEnough"`
	Hold       [][]string `json:"hold"`
	MoreSets   bool       `json:"moreSets"`

	MostPrecise         []string          `json:"mostPrecise"`
	MostPreciseOfAll    []string          `json:"mostPreciseOfAll"`
	MostPreciseSmallest []string          `json:"mostPreciseSmallest"`
	Cheapest            []string          `json:"cheapest"`
	Cost                *float64          `json:"cost"`
	Forbidden           []string          `json:"forbidden"`
	ForbiddenWhy        map[string]string `json:"forbiddenWhy"`
	HeldFaults          map[string]string `json:"heldFaults"`
	WouldHelp           []string          `json:"wouldHelp"` // unmeasured variables that, if measured, would give a set
	HelpTogether        bool              `json:"wouldHelpTogether"`

	Paths      []pathOut `json:"paths"`
	MorePaths  bool      `json:"morePaths"`
	PathCount  int       `json:"pathCount"`
	PathsExact bool      `json:"pathCountIsExact"`

	Controls         map[string]verdictOut `json:"controls"`
	Direct           *directOut            `json:"direct"`
	Estimand         *estimandOut          `json:"estimand"`
	EstimandHeld     *estimandOut          `json:"estimandByHolding"`
	FrontDoors       []frontDoorOut        `json:"frontDoors"`
	Instruments      []instrumentOut       `json:"instruments"`
	ArrowInstruments []instrumentOut       `json:"instrumentsOfTheArrow"`

	Laws       []lawOut       `json:"laws"`
	Simulation *simulationOut `json:"simulation"`

	Basis       []independenceOut `json:"basis"`
	Pairs       []pairOut         `json:"pairs"`
	Functionals []functionalOut   `json:"functionalConstraints"`
	Tetrads     [][4]string       `json:"tetrads"`
	Class       *classOut         `json:"class"`
	Rivals      []likenessOut     `json:"rivals"`

	Sections []sectionOut `json:"sections"`
	Done     bool         `json:"done"`

	mistakesOut
}

type askedOut struct {
	Exposures []string `json:"exposures"`
	Outcomes  []string `json:"outcomes"`
	Given     []string `json:"given"`
	Held      []string `json:"held"`
	Fixed     []string `json:"fixed"`
	Effect    string   `json:"effect"`
	RowsBy    []string `json:"rowsChosenBy"`
}

type pathOut struct {
	Path      string            `json:"path"`
	Nodes     []string          `json:"nodes"`
	Roles     map[string]string `json:"roles"`
	Kind      string            `json:"kind"`
	Open      bool              `json:"open"`
	ClosedAt  []string          `json:"closedAt"`
	ClosedWhy map[string]string `json:"closedWhy"`
	OpenedAt  map[string]string `json:"openedAt"` // collider → what is held that opens it
}

type verdictOut struct {
	Verdict  string `json:"verdict"`
	Sentence string `json:"sentence"`
}

type directOut struct {
	Fixed      []string   `json:"fixed"`
	Drawn      bool       `json:"effectDrawn"`
	Hold       [][]string `json:"hold"`
	Identified bool       `json:"identified"`
	Sentence   string     `json:"sentence"`
}

type estimandOut struct {
	Asks       string   `json:"asks"`
	Identified bool     `json:"identified"`
	Symbols    string   `json:"symbols"`
	Words      string   `json:"words"`
	Whole      []string `json:"wholeThatFails"` // what stands in the way, and the part of it
	Part       []string `json:"partThatFails"`
}

type frontDoorOut struct {
	Through []string `json:"through"`
	Given   []string `json:"given"`
}

type instrumentOut struct {
	Variable string     `json:"variable"`
	Given    [][]string `json:"given"`
	More     bool       `json:"more"`
}

type lawOut struct {
	Variable string       `json:"variable"`
	Parents  []string     `json:"parents"`
	Carried  []carriedOut `json:"carried"`
}

type carriedOut struct {
	Variable string   `json:"variable"`
	For      []string `json:"for"` // what was left out; "" = a cause that nobody named
}

type simulationOut struct {
	Case     string   `json:"case"` // a, b or c
	Reason   string   `json:"reason"`
	Observed []string `json:"readObserved"`
}

type independenceOut struct {
	Of       []string `json:"of"`
	And      []string `json:"and"`
	Given    []string `json:"given"`
	Sentence string   `json:"sentence"`
}

type pairOut struct {
	Between []string   `json:"between"`
	Given   [][]string `json:"separatedBy"`
	More    bool       `json:"more"`
}

type functionalOut struct {
	Variable string `json:"variable"`
	FreeOf   string `json:"freeOf"`
	Sentence string `json:"sentence"`
}

type classOut struct {
	Listed     bool        `json:"listed"`
	Size       *big.Int    `json:"size"`
	Reversible [][2]string `json:"reversible"`
	Undecided  [][2]string `json:"undecided"`
}

type likenessOut struct {
	Rival    string `json:"rival"`
	Same     bool   `json:"sameIndependences"`
	Unknown  bool   `json:"undecided"`
	Sentence string `json:"sentence"`
}

type sectionOut struct {
	Name     string        `json:"name"`
	Summary  string        `json:"summary"`
	LeftOut  string        `json:"leftOut"`
	Findings []readFinding `json:"findings"`
}

type readFinding struct {
	Key      string   `json:"key"`
	Kind     string   `json:"kind"`
	Sentence string   `json:"sentence"`
	Why      string   `json:"why"`
	Nodes    []string `json:"nodes"`
	SetAside string   `json:"setAside"`
	Path     string   `json:"path"`
}

func printFindings(j *job, f *findings.Findings) *readingOut {
	g := f.Graph
	of := func(nodes []int) []string { return g.NamesOf(nodes) }
	out := &readingOut{
		Rival: j.rival, Question: printQuestion(j.question), Verdict: f.Verdict.Sentence, Way: f.Verdict.Way, Lacks: f.Lacks, Done: f.Done,
		Asked: askedOut{list(f.Ask.Exposures), list(f.Ask.Outcomes), list(f.Ask.Given), list(f.Ask.Held), list(f.Ask.Fixed), cmp.Or(f.Ask.Effect, study.TotalEffect), of(f.Selected)},
		Hold:  [][]string{}, Forbidden: []string{}, ForbiddenWhy: map[string]string{}, HeldFaults: map[string]string{}, WouldHelp: []string{}, Paths: []pathOut{}, PathsExact: true,
		Controls: map[string]verdictOut{}, FrontDoors: []frontDoorOut{}, Instruments: []instrumentOut{}, ArrowInstruments: []instrumentOut{}, Laws: []lawOut{},
		Basis: []independenceOut{}, Pairs: []pairOut{}, Functionals: []functionalOut{}, Tetrads: [][4]string{}, Rivals: []likenessOut{}, Sections: []sectionOut{},
	}
	// The reading is that of the total effect in all rows.
	total := len(f.Given) == 0 && f.Ask.Effect != study.DirectEffect
	out.ByHolding = f.Verdict.Kind == causal.Readable || f.Reading != nil && f.Reading.HeldValid && len(f.Selected) == 0 && total
	if f.Reading != nil {
		out.Identified = f.Reading.Identifiable && total
		for _, one := range f.Reading.HeldFaults {
			out.HeldFaults[g.Names[one.Node]] = one.Reason
		}
		for _, one := range f.Reading.PlateFaults {
			out.HeldFaults[g.Plates[one.Plate].Name] = one.Reason
		}
	}
	if f.Paths != nil {
		out.MorePaths, out.PathCount, out.PathsExact = !f.Paths.AtMost, f.Paths.Count, f.Paths.Exact
		for i := range f.Paths.List {
			out.Paths = append(out.Paths, printPath(f, &f.Paths.List[i]))
		}
	}
	if a := f.Adjustment; a != nil {
		out.Identified = out.Identified || len(a.Sets) > 0
		out.adjust(f, a)
	}
	if f.Controls != nil {
		for _, c := range f.Controls.List {
			out.Controls[g.Names[c.Node]] = verdictOut{c.Kind.String(), c.Sentence}
		}
	}
	if d := f.Direct; d != nil {
		out.Direct = &directOut{of(d.Fixed), d.Effect, sets(f, d.Direct.Adjustment.Sets), d.Identification.Identified && len(f.Selected) == 0 || d.Direct.Adjustment.Sets != nil, d.Sentence}
	}
	if b := f.Beyond; b != nil {
		out.Identified = out.Identified || b.Identification.Identified && len(f.Selected) == 0
		out.Estimand, out.EstimandHeld = printEstimand(f, b.Identification), printEstimand(f, b.ByHolding)
		for _, d := range b.Doors {
			out.FrontDoors = append(out.FrontDoors, frontDoorOut{of(d.Through), of(d.Given)})
		}
		out.Instruments, out.ArrowInstruments = printInstruments(f, b.TotalInstruments), printInstruments(f, b.ArrowInstruments)
	}
	if l := f.Laws; l != nil {
		out.laws(f, l)
	}
	if c := f.Contradictions; c != nil {
		for i := range c.Basis {
			s := &c.Basis[i]
			out.Basis = append(out.Basis, independenceOut{of(s.A), of(s.B), of(s.Given), s.Sentence(g)})
		}
		for _, p := range c.Pairs {
			out.Pairs = append(out.Pairs, pairOut{[]string{g.Names[p.A], g.Names[p.B]}, sets(f, p.Given), p.More})
		}
		for i := range c.Functionals {
			v := &c.Functionals[i]
			out.Functionals = append(out.Functionals, functionalOut{g.Names[v.Node], g.Names[v.FreeOf], v.Sentence(g)})
		}
		for _, t := range c.Tetrads {
			out.Tetrads = append(out.Tetrads, [4]string{g.Names[t.A], g.Names[t.B], g.Names[t.C], g.Names[t.D]})
		}
	}
	if e := f.Equivalence; e != nil {
		if e.Class != nil {
			out.Class = &classOut{e.Class.Listed, e.Class.Size, printArrows(f, e.Class.Reversible), printArrows(f, e.Class.Undecided)}
		}
		for _, r := range e.Rivals {
			at := slices.IndexFunc(e.Findings, func(one findings.Finding) bool { return one.Key == "rival "+r.Rival })
			out.Rivals = append(out.Rivals, likenessOut{r.Rival, r.Same, r.Unknown, e.Findings[at].Sentence})
		}
	}
	for _, s := range f.Sections() {
		so := sectionOut{s.Name, s.Summary, s.LeftOut, []readFinding{}}
		for _, one := range s.Findings {
			fo := readFinding{Key: one.Key, Kind: one.Kind, Sentence: one.Sentence, Why: one.Why, Nodes: of(one.Nodes), SetAside: one.Dismissed}
			if one.Path != nil {
				fo.Path = one.Path.Text(g)
			}
			so.Findings = append(so.Findings, fo)
		}
		out.Sections = append(out.Sections, so)
	}
	return out
}

func (out *readingOut) adjust(f *findings.Findings, a *findings.Adjustment) {
	g := f.Graph
	out.Hold, out.MoreSets = sets(f, a.Sets), a.MoreSets
	for _, set := range []struct {
		nodes []int
		to    *[]string
	}{{a.BestMinimal, &out.MostPrecise}, {a.Optimal, &out.MostPreciseOfAll}, {a.BestSmallest, &out.MostPreciseSmallest}} {
		if set.nodes != nil {
			*set.to = g.NamesOf(set.nodes)
		}
	}
	if a.Cheapest != nil && a.Aim.Costs != nil {
		out.Cheapest, out.Cost = g.NamesOf(a.Cheapest), &a.Cost
	}
	for _, one := range f.Forbidden() {
		out.Forbidden = append(out.Forbidden, g.Names[one.Node])
		out.ForbiddenWhy[g.Names[one.Node]] = one.Reason
	}
	out.WouldHelp, out.HelpTogether = g.NamesOf(a.Culprits), a.CulpritsAll
	for _, arc := range a.CulpritArcs {
		out.WouldHelp = append(out.WouldHelp, g.Names[arc[0]]+" ↔ "+g.Names[arc[1]])
	}
}

func (out *readingOut) laws(f *findings.Findings, l *findings.Laws) {
	g := f.Graph
	for _, law := range l.List {
		lo := lawOut{g.Names[law.Node], g.NamesOf(law.Parents), []carriedOut{}}
		for _, c := range law.Carried {
			co := carriedOut{g.Names[c.Node], []string{}}
			for _, u := range c.For {
				if u >= 0 {
					co.For = append(co.For, g.Names[u])
				} else {
					co.For = append(co.For, "")
				}
			}
			lo.Carried = append(lo.Carried, co)
		}
		out.Laws = append(out.Laws, lo)
	}
	if l.Reason != "" {
		out.Simulation = &simulationOut{[...]string{"a", "b", "c"}[l.Case], l.Reason, g.NamesOf(l.District)}
	}
}

func printPath(f *findings.Findings, p *causal.Path) pathOut {
	g := f.Graph
	po := pathOut{
		Path: p.Text(g), Nodes: g.NamesOf(p.Nodes), Roles: map[string]string{}, Kind: p.Kind.String(), Open: p.Open,
		ClosedAt: []string{}, ClosedWhy: map[string]string{}, OpenedAt: map[string]string{},
	}
	for i := 1; i < len(p.Nodes)-1; i++ {
		po.Roles[g.Names[p.Nodes[i]]] = p.Role(i).String()
	}
	for _, s := range p.ClosedAt {
		name := g.Names[s.Node]
		po.ClosedAt = append(po.ClosedAt, name)
		po.ClosedWhy[name] = s.Reason
	}
	for _, o := range p.OpenedAt {
		po.OpenedAt[g.Names[o.Node]] = g.Names[o.By]
	}
	return po
}

func printEstimand(f *findings.Findings, id *causal.Identification) *estimandOut {
	if id == nil {
		return nil
	}
	return &estimandOut{id.Query(), id.Identified, id.Symbols(), id.Words(), f.Graph.NamesOf(id.Whole), f.Graph.NamesOf(id.Part)}
}

func printInstruments(f *findings.Findings, all []causal.InstrumentSets) []instrumentOut {
	out := []instrumentOut{}
	for _, z := range all {
		out = append(out, instrumentOut{f.Graph.Names[z.Node], sets(f, z.Given), z.More})
	}
	return out
}

func printArrows(f *findings.Findings, arrows [][2]int) [][2]string {
	out := [][2]string{}
	for _, a := range arrows {
		out = append(out, [2]string{f.Graph.Names[a[0]], f.Graph.Names[a[1]]})
	}
	return out
}

// sets names sets of nodes; none is an empty list.
func sets(f *findings.Findings, all [][]int) [][]string {
	out := [][]string{}
	for _, z := range all {
		out = append(out, f.Graph.NamesOf(z))
	}
	return out
}

// list is an empty list where there is none.
func list(ids []string) []string {
	if ids == nil {
		return []string{}
	}
	return ids
}
