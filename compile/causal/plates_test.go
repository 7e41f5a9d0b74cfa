package causal

import (
	"fmt"
	"math/rand/v2"
	"slices"
	"strings"
	"testing"

	"arrowroot/compile/graph"
)

// inFarms is a graph with one plate, farm, at whose level the given nodes and
// arcs (by place) live.
func inFarms(t testing.TB, spec graph.Spec, nodes []int, arcs ...int) *graph.Graph {
	t.Helper()
	spec.Plates = []graph.Plate{{Name: "farm", Within: -1}}
	spec.Levels = make([][]int, len(spec.Names))
	for _, v := range nodes {
		spec.Levels[v] = []int{0}
	}
	spec.ArcLevels = make([][]int, len(spec.Arcs))
	for _, i := range arcs {
		spec.ArcLevels[i] = []int{0}
	}
	g, err := graph.New(spec)
	if err != nil {
		t.Fatal(err)
	}
	return g
}

// A confounder that lives at a plate's level closes when the plate is held; one
// of the row does not (SEMANTICS A6).
func TestHoldAPlate(t *testing.T) {
	spec := graph.Spec{
		Names:      []string{"hedge", "bees", "attitude", "soil", "flowers"},
		Arrows:     [][2]int{{0, 1}, {2, 0}, {2, 1}, {3, 0}, {3, 1}, {0, 4}, {4, 1}},
		Unmeasured: []int{2},
	}
	g := inFarms(t, spec, []int{2})
	r := Read(g, Query{Exposure: 0, Outcome: 1})
	want := "hedge → bees is confounded along 2 open back-door paths. Hold farm and soil: compare within each farm."
	if r.Verdict.Kind != Confounded || r.Verdict.Sentence != want || fmt.Sprint(r.Proposed()) != "[farm soil]" {
		t.Errorf("%v %q %v\nwant %q", r.Verdict.Kind, r.Verdict.Sentence, r.Proposed(), want)
	}
	if !r.Identifiable || r.Sets != nil {
		t.Errorf("identifiable %v, sets %v", r.Identifiable, r.Sets)
	}
	r = Read(g, Query{Exposure: 0, Outcome: 1, Held: []int{3}, Within: []int{0}})
	want = "hedge → bees can be read from these data, comparing within each farm and holding soil, if the arrows drawn and not drawn are right."
	if !r.HeldValid || r.Verdict.Sentence != want {
		t.Errorf("%v %q\nwant %q", r.HeldValid, r.Verdict.Sentence, want)
	}
	for _, p := range r.Paths {
		if p.Kind == BackDoor && p.Open {
			t.Errorf("%s is open", p.Text(g))
		}
		if p.Text(g) == "hedge ← attitude → bees" && p.ClosedAt[0].Reason != "attitude is the same throughout each farm" {
			t.Errorf("closed because %q", p.ClosedAt[0].Reason)
		}
	}
	r = Read(g, Query{Exposure: 0, Outcome: 1, Within: []int{0}})
	want = "Within each farm: hedge → bees is confounded along 1 open back-door path. Hold soil."
	if r.HeldValid || r.Verdict.Sentence != want || fmt.Sprint(r.Proposed()) != "[farm soil]" {
		t.Errorf("%v %q %v\nwant %q", r.HeldValid, r.Verdict.Sentence, r.Proposed(), want)
	}
	r = Read(g, Query{Exposure: 0, Outcome: 1, Held: []int{3, 4}, Within: []int{0}})
	if r.Verdict.Kind != OverHeld || !strings.HasPrefix(r.Verdict.Sentence, "Within each farm: Holding flowers would hide part of the effect") {
		t.Errorf("%v %q", r.Verdict.Kind, r.Verdict.Sentence)
	}

	rows := inFarms(t, spec, nil) // the same cause, row by row
	if r := Read(rows, Query{Exposure: 0, Outcome: 1, Held: []int{3}, Within: []int{0}}); r.HeldValid {
		t.Errorf("a cause of the row closed by holding farm: %q", r.Verdict.Sentence)
	}
}

func TestPlateRefused(t *testing.T) {
	refusals := []struct {
		name   string
		spec   graph.Spec
		atFarm []int
		want   string
	}{
		{"the exposure does not vary", graph.Spec{Names: []string{"size", "bees"}, Arrows: [][2]int{{0, 1}}}, []int{0},
			"farm cannot be held: size is the same throughout each farm, so that nothing is left to compare within it."},
		{"the outcome does not", graph.Spec{Names: []string{"hedge", "profit"}, Arrows: [][2]int{{0, 1}}}, []int{1},
			"farm cannot be held: profit is the same throughout each farm, so that nothing can change it within one."},
		{"a mediator", graph.Spec{Names: []string{"hedge", "bees", "mood"}, Arrows: [][2]int{{0, 2}, {2, 1}}}, []int{2},
			"farm cannot be held: that holds mood too, and it lies on hedge → mood → bees."},
		{"a collider", graph.Spec{Names: []string{"hedge", "bees", "soil", "mood"}, Arrows: [][2]int{{0, 1}, {2, 3}, {2, 1}}}, []int{3},
			"farm cannot be held: that holds mood too, on which soil acts, though soil changes within each farm."},
	}
	for _, c := range refusals {
		g := inFarms(t, c.spec, c.atFarm)
		r := Read(g, Query{Exposure: 0, Outcome: 1, Within: []int{0}})
		if r.HeldValid || r.Verdict.Kind != OverHeld || r.Verdict.Sentence != c.want {
			t.Errorf("%s: %v %q\nwant %q", c.name, r.Verdict.Kind, r.Verdict.Sentence, c.want)
		}
	}
}

// Holding a fine plate holds what lives at the level of one that it lies
// within; a level of two plates needs one finer than both.
func TestLevelsOfPlates(t *testing.T) {
	g, err := graph.New(graph.Spec{
		Names:  []string{"x", "y", "region", "visit"},
		Plates: []graph.Plate{{Name: "farm", Within: 1}, {Name: "village", Within: -1}, {Name: "year", Within: -1}},
		Levels: [][]int{nil, nil, {1}, {0, 2}},
	})
	if err != nil {
		t.Fatal(err)
	}
	for _, c := range []struct {
		held []int
		want string
	}{
		{[]int{0}, "[false false true false]"}, {[]int{1}, "[false false true false]"},
		{[]int{2}, "[false false false false]"}, {[]int{0, 2}, "[false false true false]"},
	} {
		if got := fmt.Sprint(sameNodes(g, c.held)); got != c.want {
			t.Errorf("holding %v: %s, want %s", c.held, got, c.want)
		}
	}
}

// Separation within groups agrees with separation in the diagram written out
// row by row: groups share what lives at their level, rows have the rest, and
// holding the plate is conditioning on everything shared, the causes behind its
// arcs among it. No row-level node acts on a shared one here: such plates are
// refused.
func TestWithinAgainstRowsWrittenOut(t *testing.T) {
	r := rand.New(rand.NewPCG(5, 6))
	for range rounds(300, 3000) {
		n := 4 + r.IntN(3)
		spec := graph.Spec{}
		var shared []int
		for v := range n {
			spec.Names = append(spec.Names, fmt.Sprint("v", v))
			if v > 1 && r.Float64() < 0.4 {
				shared = append(shared, v)
			}
		}
		order := r.Perm(n)
		for i, b := range order {
			for _, a := range order[:i] {
				if r.Float64() < 0.4 && (slices.Contains(shared, a) || !slices.Contains(shared, b)) {
					spec.Arrows = append(spec.Arrows, [2]int{a, b})
				}
			}
		}
		var at []int
		for a := range n {
			for b := range a {
				if slices.Contains(shared, a) == slices.Contains(shared, b) && r.Float64() < 0.15 {
					if slices.Contains(shared, a) || r.Float64() < 0.5 {
						at = append(at, len(spec.Arcs))
					}
					spec.Arcs = append(spec.Arcs, [2]int{a, b})
				}
			}
		}
		g := inFarms(t, spec, shared, at...)
		inside := Within(g, []int{0})
		rows, place, held := writtenOut(t, g, 2, 2)
		for bits := range 1 << (n - 2) {
			var z, given []int
			for i := range n - 2 {
				if bits>>i&1 == 1 {
					z = append(z, i+2)
					given = append(given, place(i+2, 0, 0))
				}
			}
			want := oracleSeparated(rows, place(0, 0, 0), place(1, 0, 0), tidy(append(given, held...)))
			if got := Separated(inside, []int{0}, []int{1}, minus(z, shared)); got != want {
				t.Fatalf("%s shared %v arcs %v, holding farm and %v: %v, written out %v", describe(g), shared, at, z, got, want)
			}
		}
	}
}

// writtenOut draws a graph with one plate for some groups of some rows; held
// are the nodes of all groups and the causes behind arcs at their level.
func writtenOut(t testing.TB, g *graph.Graph, groups, rows int) (out *graph.Graph, place func(v, group, row int) int, held []int) {
	t.Helper()
	spec := graph.Spec{}
	at := make(map[[3]int]int)
	add := func(name string, key [3]int) int {
		at[key] = len(spec.Names)
		spec.Names = append(spec.Names, name)
		return at[key]
	}
	arrow := func(from, to int) {
		if e := [2]int{from, to}; !slices.Contains(spec.Arrows, e) {
			spec.Arrows = append(spec.Arrows, e)
		}
	}
	shared := sameNodes(g, []int{0})
	for v := range g.Len() {
		for j := range groups {
			if shared[v] {
				held = append(held, add(fmt.Sprint(g.Names[v], "_", j), [3]int{v, j, 0}))
				continue
			}
			for i := range rows {
				add(fmt.Sprint(g.Names[v], "_", j, i), [3]int{v, j, i})
			}
		}
	}
	place = func(v, group, row int) int {
		if shared[v] {
			row = 0
		}
		return at[[3]int{v, group, row}]
	}
	for j := range groups {
		for i := range rows {
			for _, a := range g.Arrows {
				arrow(place(a[0], j, i), place(a[1], j, i))
			}
			for k, a := range g.Arcs {
				key := [3]int{-1 - k, j, i}
				if len(g.ArcLevels[k]) > 0 {
					key[2] = 0
				}
				u, known := at[key]
				if !known {
					u = add(fmt.Sprint("cause", k, "_", j, key[2]), key)
					if len(g.ArcLevels[k]) > 0 {
						held = append(held, u)
					}
				}
				arrow(u, place(a[0], j, i))
				arrow(u, place(a[1], j, i))
			}
		}
	}
	out, err := graph.New(spec)
	if err != nil {
		t.Fatal(err)
	}
	return out, place, held
}

// The law of a variable with what it carries, at its own row and at the level
// of the plate, is independent of everything earlier in the fit. Checked in the
// diagram written out: what enters as a mean is known of all rows of the group,
// and a baseline that varies by the plate is what the other rows' values of the
// variable itself tell, with what their laws read. This is for A6 what
// conditioning on carriers is for A1.
func TestSharedCarriersAgainstRowsWrittenOut(t *testing.T) {
	r := rand.New(rand.NewPCG(15, 16))
	compared := 0
	for range 1500 {
		n := 4 + r.IntN(3)
		spec := graph.Spec{}
		var shared []int
		for v := range n {
			spec.Names = append(spec.Names, fmt.Sprint("v", v))
			if v > 1 && r.Float64() < 0.35 {
				shared = append(shared, v)
			}
			if v > 1 && r.Float64() < 0.4 {
				spec.Unmeasured = append(spec.Unmeasured, v)
			}
		}
		order := r.Perm(n)
		for i, b := range order {
			for _, a := range order[:i] {
				if r.Float64() < 0.4 && (slices.Contains(shared, a) || !slices.Contains(shared, b)) {
					spec.Arrows = append(spec.Arrows, [2]int{a, b})
				}
			}
		}
		var at []int
		for a := range n {
			for b := range a {
				if slices.Contains(shared, a) == slices.Contains(shared, b) && r.Float64() < 0.12 {
					if slices.Contains(shared, a) || r.Float64() < 0.6 {
						at = append(at, len(spec.Arcs))
					}
					spec.Arcs = append(spec.Arcs, [2]int{a, b})
				}
			}
		}
		g := inFarms(t, spec, shared, at...)
		if len(closing(g, 0, 1)) == 0 {
			continue
		}
		compared++
		checkShared(t, g)
	}
	if compared < 100 {
		t.Errorf("only %d diagrams had a cause to carry", compared)
	}
}

func checkShared(t *testing.T, g *graph.Graph) {
	t.Helper()
	const rows = 2
	out, place, _ := writtenOut(t, g, 1, rows)
	same := sameNodes(g, []int{0})
	carried := make(map[int]Shared)
	for _, s := range SharedCarriers(g, 0, 1) {
		carried[s.Node] = s
	}
	var earlier []int
	for _, law := range CarriersFor(AsFitted(g, 0, 1), 0, 1) {
		v := law.Node
		if !g.Measured[v] || same[v] {
			if g.Measured[v] {
				earlier = append(earlier, v)
			}
			continue
		}
		reads := slices.Clone(law.Parents)
		for _, c := range slices.Concat(law.Carried, carried[v].Carried) {
			reads = append(reads, c.Node)
		}
		reads = slices.DeleteFunc(reads, func(q int) bool { return !g.Measured[q] })
		var given []int
		for _, q := range reads {
			given = append(given, place(q, 0, 0))
		}
		for _, p := range carried[v].Plates {
			for i := range rows {
				for _, m := range slices.Concat(p.Means, reads) {
					given = append(given, place(m, 0, i))
				}
				if i > 0 {
					given = append(given, place(v, 0, i))
				}
			}
		}
		given = tidy(given)
		for _, w := range earlier {
			among := rows // of the group; a law that carries nothing there is about its own row
			if len(carried[v].Plates) == 0 {
				among = 1
			}
			for i := range among {
				if at := place(w, 0, i); !slices.Contains(given, at) && !oracleSeparated(out, place(v, 0, 0), at, given) {
					t.Fatalf("%s arcs %v levels %v: the law of %s, reading %v with %+v, still depends on %s of row %d",
						describe(g), g.Arcs, g.ArcLevels, g.Names[v], reads, carried[v], g.Names[w], i)
				}
			}
		}
		earlier = append(earlier, v)
	}
}
