package mistake

import (
	"fmt"
	"reflect"
	"slices"
	"strings"

	"arrowroot/compile/causal"
	"arrowroot/compile/graph"
	"arrowroot/compile/study"
	"arrowroot/compile/table"
)

// A look is what the finders look at: one rival's sheet as a graph, and what is
// asked of it in the graph's numbers.
type look struct {
	study *study.Study
	rival *study.Rival
	ask   *study.Question // never nil; empty if nothing is asked
	at    int             // its place among the study's questions; -1 = the study does not hold it
	table *table.Table

	g      *graph.Graph // a node for each on the sheet, in its order
	x, y   int          // -1 = not said, or not on the sheet
	held   []int        // what is held and stands on the sheet
	plates []int        // what is held of the graph's plates
	fixed  []int        // of a controlled direct effect
	direct bool

	blamed map[int]bool // held variables of which a graver mistake is told already

	inside *graph.Graph    // g within the groups of the held plates; g itself without
	read   *causal.Reading // of the total effect with held held; nil unless asked is true
}

// newLook is nil for a rival that does not exist or whose arrows close a cycle:
// edits refuse those, and the study's own check says it.
func newLook(s *study.Study, rival string, q *study.Question, reading *causal.Reading, t *table.Table) *look {
	r := s.Rival(rival)
	if r == nil {
		return nil
	}
	if q == nil {
		q = &study.Question{}
	}
	l := &look{study: s, rival: r, ask: q, at: placeOf(s, q), table: t, direct: q.Effect == study.DirectEffect, blamed: map[int]bool{}}
	var err error
	if l.g, err = s.Graph(rival); err != nil {
		return nil
	}
	l.x, l.y = l.g.Index(q.Exposure), l.g.Index(q.Outcome)
	for _, id := range q.Held {
		if v := l.g.Index(id); v >= 0 {
			l.held = append(l.held, v)
		} else if p := slices.IndexFunc(l.g.Plates, func(p graph.Plate) bool { return p.Name == id }); p >= 0 && s.HoldsPlate(id) {
			l.plates = append(l.plates, p)
		}
	}
	slices.Sort(l.held)
	for _, f := range q.Fixed {
		if v := l.g.Index(f.Variable); v >= 0 {
			l.fixed = append(l.fixed, v)
		}
	}
	l.inside = l.g
	if len(l.plates) > 0 {
		l.inside = causal.Within(l.g, l.plates)
	}
	if l.asked() {
		l.read = reading
		if !l.fits(reading) {
			l.read = causal.Read(l.g, causal.Query{Exposure: l.x, Outcome: l.y, Held: l.held, Within: l.plates})
		}
	}
	return l
}

// placeOf finds a question in the study; -1 if the study does not hold it.
func placeOf(s *study.Study, q *study.Question) int {
	if i := slices.Index(s.Questions, q); i >= 0 {
		return i
	}
	return slices.IndexFunc(s.Questions, func(other *study.Question) bool { return reflect.DeepEqual(other, q) })
}

// asked reports whether exposure and outcome are named and on the sheet.
func (l *look) asked() bool { return l.x >= 0 && l.y >= 0 && l.x != l.y }

// fits reports whether a reading is of this graph and question, and of nothing
// that is drawn for it besides, such as nodes of row filters.
func (l *look) fits(r *causal.Reading) bool {
	return r != nil && slices.Equal(r.Graph.Names, l.g.Names) && slices.Equal(r.Graph.Arrows, l.g.Arrows) && slices.Equal(r.Graph.Arcs, l.g.Arcs) &&
		r.Query.Exposure == l.x && r.Query.Outcome == l.y && slices.Equal(r.Query.Held, l.held) && slices.Equal(r.Query.Within, l.plates)
}

// blame notes that a held variable was told to be a mistake; it reports whether
// it was before.
func (l *look) blame(v int) (before bool) {
	before = l.blamed[v]
	l.blamed[v] = true
	return before
}

// beside is what is rightly held besides v, as far as has been told.
func (l *look) beside(v int) []int {
	return slices.DeleteFunc(minus(l.held, v), func(u int) bool { return l.blamed[u] })
}

// variable is the ledger's line of a node.
func (l *look) variable(v int) *study.Variable { return l.study.Variable(l.g.Names[v]) }

// key is the key of a mistake.
func key(code Code, about ...string) string {
	return strings.Join(append([]string{string(code)}, about...), " ")
}

// names writes variables as "a", "a and b" or "a, b and c".
func names(ids []string) string {
	switch n := len(ids); n {
	case 0:
		return "nothing"
	case 1:
		return ids[0]
	default:
		return strings.Join(ids[:n-1], ", ") + " and " + ids[n-1]
	}
}

func (l *look) ids(nodes []int) []string {
	if nodes == nil {
		return nil
	}
	return l.g.NamesOf(nodes)
}

// walk is a shortest way along arrows from a to b, both included, that avoids
// the given nodes; nil if there is none.
func walk(g *graph.Graph, a, b int, avoid ...int) []int {
	before := make([]int, g.Len())
	for v := range before {
		before[v] = -1
	}
	before[a] = a
	for queue := []int{a}; len(queue) > 0; queue = queue[1:] {
		if queue[0] == b {
			way := []int{b}
			for v := b; v != a; {
				v = before[v]
				way = append(way, v)
			}
			slices.Reverse(way)
			return way
		}
		for _, w := range g.Children[queue[0]] {
			if before[w] < 0 && !slices.Contains(avoid, w) {
				before[w] = queue[0]
				queue = append(queue, w)
			}
		}
	}
	return nil
}

// arrows writes a way along arrows: "hedge → flowers → bees".
func (l *look) arrows(way []int) string { return strings.Join(l.ids(way), " → ") }

// minus is the sorted set a without b.
func minus(a []int, b ...int) []int {
	return slices.DeleteFunc(slices.Clone(a), func(v int) bool { return slices.Contains(b, v) })
}

// plus is the sorted union.
func plus(a []int, b ...int) []int {
	all := append(slices.Clone(a), b...)
	slices.Sort(all)
	return slices.Compact(all)
}

// leaveFree is the repair that holds something no longer.
func (l *look) leaveFree(v int) []Repair {
	if l.at < 0 {
		return nil
	}
	id := l.g.Names[v]
	return []Repair{{"Leave " + id + " free", study.Hold{At: l.at, Variable: id}}}
}

// holdToo is the repair that holds more: what is held becomes the given set.
func (l *look) holdToo(set []int) []Repair {
	more := l.ids(minus(set, l.held...))
	if l.at < 0 || len(more) == 0 {
		return nil
	}
	q := *l.ask
	q.Held = append(slices.Clone(l.ask.Held), more...)
	return []Repair{{fmt.Sprintf("Hold %s as well", names(more)), study.ChangeQuestion{At: l.at, To: q}}}
}

// draw is the repair that draws an arrow.
func (l *look) draw(from, to int) Repair {
	a, b := l.g.Names[from], l.g.Names[to]
	return Repair{"Draw " + a + " → " + b, study.AddArrow{Rival: l.rival.Name, Arrow: study.Arrow{From: a, To: b}}}
}
