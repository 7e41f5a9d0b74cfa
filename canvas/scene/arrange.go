package scene

import (
	"math"
	"slices"

	"arrowroot/canvas/draw"
	"arrowroot/compile/study"
)

// Arrange finds places for the nodes of a rival; it returns one for every
// node. With keepPlaced, nodes that already have a place keep it.
func Arrange(s *study.Study, r *study.Rival, keepPlaced bool) map[string]study.Point {
	return ArrangeFor(s, r, nil, keepPlaced)
}

// ArrangeFor is Arrange with the outcome of a question to the right of all
// that it does not cause. The layout is layered, causes to the left, as
// Sugiyama, Tagawa & Toda (1981) describe it: layers by longest path, dummy
// nodes along long arrows, fewer crossings by barycentres and exchanges
// (Gansner et al. 1993), then heights by least squares in that order.
func ArrangeFor(s *study.Study, r *study.Rival, q *study.Question, keepPlaced bool) map[string]study.Point {
	if r == nil || r.Diagram == nil {
		return nil
	}
	a := newArranger(s, r, q)
	if keepPlaced && r.Layout != nil {
		kept := make(map[string]study.Point)
		for _, n := range r.Diagram.Nodes {
			if p, ok := r.Layout.At[n.Variable]; ok {
				kept[n.Variable] = p
			}
		}
		if len(kept) > 0 {
			a.settle(kept)
			return kept
		}
	}
	return a.run()
}

// A spot is a node of the layout, or a dummy where a long arrow passes a layer.
type spot struct {
	layer, place int
	band         int // higher bands stand higher; 0 = every plate holds it
	width        float64
	x, y         float64
	ins, outs    []int
	dummy        bool
}

type arranger struct {
	names  []string
	spots  []spot
	real   int // spots before this are nodes
	order  []int
	layers [][]int
	goal   int // the outcome, or −1
}

// Distances of the layout at zoom 1.
const (
	layerGap = 88.0
	nodeStep = 80.0  // between nodes one above the other, with room for dots
	lineStep = 32.0  // beside a dummy
	bandStep = 136.0 // room for the dots, two frames and a tab
)

func newArranger(s *study.Study, r *study.Rival, q *study.Question) *arranger {
	a := &arranger{goal: -1}
	index := make(map[string]int)
	variables := ledger(s)
	for i, n := range r.Diagram.Nodes {
		v := variables[n.Variable]
		w, _, _ := nodeSize(n.Variable, nameFace(v), 1)
		p := spot{width: w}
		p.band = bandOf(s, v)
		a.names = append(a.names, n.Variable)
		a.spots = append(a.spots, p)
		index[n.Variable] = i
		if q != nil && q.Outcome == n.Variable {
			a.goal = i
		}
	}
	a.real = len(a.spots)
	for _, e := range r.Diagram.Arrows {
		from, ok := index[e.From]
		to, ok2 := index[e.To]
		if ok && ok2 && from != to {
			a.join(from, to)
		}
	}
	a.sort()
	return a
}

// bandOf puts variables that fewer plates hold further out, so that frames can
// pass between: above, or below if the first outermost plate does not hold
// them, which parts two crossed plates.
func bandOf(s *study.Study, v *study.Variable) int {
	if s == nil || v == nil {
		return 0
	}
	without, side, first := 0, 1, true
	for _, plate := range s.Plates {
		in := holds(s, plate.Name, v)
		if !in {
			without++
		}
		if first && plate.Within == "" {
			first = false
			if !in {
				side = -1
			}
		}
	}
	return side * without
}

// passing is the band of an arrow between two bands.
func passing(a, b int) int {
	switch {
	case a > 0 && b > 0:
		return min(a, b)
	case a < 0 && b < 0:
		return max(a, b)
	}
	return 0
}

func (a *arranger) join(from, to int) {
	a.spots[from].outs = append(a.spots[from].outs, to)
	a.spots[to].ins = append(a.spots[to].ins, from)
}

// sort fills order along the arrows. A cycle, which no sound study has, is cut
// where it is met.
func (a *arranger) sort() {
	state := make([]uint8, a.real)
	var visit func(int)
	visit = func(v int) {
		state[v] = 1
		for _, w := range a.spots[v].outs {
			if state[w] == 0 {
				visit(w)
			}
		}
		a.order = append(a.order, v)
	}
	for v := a.real - 1; v >= 0; v-- {
		if state[v] == 0 {
			visit(v)
		}
	}
	slices.Reverse(a.order)
	rank := make([]int, a.real)
	for i, v := range a.order {
		rank[v] = i
	}
	for v := range a.real {
		p := &a.spots[v]
		p.ins = slices.DeleteFunc(p.ins, func(w int) bool { return rank[w] > rank[v] })
		p.outs = slices.DeleteFunc(p.outs, func(w int) bool { return rank[w] < rank[v] })
	}
}

func (a *arranger) run() map[string]study.Point {
	a.layer()
	a.dummies()
	a.uncross()
	a.heights()
	at := make(map[string]study.Point, a.real)
	gap := layerGap
	if len(a.layers) > 7 {
		gap *= 0.7
	}
	x, top, bottom := 96.0, math.Inf(1), math.Inf(-1)
	columns := make([]float64, len(a.layers))
	for l, members := range a.layers {
		widest := 0.0
		for _, v := range members {
			if !a.spots[v].dummy {
				widest = max(widest, a.spots[v].width)
				top, bottom = min(top, a.spots[v].y), max(bottom, a.spots[v].y)
			}
		}
		columns[l] = x + widest/2
		x += widest + gap
	}
	// A window is wider than high by about this much: use its height.
	const aspect = 1.9
	stretch := 1.0
	if bottom > top {
		stretch = min(max((x-gap-96)/aspect/(bottom-top), 1), 2.4)
	}
	for v := range a.real {
		p := &a.spots[v]
		p.x, p.y = columns[p.layer], (p.y-top)*stretch+96
	}
	a.part(min(1, comfortable/x))
	for v := range a.real {
		at[a.names[v]] = study.Point{X: snap(a.spots[v].x), Y: snap(a.spots[v].y)}
	}
	return at
}

// comfortable is the width in which a window shows a whole sheet.
const comfortable = 1000.0

// part moves nodes of one band apart that would cover one another at a zoom:
// names have a least size, so on a small picture nodes are relatively larger.
func (a *arranger) part(zoom float64) {
	type size struct{ w, h float64 }
	sizes := make([]size, a.real)
	for v := range a.real {
		w, h, _ := nodeSize(a.names[v], draw.Bold, zoom)
		sizes[v] = size{w / zoom, (h + 6) / zoom}
	}
	for range 30 {
		still := true
		for v := range a.real {
			for w := range v {
				p, q := &a.spots[v], &a.spots[w]
				over := (sizes[v].h+sizes[w].h)/2 - math.Abs(p.y-q.y)
				if p.band != q.band || over <= 0 || math.Abs(p.x-q.x) >= (sizes[v].w+sizes[w].w)/2+4/zoom {
					continue
				}
				still = false
				push := over/2 + 1
				if p.y < q.y {
					push = -push
				}
				p.y, q.y = p.y+push, q.y-push
			}
		}
		if still {
			return
		}
	}
}
