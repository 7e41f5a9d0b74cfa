package scene

import (
	"cmp"
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
		holds := Holds(s, plate.Name, v)
		if !holds {
			without++
		}
		if first && plate.Within == "" {
			first = false
			if !holds {
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

// layer gives every node the least layer its parents allow, then moves it
// towards its neighbours, so that arrows are short; the outcome goes last
// among what it does not cause.
func (a *arranger) layer() {
	for _, v := range a.order {
		for _, w := range a.spots[v].outs {
			a.spots[w].layer = max(a.spots[w].layer, a.spots[v].layer+1)
		}
	}
	if a.goal >= 0 {
		after := a.after(a.goal)
		last := 0
		for v := range a.real {
			if !after[v] {
				last = max(last, a.spots[v].layer)
			}
		}
		shift := last - a.spots[a.goal].layer
		for v := range a.real {
			if after[v] {
				a.spots[v].layer += max(shift, 0)
			}
		}
	}
	for range 8 {
		for _, v := range a.order {
			if v == a.goal {
				continue
			}
			p := &a.spots[v]
			lo, hi := 0, math.MaxInt
			var near []int
			for _, w := range p.ins {
				lo = max(lo, a.spots[w].layer+1)
				near = append(near, a.spots[w].layer)
			}
			for _, w := range p.outs {
				hi = min(hi, a.spots[w].layer-1)
				near = append(near, a.spots[w].layer)
			}
			if len(near) == 0 || hi == math.MaxInt && len(p.ins) == 0 {
				continue
			}
			slices.Sort(near)
			// Any median minimises the total length; the lower one keeps causes left.
			p.layer = min(max(near[(len(near)-1)/2], lo), hi)
		}
	}
}

// after marks a node and all it causes.
func (a *arranger) after(v int) []bool {
	seen := make([]bool, a.real)
	seen[v] = true
	for _, w := range a.order {
		if !seen[w] {
			continue
		}
		for _, x := range a.spots[w].outs {
			seen[x] = true
		}
	}
	return seen
}

// dummies cuts arrows over several layers and fills the layers.
func (a *arranger) dummies() {
	deepest := 0
	for v := range a.real {
		deepest = max(deepest, a.spots[v].layer)
		outs := slices.Clone(a.spots[v].outs)
		for k, w := range outs {
			last := v
			for l := a.spots[v].layer + 1; l < a.spots[w].layer; l++ {
				a.spots = append(a.spots, spot{layer: l, band: passing(a.spots[v].band, a.spots[w].band), dummy: true})
				d := len(a.spots) - 1
				if last == v {
					a.spots[v].outs[k] = d
				} else {
					a.spots[last].outs = []int{d}
				}
				a.spots[d].ins = []int{last}
				last = d
			}
			if last != v {
				a.spots[last].outs = []int{w}
				i := slices.Index(a.spots[w].ins, v)
				a.spots[w].ins[i] = last
			}
		}
	}
	a.layers = make([][]int, deepest+1)
	for v := range a.spots {
		l := a.spots[v].layer
		a.layers[l] = append(a.layers[l], v)
	}
	for _, members := range a.layers {
		a.number(members)
	}
}

func (a *arranger) number(members []int) {
	for i, v := range members {
		a.spots[v].place = i
	}
}

// uncross orders the layers so that few arrows cross; the best order met wins.
func (a *arranger) uncross() {
	best, least := a.snapshot(), a.crossings()
	for sweep := range 24 {
		if least == 0 {
			break
		}
		for i := range a.layers {
			l, back := i, false
			if sweep%2 == 1 {
				l, back = len(a.layers)-1-i, true
			}
			a.barycentre(a.layers[l], back)
		}
		a.exchange()
		if c := a.crossings(); c < least {
			best, least = a.snapshot(), c
		}
	}
	for l, members := range best {
		a.layers[l] = members
		a.number(members)
	}
}

func (a *arranger) snapshot() [][]int {
	kept := make([][]int, len(a.layers))
	for l, members := range a.layers {
		kept[l] = slices.Clone(members)
	}
	return kept
}

// barycentre sorts a layer by the mean place of its neighbours to one side;
// bands stay apart.
func (a *arranger) barycentre(members []int, back bool) {
	mean := make(map[int]float64, len(members))
	for _, v := range members {
		near := a.spots[v].ins
		if back {
			near = a.spots[v].outs
		}
		mean[v] = float64(a.spots[v].place)
		if len(near) > 0 {
			sum := 0.0
			for _, w := range near {
				sum += float64(a.spots[w].place)
			}
			mean[v] = sum / float64(len(near))
		}
	}
	slices.SortStableFunc(members, func(v, w int) int {
		return cmp.Or(cmp.Compare(a.spots[w].band, a.spots[v].band), cmp.Compare(mean[v], mean[w]))
	})
	a.number(members)
}

// exchange swaps neighbours in a layer wherever that removes crossings.
func (a *arranger) exchange() {
	for range 6 {
		better := false
		for _, members := range a.layers {
			for i := 1; i < len(members); i++ {
				v, w := members[i-1], members[i]
				if a.spots[v].band == a.spots[w].band && a.between(w, v) < a.between(v, w) {
					members[i-1], members[i] = w, v
					a.spots[v].place, a.spots[w].place = i, i-1
					better = true
				}
			}
		}
		if !better {
			return
		}
	}
}

// between counts the crossings of the arrows of two nodes of a layer when v
// stands above w.
func (a *arranger) between(v, w int) int {
	count := 0
	for _, side := range [2][2][]int{{a.spots[v].ins, a.spots[w].ins}, {a.spots[v].outs, a.spots[w].outs}} {
		for _, x := range side[0] {
			for _, y := range side[1] {
				if a.spots[x].place > a.spots[y].place {
					count++
				}
			}
		}
	}
	return count
}

func (a *arranger) crossings() int {
	count := 0
	for _, members := range a.layers {
		for i, v := range members {
			for _, w := range members[i+1:] {
				for _, x := range a.spots[v].outs {
					for _, y := range a.spots[w].outs {
						if a.spots[x].place > a.spots[y].place {
							count++
						}
					}
				}
			}
		}
	}
	return count
}

// heights gives every spot the height that its neighbours ask for, as near as
// order and distances allow, over and over from both sides.
func (a *arranger) heights() {
	for _, members := range a.layers {
		y := 0.0
		for i, v := range members {
			if i > 0 {
				y += a.apart(members[i-1], v)
			}
			a.spots[v].y = y
		}
		for _, v := range members { // layers begin centred on one another
			a.spots[v].y -= y / 2
		}
	}
	for range 24 {
		for l := range a.layers {
			a.relax(l)
		}
		for l := len(a.layers) - 1; l >= 0; l-- {
			a.relax(l)
		}
	}
	a.bands()
}

func (a *arranger) apart(v, w int) float64 {
	switch {
	case a.spots[v].dummy && a.spots[w].dummy:
		return lineStep
	case a.spots[v].dummy || a.spots[w].dummy:
		return (nodeStep + lineStep) / 2
	}
	return nodeStep
}

// relax moves a layer to the least-squares heights in its order: pool adjacent
// violators on heights less their least offsets (Best & Chakravarti 1990).
func (a *arranger) relax(l int) {
	members := a.layers[l]
	type block struct {
		sum, weight float64
		n           int
	}
	var blocks []block
	offset := make([]float64, len(members))
	for i, v := range members {
		if i > 0 {
			offset[i] = offset[i-1] + a.apart(members[i-1], v)
		}
		sum, weight := 0.0, 0.0
		for _, near := range [2][]int{a.spots[v].ins, a.spots[v].outs} {
			for _, w := range near {
				k := 1.0
				if a.spots[v].dummy && a.spots[w].dummy {
					k = 6 // long arrows run straight
				}
				sum, weight = sum+k*a.spots[w].y, weight+k
			}
		}
		if weight == 0 {
			sum, weight = 0.1*a.spots[v].y, 0.1
		}
		b := block{sum: sum - weight*offset[i], weight: weight, n: 1}
		for len(blocks) > 0 {
			last := blocks[len(blocks)-1]
			if last.sum/last.weight <= b.sum/b.weight {
				break
			}
			b = block{b.sum + last.sum, b.weight + last.weight, b.n + last.n}
			blocks = blocks[:len(blocks)-1]
		}
		blocks = append(blocks, b)
	}
	i := 0
	for _, b := range blocks {
		for range b.n {
			a.spots[members[i]].y = b.sum/b.weight + offset[i]
			i++
		}
	}
}

// bands moves the bands apart, so that no frame encloses what it does not hold.
func (a *arranger) bands() {
	highest, lowest := 0, 0
	for v := range a.real {
		highest, lowest = max(highest, a.spots[v].band), min(lowest, a.spots[v].band)
	}
	floor := math.Inf(-1)
	for band := highest; band >= lowest; band-- {
		lo, hi := math.Inf(1), math.Inf(-1)
		for v := range a.real {
			if p := a.spots[v]; p.band == band {
				lo, hi = min(lo, p.y), max(hi, p.y)
			}
		}
		if math.IsInf(lo, 1) {
			continue
		}
		shift := 0.0
		if !math.IsInf(floor, -1) {
			shift = max(0, floor+bandStep-lo)
		}
		for v := range a.real {
			if a.spots[v].band == band {
				a.spots[v].y += shift
			}
		}
		floor = hi + shift
	}
}

// settle finds places for the nodes that have none beside those that have:
// between parents and children, at the nearest place that is free.
func (a *arranger) settle(placed map[string]study.Point) {
	for _, v := range a.order {
		name := a.names[v]
		if _, ok := placed[name]; ok {
			continue
		}
		want, any := a.wish(v, placed)
		if !any {
			want = below(placed)
		}
		placed[name] = a.freeNear(want, a.spots[v].width, placed)
	}
}

// wish is where the placed neighbours of a node would have it.
func (a *arranger) wish(v int, placed map[string]study.Point) (study.Point, bool) {
	const step = 176.0
	left, right := math.Inf(-1), math.Inf(1)
	sum, n := 0.0, 0.0
	for _, w := range a.spots[v].ins {
		if p, ok := placed[a.names[w]]; ok {
			left, sum, n = max(left, p.X), sum+p.Y, n+1
		}
	}
	for _, w := range a.spots[v].outs {
		if p, ok := placed[a.names[w]]; ok {
			right, sum, n = min(right, p.X), sum+p.Y, n+1
		}
	}
	if n == 0 {
		return study.Point{}, false
	}
	x := left + step
	switch {
	case math.IsInf(left, -1):
		x = right - step
	case !math.IsInf(right, 1):
		x = (left + right) / 2
	}
	return study.Point{X: x, Y: sum / n}, true
}

// below is a place under everything, for nodes that nothing joins.
func below(placed map[string]study.Point) study.Point {
	x, y := math.Inf(1), math.Inf(-1)
	for _, p := range placed {
		x, y = min(x, p.X), max(y, p.Y)
	}
	return study.Point{X: x, Y: y + nodeStep}
}

func (a *arranger) freeNear(want study.Point, width float64, placed map[string]study.Point) study.Point {
	free := func(p study.Point) bool {
		for _, q := range placed {
			if math.Abs(p.X-q.X) < width/2+64 && math.Abs(p.Y-q.Y) < nodeStep-8 {
				return false
			}
		}
		return true
	}
	for ring := range 40 {
		for _, d := range [][2]int{{0, 1}, {0, -1}, {1, 0}, {-1, 0}, {1, 1}, {1, -1}, {-1, 1}, {-1, -1}} {
			p := snapped(study.Point{X: want.X + float64(d[0]*ring)*32, Y: want.Y + float64(d[1]*ring)*24})
			if free(p) {
				return p
			}
		}
	}
	return snapped(want)
}
