package evidence

import (
	"cmp"
	"context"
	"errors"
	"fmt"
	"slices"

	"arrowroot/compile/causal"
	"arrowroot/compile/graph"
)

const (
	defaultLevel = 0.9
	defaultMost  = 2000
)

// errNoData is a request without a table.
var errNoData = errors.New("there are no data to test the arrows against: open a table and bind its columns to the variables")

func test(ctx context.Context, req Request, watch func(done, total int)) (*Evidence, error) {
	g := req.Graph
	if g == nil {
		var err error
		if g, req.Selected, err = chosen(&req); err != nil {
			return nil, err
		}
	}
	if req.Table == nil || req.Table.Rows == 0 {
		return nil, errNoData
	}
	if !(req.Level > 0 && req.Level < 1) {
		req.Level = defaultLevel
	}
	b := newBench(&req, g)
	e := &Evidence{Rival: req.Rival, Graph: g, Level: req.Level, Rows: len(b.data.rows)}

	statements, more := req.Statements, false
	if statements == nil {
		var basis []causal.Independence
		basis, more = causal.Basis(g)
		statements = causal.Pairwise(basis)
	}
	if most := cmp.Or(req.Most, defaultMost); len(statements) > most {
		e.LeftOut = fmt.Sprintf("The arrows imply %d independences; the first %d were tested.", len(statements), most)
		statements = statements[:most]
	} else if more {
		e.LeftOut = "Unmeasured causes tie so many variables together that more independences may follow than were tested."
	}
	var testable []causal.Independence
	for _, s := range statements {
		if slices.ContainsFunc(slices.Concat(s.A, s.B), b.selected) {
			continue // the same in all rows
		}
		s.Given = slices.DeleteFunc(slices.Clone(s.Given), b.selected)
		if reason := b.untestable(s); reason != "" {
			e.Untested = append(e.Untested, b.untested(s, reason))
		} else {
			testable = append(testable, s)
		}
	}
	controls := b.controls()
	all := slices.Clone(testable)
	for _, c := range controls {
		all = append(all, c.Independence)
	}
	found, err := b.run(ctx, all, watch)
	if err != nil {
		return nil, err
	}
	e.Findings = found[:len(testable):len(testable)]
	b.judge(e.Findings)
	b.mend(e.Findings)
	for i := range controls {
		controls[i].Finding = found[len(testable)+i]
	}
	e.Controls = b.judgeControls(controls)
	e.Untested = append(e.Untested, b.unmeasured()...)
	if e.Tetrads, err = b.tetrads(ctx); err != nil {
		return nil, err
	}
	var not []Untested
	if e.Functionals, not, err = b.functionals(ctx); err != nil {
		return nil, err
	}
	e.Untested = append(e.Untested, not...)
	for i := range e.Findings {
		b.say(&e.Findings[i])
		if e.Findings[i].Verdict == Contradicted {
			e.Contradicted++
		}
	}
	slices.SortStableFunc(e.Findings, worse)
	e.Summary, e.Method = b.summary(e), b.method(e)+methodOfWeights(e.Functionals)
	return e, nil
}

// chosen is the graph of a rival with what its rows were chosen by: nodes that
// limit them, and a node behind those of the sheet for each variable on which
// the data are filtered.
func chosen(req *Request) (*graph.Graph, []int, error) {
	g, err := req.Study.Graph(req.Rival)
	if err != nil {
		return nil, nil, err
	}
	var selected []int
	for _, n := range req.Study.Rival(req.Rival).Diagram.Nodes {
		if n.Limits {
			selected = append(selected, g.Index(n.Variable))
		}
	}
	data := req.Study.DataOf(req.Rival)
	if data == nil || len(data.Keep) == 0 {
		return g, selected, nil
	}
	spec := specOf(g)
	spec.Names = slices.Clone(spec.Names)
	spec.Arrows = slices.Clone(spec.Arrows)
	for _, k := range data.Keep {
		if v := g.Index(k.Variable); v >= 0 {
			selected = append(selected, len(spec.Names))
			spec.Arrows = append(spec.Arrows, [2]int{v, len(spec.Names)})
			spec.Names = append(spec.Names, "the filter on "+k.Variable)
		}
	}
	g, err = graph.New(spec)
	return g, selected, err
}
