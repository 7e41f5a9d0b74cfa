package causal

import (
	"fmt"
	"math/rand/v2"
	"slices"
	"testing"

	"arrowroot/compile/graph"
)

// The oracle works from the definitions and shares nothing with the package
// but the graph: separation by the moral ancestral graph (Lauritzen et al.
// 1990) with a node drawn for every arc, paths by exhaustive search,
// adjustment by the criterion on paths (Shpitser, VanderWeele & Robins 2010)
// over all subsets, identification by the ID recursion (Shpitser & Pearl 2006).

// oracleSeparated decides separation in the moral graph of the ancestors.
func oracleSeparated(g *graph.Graph, a, b int, given []int) bool {
	named, _ := nameArcs(g)
	above := named.Ancestors(append([]int{a, b}, given...)...)
	near := make([]map[int]bool, named.Len())
	for v := range near {
		near[v] = map[int]bool{}
	}
	for v := range near {
		if !above[v] {
			continue
		}
		family := append(slices.Clone(named.Parents[v]), v)
		for _, p := range family {
			for _, q := range family {
				near[p][q] = true
			}
		}
	}
	seen := map[int]bool{a: true}
	for stack := []int{a}; len(stack) > 0; {
		v := stack[len(stack)-1]
		stack = stack[:len(stack)-1]
		for w := range near[v] {
			if w == b {
				return false
			}
			if !seen[w] && !slices.Contains(given, w) {
				seen[w] = true
				stack = append(stack, w)
			}
		}
	}
	return true
}

// oraclePaths lists all paths in no particular order.
func oraclePaths(g *graph.Graph, x, y int) []Path {
	var all []Path
	var walk func(p Path)
	walk = func(p Path) {
		at := p.Nodes[len(p.Nodes)-1]
		if at == y {
			all = append(all, p)
			return
		}
		on := func(next int, e Edge) {
			if !slices.Contains(p.Nodes, next) {
				walk(Path{Nodes: append(slices.Clone(p.Nodes), next), Edges: append(slices.Clone(p.Edges), e)})
			}
		}
		for _, e := range g.Arrows {
			if e[0] == at {
				on(e[1], Edge{From: e[0], To: e[1]})
			}
			if e[1] == at {
				on(e[0], Edge{From: e[0], To: e[1]})
			}
		}
		for _, e := range g.Arcs {
			if e[0] == at {
				on(e[1], Edge{From: e[0], To: e[1], Arc: true})
			}
			if e[1] == at {
				on(e[0], Edge{From: e[1], To: e[0], Arc: true})
			}
		}
	}
	walk(Path{Nodes: []int{x}})
	return all
}

func forward(p *Path) bool {
	for i, e := range p.Edges {
		if e.Arc || e.From != p.Nodes[i] {
			return false
		}
	}
	return true
}

// oracleOpen is the definition of an open path.
func oracleOpen(g *graph.Graph, p *Path, given []int) bool {
	for i := 1; i < len(p.Nodes)-1; i++ {
		v := p.Nodes[i]
		points := func(e Edge) bool { return e.Arc || e.To == v }
		if points(p.Edges[i-1]) && points(p.Edges[i]) {
			below := g.Descendants(v)
			if !slices.ContainsFunc(given, func(z int) bool { return below[z] }) {
				return false
			}
		} else if slices.Contains(given, v) {
			return false
		}
	}
	return true
}

// oracleForbidden follows the causal paths.
func oracleForbidden(g *graph.Graph, all []Path) []bool {
	no := make([]bool, g.Len())
	for i := range all {
		if forward(&all[i]) {
			for _, v := range all[i].Nodes[1:] {
				for w, is := range g.Descendants(v) {
					no[w] = no[w] || is
				}
			}
		}
	}
	return no
}

func oracleValid(g *graph.Graph, all []Path, forbidden []bool, z []int) bool {
	for _, v := range z {
		if forbidden[v] {
			return false
		}
	}
	for i := range all {
		if !forward(&all[i]) && oracleOpen(g, &all[i], z) {
			return false
		}
	}
	return true
}

// oracleMinimal goes through all subsets of what may be held.
func oracleMinimal(candidates, forced []int, valid func([]int) bool) [][]int {
	var works []int
	for bits := range 1 << len(candidates) {
		if z := subset(candidates, bits); within(forced, z) && valid(z) {
			works = append(works, bits)
		}
	}
	var least [][]int
	for _, b := range works {
		if !slices.ContainsFunc(works, func(c int) bool { return c != b && c&b == c }) {
			least = append(least, subset(candidates, b))
		}
	}
	return least
}

// oracleIdentifiable is the decision of algorithm ID: sets of nodes are bits.
func oracleIdentifiable(g *graph.Graph, x, y []int) bool {
	named, first := nameArcs(g)
	hidden := func(v int) bool { return v >= first || !named.Measured[v] }
	n := named.Len()
	parents, siblings := make([]int, n), make([]int, n)
	var reach func(v int) int // measured nodes reached through hidden ones
	reach = func(v int) int {
		if !hidden(v) {
			return 1 << v
		}
		bits := 0
		for _, c := range named.Children[v] {
			bits |= reach(c)
		}
		return bits
	}
	all := 0
	for v := range n {
		if !hidden(v) {
			all |= 1 << v
			for _, c := range named.Children[v] {
				for w := range n {
					if reach(c)>>w&1 == 1 {
						parents[w] |= 1 << v
					}
				}
			}
			continue
		}
		for a := range n {
			if reach(v)>>a&1 == 1 {
				siblings[a] |= reach(v) &^ (1 << a)
			}
		}
	}
	// ancestors of y among the nodes of v, arrows into cut taken away
	ancestors := func(v, cut, y int) int {
		for {
			more := y
			for w := range n {
				if y>>w&1 == 1 && cut>>w&1 == 0 {
					more |= parents[w] & v
				}
			}
			if more == y {
				return y
			}
			y = more
		}
	}
	component := func(v, w int) int {
		in := 1 << w
		for {
			more := in
			for u := range n {
				if in>>u&1 == 1 {
					more |= siblings[u] & v
				}
			}
			if more == in {
				return in
			}
			in = more
		}
	}
	components := func(v int) []int {
		var parts []int
		for left := v; left != 0; {
			w := 0
			for left>>w&1 == 0 {
				w++
			}
			c := component(v, w)
			parts = append(parts, c)
			left &^= c
		}
		return parts
	}
	var id func(y, x, v int) bool
	id = func(y, x, v int) bool {
		if x == 0 {
			return true // line 1
		}
		if above := ancestors(v, 0, y); above != v {
			return id(y, x&above, above) // line 2
		}
		if w := (v &^ x) &^ ancestors(v, x, y); w != 0 {
			return id(y, x|w, v) // line 3
		}
		parts := components(v &^ x)
		if len(parts) > 1 { // line 4
			for _, s := range parts {
				if !id(s, v&^s, v) {
					return false
				}
			}
			return true
		}
		whole := components(v)
		if len(whole) == 1 {
			return false // line 5
		}
		for _, s := range whole {
			if s == parts[0] {
				return true // line 6
			}
			if s&parts[0] == parts[0] {
				return id(y, x&s, s) // line 7
			}
		}
		panic("no component holds the part")
	}
	return id(bitsOf(y), bitsOf(x), all)
}

func TestAgainstOracle(t *testing.T) {
	r := rand.New(rand.NewPCG(11, 2026))
	graphs := rounds(2000, 22000)
	var separations, setsFound, pathsFound, identified int
	for i := range graphs {
		s := sketch{nodes: 3 + r.IntN(5), arrows: 0.2 + 0.5*r.Float64()}
		if i%2 == 1 {
			s.unmeasured, s.arcs = 0.3*r.Float64(), 0.25*r.Float64()
		}
		if i%4 == 3 { // few nodes, many arcs: where identification is in doubt
			s.nodes, s.unmeasured, s.arcs = 3+r.IntN(3), 0.2*r.Float64(), 0.5
		}
		g := s.draw(t, r)
		for i%4 == 3 && !g.Descendants(0)[1] {
			g = s.draw(t, r)
		}
		x, y := 0, 1
		fail := func(format string, args ...any) {
			t.Helper()
			t.Fatalf("graph %d:%s\n%s", i, describe(g), fmt.Sprintf(format, args...))
		}

		everyone := list(everything(g))
		for a := range g.Len() {
			for b := range a {
				z := minus(subset(everyone, r.IntN(1<<g.Len())), []int{b, a})
				separations++
				if got, want := Separated(g, []int{a}, []int{b}, z), oracleSeparated(g, a, b, z); got != want {
					fail("%d and %d separated by %v: got %v, want %v", a, b, z, got, want)
				}
			}
		}

		all := oraclePaths(g, x, y)
		held := minus(subset(everyone, r.IntN(1<<g.Len())), []int{x, y})
		read := Read(g, Query{Exposure: x, Outcome: y, Held: held, MaxPaths: 1e6, MaxSets: 1e6})
		if len(all) != len(read.Paths) || read.MorePaths {
			fail("%d paths, want %d", len(read.Paths), len(all))
		}
		pathsFound += len(all)
		texts := map[string]bool{}
		for k := range read.Paths {
			p := &read.Paths[k]
			texts[p.Text(g)] = true
			if p.Open != oracleOpen(g, p, held) || (p.Kind == Causal) != forward(p) {
				fail("path %s given %v: open %v, kind %v", p.Text(g), held, p.Open, p.Kind)
			}
			for _, o := range p.OpenedAt {
				if !g.Descendants(o.Node)[o.By] || !slices.Contains(held, o.By) {
					fail("path %s given %v: %d is said to open %d", p.Text(g), held, o.By, o.Node)
				}
			}
			if k > 0 {
				if before := &read.Paths[k-1]; len(before.Nodes) > len(p.Nodes) ||
					len(before.Nodes) == len(p.Nodes) && slices.Compare(before.Nodes, p.Nodes) > 0 {
					fail("path %s stands before %s", before.Text(g), p.Text(g))
				}
			}
		}
		for k := range all {
			if !texts[all[k].Text(g)] {
				fail("path %s is missing", all[k].Text(g))
			}
		}

		forbidden := oracleForbidden(g, all)
		var candidates []int
		for v := range g.Len() {
			if v != x && v != y && g.Measured[v] {
				candidates = append(candidates, v)
			}
		}
		valid := func(z []int) bool { return oracleValid(g, all, forbidden, z) }
		for _, forced := range [][]int{{}, subset(candidates, r.IntN(1<<len(candidates)))} {
			got, more := Minimal(g, x, y, forced, 1e6)
			want := oracleMinimal(candidates, forced, valid)
			if more || !slices.Equal(spelled(g, got), spelled(g, want)) {
				fail("minimal sets with %v: got %v, want %v", forced, got, want)
			}
			setsFound += len(got)
			sortSets(g, want)
			if !slices.EqualFunc(got, want, func(a, b []int) bool { return slices.Equal(a, b) }) {
				fail("sets with %v are out of order: %v", forced, got)
			}
			got, _ = MinimalSeparators(g, x, y, forced, 1e6)
			want = oracleMinimal(candidates, forced, func(z []int) bool { return oracleSeparated(g, x, y, z) })
			if !slices.Equal(spelled(g, got), spelled(g, want)) {
				fail("minimal separators with %v: got %v, want %v", forced, got, want)
			}
		}
		if z := subset(candidates, r.IntN(1<<len(candidates))); ValidAdjustment(g, x, y, z) != valid(z) {
			fail("%v valid: want %v", z, valid(z))
		}
		if read.HeldValid != (within(held, candidates) && valid(held)) {
			fail("held %v valid: got %v", held, read.HeldValid)
		}

		if got, want := read.Identifiable, oracleIdentifiable(g, []int{x}, []int{y}); got != want {
			fail("identifiable: got %v, want %v", got, want)
		}
		if read.Identifiable {
			identified++
		} else if read.Sets != nil {
			fail("sets, yet not identifiable")
		}
		checkCulprits(t, g, read)
	}
	t.Logf("%d graphs: %d separations, %d paths, %d sets, %d identifiable", graphs, separations, pathsFound, setsFound, identified)
}

// checkCulprits sees that measuring what is named gives a set, by the oracle.
func checkCulprits(t *testing.T, g *graph.Graph, r *Reading) {
	t.Helper()
	if r.Sets != nil {
		if r.Culprits != nil || r.CulpritArcs != nil {
			t.Fatalf("%s: culprits, yet sets", describe(g))
		}
		return
	}
	named, first := nameArcs(g)
	culprits := slices.Clone(r.Culprits)
	for _, a := range r.CulpritArcs {
		culprits = append(culprits, first+slices.Index(g.Arcs, a))
	}
	gives := func(measured ...int) bool {
		h := *named
		h.Measured = slices.Clone(named.Measured)
		for _, v := range measured {
			h.Measured[v] = true
		}
		all := oraclePaths(&h, r.Query.Exposure, r.Query.Outcome)
		forbidden := oracleForbidden(&h, all)
		var candidates []int
		for v, m := range h.Measured {
			if m && v != r.Query.Exposure && v != r.Query.Outcome && !forbidden[v] {
				candidates = append(candidates, v)
			}
		}
		for bits := range 1 << len(candidates) {
			if oracleValid(&h, all, forbidden, subset(candidates, bits)) {
				return true
			}
		}
		return false
	}
	if len(culprits) == 0 { // the outcome acts on the exposure
		var hidden []int
		for v, m := range named.Measured {
			if !m {
				hidden = append(hidden, v)
			}
		}
		if r.Effect || gives(hidden...) {
			t.Fatalf("%s: no set and no culprits", describe(g))
		}
	}
	if r.CulpritsAll {
		if !gives(culprits...) {
			t.Fatalf("%s: measuring %v gives no set", describe(g), culprits)
		}
		for _, v := range culprits {
			if gives(minus(culprits, []int{v})...) {
				t.Fatalf("%s: measuring %v gives a set without %d", describe(g), culprits, v)
			}
		}
		return
	}
	for v := range named.Len() {
		if !named.Measured[v] && gives(v) != slices.Contains(culprits, v) {
			t.Fatalf("%s: measuring %d gives a set: %v", describe(g), v, gives(v))
		}
	}
}
