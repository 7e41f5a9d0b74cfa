package scene

import "math"

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
