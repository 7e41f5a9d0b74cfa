package scene

import (
	"math"
	"slices"
)

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
	a.spread()
}

// spread sets the nodes without arrows in rows over the layers, not all in the
// first, where those of a data file would make one high column.
func (a *arranger) spread() {
	var loose []int
	columns := 0
	for v := range a.real {
		p := &a.spots[v]
		switch {
		case v == a.goal:
		case len(p.ins)+len(p.outs) == 0:
			loose = append(loose, v)
		default:
			columns = max(columns, p.layer+1)
		}
	}
	if a.goal >= 0 && columns > 0 {
		columns = min(columns, max(a.spots[a.goal].layer, 1))
	}
	columns = max(columns, int(math.Ceil(math.Sqrt(float64(len(loose))))))
	for i, v := range loose {
		a.spots[v].layer = i % columns
	}
	if a.goal < 0 || len(loose) == 0 {
		return
	}
	shift := min(columns, len(loose)) - a.spots[a.goal].layer
	for v, after := range a.after(a.goal) {
		if after {
			a.spots[v].layer += max(shift, 0)
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
