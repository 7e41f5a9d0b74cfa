package scene

import (
	"math"

	"arrowroot/compile/study"
)

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
			p := Snapped(study.Point{X: want.X + float64(d[0]*ring)*32, Y: want.Y + float64(d[1]*ring)*24})
			if free(p) {
				return p
			}
		}
	}
	return Snapped(want)
}
