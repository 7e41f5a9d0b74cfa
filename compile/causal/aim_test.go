package causal

import (
	"math"
	"math/rand/v2"
	"slices"
	"testing"

	"arrowroot/compile/graph"
)

// brute lists the valid sets of an aim by the definition, over all subsets.
func brute(g *graph.Graph, aim Aim) [][]int {
	c := newComparison(g, aim.Exposures, aim.Outcomes)
	var candidates []int
	for v := range g.Len() {
		if c.usable[v] && !slices.Contains(aim.Unavailable, v) && !slices.Contains(aim.Forced, v) {
			candidates = append(candidates, v)
		}
	}
	var valid [][]int
	for at := range 1 << len(candidates) {
		if z := union(subset(candidates, at), aim.Forced); c.valid(z) {
			valid = append(valid, z)
		}
	}
	return valid
}

func TestAimsAgainstSubsets(t *testing.T) {
	r := rand.New(rand.NewPCG(41, 2026))
	withSets, several := 0, 0
	for range rounds(600, 6000) {
		s := sketch{nodes: 4 + r.IntN(5), arrows: 0.2 + 0.4*r.Float64(), unmeasured: 0.15, arcs: 0.1 * r.Float64(), computed: float64(r.IntN(2)) * 0.15}
		g := s.draw(t, r)
		aim := Aim{Exposures: []int{0}, Outcomes: []int{1}, Costs: make([]float64, g.Len()), MaxSets: 1000}
		for v := range g.Len() {
			aim.Costs[v] = float64(r.IntN(5))
			switch where := r.IntN(12); {
			case v < 2 || !g.Measured[v]:
			case where == 0:
				aim.Exposures = append(aim.Exposures, v)
			case where == 1:
				aim.Outcomes = append(aim.Outcomes, v)
			case where == 2:
				aim.Forced = append(aim.Forced, v)
			case where == 3:
				aim.Unavailable = append(aim.Unavailable, v)
			}
		}
		a := Adjust(g, aim)
		valid := brute(g, a.Aim)
		if (len(valid) > 0) != (a.Sets != nil) || a.Sentence == "" {
			t.Fatalf("%s: %+v: sets %v, by trial %v", describe(g), aim, a.Sets, valid)
		}
		if len(valid) == 0 {
			continue
		}
		withSets++
		least := math.Inf(1)
		for _, z := range valid {
			least = min(least, a.cost(z))
		}
		if a.Cheapest == nil || a.Cost != least || a.cost(a.Cheapest) != least || !slices.ContainsFunc(valid, func(z []int) bool { return slices.Equal(z, a.Cheapest) }) {
			t.Errorf("%s: %+v: cheapest %v at %g, by trial %g", describe(g), aim, a.Cheapest, a.Cost, least)
		}
		if len(aim.Exposures) > 1 {
			several++
		}
		if nearest := newComparison(g, aim.Exposures, aim.Outcomes).moral(nil).nearest(); a.BestMinimal != nil && aim.Forced == nil && aim.Unavailable == nil && !slices.Contains(g.Computed, true) {
			c := newComparison(g, a.Aim.Exposures, a.Aim.Outcomes)
			if !c.asPrecise(nearest, a.BestMinimal) {
				t.Errorf("%s: nearest %v, best %v", describe(g), nearest, a.BestMinimal)
			}
		}
	}
	if withSets < 200 || several < 30 {
		t.Errorf("only %d aims with sets, %d of several exposures", withSets, several)
	}
}

// The variance of a fitted slope is that of the outcome given exposure and held
// set over that of the exposure given the held set (common practice for linear
// laws; Henckel, Perković & Maathuis 2022, eq. 4). No claimed set is beaten.
func TestPrecisionClaimsInLinearModels(t *testing.T) {
	r := rand.New(rand.NewPCG(42, 2026))
	claims := 0
	for range rounds(500, 5000) {
		s := sketch{nodes: 4 + r.IntN(4), arrows: 0.3 + 0.3*r.Float64(), unmeasured: 0.2, arcs: 0.1}
		g := s.draw(t, r)
		a := Adjust(g, Aim{Exposures: []int{0}, Outcomes: []int{1}})
		if a.BestMinimal == nil && a.Optimal == nil {
			continue
		}
		m := drawLinear(g, r)
		residual := func(v int, on []int) float64 {
			left := m.cov[v][v]
			for i, b := range m.regress(v, on) {
				left -= b * m.cov[v][on[i]]
			}
			return left
		}
		variance := func(z []int) float64 { return residual(1, union(z, []int{0})) / residual(0, z) }
		check := func(what string, claimed []int, others [][]int) {
			if claimed == nil {
				return
			}
			for _, z := range others {
				claims++
				if variance(claimed) > variance(z)*(1+1e-7) {
					t.Errorf("%s: %s %v is beaten by %v", describe(g), what, claimed, z)
				}
			}
		}
		check("optimal", a.Optimal, brute(g, a.Aim))
		check("best minimal", a.BestMinimal, a.Sets)
		check("best smallest", a.BestSmallest, slices.DeleteFunc(slices.Clone(a.Sets), func(z []int) bool { return len(z) > len(a.Sets[0]) }))
	}
	if claims < 500 {
		t.Errorf("only %d claims", claims)
	}
}

// Source: testdata/causal/SOURCE.md.
func TestAimsOfReference(t *testing.T) {
	for _, c := range readReference(t, "cases.json") {
		g := c.graph(t)
		x, y, held := numbers(g, c.Exposure), numbers(g, c.Outcome), numbers(g, c.Conditioned)
		switch c.Question.Type {
		case "adjust":
			var want struct {
				Minimal     [][]string
				MinimumSize *int `json:"minimum_size"`
			}
			c.answer(t, &want)
			a := Adjust(g, Aim{Exposures: x, Outcomes: y, Forced: held, MaxSets: 1e4})
			compareSets(t, c.ID, "minimal sets", g, a.Sets, want.Minimal)
			if want.MinimumSize != nil && a.Cost != float64(*want.MinimumSize) {
				t.Errorf("%s: cheapest %v, want size %d", c.ID, a.Cheapest, *want.MinimumSize)
			}
		case "oset":
			var want struct {
				OSet     *[]string  `json:"o_set"`
				Minimal  [][]string `json:"graphically_best_among_minimal"`
				Smallest [][]string `json:"graphically_best_among_minimum"`
			}
			c.answer(t, &want)
			a := Adjust(g, Aim{Exposures: x, Outcomes: y})
			if want.OSet != nil {
				compareSets(t, c.ID, "O-set", g, [][]int{a.Optimal}, [][]string{*want.OSet})
			} else if a.Optimal != nil {
				t.Errorf("%s: O-set %v", c.ID, a.Optimal)
			}
			for _, claim := range []struct {
				got  []int
				want [][]string
			}{{a.BestMinimal, want.Minimal}, {a.BestSmallest, want.Smallest}} {
				if (claim.got != nil) != (len(claim.want) > 0) || claim.got != nil && !slices.Contains(spelledNames(claim.want), spelled(g, [][]int{claim.got})[0]) {
					t.Errorf("%s: best %v, want one of %v", c.ID, claim.got, claim.want)
				}
			}
		}
	}
}

// Source: testdata/causal/SOURCE.md.
func TestControlsOfReference(t *testing.T) {
	kinds := map[[2]string][]ControlKind{
		{"good", ""}: {GoodControl},
		{"bad", ""}:  {BadControl},
		{"neutral", "can improve, never worsens"}: {SharpensControl},
		{"neutral", "can worsen, never improves"}: {BluntsControl},
		{"neutral", ""}: {NeutralControl},
	}
	for _, c := range readReference(t, "cases.json") {
		if c.Question.Type != "control" {
			continue
		}
		var want struct{ Verdict, Precision string }
		c.answer(t, &want)
		g := c.graph(t)
		found := false
		for _, v := range Controls(g, g.Index(c.Exposure[0]), g.Index(c.Outcome[0]), numbers(g, c.Conditioned)) {
			if v.Node != g.Index(c.Question.Z) {
				continue
			}
			found = true
			if !slices.Contains(kinds[[2]string{want.Verdict, want.Precision}], v.Kind) {
				t.Errorf("%s: %s (%s), want %v", c.ID, v.Kind, v.Sentence, want)
			}
			if v.Kind == GoodControl && v.Path == nil || v.Kind == BadControl && v.Path == nil {
				t.Errorf("%s: no path for %s", c.ID, v.Sentence)
			}
		}
		if !found {
			t.Errorf("%s: no verdict on %s", c.ID, c.Question.Z)
		}
	}
}

func TestControlSentences(t *testing.T) {
	g, err := graph.New(graph.Spec{
		Names:  []string{"soil", "hedge", "flowers", "bees", "rain", "tractor", "count"},
		Arrows: [][2]int{{0, 1}, {0, 3}, {1, 2}, {2, 3}, {4, 3}, {5, 1}, {1, 6}, {3, 6}},
	})
	if err != nil {
		t.Fatal(err)
	}
	want := []string{
		"Hold soil: it closes hedge ← soil → bees.",
		"Leave flowers free: it lies on hedge → flowers → bees.",
		"Leave rain free: hedge ← soil → bees stays open all the same, and with rain held the bias can be larger.",
		"Leave tractor free: hedge ← soil → bees stays open all the same, and with tractor held the bias can be larger.",
		"Leave count free: it is an effect of bees, by hedge → flowers → bees → count.",
	}
	wantHeld := []string{
		"Hold soil: it closes hedge ← soil → bees.",
		"Leave flowers free: it lies on hedge → flowers → bees.",
		"Holding rain is not needed, but can only make the answer more precise.",
		"Holding tractor is not needed and can only make the answer less precise.",
		"Leave count free: it is an effect of bees, by hedge → flowers → bees → count.",
	}
	for i, held := range [][]int{nil, {0}} {
		var got []string
		for _, c := range Controls(g, 1, 3, held) {
			got = append(got, c.Sentence)
		}
		if !slices.Equal(got, [][]string{want, wantHeld}[i]) {
			t.Errorf("held %v:\n%q", held, got)
		}
	}
}

// The joint effect of two exposures whose confounder lies on a causal path has
// no set, yet is identified (case exp-induced-joint of testdata/causal).
func TestDirectEffects(t *testing.T) {
	g, err := graph.New(graph.Spec{
		Names:  []string{"hedge", "damp", "flowers", "bees"},
		Arrows: [][2]int{{0, 1}, {1, 2}, {1, 3}, {0, 2}, {2, 3}, {0, 3}},
	})
	if err != nil {
		t.Fatal(err)
	}
	d := ReadDirect(g, 0, 3, []int{2})
	if d.Adjustment.Sets != nil || !d.Identification.Identified || !d.Effect {
		t.Errorf("sets %v; %s", d.Adjustment.Sets, d.Sentence)
	}
	checkFormula(t, "direct effect", g, d.Identification, rand.New(rand.NewPCG(43, 2026)))
	all := ReadDirect(g, 0, 3, nil)
	if want := "The direct effect of hedge on bees with damp and flowers kept as set can be read: hold damp and flowers."; all.Sentence != want {
		t.Errorf("got %s", all.Sentence)
	}
	none := ReadDirect(g, 0, 2, []int{1})
	if !none.Effect || none.Adjustment.Sets == nil {
		t.Errorf("got %s", none.Sentence)
	}
	away := ReadDirect(g, 1, 3, []int{2})
	if want := "The direct effect of damp on bees with flowers kept as set can be read: hold hedge and flowers."; !away.Effect || away.Sentence != want {
		t.Errorf("got %s", away.Sentence)
	}
}
