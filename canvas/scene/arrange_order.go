package scene

import (
	"cmp"
	"slices"
)

// uncross orders the layers so that few arrows cross; the best order met wins.
func (a *arranger) uncross() {
	best, least := a.snapshot(), a.crossings()
	for sweep := range min(24, 2+30000/max(len(a.spots), 1)) { // a large sheet is laid out while a hand waits
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

// crossings counts, layer by layer, the pairs of arrows that cross: those whose
// heads stand the other way round than their tails (Barth, Mutzel & Jünger
// 2004, with a tree of sums: Fenwick 1994).
func (a *arranger) crossings() int {
	most := 0
	for _, members := range a.layers {
		most = max(most, len(members))
	}
	sums := make([]int, most+1)
	count := 0
	for _, members := range a.layers {
		clear(sums)
		before := 0
		for _, v := range members {
			for _, y := range a.spots[v].outs {
				notAfter := 0
				for i := a.spots[y].place + 1; i > 0; i -= i & -i {
					notAfter += sums[i]
				}
				count += before - notAfter
			}
			for _, y := range a.spots[v].outs {
				before++
				for i := a.spots[y].place + 1; i < len(sums); i += i & -i {
					sums[i]++
				}
			}
		}
	}
	return count
}
