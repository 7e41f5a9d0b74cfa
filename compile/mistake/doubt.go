package mistake

import (
	"fmt"
	"strings"

	"arrowroot/compile/causal"
	"arrowroot/compile/graph"
	"arrowroot/compile/study"
)

// doubts is how many pairs nothingHidden names.
const doubts = 3

// nothingHidden finds a sheet on which everything is measured (M6), and names
// the pairs most worth doubting: those of which a shared cause that nobody
// measured would take the answer away, exposure and outcome first.
func nothingHidden(l *look) []Mistake {
	if l.read == nil || !l.read.Effect || len(l.g.Arcs) > 0 {
		return nil
	}
	for _, measured := range l.g.Measured {
		if !measured {
			return nil
		}
	}
	pairs := l.doubtful()
	x, y := l.g.Names[l.x], l.g.Names[l.y]
	m := Mistake{
		Code: NothingHidden, Severity: Note, Key: key(NothingHidden, x, y),
		Sentence: fmt.Sprintf("Everything drawn was measured: could %s and %s share a cause that nobody measured?", x, y),
		Why:      fmt.Sprintf("One shared by %s would confound the effect, whatever is held.", pairWords(pairs)),
	}
	for _, p := range pairs {
		m.Nodes = append(m.Nodes, p[:]...)
		m.Repairs = append(m.Repairs, Repair{"Draw one of " + p[0] + " and " + p[1], study.AddArc{Rival: l.rival.Name, Arc: study.Arc{A: p[0], B: p[1]}}})
	}
	m.Nodes = unique(m.Nodes)
	return []Mistake{m}
}

// doubtful lists pairs of which a shared cause would leave no set to hold:
// exposure and outcome, then the exposure and what it acts through, then any
// others of either, in the order of the sheet.
func (l *look) doubtful() [][2]string {
	readable := func(g *graph.Graph) bool {
		sets, _ := causal.Minimal(g, l.x, l.y, nil, 1)
		return sets != nil
	}
	below, above := l.g.Descendants(l.x), l.g.Ancestors(l.y)
	var tries [][2]int
	for v := range l.g.Len() {
		if v != l.x && v != l.y && below[v] && above[v] {
			tries = append(tries, [2]int{l.x, v})
		}
	}
	for v := range l.g.Len() {
		if v != l.x && v != l.y && !below[v] {
			tries = append(tries, [2]int{l.x, v}, [2]int{v, l.y})
		}
	}
	pairs := [][2]string{{l.g.Names[l.x], l.g.Names[l.y]}}
	if l.read.Sets == nil {
		return pairs
	}
	for _, t := range tries {
		if len(pairs) == doubts {
			break
		}
		if !readable(withArc(l.g, t)) {
			pairs = append(pairs, [2]string{l.g.Names[t[0]], l.g.Names[t[1]]})
		}
	}
	return pairs
}

// withArc is a graph of measured variables with one arc.
func withArc(g *graph.Graph, arc [2]int) *graph.Graph {
	spec := graph.Spec{Names: g.Names, Arrows: g.Arrows, Arcs: [][2]int{arc}}
	for v, computed := range g.Computed {
		if computed {
			spec.Computed = append(spec.Computed, v)
		}
	}
	next, err := graph.New(spec)
	if err != nil {
		panic(err) // the arrows are those of a graph
	}
	return next
}

// pairWords writes pairs as "hedge and bees, or by hedge and flowers".
func pairWords(pairs [][2]string) string {
	words := make([]string, len(pairs))
	for i, p := range pairs {
		words[i] = p[0] + " and " + p[1]
	}
	return strings.Join(words, ", or by ")
}

// unique drops words that came before.
func unique(words []string) []string {
	var once []string
	seen := map[string]bool{}
	for _, w := range words {
		if !seen[w] {
			seen[w] = true
			once = append(once, w)
		}
	}
	return once
}
