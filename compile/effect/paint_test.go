package effect

import (
	"context"
	"math"
	"strings"
	"testing"

	"arrowroot/compile/causal"
	"arrowroot/compile/formula"
	"arrowroot/compile/graph"
	"arrowroot/compile/model"
	"arrowroot/compile/study"
)

func arrowsOf(t *testing.T, s *sketch, n int) map[string]ArrowEffect {
	t.Helper()
	all, err := Arrows(context.Background(), s.m, s.draws(n), Options{})
	if err != nil {
		t.Fatal(err)
	}
	out := make(map[string]ArrowEffect)
	for _, a := range all {
		out[a.From+" → "+a.To] = a
	}
	return out
}

// A linear law has closed forms: slope × central 80 % / width.
func TestArrowsOfALinearLaw(t *testing.T) {
	s := newSketch(t, 101)
	x := make([]float64, 101)
	for i := range x {
		x[i] = float64(i)
	}
	hedge := s.variable("hedge", study.Real, x)
	hedge.Unit = "m/ha"
	soil := s.variable("soil", study.Category, nil101(3))
	soil.Levels = []string{"clay", "loam", "sand"}
	yield := s.variable("yield", study.Real, x)
	yield.Low, yield.High, yield.Unit = 0, 50, "t"
	s.vector("step", model.ZeroSum, 1, 2, -3)
	s.parameter("beta", 0.25)
	s.law("yield", "normal", "beta * hedge + step of soil", "1")
	a := arrowsOf(t, s, 3)["hedge → yield"]
	near(t, "low", a.Low, 10, 1e-9)
	near(t, "high", a.High, 90, 1e-9)
	near(t, "change in widths", a.Values[2], 0.25*80/50, 1e-12)
	if a.Unsigned || a.Ratio || a.Per != 10 || !strings.HasPrefix(a.Words, "+2.5 (90 %: +2.5 to +2.5) t per 10 m/ha") {
		t.Errorf("%+v", a)
	}
	b := arrowsOf(t, s, 3)["soil → yield"]
	near(t, "largest step", b.Values[0], -5.0/50, 1e-12)
	if !strings.HasSuffix(b.Words, "sand against loam") {
		t.Errorf("words: %q", b.Words)
	}
}

func nil101(k int) []float64 {
	out := make([]float64, 101)
	for i := range out {
		out[i] = float64(i % k)
	}
	return out
}

func TestArrowsOfALogLink(t *testing.T) {
	s := newSketch(t, 101)
	x := spreadOut(101, 0, 180)
	hedge := s.variable("hedge", study.Real, x)
	hedge.Low, hedge.High, hedge.Unit = 0, 180, "m/ha"
	bees := s.variable("bees", study.Count, nil101(5))
	bees.Low, bees.High = 0, 120
	s.law("bees", "negative binomial", "2 + 0.005 * hedge", "3")
	a := arrowsOf(t, s, 2)["hedge → bees"]
	near(t, "change", a.Values[0], (math.Exp(2+0.005*a.High)-math.Exp(2+0.005*a.Low))/120, 1e-12)
	near(t, "per step", a.PerUnit[0], math.Exp(0.005*a.Per), 1e-12)
	if !a.Ratio || !strings.HasPrefix(a.Words, "×1.1") || !strings.HasSuffix(a.Words, " per 20 m/ha") {
		t.Errorf("%q", a.Words)
	}
}

func TestArrowsIntoLevels(t *testing.T) {
	s := newSketch(t, 101)
	x := nil101(2)
	s.variable("x", study.Binary, x).Levels = []string{"no", "yes"}
	crop := s.variable("crop", study.Category, nil101(3))
	crop.Levels = []string{"oats", "rye", "beans"}
	l := s.law("crop", "categorical", "0")
	l.Predictors = []formula.Expr{s.parse("x"), s.parse("0 * x"), s.parse("-x")}
	v, _ := s.m.Name("x")
	l.Drawn = []int{v}
	a := arrowsOf(t, s, 2)["x → crop"]
	total := math.E + 1 + 1/math.E
	near(t, "total variation", a.Values[0], math.E/total-1.0/3, 1e-12)
	if !a.Unsigned {
		t.Error("a distance has no sign")
	}
}

// Nodes: what descends moves, what does not is plain, and a variable that
// shares an unmeasured cause with the exposure's child is not simulated.
func TestNodes(t *testing.T) {
	s := newSketch(t, 50)
	x := spreadOut(50, 0, 1)
	s.variable("z", study.Real, x)
	s.variable("x", study.Real, x)
	m := s.variable("m", study.Real, x)
	m.Low, m.High = 0, 4
	y := s.variable("y", study.Real, x)
	y.Low, y.High = 0, 10
	s.law("x", "normal", "z", "1")
	s.law("m", "normal", "2 * x", "1")
	s.law("y", "normal", "3 * m + z", "1")
	g, err := graph.New(graph.Spec{Names: []string{"z", "x", "m", "y"}, Arrows: [][2]int{{0, 1}, {1, 2}, {2, 3}, {0, 3}}})
	if err != nil {
		t.Fatal(err)
	}
	nodes, err := Nodes(context.Background(), s.m, g, ask("x", "y", 0, 1), s.draws(3), source(), Options{})
	if err != nil {
		t.Fatal(err)
	}
	by := make(map[string]NodeEffect)
	for _, n := range nodes {
		by[n.Variable] = n
	}
	if !by["z"].Plain || by["z"].Values != nil || len(nodes) != 3 {
		t.Errorf("z: %+v of %d", by["z"], len(nodes))
	}
	near(t, "m", by["m"].Values[0], 2.0/4, 1e-9)
	near(t, "y", by["y"].Values[0], 6.0/10, 1e-9)

	joined, err := graph.New(graph.Spec{Names: []string{"z", "x", "m", "y"}, Arrows: [][2]int{{0, 1}, {1, 2}, {2, 3}, {0, 3}}, Arcs: [][2]int{{1, 2}}})
	if err != nil {
		t.Fatal(err)
	}
	if nodes, err = Nodes(context.Background(), s.m, joined, ask("x", "y", 0, 1), s.draws(3), source(), Options{}); err != nil {
		t.Fatal(err)
	}
	for _, n := range nodes {
		if n.Variable != "z" && !n.Refused {
			t.Errorf("%s is painted though an unmeasured cause joins x and m", n.Variable)
		}
	}
}

// An ordered child is painted by P(middle level or above), per draw.
func TestArrowsIntoOrderedLevels(t *testing.T) {
	s := newSketch(t, 101)
	x := spreadOut(101, 0, 10)
	s.variable("x", study.Real, x)
	grade := s.variable("grade", study.Ordered, nil101(4))
	grade.Levels = []string{"never", "rarely", "often", "always"}
	s.vector("cut_grade", model.Cuts, -1, 0.5, 2)
	s.law("grade", "ordered", "0.2 * x").Cutpoints = "cut_grade"
	a := arrowsOf(t, s, 2)["x → grade"]
	near(t, "P(often or above)", a.Values[0], logistic(0.2*a.High-0.5)-logistic(0.2*a.Low-0.5), 1e-12)
	if a.Unsigned || !strings.Contains(a.Words, "in P(often or above) per 1") {
		t.Errorf("%q", a.Words)
	}
}

// A front door is painted by rule (b); the node after it too.
func TestNodesByRuleB(t *testing.T) {
	s := newSketch(t, 40)
	x := spreadOut(40, -1, 1)
	s.variable("x", study.Real, x)
	m := s.variable("m", study.Real, x)
	y := s.variable("y", study.Real, x)
	m.Low, m.High, y.Low, y.High = 0, 1, 0, 1
	s.law("m", "normal", "0.6 * x", "1")
	s.law("y", "normal", "0.8 * m + 0.5 * x", "1") // x is carried for the arc
	g, err := graph.New(graph.Spec{Names: []string{"x", "m", "y"}, Arrows: [][2]int{{0, 1}, {1, 2}}, Arcs: [][2]int{{0, 2}}})
	if err != nil {
		t.Fatal(err)
	}
	nodes, err := Nodes(context.Background(), s.m, g, ask("x", "y", 0, 1), s.draws(2), source(), Options{})
	if err != nil {
		t.Fatal(err)
	}
	near(t, "m", nodes[0].Values[0], 0.6, 1e-9)
	near(t, "y", nodes[1].Values[0], 0.48, 1e-9)
	if _, err := Nodes(context.Background(), s.m, g, ask("z", "y", 0, 1), s.draws(2), source(), Options{}); err == nil {
		t.Error("an exposure that is not there went unnoticed")
	}
}

func TestShortNumbers(t *testing.T) {
	for x, want := range map[float64]string{
		1.0234: "1.02", 1.1: "1.1", 0.00052345: "0.000523", 0.0523: "0.0523", -41.62: "−41.6", 12345: "12345", 2.5e7: "2.5e+07", 0: "0",
	} {
		if got := short(x); got != want {
			t.Errorf("short(%v) = %q, want %q", x, got, want)
		}
	}
	for width, want := range map[float64]float64{180: 20, 100: 10, 1: 0.1, 0.7: 0.05, 9: 1, 0: 1} {
		if got := niceStep(width); math.Abs(got-want) > 1e-12 {
			t.Errorf("niceStep(%v) = %v, want %v", width, got, want)
		}
	}
}

// One simulation serves all nodes of a chain; each gives what a contrast of
// its own gives, within simulation error.
func TestNodesAgreeWithContrasts(t *testing.T) {
	s := newSketch(t, 200)
	x := spreadOut(200, 0, 1)
	s.variable("x", study.Real, x)
	for _, id := range []string{"m", "k", "y"} {
		v := s.variable(id, study.Real, x)
		v.Low, v.High = 0, 2
	}
	s.law("m", "Poisson", "0.3 + 0.8 * x")
	s.law("k", "Bernoulli", "-1 + 0.7 * m - x")
	s.law("y", "gamma", "0.2 * m + 0.5 * k", "3")
	g, err := graph.New(graph.Spec{Names: []string{"x", "m", "k", "y"}, Arrows: [][2]int{{0, 1}, {0, 2}, {1, 2}, {1, 3}, {2, 3}}})
	if err != nil {
		t.Fatal(err)
	}
	small := Options{Budget: 1e6}
	nodes, err := Nodes(context.Background(), s.m, g, ask("x", "y", 0, 1), s.draws(400), source(), small)
	if err != nil {
		t.Fatal(err)
	}
	for i, width := range []float64{2, 1, 2} { // a probability's width is 1
		c, err := Simulate(context.Background(), s.m, causal.PinAndSimulate, nil, ask("x", nodes[i].Variable, 0, 1), s.draws(400), source(), small)
		if err != nil {
			t.Fatal(err)
		}
		near(t, nodes[i].Variable, mean(nodes[i].Values)*width, mean(c.Values), 0.005)
	}
}
