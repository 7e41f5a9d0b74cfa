package causal

import "math"

// A network carries flow along edges of limited capacity. Every edge is stored
// next to its reverse, so e^1 is the reverse of e.
type network struct {
	to   []int
	room []float64 // capacity that is left
	out  [][]int   // edges by the node they leave
}

func newNetwork(nodes int) *network { return &network{out: make([][]int, nodes)} }

func (n *network) edge(from, to int, capacity float64) {
	n.out[from] = append(n.out[from], len(n.to))
	n.out[to] = append(n.out[to], len(n.to)+1)
	n.to = append(n.to, to, from)
	n.room = append(n.room, capacity, 0)
}

// most sends as much flow as it can (Edmonds & Karp 1972) and marks what the
// source still reaches: the edges out of the mark are a smallest cut. A flow
// without limit is +Inf.
func (n *network) most(source, sink int) (total float64, reached []bool) {
	for {
		came := make([]int, len(n.out)) // the edge by which a node was reached, plus one
		reached = make([]bool, len(n.out))
		reached[source] = true
		for queue := []int{source}; len(queue) > 0 && !reached[sink]; queue = queue[1:] {
			for _, e := range n.out[queue[0]] {
				if v := n.to[e]; n.room[e] > 0 && !reached[v] {
					reached[v], came[v] = true, e+1
					queue = append(queue, v)
				}
			}
		}
		if !reached[sink] {
			return total, reached
		}
		push := math.Inf(1)
		for v := sink; v != source; v = n.to[(came[v]-1)^1] {
			push = min(push, n.room[came[v]-1])
		}
		if math.IsInf(push, 1) {
			return push, reached
		}
		total += push
		for v := sink; v != source; v = n.to[(came[v]-1)^1] {
			n.room[came[v]-1] -= push
			n.room[(came[v]-1)^1] += push
		}
	}
}
