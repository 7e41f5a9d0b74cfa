package causal

import (
	"cmp"
	"container/heap"
	"iter"

	"arrowroot/compile/graph"
)

// paths gives every path between x and y, shortest first and among equals by
// place of the nodes in the graph. It is lazy: one more path costs a bounded
// number of breadth-first searches, however many paths there are (Yen 1971,
// with the partition of Lawler 1972), so no graph makes it hang.
func paths(g *graph.Graph, x, y int) iter.Seq[*Path] {
	return func(yield func(*Path) bool) {
		if x == y {
			return
		}
		w := &walker{g: g, x: x, y: y, steps: steps(g), far: make([]int, g.Len())}
		if first := w.complete(nil, nil); first != nil {
			w.waiting = append(w.waiting, first)
		}
		for len(w.waiting) > 0 {
			best := heap.Pop(&w.waiting).(*branch)
			if !yield(best.path(x)) {
				return
			}
			// Every other path that shares the fixed beginning leaves this one
			// at some step: one branch for each.
			for at := best.fixed; at < len(best.walk); at++ {
				barred := []step{best.walk[at]}
				if at == best.fixed {
					barred = append(barred, best.barred...)
				}
				if next := w.complete(best.walk[:at], barred); next != nil {
					heap.Push(&w.waiting, next)
				}
			}
		}
	}
}

// pathBudget lasts for about a second: one more path takes a search for each of
// its edges, so that of long paths through a large diagram few are listed.
const pathBudget = 5 * searchBudget

// A step leaves a node along an edge.
type step struct {
	to   int
	kind stepKind
}

type stepKind int

// The order breaks ties between an arrow and an arc to the same node.
const (
	along stepKind = iota
	against
	arc
)

func steps(g *graph.Graph) [][]step {
	all := make([][]step, g.Len())
	for v := range all {
		for to := range g.Len() {
			if g.HasArrow(v, to) {
				all[v] = append(all[v], step{to, along})
			}
			if g.HasArrow(to, v) {
				all[v] = append(all[v], step{to, against})
			}
			for _, s := range g.Siblings[v] {
				if s == to {
					all[v] = append(all[v], step{to, arc})
				}
			}
		}
	}
	return all
}

// A branch stands for all paths that begin with walk[:fixed] and do not go on
// with a barred step; walk is the first of them.
type branch struct {
	walk   []step
	fixed  int
	barred []step
}

func (b *branch) path(x int) *Path {
	p := &Path{Nodes: []int{x}}
	at := x
	for _, s := range b.walk {
		e := Edge{From: at, To: s.to, Arc: s.kind == arc}
		if s.kind == against {
			e.From, e.To = s.to, at
		}
		p.Edges = append(p.Edges, e)
		p.Nodes = append(p.Nodes, s.to)
		at = s.to
	}
	return p
}

type branches []*branch

func (h branches) Len() int      { return len(h) }
func (h branches) Swap(i, j int) { h[i], h[j] = h[j], h[i] }
func (h branches) Less(i, j int) bool {
	a, b := h[i].walk, h[j].walk
	if len(a) != len(b) {
		return len(a) < len(b)
	}
	for k := range a {
		if c := cmp.Compare(a[k].to, b[k].to); c != 0 {
			return c < 0
		}
	}
	for k := range a {
		if c := cmp.Compare(a[k].kind, b[k].kind); c != 0 {
			return c < 0
		}
	}
	return false
}
func (h *branches) Push(b any) { *h = append(*h, b.(*branch)) }
func (h *branches) Pop() any {
	last := len(*h) - 1
	b := (*h)[last]
	*h = (*h)[:last]
	return b
}

type walker struct {
	g       *graph.Graph
	x, y    int
	steps   [][]step
	waiting branches
	far     []int // scratch: edges from a node to y; -1 = y is out of reach
	queue   []int // scratch
}

// complete finds the first path that begins with head and does not go on with
// a barred step; nil if there is none.
func (w *walker) complete(head, barred []step) *branch {
	const unseen, used = -1, -2
	for v := range w.far {
		w.far[v] = unseen
	}
	at := w.x
	w.far[w.x] = used
	for _, s := range head {
		w.far[s.to] = used
		at = s.to
	}
	w.far[w.y] = 0
	w.queue = append(w.queue[:0], w.y)
	for i := 0; i < len(w.queue); i++ {
		v := w.queue[i]
		for _, s := range w.steps[v] {
			if w.far[s.to] == unseen {
				w.far[s.to] = w.far[v] + 1
				w.queue = append(w.queue, s.to)
			}
		}
	}
	walk := append(make([]step, 0, len(head)+4), head...)
	for at != w.y {
		var best step
		found := false
		for _, s := range w.steps[at] {
			if w.far[s.to] < 0 || found && w.far[s.to] >= w.far[best.to] {
				continue
			}
			if len(walk) == len(head) && contains(barred, s) {
				continue
			}
			best, found = s, true
		}
		if !found {
			return nil
		}
		walk = append(walk, best)
		at = best.to
	}
	return &branch{walk: walk, fixed: len(head), barred: barred}
}

func contains(steps []step, s step) bool {
	for _, t := range steps {
		if t == s {
			return true
		}
	}
	return false
}
