package causal

import (
	"fmt"
	"math"
	"math/rand/v2"
	"slices"
	"strings"
	"testing"
)

// average is Σ P(y | x, held, kept) P(held | kept) for the values in state.
func (p joint) average(x, y int, held, kept []int, state int) float64 {
	total := 0.0
	for at := range 1 << len(held) {
		next := state
		for i, v := range held {
			next = next&^(1<<v) | at>>i&1<<v
		}
		total += p.given([]int{y}, union(held, kept, []int{x}), next) * p.given(held, kept, next)
	}
	return total
}

// What is said of kept rows is so if and only if the held average over them is
// the effect, in exact binary models drawn at random, against the truncated
// factorisation.
func TestKeptRowsInBinaryModels(t *testing.T) {
	r := rand.New(rand.NewPCG(95, 2026))
	var among, all [3]int
	for range rounds(1500, 15000) {
		s := sketch{nodes: 4 + r.IntN(3), arrows: 0.2 + 0.4*r.Float64(), unmeasured: 0.2, arcs: 0.15 * r.Float64()}
		g := s.draw(t, r)
		const x, y, kept = 0, 1, 2
		if g.Len()+len(g.Arcs) > 10 {
			continue
		}
		var candidates []int
		for v := 3; v < g.Len(); v++ {
			if g.Measured[v] {
				candidates = append(candidates, v)
			}
		}
		held := subset(candidates, r.IntN(1<<len(candidates)))
		k := ReadKept(g, x, y, held, []int{kept})
		if k.Sentence == "" {
			t.Fatalf("%s: no sentence", describe(g))
		}
		measured := *g
		measured.Measured = slices.Clone(g.Measured)
		measured.Measured[kept] = true // whoever kept the rows knew it
		m := newBinaryModel(&measured, r)
		truth := m.doing([]int{x})
		same, like := true, true
		for state := range 4 {
			state |= 1 << kept
			got := m.seen.average(x, y, held, []int{kept}, state)
			same = same && math.Abs(got-truth.given([]int{y}, []int{x}, state)) < 1e-9
			like = like && math.Abs(got-truth.given([]int{y}, []int{x, kept}, state)) < 1e-9
		}
		if (k.All == Valid) != same {
			t.Fatalf("%s: kept by v2, held %v: all rows %v, yet the same is %v: %s", describe(g), held, k.All, same, k.Sentence)
		}
		if !g.Descendants(x)[kept] && (k.Among == Valid) != like {
			t.Fatalf("%s: kept by v2, held %v: among them %v, yet the same is %v: %s", describe(g), held, k.Among, like, k.Sentence)
		}
		if k.All == Undecided { // what is missing is the spread of what is held
			for state := range 4 {
				state |= 1 << kept
				total := 0.0
				for at := range 1 << len(held) {
					next := state
					for i, v := range held {
						next = next&^(1<<v) | at>>i&1<<v
					}
					total += m.seen.given([]int{y}, union(held, []int{x, kept}), next) * m.seen.given(held, nil, next)
				}
				if want := truth.given([]int{y}, []int{x}, state); math.Abs(total-want) > 1e-9 {
					t.Fatalf("%s: held %v weighed as in all rows gives %g, truth %g", describe(g), held, total, want)
				}
			}
		}
		among[k.Among]++
		all[k.All]++

		q := Query{Exposure: x, Outcome: y, Held: held, Selected: []int{kept}, MaxSets: 1e4}
		read := Read(g, q)
		if read.Verdict.Sentence == "" || read.HeldValid != (k.Among == Valid) {
			t.Fatalf("%s: held %v: %+v", describe(g), held, read.Verdict)
		}
		valid := oracleMinimal(candidates, nil, func(z []int) bool { return ReadKept(g, x, y, z, []int{kept}).Among == Valid })
		compareSets(t, describe(g), "sets among kept rows", g, read.Sets, withNames(g.Names, valid))
	}
	if min(among[Valid], among[NotValid], all[Valid], all[NotValid], all[Undecided]) < 40 {
		t.Errorf("among %v, all %v", among, all)
	}
	t.Logf("valid, not valid, undecided: among kept rows %v, in all %v", among, all)
}

func withNames(names []string, sets [][]int) [][]string {
	all := make([][]string, len(sets))
	for i, z := range sets {
		for _, v := range z {
			all[i] = append(all[i], names[v])
		}
	}
	return all
}

func TestKeptSentences(t *testing.T) {
	for _, c := range []struct {
		sheet, held, kept string
		among, all        Answer
		sentence          string
	}{
		{"hedge -> bees, hedge -> visited", "", "visited", Valid, Valid,
			"Rows were kept by visited, which says nothing of what bees would be with hedge set: these rows give the effect in all rows."},
		{"hedge -> bees, soil -> hedge, soil -> bees, soil -> visited", "soil", "visited", Valid, Undecided,
			"Rows were kept by visited: these rows, holding soil, give the effect among rows like them, and in all rows only if the spread of soil there is known."},
		{"hedge -> bees, soil -> bees, soil -> visited", "", "visited", Valid, NotValid,
			"Rows were kept by visited, which is related to bees: these rows give the effect among rows like them, not in all rows."},
		{"hedge -> bees -> counted", "", "counted", NotValid, NotValid,
			"Rows were kept by counted, and it is an effect of bees, by hedge → bees → counted: the effect cannot be read from these rows by holding anything."},
		{"hedge -> bees, hedge -> counted, soil -> counted, soil -> bees", "", "counted", NotValid, NotValid,
			"Rows were kept by counted, which opens hedge → counted ← soil → bees: these rows do not give the effect."},
		{"hedge -> bees, soil -> hedge, soil -> bees, visited -> soil", "", "visited", NotValid, NotValid,
			"Rows were kept by visited: these rows do not give the effect of hedge on bees."},
	} {
		g := sheet(t, c.sheet)
		at := func(words string) []int { return numbers(g, strings.Fields(words)) }
		k := ReadKept(g, g.Index("hedge"), g.Index("bees"), at(c.held), at(c.kept))
		if k.Among != c.among || k.All != c.all || k.Sentence != c.sentence {
			t.Errorf("%s:\n got %v %v %q\nwant %v %v %q", c.sheet, k.Among, k.All, k.Sentence, c.among, c.all, c.sentence)
		}
	}
	g := sheet(t, "hedge -> bees, hedge -> counted, (soil) -> counted, soil -> bees")
	v := Read(g, Query{Exposure: 0, Outcome: 1, Selected: []int{2}}).Verdict
	if want := "Rows were kept by counted, which opens hedge → counted ← soil → bees: these rows do not give the effect."; v.Kind != NoSet || v.Sentence != want || v.Way == "" {
		t.Errorf("%+v", v)
	}
}

// Whatever kept the rows, the reading agrees with itself.
func TestKeptReadingsAreConsistent(t *testing.T) {
	r := rand.New(rand.NewPCG(96, 2026))
	var kinds [6]int
	for range rounds(1500, 15000) {
		s := sketch{nodes: 3 + r.IntN(5), arrows: 0.2 + 0.4*r.Float64(), unmeasured: 0.25 * r.Float64(), arcs: 0.1 * r.Float64(), computed: 0.3 * float64(r.IntN(2))}
		g := s.draw(t, r)
		const x, y = 0, 1
		everyone := list(everything(g))
		selected := subset(everyone, r.IntN(1<<g.Len())&r.IntN(1<<g.Len()))
		held := subset(everyone, r.IntN(1<<g.Len())&r.IntN(1<<g.Len()))
		read := Read(g, Query{Exposure: x, Outcome: y, Held: held, Selected: selected})
		v := read.Verdict
		kinds[v.Kind]++
		fail := func(what string) {
			t.Helper()
			t.Fatalf("%s | held %v, kept by %v: %s: %+v, faults %v, sets %v", describe(g), held, selected, what, v, read.HeldFaults, read.Sets)
		}
		if v.Sentence == "" || (read.Kept == nil) != (len(selected) == 0) {
			fail("no sentence, or nothing said of the rows")
		}
		if read.Kept != nil && (read.Kept.Sentence == "" || (read.Kept.Among == Valid) != read.HeldValid) {
			fail("the rows and the held set disagree")
		}
		for _, z := range read.Sets {
			if len(minus(z, selected)) < len(z) || len(selected) > 0 && ReadKept(g, x, y, z, selected).Among != Valid {
				fail("a set that does not do")
			}
		}
		if v.HasProposal && len(selected) > 0 && ReadKept(g, x, y, v.Propose, selected).Among != Valid {
			fail("the proposal is not valid")
		}
		for _, one := range ControlsAmong(g, x, y, held, selected) {
			base := minus(held, []int{one.Node})
			with := union(base, []int{one.Node})
			if slices.Contains(selected, one.Node) || len(selected) == 0 || slices.Contains(held, x) || slices.Contains(held, y) {
				continue
			}
			before, after := ReadKept(g, x, y, base, selected).Among == Valid, ReadKept(g, x, y, with, selected).Among == Valid
			if (one.Kind == GoodControl) != (!before && after) || before && (one.Kind == BadControl) != !after {
				fail(fmt.Sprintf("%d: %s; valid without %v, with %v", one.Node, one.Sentence, before, after))
			}
		}
		for _, f := range read.HeldFaults {
			if slices.Contains(selected, f.Node) {
				fail("what kept the rows is said to be held wrongly")
			}
		}
	}
	t.Logf("verdicts by kind: %v", kinds)
}
