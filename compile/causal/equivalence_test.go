package causal

import (
	"fmt"
	"math/big"
	"math/rand/v2"
	"slices"
	"testing"

	"arrowroot/compile/graph"
)

// Source of the files read here: testdata/causal/SOURCE.md.

type classAnswer struct {
	Directed, Undirected [][2]string
	Size                 int64
}

func checkClass(t *testing.T, id string, g *graph.Graph, want classAnswer) {
	t.Helper()
	c := ClassOf(g)
	pairs := func(arrows [][2]int, unordered bool) []string {
		var all []string
		for _, a := range arrows {
			from, to := g.Names[a[0]], g.Names[a[1]]
			if unordered {
				from, to = min(from, to), max(from, to)
			}
			all = append(all, from+" "+to)
		}
		slices.Sort(all)
		return all
	}
	var directed, undirected []string
	for _, a := range want.Directed {
		directed = append(directed, a[0]+" "+a[1])
	}
	for _, a := range want.Undirected {
		undirected = append(undirected, min(a[0], a[1])+" "+max(a[0], a[1]))
	}
	slices.Sort(directed)
	slices.Sort(undirected)
	if got := pairs(c.Directed, false); !slices.Equal(got, directed) {
		t.Errorf("%s: directed %v, want %v", id, got, directed)
	}
	if got := pairs(c.Reversible, true); !slices.Equal(got, undirected) {
		t.Errorf("%s: undirected %v, want %v", id, got, undirected)
	}
	if c.Size == nil || c.Size.Cmp(big.NewInt(want.Size)) != 0 {
		t.Errorf("%s: size %v, want %d", id, c.Size, want.Size)
	}
	members := map[string]bool{}
	for m := range Members(g) {
		members[arrowsKey(m)] = true
	}
	if int64(len(members)) != want.Size || !members[arrowsKey(g)] {
		t.Errorf("%s: %d members, want %d; itself among them %v", id, len(members), want.Size, members[arrowsKey(g)])
	}
}

func arrowsKey(g *graph.Graph) string {
	arrows := slices.Clone(g.Arrows)
	slices.SortFunc(arrows, func(a, b [2]int) int { return slices.Compare(a[:], b[:]) })
	return fmt.Sprint(arrows)
}

func TestClassesOfReference(t *testing.T) {
	for _, c := range readReference(t, "beyond.json") {
		switch c.Question.Type {
		case "cpdag":
			var want classAnswer
			c.answer(t, &want)
			checkClass(t, c.ID, c.graph(t), want)
		case "equivalent":
			var want struct{ Equivalent bool }
			c.answer(t, &want)
			a, b := c.graph(t), (&reference{Nodes: c.Question.Other.Nodes, Edges: c.Question.Other.Edges}).graph(t)
			if got := SameIndependences(a, b); got.Same != want.Equivalent || got.Unknown {
				t.Errorf("%s: %s", c.ID, got.Sentence(a, b, "first", "second"))
			}
		case "meek":
			var want classAnswer
			c.answer(t, &want)
			g := c.graph(t)
			p := newPattern(g.Len())
			for _, a := range c.Question.Directed {
				p.on[g.Index(a[0])][g.Index(a[1])] = true
			}
			for _, a := range c.Question.Undirected {
				v, w := g.Index(a[0]), g.Index(a[1])
				p.on[v][w], p.on[w][v] = true, true
			}
			p.close()
			for _, a := range want.Directed {
				if !p.directed(g.Index(a[0]), g.Index(a[1])) {
					t.Errorf("%s: %v is not directed", c.ID, a)
				}
			}
			for _, a := range want.Undirected {
				if !p.free(g.Index(a[0]), g.Index(a[1])) {
					t.Errorf("%s: %v is directed", c.ID, a)
				}
			}
		}
	}
	for _, c := range readReference(t, "random.json") {
		if c.Answers.Cpdag != nil {
			checkClass(t, c.ID, c.graph(t), *c.Answers.Cpdag)
		}
	}
}

// allDAGs gives every acyclic graph of n labelled nodes.
func allDAGs(t *testing.T, n int, each func(*graph.Graph)) {
	t.Helper()
	spec := graph.Spec{}
	for v := range n {
		spec.Names = append(spec.Names, fmt.Sprint("v", v))
	}
	var fill func(a, b int, arrows [][2]int)
	fill = func(a, b int, arrows [][2]int) {
		if b == n {
			a, b = a+1, a+2
		}
		if b >= n {
			spec.Arrows = arrows
			if g, err := graph.New(spec); err == nil {
				each(g)
			}
			return
		}
		fill(a, b+1, arrows)
		fill(a, b+1, append(slices.Clone(arrows), [2]int{a, b}))
		fill(a, b+1, append(slices.Clone(arrows), [2]int{b, a}))
	}
	fill(0, 1, nil)
}

// The numbers of classes of 1 to 5 labelled nodes: 1, 2, 11, 185, 8782
// (Gillispie & Perlman 2001, from memory; reproduced by the oracle of
// testdata/causal). Sizes are compared with the number of graphs met.
func TestClassCounts(t *testing.T) {
	for n, want := range map[int]int{1: 1, 2: 2, 3: 11, 4: 185, 5: 8782} {
		met := map[string]int64{}
		size := map[string]*big.Int{}
		allDAGs(t, n, func(g *graph.Graph) {
			p := skeletonOf(g)
			p.close()
			k := fmt.Sprint(p.on)
			if met[k]++; size[k] == nil {
				size[k] = ClassOf(g).Size
			}
		})
		if len(met) != want {
			t.Errorf("%d nodes: %d classes, want %d", n, len(met), want)
		}
		for k, times := range met {
			if size[k] == nil || size[k].Cmp(big.NewInt(times)) != 0 {
				t.Fatalf("%d nodes: a class of %d counted as %v", n, times, size[k])
			}
		}
	}
}

// Two diagrams are the same if and only if all pairs are separated by the same
// sets, with and without unmeasured causes and computed variables.
func TestSamenessByTrial(t *testing.T) {
	r := rand.New(rand.NewPCG(81, 2026))
	same := 0
	for range rounds(3000, 30000) {
		s := sketch{nodes: 3 + r.IntN(3), arrows: 0.5}
		if r.IntN(2) == 0 {
			s.arcs, s.computed = 0.3, 0.2*float64(r.IntN(2))
		}
		a := s.draw(t, r)
		b := s.draw(t, r)
		if len(a.Arrows) > 0 && r.IntN(2) == 0 {
			if turned := turnedRound(a, a.Arrows[r.IntN(len(a.Arrows))]); turned != nil {
				b = turned
			}
		}
		if fmt.Sprint(available(a)) != fmt.Sprint(available(b)) {
			continue
		}
		want := true
		nodes := list(available(a))
		for i, v := range nodes {
			for _, w := range nodes[i+1:] {
				rest := minus(nodes, []int{v, w})
				for at := range 1 << len(rest) {
					given := subset(rest, at)
					want = want && Separated(a, []int{v}, []int{w}, given) == Separated(b, []int{v}, []int{w}, given)
				}
			}
		}
		got := SameIndependences(a, b)
		if got.Same != want || got.Unknown {
			t.Fatalf("%s and %s: %+v", describe(a), describe(b), got)
		}
		if want {
			same++
		} else if got.Witness == nil {
			t.Errorf("%s and %s: no witness", describe(a), describe(b))
		}
	}
	if same < 200 {
		t.Errorf("only %d the same", same)
	}
}

func TestClassSentences(t *testing.T) {
	chain := sheet(t, "feed -> gut -> health")
	back := sheet(t, "health -> gut -> feed")
	meet := sheet(t, "feed -> gut, health -> gut")
	tied := sheet(t, "feed -> gut -> health, feed <-> health")
	for _, check := range []struct{ got, want string }{
		{ClassOf(chain).Sentence, "3 diagrams imply the same independences, this one among them: feed → gut and gut → health could be turned round."},
		{ClassOf(meet).Sentence, "No other diagram of these variables implies the same independences."},
		{SameIndependences(chain, back).Sentence(chain, back, "Feed only", "Feed back"), "Feed only and Feed back imply the same independences among what was measured: no amount of data of this kind can tell them apart by their arrows."},
		{SameIndependences(chain, meet).Sentence(chain, meet, "Chain", "Meeting"), "Data can tell Chain and Meeting apart: Chain says that health and feed are unrelated once gut is known, and Meeting does not."},
		{SameIndependences(chain, tied).Sentence(chain, tied, "Chain", "Tied"), "Data can tell Chain and Tied apart: Chain says that health and feed are unrelated once gut is known, and Tied does not."},
	} {
		if check.got != check.want {
			t.Errorf("got  %s\nwant %s", check.got, check.want)
		}
	}
	if c := ClassOf(tied); c.Listed || c.Size != nil || len(c.Reversible) != 2 {
		t.Errorf("%+v", c)
	}
	many := sheet(t, "a -> b -> c -> d -> e -> f -> g -> h -> i -> j -> k -> =l")
	if c := ClassOf(many); c.Listed || len(c.Undecided) == 0 || len(c.Reversible) > 0 {
		t.Errorf("%+v", c)
	}
	if c := ClassOf(large(t)); c.Listed || c.Sentence == "" {
		t.Errorf("%+v", c)
	}
}

// With unmeasured causes an arrow is said to be reversible if and only if the
// same pairs are separated by the same sets once it is turned round.
func TestReversibleArrowsByTrial(t *testing.T) {
	r := rand.New(rand.NewPCG(82, 2026))
	reversible, not := 0, 0
	for range rounds(500, 5000) {
		s := sketch{nodes: 4 + r.IntN(3), arrows: 0.3 + 0.3*r.Float64(), unmeasured: 0.2, arcs: 0.2 * r.Float64()}
		g := s.draw(t, r)
		if listed(g) {
			continue
		}
		c := ClassOf(g)
		if len(c.Undecided) > 0 || c.Listed || c.Size != nil {
			t.Fatalf("%s: %+v", describe(g), c)
		}
		can := available(g)
		nodes := list(can)
		for _, a := range g.Arrows {
			want := can[a[0]] && can[a[1]]
			turned := turnedRound(g, a)
			want = want && turned != nil
			for i, v := range nodes {
				for _, w := range nodes[i+1:] {
					rest := minus(nodes, []int{v, w})
					for at := range 1 << len(rest) {
						if !want {
							break
						}
						given := subset(rest, at)
						want = oracleSeparated(g, v, w, given) == oracleSeparated(turned, v, w, given)
					}
				}
			}
			if want {
				reversible++
			} else {
				not++
			}
			if slices.Contains(c.Reversible, a) != want {
				t.Fatalf("%s: %v can be turned round: %v", describe(g), a, want)
			}
		}
	}
	if reversible < 100 || not < 100 {
		t.Errorf("%d reversible, %d not", reversible, not)
	}
}
