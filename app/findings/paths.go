package findings

import (
	"fmt"
	"slices"
	"strings"

	"arrowroot/app/words"
	"arrowroot/compile/causal"
)

// paths lists the paths; of one exposure and one outcome they are those of the
// reading, which comes first of all.
func (r *reader) paths(f *Findings) {
	f.Reading = r.total(f)
	if f.Reading != nil {
		f.Verdict = f.Reading.Verdict
	}
	p := &Paths{Section: Section{Name: PathSection}}
	if f.Reading != nil && !f.direct() {
		p.List, p.AtMost = f.Reading.Paths, !f.Reading.MorePaths
	} else {
		held := union(union(f.Held, f.Selected), r.fixed(f))
		p.List, p.AtMost = causal.Between(f.Graph, f.Exposures, f.Outcomes, held, r.limits.Paths)
	}
	p.Count, p.Exact = len(p.List), p.AtMost
	if !p.AtMost {
		n, exact := causal.CountPaths(f.Graph, f.Exposures, f.Outcomes)
		p.Count, p.Exact = max(n, len(p.List)+1), exact
		p.LeftOut = fmt.Sprintf("The first %s of %s are listed, shortest first.", words.Whole(float64(len(p.List))), p.many())
	}
	for i := range p.List {
		one := &p.List[i]
		f.add(&p.Section, Finding{
			Key: "path " + one.Text(f.Graph), Kind: pathKind(one), Sentence: f.pathSentence(one), Why: f.roles(one),
			Nodes: one.Nodes, Edges: one.Edges, Path: one,
		})
	}
	p.Summary = f.pathSummary(p)
	f.Paths = p
}

// many says how many paths there are.
func (p *Paths) many() string {
	if p.Exact {
		return words.Plural(p.Count, "path")
	}
	return "at least " + words.Plural(p.Count, "path")
}

func pathKind(p *causal.Path) string {
	if p.Open {
		return p.Kind.String() + ", open"
	}
	return p.Kind.String() + ", closed"
}

// pathSentence says what a path does.
func (f *Findings) pathSentence(p *causal.Path) string {
	text := p.Text(f.Graph)
	var stops, opened []string
	for _, s := range p.ClosedAt {
		stops = append(stops, s.Reason)
	}
	for _, o := range p.OpenedAt {
		by := f.Graph.Names[o.By]
		how := by + " is held"
		selected := slices.Contains(f.Selected, o.By)
		switch {
		case selected && o.By == o.Node:
			how = "rows were kept by it"
		case selected:
			how = fmt.Sprintf("rows were kept by %s, on which it acts", by)
		case o.By != o.Node:
			how = fmt.Sprintf("%s, on which it acts, is held", by)
		}
		opened = append(opened, fmt.Sprintf("%s lets it through, because %s", f.Graph.Names[o.Node], how))
	}
	switch {
	case p.Kind == causal.Causal && p.Open:
		return text + " carries the effect."
	case p.Kind == causal.Causal:
		return fmt.Sprintf("%s carries the effect, and is cut: %s.", text, strings.Join(stops, "; "))
	case p.Open && len(opened) > 0:
		return fmt.Sprintf("%s is open: %s.", text, strings.Join(opened, "; "))
	case p.Open:
		return text + " is open and mixes something else into the comparison."
	}
	return fmt.Sprintf("%s is closed: %s.", text, strings.Join(stops, "; "))
}

// roles says what each inner node is on a path.
func (f *Findings) roles(p *causal.Path) string {
	if len(p.Nodes) < 3 {
		return "Nothing stands between the two."
	}
	var parts []string
	for i := 1; i < len(p.Nodes)-1; i++ {
		parts = append(parts, fmt.Sprintf("%s is a %s", f.Graph.Names[p.Nodes[i]], p.Role(i)))
	}
	return words.List(parts) + "."
}

func (f *Findings) pathSummary(p *Paths) string {
	ends := words.List(f.Ask.Exposures) + " to " + words.List(f.Ask.Outcomes)
	if len(p.List) == 0 {
		return fmt.Sprintf("No path leads from %s.", ends)
	}
	causes, open := 0, 0
	for i := range p.List {
		switch one := &p.List[i]; {
		case one.Kind == causal.Causal:
			causes++
		case one.Open:
			open++
		}
	}
	of, lead := p.many(), "lead"
	if p.Count == 1 {
		lead = "leads"
	}
	among := ""
	if !p.AtMost {
		among = fmt.Sprintf("of the first %s, ", words.Whole(float64(len(p.List))))
	}
	return fmt.Sprintf("%s %s from %s: %s%s the effect, and %s open besides.", words.Upper(of), lead, ends, among, carry(causes), beMany(open))
}

func carry(n int) string {
	switch n {
	case 0:
		return "none carries"
	case 1:
		return "1 carries"
	}
	return words.Whole(float64(n)) + " carry"
}

func beMany(n int) string {
	switch n {
	case 0:
		return "none is"
	case 1:
		return "1 is"
	}
	return words.Whole(float64(n)) + " are"
}
