package causal

import "fmt"

// whyForbidden names, for every node that no adjustment set may hold whether it
// was measured or not, the arrows that make it so.
func (c *comparison) whyForbidden() []Forbidden {
	var all []Forbidden
	x, y := c.x[0], c.y[0]
	for v, no := range c.forbidden {
		if !no {
			continue
		}
		f := Forbidden{Node: v}
		switch {
		case v == y:
			f.Path = c.arrows(x, v)
			f.Reason = "it is the outcome"
		case c.causal[v]:
			f.Path = append(c.arrows(x, v), c.arrows(v, y)[1:]...)
			f.Reason = "it lies on " + arrowText(c.g, f.Path)
		default:
			f.Path = c.arrows(x, v)
			// The last causal node on the way is what it is an effect of.
			for _, u := range f.Path {
				if c.causal[u] {
					f.Reason = fmt.Sprintf("it is an effect of %s, by %s", c.g.Names[u], arrowText(c.g, f.Path))
				}
			}
		}
		all = append(all, f)
	}
	return all
}

// arrows is a shortest way from a to b along arrows, the first by place of the
// nodes. A way to a descendant of a causal node goes through a causal node.
func (c *comparison) arrows(a, b int) []int {
	type stop struct {
		node   int
		causal bool // a causal node, or the start of a way that needs none, is behind
	}
	free := c.causal[b] || b == a || c.causal[a]
	start := stop{a, free}
	from := map[stop]stop{start: start}
	for queue := []stop{start}; len(queue) > 0; queue = queue[1:] {
		at := queue[0]
		if at.node == b && at.causal {
			way := []int{b}
			for at != start {
				at = from[at]
				way = append([]int{at.node}, way...)
			}
			return way
		}
		for _, w := range c.g.Children[at.node] {
			next := stop{w, at.causal || c.causal[w]}
			if _, seen := from[next]; !seen {
				from[next] = at
				queue = append(queue, next)
			}
		}
	}
	return []int{a}
}
