package findings

import (
	"context"
	"slices"

	"arrowroot/compile/causal"
	"arrowroot/compile/study"
)

// Read reads everything off a rival's arrows. Errors are those of the study (no
// such rival, a cycle) and of ctx; what a question lacks is no error but
// Findings.Lacks, and what needs no question is read all the same. When ctx
// ends, what was read by then is returned with its error.
func Read(ctx context.Context, s *study.Study, rival string, ask Ask, limits Limits) (*Findings, error) {
	return Stream(ctx, s, rival, ask, limits, nil)
}

// Stream is Read, and calls each with all that is there so far whenever there
// is more: paths first, long lists last. Values handed to each never change.
func Stream(ctx context.Context, s *study.Study, rival string, ask Ask, limits Limits, each func(*Findings)) (*Findings, error) {
	sh, err := newSheet(s, rival)
	if err != nil {
		return nil, err
	}
	r := &reader{ctx: ctx, sheet: sh, limits: limits.orDefault()}
	f := &Findings{Study: s, Rival: rival, Ask: ask, Graph: sh.graph, Sheet: sh.drawn.Len(), Selected: sh.selected}
	steps := r.ask(f)
	for i, step := range steps {
		if ctx.Err() != nil {
			return f, ctx.Err()
		}
		next := *f
		step(&next)
		next.Done = i == len(steps)-1 && ctx.Err() == nil
		f = &next
		if each != nil {
			each(f)
		}
	}
	return f, ctx.Err()
}

// A reader is one reading under way.
type reader struct {
	ctx    context.Context
	sheet  *sheet
	limits Limits
}

// A step adds a section, or more of one, to findings that nobody has seen yet.
type step func(*Findings)

// ask finds the nodes that a question names and gives the steps that answer it:
// what follows the hand first, then lists that can grow long.
func (r *reader) ask(f *Findings) []step {
	f.Exposures, f.Outcomes, f.Given, f.Held = f.nodes(f.Ask.Exposures), f.nodes(f.Ask.Outcomes), f.nodes(f.Ask.Given), f.nodes(f.Ask.Held)
	f.Lacks = f.lacks()
	if f.Lacks != "" {
		f.Verdict = causal.Verdict{Kind: causal.Incomplete, Sentence: f.Lacks}
		return []step{r.laws, r.rows, r.basis, r.functionals, r.independences, r.tetrads, r.class, r.rivals}
	}
	steps := []step{r.paths, r.adjustment}
	if len(f.Exposures) == 1 && len(f.Outcomes) == 1 {
		steps = append(steps, r.controls, r.direct)
	}
	steps = append(steps, r.identification, r.laws, r.rows, r.basis)
	if len(f.Exposures) == 1 && len(f.Outcomes) == 1 {
		steps = append(steps, r.doors, r.instruments)
	}
	return append(steps, r.functionals, r.independences, r.tetrads, r.class, r.rivals)
}

// nodes finds variables on the sheet; others are left out.
func (f *Findings) nodes(ids []string) []int {
	out := []int{}
	for _, id := range ids {
		if v := f.Graph.Index(id); v >= 0 && v < f.Sheet {
			out = append(out, v)
		}
	}
	slices.Sort(out)
	return slices.Compact(out)
}

// total is the reading of one exposure and one outcome in the rows that there
// are.
func (r *reader) total(f *Findings) *causal.Reading {
	if len(f.Exposures) != 1 || len(f.Outcomes) != 1 {
		return nil
	}
	q := causal.Query{
		Exposure: f.Exposures[0], Outcome: f.Outcomes[0], Held: f.Held, Selected: f.Selected,
		MaxPaths: r.limits.Paths, MaxSets: r.limits.Sets,
	}
	for _, id := range f.Ask.Held {
		if plate := f.Graph.Plate(id); plate >= 0 && f.Graph.Index(id) < 0 {
			q.Within = append(q.Within, plate)
		}
	}
	return causal.Read(f.Graph, q)
}

func (l Limits) orDefault() Limits {
	if l.Paths <= 0 {
		l.Paths = 500
	}
	if l.Sets <= 0 {
		l.Sets = 100
	}
	return l
}

// add puts a finding into a section, with the reason why it was set aside if
// it was.
func (f *Findings) add(s *Section, one Finding) {
	if d := f.Study.Dismissal(f.Rival, one.Key); d != nil {
		one.Dismissed = d.Why
	}
	one.Nodes = f.onSheet(one.Nodes)
	one.Edges = slices.DeleteFunc(slices.Clone(one.Edges), func(e causal.Edge) bool { return e.From >= f.Sheet || e.To >= f.Sheet })
	s.Findings = append(s.Findings, one)
}
