package findings

import (
	"slices"

	"arrowroot/app/words"
	"arrowroot/compile/causal"
	"arrowroot/compile/graph"
	"arrowroot/compile/study"
)

// filterName names the node that stands for the row filter of a table. It is no
// ID, so no variable has it.
func filterName(by []string) string { return "the filter on " + words.List(by) }

// A sheet is a rival's graph made ready for reading.
type sheet struct {
	drawn      *graph.Graph // as on the sheet
	graph      *graph.Graph // with the row filter as a node behind the others
	selected   []int        // what limits the rows, by node
	filtered   []string     // what the row filter goes by and the sheet does not show
	indicators []causal.Indicator
	records    []Record
	costs      []float64 // by node; nil = none is said
}

// newSheet reads what limits rows and records variables off study and rival. A
// row filter is an effect of what it goes by, held: it lets paths through, and
// keeps no variable from varying within its bounds.
func newSheet(s *study.Study, rival string) (*sheet, error) {
	g, err := s.Graph(rival)
	if err != nil {
		return nil, err
	}
	sh := &sheet{drawn: g, graph: g}
	var limits, by []int
	for i, n := range s.Rival(rival).Diagram.Nodes {
		if n.Limits {
			limits = append(limits, i)
		}
		v := s.Variable(n.Variable)
		if of := g.Index(v.Answers); v.Answers != "" && of >= 0 {
			sh.indicators = append(sh.indicators, causal.Indicator{Of: of, Node: i})
		}
		if of := g.Index(v.Records); v.Records != "" && of >= 0 {
			sh.records = append(sh.records, Record{Of: of, Node: i, Differential: differs(g, of, i)})
		}
		if v.Cost > 0 && sh.costs == nil {
			sh.costs = make([]float64, g.Len(), g.Len()+1)
		}
		if v.Cost > 0 {
			sh.costs[i] = v.Cost
		}
	}
	if d := s.DataOf(rival); d != nil {
		for _, c := range d.Keep {
			switch v := g.Index(c.Variable); {
			case v < 0:
				sh.filtered = append(sh.filtered, c.Variable)
			case !slices.Contains(limits, v): // else it is held as it is
				by = append(by, v)
			}
		}
	}
	sh.selected = limits
	if len(by) > 0 {
		sh.selected = append(slices.Clone(limits), g.Len())
		if sh.costs != nil {
			sh.costs = append(sh.costs, 0)
		}
	}
	if len(sh.selected) > 0 {
		sh.graph = withFilter(g, limits, by)
	}
	return sh, nil
}

// withFilter draws an effect of by behind the nodes of g, if by names any. What
// limits the rows is known of each of them, measured or not.
func withFilter(g *graph.Graph, limits, by []int) *graph.Graph {
	spec := graph.Spec{
		Names: slices.Clone(g.Names), Arrows: slices.Clone(g.Arrows), Arcs: g.Arcs,
		Plates: g.Plates, Levels: slices.Clone(g.Levels), ArcLevels: g.ArcLevels,
	}
	for v := range g.Len() {
		if !g.Measured[v] && !slices.Contains(limits, v) {
			spec.Unmeasured = append(spec.Unmeasured, v)
		}
		if g.Computed[v] {
			spec.Computed = append(spec.Computed, v)
		}
	}
	if len(by) > 0 {
		var ids []string
		for _, v := range by {
			ids = append(ids, g.Names[v])
		}
		spec.Names = append(spec.Names, filterName(ids))
		spec.Levels = append(spec.Levels, nil)
		for _, v := range by {
			spec.Arrows = append(spec.Arrows, [2]int{v, g.Len()})
		}
	}
	out, err := graph.New(spec)
	if err != nil { // a node without children closes no cycle
		panic(err)
	}
	return out
}

// differs reports whether anything but the true variable bears on its record.
func differs(g *graph.Graph, of, record int) bool {
	return len(g.Siblings[record]) > 0 || slices.ContainsFunc(g.Parents[record], func(p int) bool { return p != of })
}

// onSheet drops nodes that the sheet does not show.
func (f *Findings) onSheet(nodes []int) []int {
	out := []int{}
	for _, v := range nodes {
		if v < f.Sheet {
			out = append(out, v)
		}
	}
	return out
}

// along gives the edges that join neighbours of a list of nodes, arrows before
// arcs.
func along(g *graph.Graph, nodes []int) []causal.Edge {
	var edges []causal.Edge
	for i := 1; i < len(nodes); i++ {
		switch a, b := nodes[i-1], nodes[i]; {
		case g.HasArrow(a, b):
			edges = append(edges, causal.Edge{From: a, To: b})
		case g.HasArrow(b, a):
			edges = append(edges, causal.Edge{From: b, To: a})
		default:
			edges = append(edges, causal.Edge{From: a, To: b, Arc: true})
		}
	}
	return edges
}

// names gives the names of nodes.
func (f *Findings) names(nodes []int) []string {
	return f.Graph.NamesOf(nodes)
}

// minus is a without the members of b.
func minus(a, b []int) []int {
	out := []int{}
	for _, v := range a {
		if !slices.Contains(b, v) {
			out = append(out, v)
		}
	}
	return out
}

// union is the sorted union.
func union(a, b []int) []int {
	out := slices.Concat(a, b)
	slices.Sort(out)
	return slices.Compact(out)
}
