package causal

import "arrowroot/compile/graph"

// A Difference is what one graph draws and the other does not. Nodes are
// matched by name; everything is in the order of the graph it comes from.
type Difference struct {
	NodesOnlyA, NodesOnlyB []string
	OnlyA, OnlyB           [][2]string // arrows, from and to
	Reversed               [][2]string // arrows as in a that b draws the other way; also in OnlyA and OnlyB
	ArcsOnlyA, ArcsOnlyB   [][2]string
}

// Same reports whether the graphs draw the same nodes, arrows and arcs.
func (d *Difference) Same() bool {
	return len(d.NodesOnlyA)+len(d.NodesOnlyB)+len(d.OnlyA)+len(d.OnlyB)+len(d.ArcsOnlyA)+len(d.ArcsOnlyB) == 0
}

// Compare lists what differs between two rivals' graphs.
func Compare(a, b *graph.Graph) Difference {
	var d Difference
	drawnA, drawnB := drawn(a), drawn(b)
	for _, s := range a.Names {
		if b.Index(s) < 0 {
			d.NodesOnlyA = append(d.NodesOnlyA, s)
		}
	}
	for _, s := range b.Names {
		if a.Index(s) < 0 {
			d.NodesOnlyB = append(d.NodesOnlyB, s)
		}
	}
	for _, e := range a.Arrows {
		arrow := [2]string{a.Names[e[0]], a.Names[e[1]]}
		if !drawnB[line{arrow, false}] {
			d.OnlyA = append(d.OnlyA, arrow)
			if drawnB[line{[2]string{arrow[1], arrow[0]}, false}] {
				d.Reversed = append(d.Reversed, arrow)
			}
		}
	}
	for _, e := range b.Arrows {
		if arrow := [2]string{b.Names[e[0]], b.Names[e[1]]}; !drawnA[line{arrow, false}] {
			d.OnlyB = append(d.OnlyB, arrow)
		}
	}
	for _, e := range a.Arcs {
		if arc := [2]string{a.Names[e[0]], a.Names[e[1]]}; !drawnB[line{arc, true}] {
			d.ArcsOnlyA = append(d.ArcsOnlyA, arc)
		}
	}
	for _, e := range b.Arcs {
		if arc := [2]string{b.Names[e[0]], b.Names[e[1]]}; !drawnA[line{arc, true}] {
			d.ArcsOnlyB = append(d.ArcsOnlyB, arc)
		}
	}
	return d
}

// A line is an arrow, or an arc in one of its two directions.
type line struct {
	ends [2]string
	arc  bool
}

func drawn(g *graph.Graph) map[line]bool {
	all := map[line]bool{}
	for _, e := range g.Arrows {
		all[line{[2]string{g.Names[e[0]], g.Names[e[1]]}, false}] = true
	}
	for _, e := range g.Arcs {
		all[line{[2]string{g.Names[e[0]], g.Names[e[1]]}, true}] = true
		all[line{[2]string{g.Names[e[1]], g.Names[e[0]]}, true}] = true
	}
	return all
}
